"""How water meets a whole screen: one side of a wall, or both sides of a screen that stands in the water."""

from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum
from functools import cached_property

from forebay.flow.faces import LEFT
from forebay.trade.screens.face_flow import Exposure, FaceFlow
from forebay.trade.screens.screen import Pump, Screen

AS_FAST = 1.0
"""Sweeping over approach velocity that fish need where no criterion asks for more [-]."""


class Basis(StrEnum):
    """Where the approach velocity of a screen comes from."""

    MODELLED = "modelled"
    CALCULATED = "calculated"


@dataclass(frozen=True)
class SideFlow:
    """One side of a screen: the flow with its pump on, and with it off where that flow exists."""

    on: FaceFlow
    off: FaceFlow | None

    @property
    def name(self) -> str:
        """Side on which the water is, seen from the start of the face."""
        return "left" if self.on.face.side == LEFT else "right"

    def swept(self, pump: Pump) -> FaceFlow | None:
        """The flow whose sweeping velocity counts."""
        return self.on if pump is Pump.ON else self.off


@dataclass(frozen=True)
class ScreenFlow:
    """A screen with the flow that meets it.

    discharge : of the screen [m3/s];  basis : of the approach velocity
    sides : one or two;  without_pump : why the flow without its pump is unknown, empty if it is known
    """

    screen: Screen
    discharge: float
    basis: Basis
    sides: tuple[SideFlow, ...]
    without_pump: str = ""

    @property
    def length(self) -> float:
        """Length of the face [m]."""
        return self.sides[0].on.face.length

    @property
    def on(self) -> str:
        """Name of the wall that the screen is part of, or "water"."""
        return self.sides[0].on.face.on

    @property
    def area(self) -> float:
        """Wetted area of all sides [m2]."""
        return len(self.sides) * self.length * self.screen.height

    @property
    def effective_area(self) -> float:
        """Area less what frames block [m2]."""
        return self.area * (1.0 - self.screen.blocked_fraction)

    @property
    def open_area(self) -> float:
        """Open part of the effective area [m2]."""
        return self.effective_area * self.screen.open_fraction

    @property
    def through_slot(self) -> float:
        """Velocity through the slots: discharge over open area [m/s]."""
        return self.discharge / self.open_area

    @property
    def mean_approach(self) -> float:
        """Discharge over effective area [m/s]."""
        return self.discharge / self.effective_area

    @cached_property
    def max_approach(self) -> float:
        """Largest approach velocity of all sides [m/s]."""
        return max(side.on.approach_range[1] for side in self.sides)

    @cached_property
    def min_approach(self) -> float:
        """Least approach velocity of all sides [m/s]; negative where water leaves through the face."""
        return min(side.on.approach_range[0] for side in self.sides)

    @property
    def governing(self) -> SideFlow:
        """The side with the largest approach velocity."""
        return max(self.sides, key=lambda side: side.on.approach_range[1])

    @property
    def max_over_mean(self) -> float | None:
        """Largest over mean approach velocity read on the governing side [-]; None if no water arrives."""
        face = self.governing.on
        return face.approach_range[1] / face.mean_approach if face.mean_approach > 0.0 else None

    def swept(self, pump: Pump) -> tuple[FaceFlow, ...]:
        """All sides with the pump on or off; empty if that flow is unknown."""
        flows = tuple(side.swept(pump) for side in self.sides)
        return tuple(flow for flow in flows if flow is not None)

    def min_sweeping(self, pump: Pump) -> float | None:
        """Least sweeping velocity between the end reaches of all sides [m/s]."""
        return min((flow.least_sweeping for flow in self.swept(pump)), default=None)

    def min_sweeping_ratio(self, pump: Pump) -> float | None:
        """Least sweeping over approach velocity between the end reaches of all sides [-]."""
        return min((flow.least_ratio for flow in self.swept(pump)), default=None)

    def exposure(self, pump: Pump) -> Exposure | None:
        """Longest time along any side to the bypass."""
        exposures = [flow.exposure for flow in self.swept(pump)]
        return max(exposures, key=lambda exposure: exposure.time, default=None)

    def share(self, pump: Pump, of_side: Callable[[FaceFlow], float]) -> float | None:
        """Mean over the sides of a part of their face [-], which are equally long."""
        shares = [of_side(flow) for flow in self.swept(pump)]
        return sum(shares) / len(shares) if shares else None

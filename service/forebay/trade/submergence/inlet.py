"""An inlet under a free surface, and the numbers that say how its flow behaves."""

from dataclasses import dataclass
from enum import StrEnum
from math import pi, sqrt

from forebay.trade.water import WaterProperties


class InletKind(StrEnum):
    """Form of an inlet."""

    BELL = "bell"
    VERTICAL_PIPE = "vertical-pipe"
    HORIZONTAL_PIPE = "horizontal-pipe"
    SLOT = "slot"


class Datum(StrEnum):
    """Level down from the surface to which a submergence is measured."""

    LIP = "lip"
    CENTRELINE = "centreline"
    CROWN = "crown"


UPRIGHT = frozenset({InletKind.BELL, InletKind.VERTICAL_PIPE})
"""Inlets whose opening is level, so that lip, centreline and crown are one level."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Inlet:
    """One inlet.

    discharge : [m3/s]
    height : diameter of a bell (outside, at the lip) or pipe, height of a slot [m];  width : of a slot [m]
    submergence : depth of water over the lip of an upright inlet, over the centreline of another [m]
    element : sink of the layout that it is, whose swirl is then read from the flow
    circulation : known or assumed, in place of the layout's [m2/s];  core_radius : of the vortex it feeds [m]
    throat : diameter of the pipe behind the inlet [m]; None for the inlet's own
    """

    name: str
    kind: InletKind
    discharge: float
    height: float
    submergence: float
    width: float | None = None
    element: str | None = None
    circulation: float | None = None
    core_radius: float | None = None
    throat: float | None = None

    @property
    def area(self) -> float:
        """Area of the opening [m2]."""
        return 0.25 * pi * self.height**2 if self.width is None else self.height * self.width

    @property
    def diameter(self) -> float:
        """Diameter, of a slot that of the circle of equal area [m]."""
        return self.height if self.width is None else sqrt(4.0 * self.area / pi)

    @property
    def velocity(self) -> float:
        """Mean velocity in the opening [m/s]."""
        return self.discharge / self.area

    def available(self, datum: Datum) -> float:
        """Depth of water over a datum [m]; lip, centreline and crown of an upright inlet are one level."""
        if datum is Datum.CROWN and self.kind not in UPRIGHT:
            return self.submergence - 0.5 * self.height
        return self.submergence


@dataclass(frozen=True, slots=True)
class Similarity:
    """Dimensionless numbers of an inlet [-].

    froude : V / sqrt(g D);  reynolds : V D / nu;  radial_reynolds : Q / (nu S);  weber : rho V^2 D / sigma
    """

    froude: float
    reynolds: float
    radial_reynolds: float
    weber: float


def similarity_of(inlet: Inlet, water: WaterProperties, gravity: float) -> Similarity:
    """Numbers of an inlet in water; D is its diameter, S the submergence given, V the mean velocity."""
    speed, diameter = inlet.velocity, inlet.diameter
    return Similarity(
        froude=speed / sqrt(gravity * diameter),
        reynolds=speed * diameter / water.kinematic_viscosity,
        radial_reynolds=inlet.discharge / (water.kinematic_viscosity * inlet.submergence),
        weber=water.density * speed**2 * diameter / water.surface_tension,
    )

"""What an engineer concludes: velocity bands of bells, and what calls for a physical model."""

from collections.abc import Iterator
from dataclasses import dataclass

from forebay.trade.submergence.inlet import Inlet, InletKind
from forebay.trade.submergence.rules import Standing
from forebay.trade.submergence.vortex import Vortex

INSTITUTE = "ANSI/HI 9.8"

BELL_BANDS = ((0.6, 2.7), (0.9, 2.4), (1.2, 2.1))
"""Least and largest velocity at the bell [m/s] of small, middling and large pumps; from memory."""

MIDDLING_FROM, MIDDLING_UP_TO = 0.315, 1.26
"""Discharges of middling pumps, both included [m3/s]; from memory."""

BELL_VELOCITY = 1.7
"""Recommended velocity at a bell [m/s]; from memory."""

LARGEST_PUMP, LARGEST_STATION = 2.52, 6.31
"""Discharge of one inlet and of all above which a physical model is asked for [m3/s]; from memory."""

LARGEST_SWIRL = 5.0
"""Mean swirl angle in the pipe above which a pump suffers [deg]; from memory."""


@dataclass(frozen=True, slots=True)
class Band:
    """Velocities that are allowed and recommended at a bell [m/s]."""

    least: float
    largest: float
    recommended: float
    source: str = INSTITUTE
    standing: Standing = Standing.FROM_MEMORY

    def contains(self, velocity: float) -> bool:
        """Whether a velocity is allowed."""
        return self.least <= velocity <= self.largest


@dataclass(frozen=True, slots=True)
class Finding:
    """Reason for a physical model; value and limit in `unit`. standing : None if the reasoning is our own."""

    reason: str
    value: float
    limit: float
    unit: str
    source: str
    standing: Standing | None = None


def band_of(inlet: Inlet, *, from_memory: bool) -> Band | None:
    """Velocity band of a bell; None for other inlets, and where nothing from memory is wanted."""
    if inlet.kind is not InletKind.BELL or not from_memory:
        return None
    least, largest = BELL_BANDS[(inlet.discharge >= MIDDLING_FROM) + (inlet.discharge > MIDDLING_UP_TO)]
    return Band(least, largest, BELL_VELOCITY)


def model_study(
    inlet: Inlet, shortfalls: dict[str, tuple[float, float]], vortex: Vortex | None, station: float
) -> Iterator[Finding]:
    """Reasons for a physical model of an inlet.

    shortfalls : available and required submergence by the rule that is not met [m]
    vortex : that the approach flow could feed;  station : discharge of all inlets [m3/s]
    """
    for rule, (available, required) in shortfalls.items():
        yield Finding(f"submergence falls short of {rule}", available, required, "m", "the rule itself")
    if vortex is not None and vortex.draws_air:
        yield Finding(
            "the dip of the vortex reaches the inlet, so that air could be drawn",
            vortex.burgers_dip,
            inlet.submergence,
            "m",
            "dip of Burgers' vortex; own check",
        )
    for reason, value, limit, unit in (
        ("discharge of the inlet", inlet.discharge, LARGEST_PUMP, "m3/s"),
        ("discharge of all inlets", station, LARGEST_STATION, "m3/s"),
        ("swirl angle in the pipe", 0.0 if vortex is None else vortex.swirl_angle, LARGEST_SWIRL, "deg"),
    ):
        if value > limit:
            yield Finding(reason, value, limit, unit, INSTITUTE, Standing.FROM_MEMORY)

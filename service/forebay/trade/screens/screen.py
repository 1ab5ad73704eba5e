"""A fish-protection screen as its designer describes it."""

from dataclasses import dataclass
from enum import StrEnum

from forebay.flow.errors import FlowError


class Cleaning(StrEnum):
    """Whether debris is taken off while the screen works."""

    ACTIVE = "active"
    PASSIVE = "passive"


class Pump(StrEnum):
    """Whether the screen draws while the sweeping velocity is read."""

    ON = "pump-on"
    OFF = "pump-off"


class ScreenGeometryError(FlowError):
    """A measure of a screen does not fit its face: a bypass beyond its ends, or no face left between ends."""

    code = "screen-geometry"
    title = "A measure of the screen does not fit its face"


class FaceMisplacedError(FlowError):
    """The face of a screen does not lie along a bank or along the wall of a structure."""

    code = "face-misplaced"
    title = "The face does not lie on a wall"


@dataclass(frozen=True, slots=True, kw_only=True)
class Screen:
    """One screen over a line sink, or over a face on a wall with a discharge of its own.

    name : of the line sink, or of the face;  face : its ends, x + iy [m];  discharge : through a face [m3/s]
    height : wetted, along the face where it leans [m]
    open_fraction : open part of the mesh [-];  blocked_fraction : part of the face behind frames [-]
    cleaning : while it works
    opening : width of slots or diameter of holes [m];  clearance : from the bottom [m]
    sample_offset : distance in front of the face at which velocities are read [m]
    end_reach : length at each end left out of extremes and exposure [m]; None for the usual one
    bypass : distance from the face's start to the bypass [m]; None for the end that the water sweeps towards
    sweeping : which sweeping velocity ratio and exposure are of;  count : points of the profile
    """

    name: str
    height: float
    open_fraction: float
    cleaning: Cleaning = Cleaning.ACTIVE
    face: tuple[complex, complex] | None = None
    discharge: float | None = None
    blocked_fraction: float = 0.0
    opening: float | None = None
    clearance: float | None = None
    sample_offset: float = 0.0
    end_reach: float | None = None
    bypass: float | None = None
    sweeping: Pump = Pump.ON
    count: int = 101

    @property
    def effective_height(self) -> float:
        """Height less what frames block [m]: effective area over length."""
        return self.height * (1.0 - self.blocked_fraction)


USUAL_END_REACH = 0.01
"""Part of a face left out at each end of extremes and exposure, where none is given: the speed along a line
that draws evenly is infinite at its ends, which no screen is [-]."""


def end_reach_of(screen: Screen, length: float) -> float:
    """Length left out at each end [m]: as given, else 1 % of the face or the sampling offset if larger.

    Raises ScreenGeometryError, path ("end_reach",), if nothing is left between the ends.
    """
    reach = screen.end_reach
    if reach is None:
        reach = max(USUAL_END_REACH * length, min(screen.sample_offset, 0.25 * length))
    if not reach < 0.5 * length:
        raise ScreenGeometryError(
            "twice the end reach must be less than the length of the face", ("end_reach",)
        )
    return reach


def bypass_of(screen: Screen, length: float) -> float | None:
    """Place of the bypass as a part of the length, None for the end swept to.

    Raises ScreenGeometryError, path ("bypass",), if it lies beyond the face.
    """
    if screen.bypass is None:
        return None
    part = screen.bypass / length
    if not 0.0 <= part <= 1.0 + 1e-9:
        raise ScreenGeometryError("the bypass must lie on the face", ("bypass",))
    return min(part, 1.0)

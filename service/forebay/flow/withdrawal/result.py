"""What a withdrawal analysis says: frozen values, SI units, positions as complex x + iy [m]."""

from dataclasses import dataclass
from enum import StrEnum

from forebay.flow.arrays import ComplexArray


class OriginKind(StrEnum):
    """What water came from."""

    OUTFALL = "outfall"
    FAR_FIELD = "far-field"
    DOUBLET = "doublet"
    UNRESOLVED = "unresolved"


class WithdrawalStatus(StrEnum):
    """How far the answer for an intake can be trusted, the gravest first.

    incomplete : the stagnation search did not close, so that a divide may be missing; no error is stated
    unresolved : part of the water could not be followed to its origin
    passed-through : the current crosses the line sink; shares are of the water that meets it
    bisected : a divide without a stagnation point was found by bisection, to 1e-10 of the discharge
    ok : every divide is exact
    """

    INCOMPLETE = "incomplete"
    UNRESOLVED = "unresolved"
    PASSED_THROUGH = "passed-through"
    BISECTED = "bisected"
    OK = "ok"


class WidthStatus(StrEnum):
    """Why a far width is or is not given."""

    OK = "ok"
    STILL = "still"
    UNEVEN = "uneven"


@dataclass(frozen=True, slots=True)
class Share:
    """Part of an intake's water that came from one origin; the parts add to 1."""

    origin: str
    kind: OriginKind
    share: float


@dataclass(frozen=True, slots=True)
class EndWidth:
    """Width that the intake's water takes at a far end [m], nan with the reason in `status`."""

    end: str
    width: float
    status: WidthStatus


@dataclass(frozen=True, slots=True)
class IntakeWithdrawal:
    """Where the water of one intake comes from.

    name, discharge : of the intake [-], [m3/s]
    arriving : water that meets the intake [m3/s], more than `discharge` where a current crosses a line sink
    width_far_upstream : width at the end that the current comes from [m], nan where there is none
    widths : one for each far end
    dividing_streamlines : polylines in the direction of flow, cut at `extent` [m]
    zone : outline of the water that reaches the intake, anticlockwise, the first point not repeated, cut at
        `extent` [m]
    centre, extent : middle of the layout and radius about it at which lines and zone are cut [m]
    shares : by origin, largest first
    recirculation_share : sum over the outfalls [-]
    share_error : estimate of the largest error of a share [-], nan where `status` is incomplete
    """

    name: str
    discharge: float
    arriving: float
    width_far_upstream: float
    widths: tuple[EndWidth, ...]
    dividing_streamlines: tuple[ComplexArray, ...]
    zone: ComplexArray
    centre: complex
    extent: float
    shares: tuple[Share, ...]
    recirculation_share: float
    share_error: float
    status: WithdrawalStatus

"""What an analysis of arrivals says: frozen values, SI units, times from the start of the release [s]."""

from dataclasses import dataclass
from enum import StrEnum

from forebay.flow.arrays import FloatArray

LAST_SHARE = 0.95
"""Part of what an intake takes of a release that has arrived at `last_time` [-]."""


class Outcome(StrEnum):
    """What becomes of released water.

    captured : arrives at an intake asked for, within the horizon
    passes : leaves by a far end, into an intake not asked for or into a doublet
    recirculates : on a closed streamline, round which it goes for ever
    stagnates : runs into a stagnation point, which takes for ever
    beyond-horizon : arrives at an intake asked for, but after the horizon
    unresolved : could not be followed to an end
    """

    CAPTURED = "captured"
    PASSES = "passes"
    RECIRCULATES = "recirculates"
    STAGNATES = "stagnates"
    BEYOND_HORIZON = "beyond-horizon"
    UNRESOLVED = "unresolved"


class Tail(StrEnum):
    """How arrivals end.

    bounded : the last water arrives at `end_time`
    unbounded : a dividing streamline or a stagnation point bounds the water, beside which travel times grow
        without limit, as the logarithm of the distance from it
    cut-at-horizon : more arrives after the horizon
    """

    BOUNDED = "bounded"
    UNBOUNDED = "unbounded"
    CUT_AT_HORIZON = "cut-at-horizon"


class ReleaseStatus(StrEnum):
    """How far the answer for a release can be trusted, the gravest first.

    on-land, on-singularity : nothing can be released there
    incomplete : the stagnation search did not close, so that a divide may be missing; no error is stated
    unresolved : some of the water could not be followed to its end, see the outcomes
    on-dividing-streamline : water released exactly there goes to a stagnation point, beside it elsewhere
    not-converged : the errors stated are larger than asked for
    bisected : a divide without a stagnation point was found by bisection
    ok : every divide is exact
    """

    ON_LAND = "on-land"
    ON_SINGULARITY = "on-singularity"
    INCOMPLETE = "incomplete"
    UNRESOLVED = "unresolved"
    ON_DIVIDING_STREAMLINE = "on-dividing-streamline"
    NOT_CONVERGED = "not-converged"
    BISECTED = "bisected"
    OK = "ok"


@dataclass(frozen=True, slots=True)
class Arrival:
    """Released water at one intake, or crossing one transect.

    at : name of the intake or transect;  share : of all that is released [-]
    first_time, median_time, last_time : when the first, half and `LAST_SHARE` of that has arrived [s]
    end_time : when the last of it arrives [s], nan if `tail` is not bounded
    """

    at: str
    share: float
    first_time: float
    median_time: float
    last_time: float
    end_time: float
    tail: Tail


@dataclass(frozen=True, slots=True)
class ArrivalCurve:
    """Share arrived up to each time, linear between; shape (k,) each.

    time : ascending [s];  share : at all intakes together [-];  by_intake : at each, by name
    """

    time: FloatArray
    share: FloatArray
    by_intake: dict[str, FloatArray]


@dataclass(frozen=True, slots=True)
class OutcomeShare:
    """Part of a release with one outcome; `to` names the intake, far end or doublet, "" without one."""

    outcome: Outcome
    to: str
    share: float


@dataclass(frozen=True, slots=True)
class ReleaseArrivals:
    """What becomes of one release.

    arrivals : at the intakes asked for that it reaches;  transits : over the transects it crosses
    lost_share : what does not arrive, 1 less the shares of `arrivals` [-]
    outcomes : parts that add to 1, by outcome and destination, largest first
    curve : arrivals against time
    share_error : estimated largest error of a share or of the curve [-];  time_error : of a time [s]
    divide_distance : from a point to the nearest dividing streamline, inf without one, else nan [m]
    wet_share : part of the line or patch that lies in the water [-]
    """

    name: str
    arrivals: tuple[Arrival, ...]
    transits: tuple[Arrival, ...]
    lost_share: float
    outcomes: tuple[OutcomeShare, ...]
    curve: ArrivalCurve
    share_error: float
    time_error: float
    divide_distance: float
    wet_share: float
    status: ReleaseStatus

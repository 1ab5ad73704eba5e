"""What was found of one release, and how it is reported: arrivals, outcomes and curve, cut at the horizon."""

from dataclasses import dataclass, field
from math import inf, nan

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.arrivals.fates import INTAKE, TRANSECT, Target
from forebay.flow.arrivals.release import Release
from forebay.flow.arrivals.result import (
    LAST_SHARE,
    Arrival,
    ArrivalCurve,
    Outcome,
    OutcomeShare,
    ReleaseArrivals,
    ReleaseStatus,
    Tail,
)
from forebay.flow.arrivals.spread import Course
from forebay.flow.arrivals.transits import Transect

_DUST = 1e-12
"""Share that is rounding [-]."""

_ENDS = np.array([1e-4, 3e-4, 1e-3, 3e-3, 0.997, 0.999, 0.9997, 0.9999])
"""Parts of what arrives at which a curve has points too: it begins like a power, ends like a logarithm."""

End = tuple[Outcome, str]


@dataclass(frozen=True, slots=True)
class ArrivalRules:
    """What is asked of all releases.

    intakes : names of those that count;  transects : lines whose crossing is timed
    horizon : time after which nothing counts [s]
    tolerance : error of a share or curve to be reached [-];  curve_points : points of a curve
    """

    intakes: tuple[str, ...]
    transects: tuple[Transect, ...] = ()
    horizon: float = inf
    tolerance: float = 1e-3
    curve_points: int = 101

    @property
    def wanted(self) -> frozenset[Target]:
        """Targets whose arrival times are asked for."""
        transects = {(TRANSECT, transect.name) for transect in self.transects}
        return frozenset(transects | {(INTAKE, name) for name in self.intakes})


@dataclass(frozen=True, slots=True)
class Passage:
    """Water of a release that meets one target: its share against time, when the last comes, nan if never."""

    course: Course
    last: float


@dataclass(frozen=True, slots=True)
class Findings:
    """Of a release, let go all at once and followed for ever.

    passages : by target;  ends : shares by outcome and destination, all intakes captured ones, sum 1
    others as in `ReleaseArrivals`
    """

    passages: dict[Target, Passage] = field(default_factory=dict)
    ends: dict[End, float] = field(default_factory=dict)
    share_error: float = nan
    time_error: float = nan
    divide_distance: float = nan
    wet_share: float = 1.0
    status: ReleaseStatus = ReleaseStatus.OK


def reported(release: Release, found: Findings, rules: ArrivalRules) -> ReleaseArrivals:
    """The answer for a release let go over its duration, up to the horizon."""
    lasting = {t: p.course.lasting(release.duration) for t, p in found.passages.items()}
    at_intakes = _arrivals(found, lasting, release, rules, INTAKE)
    captured = float(sum(arrival.share for arrival in at_intakes))
    known = bool(found.ends)
    return ReleaseArrivals(
        name=release.name,
        arrivals=at_intakes,
        transits=_arrivals(found, lasting, release, rules, TRANSECT),
        lost_share=_lost(captured) if known else nan,
        outcomes=_outcomes(found, at_intakes, rules),
        curve=_curve({a.at: lasting[INTAKE, a.at] for a in at_intakes}, rules),
        share_error=found.share_error,
        time_error=found.time_error,
        divide_distance=found.divide_distance,
        wet_share=found.wet_share,
        status=found.status,
    )


def _lost(captured: float) -> float:
    """What is not captured, 0 where that is rounding."""
    return 1.0 - captured if 1.0 - captured > _DUST else 0.0


def _arrivals(
    found: Findings, lasting: dict[Target, Course], release: Release, rules: ArrivalRules, kind: str
) -> tuple[Arrival, ...]:
    names = rules.intakes if kind == INTAKE else tuple(transect.name for transect in rules.transects)
    present = [(name, lasting[kind, name]) for name in names if (kind, name) in lasting]
    arrivals = [
        _arrival(name, course, found.passages[kind, name].last + release.duration, rules.horizon)
        for name, course in present
    ]
    return tuple(arrival for arrival in arrivals if arrival.share > _DUST)


def _arrival(name: str, course: Course, last: float, horizon: float) -> Arrival:
    share = min(1.0, float(course.at(np.array([horizon]))[0]) if horizon < course.time[-1] else course.total)
    rising = np.nonzero(course.amount > 0.0)[0]
    first = float(course.time[max(int(rising[0]) - 1, 0)]) if rising.size else nan
    median, late = course.when(share * np.array([0.5, LAST_SHARE]))
    cut = course.total - share > _DUST
    tail = Tail.CUT_AT_HORIZON if cut else Tail.UNBOUNDED if np.isnan(last) else Tail.BOUNDED
    return Arrival(
        at=name,
        share=share,
        first_time=first,
        median_time=float(median),
        last_time=float(late),
        end_time=last if tail is Tail.BOUNDED else nan,
        tail=tail,
    )


def _outcomes(
    found: Findings, arrivals: tuple[Arrival, ...], rules: ArrivalRules
) -> tuple[OutcomeShare, ...]:
    shares: dict[End, float] = {(Outcome.CAPTURED, arrival.at): arrival.share for arrival in arrivals}
    for (outcome, to), share in found.ends.items():
        if outcome is not Outcome.CAPTURED:
            shares[outcome, to] = share
        elif to not in rules.intakes:
            shares[Outcome.PASSES, to] = share
        else:
            shares[Outcome.BEYOND_HORIZON, to] = share - shares.get((Outcome.CAPTURED, to), 0.0)
    rows = [OutcomeShare(outcome, to, share) for (outcome, to), share in shares.items() if share > _DUST]
    return tuple(sorted(rows, key=lambda row: (-row.share, row.outcome, row.to)))


def _curve(courses: dict[str, Course], rules: ArrivalRules) -> ArrivalCurve:
    """Arrivals at even steps of the share and at a few more near both ends, up to the horizon."""
    if not courses:
        return ArrivalCurve(np.empty(0), np.empty(0), {})
    times = np.unique(np.concatenate([course.time for course in courses.values()]))
    times = np.append(times[times < rules.horizon], min(rules.horizon, times[-1]))
    whole = np.sum([course.at(times) for course in courses.values()], axis=0)
    before = np.sum([_just_before(course, times[:1]) for course in courses.values()], axis=0)
    total = Course(np.concatenate([times[:1], times]), np.concatenate([before, whole]))
    levels = total.total * np.unique(np.concatenate([np.linspace(0.0, 1.0, rules.curve_points), _ENDS]))
    inner = total.when(levels[1:-1])
    first = float(times[max(int(np.argmax(whole > 0.0)) - 1, 0)]) if whole[0] == 0.0 else float(times[0])
    chosen = np.unique(np.concatenate([[first], inner, times[-1:]]))
    starts = [_just_before(course, chosen[:1]) for course in courses.values()]
    by_intake = {
        name: np.concatenate([start, course.at(chosen)])
        for (name, course), start in zip(courses.items(), starts, strict=True)
    }
    time = np.concatenate([chosen[:1], chosen])
    return _without_repeats(ArrivalCurve(time, np.sum(list(by_intake.values()), axis=0), by_intake))


def _just_before(course: Course, t: FloatArray) -> FloatArray:
    """Amount before anything arrives at t itself."""
    return np.where(t <= course.time[0], 0.0, np.interp(t, course.time, course.amount))


def _without_repeats(curve: ArrivalCurve) -> ArrivalCurve:
    """The curve without a first point that says nothing."""
    if curve.share[1] > 0.0:
        return curve
    return ArrivalCurve(
        curve.time[1:], curve.share[1:], {name: column[1:] for name, column in curve.by_intake.items()}
    )

"""Sectors of rakes with arrival times where they are wanted, and the amounts of water in each."""

from dataclasses import dataclass
from math import log, nan

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.arrivals.curves import Part, Rake
from forebay.flow.arrivals.cuts import cuts_on
from forebay.flow.arrivals.fates import Follower, Target
from forebay.flow.arrivals.findings import Passage
from forebay.flow.arrivals.result import LAST_SHARE, Outcome, ReleaseStatus
from forebay.flow.arrivals.scene import Scene
from forebay.flow.arrivals.sectors import PROBES, Piece, Sector, divided, pieces_between
from forebay.flow.arrivals.spread import Course, Ramps, course_of
from forebay.flow.arrivals.timing import TIME_SHIFT, Timed, endless, ramps_of, timed

_INTERVALS = 12
"""Intervals between the first nodes of a sector."""
_SHIFT = 0.0137
"""Keeps nodes off places of symmetry [-]."""
_CHORDS = np.linspace(0.0, 1.0, 9)
"""Parts of a piece between which its amount is summed."""
_RETRACED = 12
"""Streamlines followed again with a coarser tolerance, at most."""
_COARSER = 10.0

LEVELS = (0.0, 0.5, LAST_SHARE)
"""Parts of what arrives whose times are reported."""


@dataclass(frozen=True, slots=True)
class Accuracy:
    """What is asked for. tolerance : error of a share [-];  amount : of what is released, in its own unit."""

    tolerance: float
    amount: float

    @property
    def edge(self) -> float:
        """Part of a sector beyond its outermost node [-]."""
        return 0.01 * self.tolerance

    @property
    def finest(self) -> float:
        """Part of a rake to which divides are searched for [-]."""
        return 1e-3 * self.tolerance

    @property
    def nodes(self) -> FloatArray:
        """First nodes x of a sector."""
        reach = log(1.0 / self.edge)
        return np.linspace(-reach, reach, _INTERVALS + 1) + _SHIFT


@dataclass(frozen=True, slots=True)
class Sample:
    """Water of a release.

    timed : sectors that meet a wanted target;  others : those that do not
    mixed : pieces of which no one fate could be told;  missing : amount in slivers left out
    bisected : whether divides had to be searched for;  time_part : relative error of a time by tracing [-]
    """

    timed: tuple[Timed, ...]
    others: tuple[Sector, ...]
    mixed: tuple[Piece, ...]
    missing: float
    bisected: bool
    time_part: float

    def ramps(self, target: Target) -> Ramps:
        """Arrivals at a target."""
        return Ramps.joined([ramps_of(row.now, target) for row in self.timed])

    def former_ramps(self, target: Target) -> Ramps:
        """The same with half the nodes."""
        return Ramps.joined([ramps_of(row.before, target) for row in self.timed])

    def endless(self, target: Target) -> bool:
        """Whether arrivals at a target trail off without end."""
        return any(endless(row.now, target) for row in self.timed)

    @property
    def error(self) -> float:
        """Amount that may arrive at another time, or elsewhere."""
        mixed = sum(abs(amount_of(piece)) for piece in self.mixed)
        return sum(row.error for row in self.timed) + self.missing + mixed

    @property
    def sectors(self) -> tuple[Sector, ...]:
        """All of them."""
        return (*(row.now for row in self.timed), *self.others)


def amount_of(piece: Piece) -> float:
    """Amount of water in a piece, in the unit of its rake's weight."""
    return float(piece.rake.weights(piece.low + piece.width * _CHORDS).sum())


def sampled(
    follower: Follower,
    rakes: list[tuple[Rake, list[Part]]],
    wanted: frozenset[Target],
    accuracy: Accuracy,
    *,
    by_area: bool,
) -> Sample:
    """Follow the water of rakes; arrival times are refined at `wanted` targets only."""
    pieces = [
        piece for rake, parts in rakes for piece in pieces_between(rake, parts, cuts_on(follower.scene, rake))
    ]
    first = divided(follower, pieces, PROBES, accuracy.finest)
    meeting = [sector.piece for sector in first.sectors if wanted.intersection(sector.signature.targets)]
    second = divided(follower, meeting, accuracy.nodes, accuracy.finest)
    reached = [sector for sector in second.sectors if wanted.intersection(sector.signature.targets)]
    others = [
        sector
        for sector in (*first.sectors, *second.sectors)
        if not wanted.intersection(sector.signature.targets)
    ]
    rows = timed(follower, reached, by_area=by_area, tolerance=0.5 * accuracy.tolerance * accuracy.amount)
    kept = [
        *(row.now.piece for row in rows),
        *(sector.piece for sector in others),
        *first.mixed,
        *second.mixed,
    ]
    whole = sum(amount_of(Piece(rake, low, high)) for rake, parts in rakes for low, high in parts)
    return Sample(
        timed=tuple(rows),
        others=tuple(others),
        mixed=(*first.mixed, *second.mixed),
        missing=abs(whole - sum(amount_of(piece) for piece in kept)),
        bisected=first.bisected or second.bisected,
        time_part=_time_part(follower, reached),
    )


def _time_part(follower: Follower, sectors: list[Sector]) -> float:
    """Largest relative change of a travel time under a coarser tolerance: more than the error itself."""
    chosen = sectors[:: max(1, -(-len(sectors) // _RETRACED))]
    if not chosen:
        return 0.0
    middle = [int(np.argmin(np.abs(sector.x))) for sector in chosen]
    s = [
        np.array([sector.piece.parts(sector.x[k : k + 1])[0]])
        for sector, k in zip(chosen, middle, strict=True)
    ]
    z = [sector.piece.rake.place(part) for sector, part in zip(chosen, s, strict=True)]
    delay = [sector.piece.rake.delay(place) for sector, place in zip(chosen, z, strict=True)]
    coarse = Follower(follower.scene, follower.transects, _COARSER * follower.tolerance)
    again = coarse.fates(np.concatenate(z), np.concatenate(delay))
    parts = [0.0]
    for sector, k, fate in zip(chosen, middle, again, strict=True):
        times = sector.fates[k].times
        if fate.signature == sector.signature and times.size and times.min() > 0.0:
            parts.append(float(np.max(np.abs(fate.times / times - 1.0))))
    return max(parts)


def passage(course: Course, ramps: Ramps, whole: float, *, endless: bool) -> Passage:
    """Passage of a course of amounts, as shares of the whole."""
    return Passage(Course(course.time, course.amount / whole), nan if endless else float(ramps.high.max()))


def status_of(scene: Scene, sample: Sample, *, accurate: bool) -> ReleaseStatus:
    """The gravest of what can be said of a sample."""
    lost = any(sector.signature.outcome is Outcome.UNRESOLVED for sector in sample.sectors)
    if not scene.complete:
        return ReleaseStatus.INCOMPLETE
    if lost or sample.mixed:
        return ReleaseStatus.UNRESOLVED
    if not accurate:
        return ReleaseStatus.NOT_CONVERGED
    return ReleaseStatus.BISECTED if sample.bisected else ReleaseStatus.OK


def time_error(
    sample: Sample,
    passages: dict[Target, Passage],
    *,
    by_area: bool,
    first: dict[Target, float] | None = None,
) -> float:
    """Largest change of a reported time since the nodes were half as many, and by tracing [s]."""
    errors = [0.0]
    for target, found in passages.items():
        former = sample.former_ramps(target)
        begin = None if first is None else first.get(target)
        course, _ = course_of(former, by_area=by_area, first=begin)
        if course.total <= 0.0:
            continue
        levels = np.array(LEVELS)
        now, before = (c.when(levels * c.total) for c in (found.course, course))
        errors.append(float(np.max(np.abs(now - before))) + (TIME_SHIFT + sample.time_part) * float(now[-1]))
    return max(errors)

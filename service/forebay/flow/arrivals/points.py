"""What becomes of water released at one point."""

import numpy as np

from forebay.flow.arrivals.fates import INTAKE, Fate, Follower, Target
from forebay.flow.arrivals.findings import Findings, Passage
from forebay.flow.arrivals.result import Outcome, ReleaseStatus
from forebay.flow.arrivals.scene import Scene, divide_distance
from forebay.flow.arrivals.spread import Course, Ramps, course_of
from forebay.flow.layout import outflow

_ON_DIVIDE = 1e-11
"""Flux between a point and a dividing streamline, over the reference, below which it lies on it [-]."""
_COARSER = 10.0
_LAST_PIECE = 1e-8
"""Relative error of a time by the closed form of its last piece, into a sink [-]."""
_UNRESOLVED = (Outcome.UNRESOLVED, "")


def find_point(follower: Follower, at: complex) -> Findings:
    """Fate of a point: one streamline, traced twice for the error of its times.

    Notes
    -----
    Close to a dividing streamline the fate is right as long as the flux between them exceeds a few 1e-12 of
    the discharges; closer, the point counts as on it and its outcome is `stagnates`.
    """
    scene = follower.scene
    z = np.array([at], dtype=np.complex128)
    if not bool(scene.model.wet(z)[0]):
        return Findings(status=ReleaseStatus.ON_LAND)
    index = int(scene.model.singular(z)[0])
    if index >= 0:
        return _at_singularity(scene, index)
    distance, flux = divide_distance(scene, at)
    if flux <= _ON_DIVIDE * scene.reference or complex(scene.model.velocity(z)[0]) == 0j:
        return _stagnating(distance)
    fate = follower.fates(z, np.zeros(1))[0]
    coarse = Follower(scene, follower.transects, _COARSER * follower.tolerance).fates(z, np.zeros(1))[0]
    return Findings(
        passages=_passages(fate),
        ends=_ends(fate),
        share_error=0.0 if fate.signature == coarse.signature else 1.0,
        time_error=_time_error(fate, coarse),
        divide_distance=distance,
        status=_status(scene, fate),
    )


def _status(scene: Scene, fate: Fate) -> ReleaseStatus:
    if not scene.complete:
        return ReleaseStatus.INCOMPLETE
    return ReleaseStatus.UNRESOLVED if fate.signature.outcome is Outcome.UNRESOLVED else ReleaseStatus.OK


def _stagnating(distance: float) -> Findings:
    """On a dividing streamline: neither side's fate."""
    ends = {(Outcome.STAGNATES, ""): 1.0}
    return Findings(
        ends=ends, divide_distance=distance, share_error=0.0, status=ReleaseStatus.ON_DIVIDING_STREAMLINE
    )


def _at_singularity(scene: Scene, index: int) -> Findings:
    """At a sink the water is there at once; elsewhere the velocity has no direction."""
    singularities = scene.model.singularities
    kind = singularities[index].kind if index < len(singularities) else None
    if kind is None or outflow(kind) >= 0.0:
        return Findings(status=ReleaseStatus.ON_SINGULARITY)
    course = Course(np.zeros(2), np.array([0.0, 1.0]))
    distance, _ = divide_distance(scene, singularities[index].at)
    return Findings(
        passages={(INTAKE, kind.name): Passage(course, 0.0)},
        ends={(Outcome.CAPTURED, kind.name): 1.0},
        share_error=0.0,
        time_error=0.0,
        divide_distance=distance,
    )


def _passages(fate: Fate) -> dict[Target, Passage]:
    passages = {}
    for target in dict.fromkeys(fate.signature.targets):
        rows = [j for j, met in enumerate(fate.signature.targets) if met == target]
        times = fate.times[rows]
        course, _ = course_of(Ramps(times, times, fate.shares[rows]), by_area=False)
        passages[target] = Passage(course, float(times.max()))
    return passages


def _ends(fate: Fate) -> dict[tuple[Outcome, str], float]:
    ends: dict[tuple[Outcome, str], float] = {}
    for (kind, name), share in zip(fate.signature.targets, fate.shares, strict=True):
        if kind == INTAKE:
            ends[Outcome.CAPTURED, name] = ends.get((Outcome.CAPTURED, name), 0.0) + float(share)
    if fate.left > 0.0:
        ends[fate.signature.outcome, fate.signature.to] = fate.left
    return ends


def _time_error(fate: Fate, coarse: Fate) -> float:
    """Change of any time under a coarser tolerance, more than the error itself [s]."""
    if fate.signature != coarse.signature or not fate.times.size:
        return float("nan") if fate.times.size else 0.0
    return float(np.max(np.abs(fate.times - coarse.times) + _LAST_PIECE * fate.times))

"""What becomes of water released along a line, or given by an outfall."""

from collections import defaultdict
from itertools import pairwise
from math import nan

import numpy as np

from forebay.flow.arrivals.curves import Part, Rake, Straight
from forebay.flow.arrivals.fates import INTAKE, Follower
from forebay.flow.arrivals.findings import ArrivalRules, End, Findings
from forebay.flow.arrivals.outfalls import outfall_rakes
from forebay.flow.arrivals.release import AlongLine
from forebay.flow.arrivals.result import Outcome, ReleaseStatus
from forebay.flow.arrivals.sampling import (
    Accuracy,
    Sample,
    amount_of,
    passage,
    sampled,
    status_of,
    time_error,
)
from forebay.flow.arrivals.sectors import Piece
from forebay.flow.arrivals.spread import course_of
from forebay.flow.arrivals.wetting import wet_parts


def find_line(follower: Follower, line: AlongLine, rules: ArrivalRules) -> Findings:
    """Fate of water spread evenly over the wet length of a polyline."""
    curves = [Straight(a, b) for a, b in pairwise(line.points) if a != b]
    parts = wet_parts(follower.scene.model, curves)
    rakes: list[tuple[Rake, list[Part]]] = list(zip(curves, parts, strict=True))
    wet = sum(curve.length * (b - a) for curve, pairs in zip(curves, parts, strict=True) for a, b in pairs)
    if wet == 0.0:
        return Findings(status=ReleaseStatus.ON_LAND, wet_share=0.0)
    return _find(follower, rakes, rules, wet_share=wet / sum(curve.length for curve in curves))


def find_outfall(follower: Follower, name: str, rules: ArrivalRules) -> Findings:
    """Fate of an outfall's water, weighted by its flux."""
    rakes: list[tuple[Rake, list[Part]]] = [
        (rake, [(0.0, 1.0)]) for rake in outfall_rakes(follower.scene, name)
    ]
    return _find(follower, rakes, rules, wet_share=1.0)


def _find(
    follower: Follower, rakes: list[tuple[Rake, list[Part]]], rules: ArrivalRules, *, wet_share: float
) -> Findings:
    whole = sum(amount_of(Piece(rake, low, high)) for rake, parts in rakes for low, high in parts)
    accuracy = Accuracy(rules.tolerance, whole)
    sample = sampled(follower, rakes, rules.wanted, accuracy, by_area=False)
    passages, moved = {}, 0.0
    for target in rules.wanted:
        ramps = sample.ramps(target)
        if ramps.low.size:
            course, shift = course_of(ramps, by_area=False)
            passages[target] = passage(course, ramps, whole, endless=sample.endless(target))
            moved += shift / whole
    error = sample.error / whole + moved + accuracy.edge + follower.scene.model.boundary_residual
    return Findings(
        passages=passages,
        ends=_ends(sample, whole),
        share_error=min(1.0, error) if follower.scene.complete else nan,
        time_error=time_error(sample, passages, by_area=False),
        wet_share=wet_share,
        status=status_of(follower.scene, sample, accurate=error <= rules.tolerance),
    )


def _ends(sample: Sample, whole: float) -> dict[End, float]:
    """Shares by outcome and destination; what was left out counts as unresolved."""
    ends: dict[End, float] = defaultdict(float)
    for sector in sample.sectors:
        amount = amount_of(sector.piece) / whole
        for j, (kind, name) in enumerate(sector.signature.targets):
            if kind == INTAKE:
                ends[Outcome.CAPTURED, name] += amount * _mean(sector.x, sector.shares[j])
        if sector.signature.outcome is not Outcome.CAPTURED:
            ends[sector.signature.outcome, sector.signature.to] += amount * _mean(sector.x, sector.left)
    rest = 1.0 - sum(ends.values())
    if rest > 1e-14:
        ends[Outcome.UNRESOLVED, ""] += rest
    return dict(ends)


def _mean(x: np.ndarray, shares: np.ndarray) -> float:
    """Mean over a sector, of s, by the trapezoidal rule."""
    s = 1.0 / (1.0 + np.exp(-x))
    steps = np.diff(np.concatenate([[0.0], s, [1.0]]))
    padded = np.concatenate([shares[:1], shares, shares[-1:]])
    return float(np.sum(0.5 * (padded[1:] + padded[:-1]) * steps))

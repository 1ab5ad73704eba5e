"""Arrival times over sectors: splines through the nodes, refined until the arrivals no longer change.

The splines are of arsinh(t / middle time): times may grow as a power where water loops out to infinity.
"""

from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline

from forebay.flow.arrays import FloatArray
from forebay.flow.arrivals.fates import Follower, Target
from forebay.flow.arrivals.sectors import Sector, refined
from forebay.flow.arrivals.spread import Ramps

_BETWEEN = 12
"""Ramps between two nodes."""
_DOUBLINGS = 5
_LOOKS = 48
"""Times at which two versions of a sector's arrivals are compared."""
TIME_SHIFT = 1e-5
"""Relative change of a time that does not count as a change of amounts [-]."""
_INWARD = 3.0
"""Distance in x over which the slope of the travel time is compared with that at the end [-]."""
_STEADY = 0.3
"""Part of its former slope that the travel time keeps over `_INWARD`, if it grows as a logarithm [-]."""
_NOISE = 1e-6
"""Slope over the travel time that tracing alone can make [-]."""


@dataclass(frozen=True, slots=True)
class Timed:
    """A sector with its arrival times.

    before : the same with half the nodes;  error : change of amounts since then, at any time
    """

    now: Sector
    before: Sector
    error: float


def timed(follower: Follower, sectors: list[Sector], *, by_area: bool, tolerance: float) -> list[Timed]:
    """Sectors with nodes added until doubling them changes no amount by more than `tolerance` over all.

    tolerance : amount, summed over the sectors; what is left after five doublings is in the errors
    """
    each = tolerance / max(len(sectors), 1)
    done: list[Timed] = []
    pending = sectors
    for k in range(_DOUBLINGS):
        finer = refined(follower, pending)
        rows = [
            Timed(now, before, _change(now, before, by_area=by_area))
            for now, before in zip(finer, pending, strict=True)
        ]
        open_rows = [row for row in rows if row.error > each and k < _DOUBLINGS - 1]
        done += [row for row in rows if row.error <= each or k == _DOUBLINGS - 1]
        pending = [row.now for row in open_rows]
        if not pending:
            break
    return done


def ramps_of(sector: Sector, target: Target) -> Ramps:
    """Arrivals at a target."""
    meetings = [j for j, met in enumerate(sector.signature.targets) if met == target]
    return Ramps.joined([_ramps(sector, j) for j in meetings])


def _ramps(sector: Sector, j: int) -> Ramps:
    middle = float(np.median(sector.times[j])) or 1.0
    spline = CubicSpline(sector.x, np.arcsinh(sector.times[j] / middle))
    x = _fine(spline, sector.x)
    times = middle * np.sinh(np.maximum(spline(x), 0.0))
    shares = sector.shares[j]
    share = CubicSpline(sector.x, shares)(x) if np.ptp(shares) > 0.0 else np.full(x.size, shares[0])
    times, share = (np.concatenate([row[:1], row, row[-1:]]) for row in (times, share))
    s = np.concatenate([[sector.piece.low], sector.piece.parts(x), [sector.piece.high]])
    weight = sector.piece.rake.weights(s) * 0.5 * (share[1:] + share[:-1])
    return Ramps(np.minimum(times[1:], times[:-1]), np.maximum(times[1:], times[:-1]), weight)


def _fine(spline: CubicSpline, nodes: FloatArray) -> FloatArray:
    """Places between the nodes, and those at which the travel time is least or largest."""
    steps = np.arange(_BETWEEN) / _BETWEEN
    between = (nodes[:-1, None] + steps * np.diff(nodes)[:, None]).ravel()
    turns = spline.derivative().roots(extrapolate=False)
    inner = turns[(turns > nodes[0]) & (turns < nodes[-1])]
    return np.unique(np.concatenate([between, nodes[-1:], inner]))


def _change(now: Sector, before: Sector, *, by_area: bool) -> float:
    """Largest difference of the amount arrived by any time, summed over the targets.

    Times within `TIME_SHIFT` are one: where arrivals begin they rise like a square root, in no time.
    """
    total = 0.0
    for target in dict.fromkeys(now.signature.targets):
        fine, coarse = ramps_of(now, target), ramps_of(before, target)
        bounds = np.sort(np.concatenate([fine.low, fine.high]))
        t = bounds[np.linspace(0, bounds.size - 1, _LOOKS).astype(np.int64)]
        first = float(min(fine.low.min(), coarse.low.min()))
        one = fine.amounts(t, by_area=by_area, first=first)
        shift = TIME_SHIFT * t
        early, late = (
            coarse.amounts(np.maximum(t + d, 0.0), by_area=by_area, first=first) for d in (-shift, shift)
        )
        low, high = np.minimum(early, late), np.maximum(early, late)
        total += float(np.max(np.maximum(np.maximum(one - high, low - one), 0.0)))
    return total


def endless(sector: Sector, target: Target) -> bool:
    """Whether the travel time to a target grows without limit towards an end of the sector."""
    rows = [j for j, met in enumerate(sector.signature.targets) if met == target]
    return any(
        _grows(sector.x, sector.times[j]) or _grows(-sector.x[::-1], sector.times[j][::-1]) for j in rows
    )


def _grows(x: FloatArray, times: FloatArray) -> bool:
    """Whether times grow as a straight line towards the first of x."""
    inner = int(np.searchsorted(x, x[0] + _INWARD))
    if inner + 1 >= x.size or inner == 0:
        return False
    end = (times[0] - times[1]) / (x[1] - x[0])
    former = (times[inner] - times[inner + 1]) / (x[inner + 1] - x[inner])
    return bool(end > _NOISE * times[0] and end > _STEADY * abs(former))

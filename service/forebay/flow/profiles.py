"""Functions along a line from 0 to 1, smooth but for a few known places: turning points, zeros, shares.

A function takes and gives arrays of shape (n,). It may grow without bound at 0 and 1, where nobody asks it.
"""

from collections.abc import Callable, Sequence
from typing import NamedTuple

import numpy as np
from scipy.integrate import cubature

from forebay.flow.arrays import FloatArray

Profile = Callable[[FloatArray], FloatArray]
"""A function of the part of the length, in (0, 1)."""

_NODES = 801
_GOLDEN = 0.5 * (np.sqrt(5.0) - 1.0)
_TURNS = 50
"""Golden sections: 0.618^50 = 4e-11 of a gap between nodes, where a smooth function is flat to 1e-21."""
_HALVINGS = 60
_FLAT = 1e-12
"""Differences between neighbours below this part of the largest value are rounding [-]."""
_ONE_PLACE = 1e-6
"""Length, as a part of the whole, of a stretch that counts as one place [-]."""
_CLUSTER = np.array([-4.0, -2.0, -1.0, -0.5, -0.25, 0.0, 0.25, 0.5, 1.0, 2.0, 4.0])


class Integral(NamedTuple):
    """Value and error estimate of an integral, and whether the estimate met the tolerance."""

    value: float
    error: float
    converged: bool


def graded(margin: float, bumps: Sequence[tuple[float, float]] = ()) -> FloatArray:
    """Places in [margin, 1 - margin], dense towards both ends and about every bump.

    Parameters
    ----------
    margin : distance of the first and last place from the ends, in (0, 0.5) [-]
    bumps : place and width of what the function may feel from nearby [-]

    Returns
    -------
    shape (n,), ascending: 801 places at equal steps of artanh(2p - 1), and eleven about every bump.
    """
    reach = np.arctanh(1.0 - 2.0 * margin)
    places = [0.5 * (1.0 + np.tanh(np.linspace(-reach, reach, _NODES)))]
    places += [place + width * _CLUSTER for place, width in bumps]
    return np.unique(np.clip(np.concatenate(places), margin, 1.0 - margin))


def with_turning_points(profile: Profile, places: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Places with the turning points between them added, and the values at all of them, shape (k,) each.

    Notes
    -----
    Golden section between the neighbours of every sampled extreme. Two turning points within one gap
    between places stay unseen.
    """
    values = profile(places)
    steps = np.diff(values)
    flat = _FLAT * float(np.max(np.abs(values)))
    rough = (np.abs(steps[:-1]) > flat) | (np.abs(steps[1:]) > flat)
    here = np.nonzero((steps[:-1] * steps[1:] < 0.0) & rough)[0] + 1
    if here.size == 0:
        return places, values
    sign = np.sign(steps[here - 1])
    turning = _turning(profile, places[here - 1], places[here + 1], sign)
    merged = np.concatenate([places, turning])
    order = np.argsort(merged, kind="stable")
    return merged[order], np.concatenate([values, profile(turning)])[order]


def _turning(profile: Profile, low: FloatArray, high: FloatArray, sign: FloatArray) -> FloatArray:
    """Places of the maxima of sign x profile between low and high, by golden section."""
    left, right = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
    at_left, at_right = sign * profile(left), sign * profile(right)
    for _ in range(_TURNS):
        lower = at_left >= at_right
        low, high = np.where(lower, low, left), np.where(lower, right, high)
        fresh = np.where(lower, high - _GOLDEN * (high - low), low + _GOLDEN * (high - low))
        value = sign * profile(fresh)
        left, right = np.where(lower, fresh, right), np.where(lower, left, fresh)
        at_left, at_right = np.where(lower, value, at_right), np.where(lower, at_left, value)
    return np.asarray(0.5 * (low + high), dtype=np.float64)


def zeros(profile: Profile, places: FloatArray) -> FloatArray:
    """Zeros at which a function changes sign, ascending, to the last bit of their place.

    places : see `graded`; every pair of zeros is separated by a sampled place or by a turning point
    """
    at, values = with_turning_points(profile, places)
    here = np.nonzero((values[:-1] < 0.0) != (values[1:] < 0.0))[0]
    low, high, negative = at[here], at[here + 1], values[here] < 0.0
    for _ in range(_HALVINGS if here.size else 0):
        middle = 0.5 * (low + high)
        same = (profile(middle) < 0.0) == negative
        low, high = np.where(same, middle, low), np.where(same, high, middle)
    return np.asarray(0.5 * (low + high), dtype=np.float64)


def share_not_negative(profile: Profile, places: FloatArray) -> float:
    """Part of the length on which a function is zero or more [-].

    Beyond the first and last of `places` the function keeps the sign that it has there.
    """
    edges = np.concatenate([[0.0], zeros(profile, places), [1.0]])
    lengths = np.diff(edges)
    middles = np.clip(0.5 * (edges[:-1] + edges[1:]), places[0], places[-1])
    return float(lengths[profile(middles) >= 0.0].sum())


def extremes_of(profile: Profile, places: FloatArray) -> tuple[float, float]:
    """Least and largest value between the first and the last of `places`."""
    values = with_turning_points(profile, places)[1]
    return float(values.min()), float(values.max())


def places_of_largest(profile: Profile, places: FloatArray) -> FloatArray:
    """Where a function is largest, shape (k,): each place, or both ends of a stretch of equal values."""
    at, values = with_turning_points(profile, places)
    top = float(values.max())
    equal = values >= top - _FLAT * max(abs(top), float(np.max(np.abs(values))))
    stretches = np.split(np.arange(at.size), np.nonzero(np.diff(equal))[0] + 1)
    ends = [at[stretch[[0, -1]]] for stretch in stretches if equal[stretch[0]]]
    return np.concatenate([pair if pair[1] - pair[0] > _ONE_PLACE else pair[:1] for pair in ends])


def integral(profile: Profile, low: float, high: float) -> Integral:
    """Integral of a function from `low` to `high`, with an error estimate.

    Adaptive Gauss-Kronrod rule of 21 nodes; logarithmic ends are allowed, since no node falls on them.
    """

    def column(parts: FloatArray) -> FloatArray:
        return profile(parts[:, 0])

    found = cubature(column, [low], [high], rule="gk21", rtol=1e-12, atol=1e-300)
    return Integral(float(found.estimate), float(found.error), found.status == "converged")

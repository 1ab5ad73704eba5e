"""Exact integrals of 1/(z - s) and log(z - s) over a straight segment of sources s, from a to b.

Every function is a mean over the segment, so that a source strength multiplies it directly, and stays
accurate for short segments far away, for points next to an end, and on the segment itself. `facing` is 0, or,
for a segment in a wall, the sign of Im((z - a)/(b - a)) on the water's side.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray

_ON_WALL = 1e-6
"""Distance from a segment in a wall, in lengths, within which a point counts as on the water's side [-]."""

_ROUNDING = 16.0 * float(np.finfo(np.float64).eps)
"""Distance from a segment's line, relative to the coordinates, within which a point counts as on it [-]."""

_ORDERS = 2.0 * np.arange(1, 14)
_SERIES = 1.0 / (_ORDERS * (_ORDERS + 1.0))
"""1 / (2k (2k + 1)), k = 1 ... 13: with |2m| >= 4 the first term left out is below 16^-14 = 1e-17."""

_TURN = 2.0 * math.pi


@njit(cache=True, error_model="numpy")
def dot(u: complex, v: complex) -> float:
    """Re(u conj v)."""
    return u.real * v.real + u.imag * v.imag


@njit(cache=True, error_model="numpy")
def cross(u: complex, v: complex) -> float:
    """Im(u conj v)."""
    return u.imag * v.real - u.real * v.imag


@njit(cache=True, error_model="numpy")
def inverse(u: complex) -> complex:
    """1/u, nan at zero (where compiled complex division raises)."""
    square = u.real * u.real + u.imag * u.imag
    return complex(u.real / square, -u.imag / square) if square > 0.0 else complex(np.nan, np.nan)


@njit(cache=True, error_model="numpy")
def left_of(z: complex, a: complex, b: complex) -> float:
    """|b - a| times the distance to the left of the line a -> b, from the nearer end."""
    if abs(z - a) < abs(z - b):
        return cross(z - a, b - a)
    return cross(z - b, b - a)


@njit(cache=True, error_model="numpy")
def side_of(z: complex, a: complex, b: complex, facing: float) -> float:
    """1 left of the line a -> b, -1 right, 0 on it to rounding; on a segment in a wall the water's side."""
    left = left_of(z, a, b)
    length = abs(b - a)
    if abs(left) <= _ROUNDING * length * (abs(z) + abs(a) + abs(b)):
        return facing
    within = _ON_WALL * length * length
    if facing != 0.0 and abs(left) <= within and dot(z - a, z - b) <= within:
        return facing
    return math.copysign(1.0, left)


@njit(cache=True, error_model="numpy")
def sides(z: ComplexArray, a: complex, b: complex, facing: float) -> FloatArray:
    """`side_of` at places of shape (n,)."""
    found = np.empty(z.shape[0], np.float64)
    for i in range(z.shape[0]):
        found[i] = side_of(z[i], a, b, facing)
    return found


@njit(cache=True, error_model="numpy")
def mean_inverse(z: complex, a: complex, b: complex, facing: float) -> complex:
    """Mean of 1/(z - s): log((z - a)/(z - b)) / (b - a).

    On the segment: the mean of both sides, or the water's side in a wall. Not finite at either end.
    """
    to_start, to_end, run = z - a, z - b, b - a
    side = side_of(z, a, b, facing)
    along = dot(to_start, to_end)
    turn = 0.0
    if side != 0.0 or along > 0.0:
        turn = math.atan2(-side * abs(left_of(z, a, b)), along)
    ratio = run * inverse(to_end)
    size = ratio.real * ratio.real + ratio.imag * ratio.imag
    stretch = (
        0.5 * math.log1p(2.0 * ratio.real + size) if size < 0.25 else math.log(abs(to_start) / abs(to_end))
    )
    return complex(stretch, turn) / run


@njit(cache=True, error_model="numpy")
def _logarithm(value: complex, angled: complex, side: float) -> complex:
    """log|value| + i angle of `angled`, held to the given side; zero where the value is."""
    modulus = abs(value)
    stretch = math.log(modulus) if modulus > 0.0 else 0.0
    turn = math.atan2(side * abs(angled.imag), angled.real) if side != 0.0 else 0.0
    return complex(stretch, turn)


@njit(cache=True, error_model="numpy")
def mean_log(z: complex, a: complex, b: complex, axis: complex, side: float) -> complex:
    """Mean of log(z - s), angles measured from `axis` in [0, pi] (side 1), [-pi, 0] (-1) or as 0 (0).

    e log(z - a) - f log(z - b) - 1 with e = (z - a)/(b - a), f = e - 1; beyond two lengths the series
    log m - sum (2m)^-2k / (2k (2k + 1)), m = (z - (a + b)/2)/(b - a). Finite at the ends. The angle of `axis`
    itself is not added.
    """
    run, middle = b - a, 0.5 * (a + b)
    m = (z - middle) / run
    base = math.log(abs(run))
    if abs(m) > 2.0:
        inverse = 0.25 / (m * m)
        total = 0j
        for k in range(_SERIES.shape[0] - 1, -1, -1):
            total = (total + _SERIES[k]) * inverse
        return base + _logarithm(m, (z - middle) / axis, side) - total
    e, f = (z - a) / run, (z - b) / run
    inner = e * _logarithm(e, (z - a) / axis, side) - f * _logarithm(f, (z - b) / axis, side)
    return base + inner - 1.0


@njit(cache=True, error_model="numpy")
def own_log(z: complex, a: complex, b: complex, facing: float) -> complex:
    """Mean of log(z - s) up to a constant, cut along the segment and its line beyond a."""
    side = side_of(z, a, b, facing)
    return mean_log(z, a, b, b - a, 1.0 if side == 0.0 else side)


@njit(cache=True, error_model="numpy")
def subtended(p: complex, q: complex, a: complex, b: complex, facing: float) -> complex:
    """Mean over s of log((q - s)/(p - s)), continuous along the straight chord p -> q.

    Where the chord crosses the segment the imaginary part jumps by 2 pi times the share of the segment on
    the far side of b. A chord along the segment gets the mean of both sides, or the water's side in a wall.
    """
    side_p, side_q = side_of(p, a, b, facing), side_of(q, a, b, facing)
    jump = 0.0
    if side_p * side_q < 0.0:
        e, f = (p - a) / (b - a), (q - a) / (b - a)
        meets = (e.real * f.imag - f.real * e.imag) / (f.imag - e.imag)
        jump = side_p * min(max(1.0 - meets, 0.0), 1.0)
    held_p = side_q if side_p == 0.0 else side_p
    held_q = side_p if side_q == 0.0 else side_q
    passed = mean_log(q, a, b, b - a, held_q) - mean_log(p, a, b, b - a, held_p)
    return passed + complex(0.0, _TURN * jump)

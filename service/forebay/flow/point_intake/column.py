"""One point opening between a level bed and a rigid surface: images in the vertical, or modes of the column.

An opening of discharge Q at the elevation e in water of depth h has the images e + 2kh and -e + 2kh. Near it
(r < h) the images are summed, the nearest one by one, the rest by the midpoint form of Euler and Maclaurin;
farther away the modes cos(n pi z/h) K0(n pi r/h) are, of which a few are left.
"""

import math

import numpy as np
from numba import njit
from scipy.special import k0, k1

from forebay.flow.arrays import FloatArray

SWITCH = 1.0
"""Distance over the depth from which the modes are summed instead of the images [-]."""

REACH = 12.0
"""Distance over the depth beyond which the flow is plane to rounding: exp(-12 pi) = 4e-17 [-]."""

_DIRECT = 10
_LAST = 37.5
"""Argument beyond which a mode changes no digit: K1(37.5) = 1e-17 [-]."""


@njit(cache=True, error_model="numpy")
def _tail_term(y: float, p: float) -> float:
    """Sum over k >= 0 of (y + 1/2 + k)^-p less its integral from y: Euler and Maclaurin's midpoint form."""
    q = 1.0 / (y * y)
    fifth = 31.0 * (p + 3.0) * (p + 4.0) / 967680.0
    seventh = 127.0 * (p + 3.0) * (p + 4.0) * (p + 5.0) * (p + 6.0) / 154828800.0
    rest = (p + 1.0) * (p + 2.0) * q * (7.0 / 5760.0 - q * (fifth - q * seventh))
    return float(p * y ** (-p - 1.0) * (rest - 1.0 / 24.0))


@njit(cache=True, error_model="numpy")
def _tails(s: float, y: float) -> tuple[float, float]:
    """Sums over k >= 0 of s/R^3 and d/R^3, R^2 = s^2 + d^2, d = y + 1/2 + k; s far below y."""
    rho = math.sqrt(s * s + y * y)
    s2 = s * s
    radial, upward = _tail_term(y, 3.0), _tail_term(y, 2.0)
    radial -= s2 * (
        1.5 * _tail_term(y, 5.0) - s2 * (1.875 * _tail_term(y, 7.0) - 2.1875 * s2 * _tail_term(y, 9.0))
    )
    upward -= s2 * (
        1.5 * _tail_term(y, 4.0) - s2 * (1.875 * _tail_term(y, 6.0) - 2.1875 * s2 * _tail_term(y, 8.0))
    )
    return s * (1.0 / (rho * (rho + y)) + radial), 1.0 / rho + upward


@njit(cache=True, error_model="numpy")
def _row(s: float, t: float) -> tuple[float, float]:
    """Sums over all whole k of s/R^3 and (t + k)/R^3, R^2 = s^2 + (t + k)^2."""
    t -= round(t)
    radial = 0.0
    upward = 0.0
    for k in range(_DIRECT, 0, -1):
        for d in (t + k, t - k):
            cube = (s * s + d * d) ** 1.5
            radial += s / cube
            upward += d / cube
    cube = (s * s + t * t) ** 1.5
    above, below = _tails(s, _DIRECT + 0.5 + t), _tails(s, _DIRECT + 0.5 - t)
    return radial + s / cube + above[0] + below[0], upward + t / cube + above[1] - below[1]


@njit(cache=True, error_model="numpy")
def _image_sums(
    r: FloatArray, z: FloatArray, elevation: float, depth: float
) -> tuple[FloatArray, FloatArray]:
    """Velocity outwards and upwards of a unit discharge, shape of r [1/m2]; nan at the opening itself."""
    outward = np.empty(r.size)
    upward = np.empty(r.size)
    span = 2.0 * depth
    unit = 1.0 / (4.0 * math.pi * span * span)
    for i in range(r.size):
        own = _row(r[i] / span, (z[i] - elevation) / span)
        mirrored = _row(r[i] / span, (z[i] + elevation) / span)
        outward[i] = unit * (own[0] + mirrored[0])
        upward[i] = unit * (own[1] + mirrored[1])
    return outward, upward


def _mode_sums(r: FloatArray, z: FloatArray, elevation: float, depth: float) -> tuple[FloatArray, FloatArray]:
    """What a unit discharge adds to its depth mean, outwards and upwards, shape of r [1/m2]; r >= h."""
    excess, upward = np.zeros(r.shape), np.zeros(r.shape)
    x, y = math.pi * r / depth, math.pi * z / depth
    n, left = 1, np.arange(r.size)
    while left.size:
        left = left[n * x[left] < _LAST]
        weight = n * math.cos(n * math.pi * elevation / depth) / depth**2
        excess[left] += weight * np.cos(n * y[left]) * k1(n * x[left])
        upward[left] += weight * np.sin(n * y[left]) * k0(n * x[left])
        n += 1
    return excess, upward


def column_excess(
    r: FloatArray, z: FloatArray, elevation: float, depth: float
) -> tuple[FloatArray, FloatArray]:
    """What a unit discharge from a point opening adds to its depth-mean flow 1/(2 pi r h).

    Outwards u_r - 1/(2 pi r h), upwards w, with

        u_r = 1/(4 pi) sum_k r/R_k^3 = 1/(2 pi r h) [1 + 2 sum_n cos(n pi e/h) cos(n pi z/h) x_n K1(x_n)]
        w   = 1/(4 pi) sum_k (z - z_k)/R_k^3 = 1/(pi h) sum_n n pi/h cos(n pi e/h) sin(n pi z/h) K0(x_n)

    z_k = +-e + 2kh, x_n = n pi r/h.

    Parameters
    ----------
    r : shape (n,), horizontal distance from the opening, above zero [m]
    z : shape (n,), height above the bed, between 0 and `depth` [m]
    elevation : height e of the opening above the bed [m]
    depth : h [m]

    Returns
    -------
    two arrays, shape (n,) [1/m2], positive away from a source and upwards; zero beyond `REACH` depths.

    Notes
    -----
    Relative accuracy of u_r and w 1e-12 of the speed (measured against the modes at 20 digits); what is
    left of the excess itself loses the digits of 1/(2 pi r h) as r falls. About 1 microsecond a point.

    References
    ----------
    Images between two planes: Lamb, Hydrodynamics, 1932, article 72 (from memory). Modes: the cosine series
    of the same sum, by Poisson's summation.
    """
    excess, upward = np.zeros(r.shape), np.zeros(r.shape)
    near = r < SWITCH * depth
    outward, upward[near] = _image_sums(r[near], z[near], elevation, depth)
    excess[near] = outward - 1.0 / (2.0 * math.pi * depth * r[near])
    far = ~near & (r < REACH * depth)
    excess[far], upward[far] = _mode_sums(r[far], z[far], elevation, depth)
    return excess, upward


def mean_ratio(r: FloatArray, z: FloatArray, elevation: float, depth: float) -> FloatArray:
    """Horizontal speed that a point opening makes over its depth mean Q/(2 pi r h), shape of r [-]."""
    return 1.0 + 2.0 * math.pi * depth * r * column_excess(r, z, elevation, depth)[0]

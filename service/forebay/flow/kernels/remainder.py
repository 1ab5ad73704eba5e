"""The kernel coth(d/2)/2 without its nearest pole: what is left is smooth and can be integrated.

With X(d) = coth(d/2)/2 and R(d) = X(d) - 1/d, analytic for |d| < 2 pi:

    rest(d)       = R(d)
    rest_slope(d) = R'(d) = 1/d^2 - 1/(4 sinh^2(d/2))
    rest_log(d)   = log(sinh(d/2) / (d/2)),             derivative R(d)
    rest_power(d) = log((exp(d) - 1) / d) = rest_log(d) + d/2

Near d = 0 the closed forms cancel, and the Taylor series with Bernoulli numbers takes over. Absolute accuracy
1e-15 in |Im d| <= 5, measured against 40 digits.
"""

import cmath
import math

import numpy as np
from numba import njit
from scipy.special import zeta

_ORDERS = 2 * np.arange(1, 14)
_REST = np.where(_ORDERS % 4 == 2, 2.0, -2.0) * zeta(_ORDERS) / (2.0 * np.pi) ** _ORDERS
"""B_2k / (2k)! = -2 (-1)^k zeta(2k) / (2 pi)^2k, k = 1 ... 13: with |d| < 1 the first term left out is
below (1 / 2 pi)^28 = 1e-22."""

_SLOPE = _REST * (_ORDERS - 1)
_LOG = _REST / _ORDERS


@njit(cache=True, error_model="numpy")
def _series(d: complex, coefficients: np.ndarray) -> complex:
    """Sum of c_k d^(2k), k = 0 ..."""
    square = d * d
    total = 0j
    for k in range(coefficients.shape[0] - 1, -1, -1):
        total = total * square + coefficients[k]
    return total


@njit(cache=True, error_model="numpy")
def lost(d: complex) -> complex:
    """1 - exp(-d) without cancellation near d = 0."""
    decayed = math.exp(-d.real)
    half = math.sin(0.5 * d.imag)
    return complex(-math.expm1(-d.real) + 2.0 * decayed * half * half, decayed * math.sin(d.imag))


@njit(cache=True, error_model="numpy")
def is_near(d: complex) -> bool:
    """Whether the series is used."""
    return d.real * d.real + d.imag * d.imag < 1.0


@njit(cache=True, error_model="numpy")
def rest(d: complex) -> complex:
    """R(d) = coth(d/2)/2 - 1/d [-]; d not within rounding of 2 pi i k, k != 0."""
    if is_near(d):
        return d * _series(d, _REST)
    sign = -1.0 if d.real < 0.0 else 1.0
    gone = lost(sign * d)
    return sign * (2.0 - gone) / (2.0 * gone) - 1.0 / d


@njit(cache=True, error_model="numpy")
def rest_slope(d: complex) -> complex:
    """R'(d) = 1/d^2 - 1/(4 sinh^2(d/2)) [-]; domain as `rest`."""
    if is_near(d):
        return _series(d, _SLOPE)
    e = -d if d.real < 0.0 else d
    gone = lost(e)
    return 1.0 / (e * e) - (1.0 - gone) / (gone * gone)


@njit(cache=True, error_model="numpy")
def rest_log(d: complex) -> complex:
    """log(sinh(d/2) / (d/2)), zero at d = 0, continuous in |Im d| < 2 pi [-]."""
    if is_near(d):
        return d * d * _series(d, _LOG)
    e = -d if d.real < 0.0 else d
    return 0.5 * e + cmath.log(lost(e)) - cmath.log(e)


@njit(cache=True, error_model="numpy")
def rest_power(d: complex) -> complex:
    """log((exp(d) - 1) / d), zero at d = 0, continuous in |Im d| < 2 pi; -log(-d) as Re d -> -infinity."""
    if is_near(d):
        return d * d * _series(d, _LOG) + 0.5 * d
    if d.real < 0.0:
        return cmath.log(lost(-d)) - cmath.log(-d)
    return d + cmath.log(lost(d)) - cmath.log(d)


@njit(cache=True, error_model="numpy")
def decay(d: complex) -> complex:
    """X(d) + 1/2 = 1 / (1 - exp(-d)), to full relative accuracy also as Re d -> -infinity [-]."""
    if d.real < 0.0:
        decayed = math.exp(d.real)
        turned = complex(decayed * math.cos(d.imag), decayed * math.sin(d.imag))
        return -turned / lost(-d)
    return 1.0 / lost(d)


@njit(cache=True, error_model="numpy")
def log_one_plus_exp(d: complex) -> complex:
    """log(1 + exp(d)), continuous in |Im d| <= pi [-]."""
    if d.real > 0.0:
        return d + cmath.log(1.0 + cmath.exp(-d))
    return cmath.log(1.0 + cmath.exp(d))

"""Kernel X(d) = coth(d/2)/2, period 2 pi i: channel, dead end, basin and corner.

With a = Re d / 2, b = Im d / 2, E = exp(-2|a|) and m = 1 - E,
coth(a + ib) = [sign(a) m (1 + E) - 4i E sin b cos b] / (m^2 + 4 E sin^2 b),
which neither overflows nor cancels, at any distance along the channel.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray

_TURN = 2.0 * math.pi


@njit(cache=True, error_model="numpy", inline="always")
def kernel(d: complex, offset: float) -> tuple[complex, complex]:
    """X(d) + offset, for offset -1/2, 0 or 1/2, and X'(d) = -1/(4 sinh^2(d/2)); no cancellation far away."""
    a = 0.5 * d.real
    sign = 1.0 if a >= 0.0 else -1.0
    if abs(a) > 0.5:
        e = math.exp(-2.0 * abs(a))
        m = 1.0 - e
    else:
        m = -math.expm1(-2.0 * abs(a))
        e = 1.0 - m
    s = math.sin(0.5 * d.imag)
    c = math.cos(0.5 * d.imag)
    denominator = m * m + 4.0 * e * s * s
    real = sign * m * (1.0 + e)
    if offset * sign > 0.0:
        real += sign * denominator
    elif offset * sign < 0.0:
        real = -sign * 2.0 * e * (2.0 * s * s - m)
    # 2 exp(-|a|) sinh(d/2) = sinh_re + i sinh_im, of squared modulus `denominator`
    sinh_re = sign * m * c
    sinh_im = (1.0 + e) * s
    shrink = e / (denominator * denominator)
    slope_re = (sinh_im * sinh_im - sinh_re * sinh_re) * shrink
    slope_im = 2.0 * sinh_re * sinh_im * shrink
    value = complex(0.5 * real / denominator, -2.0 * e * s * c / denominator)
    return value, complex(slope_re, slope_im)


@njit(cache=True, error_model="numpy")
def pole_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> tuple[ComplexArray, ComplexArray]:
    """Sums of g (X + offset) and of g X' over the poles.

    tau : shape (n,), points [-];  poles, strengths : shape (m,), positions [-] and g [m2/s]
    Returns two arrays of shape (n,) [m2/s]; nan at a pole.
    """
    n = tau.shape[0]
    velocity = np.zeros(n, np.complex128)
    slope = np.zeros(n, np.complex128)
    for i in range(n):
        for j in range(poles.shape[0]):
            value, change = kernel(tau[i] - poles[j], offset)
            velocity[i] += strengths[j] * value
            slope[i] += strengths[j] * change
    return velocity, slope


@njit(cache=True, error_model="numpy")
def velocity_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> ComplexArray:
    """Sum of g (X + offset) over the poles: as `pole_sums` without the derivative."""
    velocity = np.zeros(tau.shape[0], np.complex128)
    for i in range(tau.shape[0]):
        for j in range(poles.shape[0]):
            velocity[i] += strengths[j] * kernel(tau[i] - poles[j], offset)[0]
    return velocity


@njit(cache=True, error_model="numpy", inline="always")
def _logarithm(d: complex, side: float) -> complex:
    """Log(2 sinh(d/2)) as side d/2 + log(1 - exp(-side d)), continuous while side Re d > 0."""
    x = side * d.real
    y = side * d.imag
    decay = math.exp(-x)
    half = math.sin(0.5 * y)
    re = -math.expm1(-x) + 2.0 * decay * half * half
    im = decay * math.sin(y)
    return complex(0.5 * x + 0.5 * math.log(re * re + im * im), 0.5 * y + math.atan2(im, re))


@njit(cache=True, error_model="numpy")
def path_integrals(
    start: ComplexArray, end: ComplexArray, poles: ComplexArray, offset: float, crossing: FloatArray
) -> ComplexArray:
    """Integrals of X + offset along paths on which Re tau is monotone.

    The antiderivative log(2 sinh(d/2)) has one form for Re d > 0 and one for Re d < 0. Where the path
    crosses Re d = 0 at height Im d in (2 pi k, 2 pi (k+1)) the right form exceeds the left by i pi (1 + 2k).

    crossing : shape (n, m) or (0, 0), Im tau where path i meets Re tau = Re p_j; (0, 0) means
        straight paths, on which it is interpolated.
    Returns shape (n, m) [-]; not finite if a path ends on a pole.
    """
    integrals = np.empty((start.shape[0], poles.shape[0]), np.complex128)
    straight = crossing.shape[0] == 0
    for i in range(start.shape[0]):
        for j in range(poles.shape[0]):
            a = start[i] - poles[j]
            b = end[i] - poles[j]
            side_a = 1.0 if a.real >= 0.0 else -1.0
            side_b = 1.0 if b.real >= 0.0 else -1.0
            value = _logarithm(b, side_b) - _logarithm(a, side_a)
            if side_a != side_b:
                if straight:
                    height = a.imag - a.real * (b.imag - a.imag) / (b.real - a.real)
                else:
                    height = crossing[i, j] - poles[j].imag
                jump = math.pi * (1.0 + 2.0 * math.floor(height / _TURN))
                value += complex(0.0, -jump * side_b)
            integrals[i, j] = value + offset * (b - a)
    return integrals


@njit(cache=True, error_model="numpy")
def magnitude_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> FloatArray:
    """Sum of |g (X + offset)| over the poles, shape (n,) [m2/s]."""
    sums = np.zeros(tau.shape[0])
    for i in range(tau.shape[0]):
        for j in range(poles.shape[0]):
            sums[i] += abs(strengths[j]) * abs(kernel(tau[i] - poles[j], offset)[0])
    return sums

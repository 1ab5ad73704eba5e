"""Kernel X(d) = coth(d/2)/2, period 2 pi i: channel, dead end, basin and corner.

With a = Re d / 2, b = Im d / 2, E = exp(-2|a|) and m = 1 - E,
coth(a + ib) = [sign(a) m (1 + E) - 4i E sin b cos b] / (m^2 + 4 E sin^2 b),
which neither overflows nor cancels, at any distance along the channel.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels.elementary import angle, decay, logarithm, sine_cosine

_BLOCK = 64
"""Points in one block: 64 doubles a column stay in the first-level cache."""
_TURN = 2.0 * math.pi


@njit(inline="always", error_model="numpy")
def _kernel(dx: float, dy: float, offset: float) -> tuple[float, float, float, float, float, float]:
    """Real and imaginary part of X(d) + offset, then E, sinh_re, sinh_im and the denominator.

    2 exp(-|a|) sinh(d/2) = sinh_re + i sinh_im, whose squared modulus is the denominator.
    """
    e, m = decay(abs(dx))
    sine, cosine = sine_cosine(0.5 * dy)
    sign = 1.0 if dx >= 0.0 else -1.0
    denominator = m * m + 4.0 * e * sine * sine
    odd = m * (1.0 + e)
    towards = offset * sign
    real = odd + denominator if towards > 0.0 else odd
    real = -2.0 * e * (2.0 * sine * sine - m) if towards < 0.0 else real
    q = 1.0 / denominator
    return 0.5 * sign * real * q, -2.0 * e * sine * cosine * q, e, sign * m * cosine, (1.0 + e) * sine, q


@njit(cache=True, error_model="numpy")
def pole_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> tuple[ComplexArray, ComplexArray]:
    """Sums of g (X + offset) and of g X' over the poles, X' = -1/(4 sinh^2(d/2)).

    tau : shape (n,), points [-];  poles, strengths : shape (m,), positions [-] and g [m2/s]
    Returns two arrays of shape (n,) [m2/s]; nan at a pole.
    """
    n = tau.shape[0]
    velocity = np.empty(n, np.complex128)
    slope = np.empty(n, np.complex128)
    x = np.zeros(_BLOCK)
    y = np.zeros(_BLOCK)
    w_re = np.zeros(_BLOCK)
    w_im = np.zeros(_BLOCK)
    s_re = np.zeros(_BLOCK)
    s_im = np.zeros(_BLOCK)
    for start in range(0, n, _BLOCK):
        count = min(_BLOCK, n - start)
        for k in range(count):
            x[k] = tau[start + k].real
            y[k] = tau[start + k].imag
        w_re[:] = 0.0
        w_im[:] = 0.0
        s_re[:] = 0.0
        s_im[:] = 0.0
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g_re = strengths[j].real
            g_im = strengths[j].imag
            for k in range(count):
                k_re, k_im, e, sh_re, sh_im, q = _kernel(x[k] - px, y[k] - py, offset)
                w_re[k] += g_re * k_re - g_im * k_im
                w_im[k] += g_re * k_im + g_im * k_re
                shrink = e * q * q
                d_re = (sh_im * sh_im - sh_re * sh_re) * shrink
                d_im = 2.0 * sh_re * sh_im * shrink
                s_re[k] += g_re * d_re - g_im * d_im
                s_im[k] += g_re * d_im + g_im * d_re
        for k in range(count):
            velocity[start + k] = complex(w_re[k], w_im[k])
            slope[start + k] = complex(s_re[k], s_im[k])
    return velocity, slope


@njit(cache=True, error_model="numpy")
def velocity_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> ComplexArray:
    """Sum of g (X + offset) over the poles: as `pole_sums` without the derivative."""
    n = tau.shape[0]
    velocity = np.empty(n, np.complex128)
    x = np.zeros(_BLOCK)
    y = np.zeros(_BLOCK)
    w_re = np.zeros(_BLOCK)
    w_im = np.zeros(_BLOCK)
    for start in range(0, n, _BLOCK):
        count = min(_BLOCK, n - start)
        for k in range(count):
            x[k] = tau[start + k].real
            y[k] = tau[start + k].imag
        w_re[:] = 0.0
        w_im[:] = 0.0
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g_re = strengths[j].real
            g_im = strengths[j].imag
            for k in range(count):
                k_re, k_im, _, _, _, _ = _kernel(x[k] - px, y[k] - py, offset)
                w_re[k] += g_re * k_re - g_im * k_im
                w_im[k] += g_re * k_im + g_im * k_re
        for k in range(count):
            velocity[start + k] = complex(w_re[k], w_im[k])
    return velocity


@njit(inline="always", error_model="numpy")
def _potential(dx: float, dy: float) -> tuple[float, float]:
    """Log(2 sinh(d/2)) = side d/2 + log(1 - exp(-side d)), side = sign(Re d): real and imaginary part."""
    side = 1.0 if dx >= 0.0 else -1.0
    x = side * dx
    y = side * dy
    e, m = decay(x)
    half_sine, half_cosine = sine_cosine(0.5 * y)
    re = m + 2.0 * e * half_sine * half_sine
    im = 2.0 * e * half_sine * half_cosine
    return 0.5 * (x + logarithm(re * re + im * im)), 0.5 * y + angle(im, re)


@njit(cache=True, error_model="numpy")
def path_integrals(
    start: ComplexArray, end: ComplexArray, poles: ComplexArray, offset: float, crossing: FloatArray
) -> ComplexArray:
    """Integrals of X + offset along paths on which Re tau is monotone.

    The antiderivative log(2 sinh(d/2)) has one form for Re d > 0 and one for Re d < 0. Where the path
    crosses Re d = 0 at height Im d in (2 pi k, 2 pi (k+1)) the right form exceeds the left by i pi (1 + 2k).

    crossing : shape (n, m) or (0, 0), Im tau where path i meets Re tau = Re p_j; (0, 0) means
        straight paths, on which it is interpolated.
    Returns shape (n, m) [-]; huge if a path ends on a pole.
    """
    count = poles.shape[0]
    straight = crossing.shape[0] == 0
    px = poles.real.copy()
    py = poles.imag.copy()
    re = np.empty(count)
    im = np.empty(count)
    height = np.empty(count)
    integrals = np.empty((start.shape[0], count), np.complex128)
    for i in range(start.shape[0]):
        ax = start[i].real
        ay = start[i].imag
        bx = end[i].real
        by = end[i].imag
        for j in range(count):
            height[j] = ay - py[j] - (ax - px[j]) * ((by - ay) / (bx - ax))
        if not straight:
            for j in range(count):
                height[j] = crossing[i, j] - py[j]
        for j in range(count):
            b_re, b_im = _potential(bx - px[j], by - py[j])
            re[j] = b_re + offset * (bx - ax)
            im[j] = b_im + offset * (by - ay)
        for j in range(count):
            a_re, a_im = _potential(ax - px[j], ay - py[j])
            re[j] -= a_re
            im[j] -= a_im
        for j in range(count):
            to_right = (ax < px[j]) and (bx >= px[j])
            to_left = (ax >= px[j]) and (bx < px[j])
            jump = math.pi * (1.0 + 2.0 * math.floor(height[j] / _TURN))
            im[j] += (jump if to_left else 0.0) - (jump if to_right else 0.0)
        for j in range(count):
            integrals[i, j] = complex(re[j], im[j])
    return integrals


@njit(cache=True, error_model="numpy")
def magnitude_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float
) -> FloatArray:
    """Sum of |g (X + offset)| over the poles, shape (n,) [m2/s]."""
    sums = np.zeros(tau.shape[0])
    for i in range(tau.shape[0]):
        for j in range(poles.shape[0]):
            d = tau[i] - poles[j]
            k_re, k_im, _, _, _, _ = _kernel(d.real, d.imag, offset)
            sums[i] += abs(strengths[j]) * math.hypot(k_re, k_im)
    return sums


@njit(cache=True, error_model="numpy")
def potential_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray, offset: float, length: float
) -> ComplexArray:
    """Sum of g (log(2 sinh(d/2)) + offset d): cuts run to the left, from poles beyond `length` to the right.

    Returns shape (n,) [m2/s].
    """
    sums = np.zeros(tau.shape[0], np.complex128)
    for i in range(tau.shape[0]):
        for j in range(poles.shape[0]):
            x = tau[i].real - poles[j].real
            y = tau[i].imag - poles[j].imag
            side = -1.0 if poles[j].real > length * (1.0 + 1e-9) else 1.0
            re, im = _potential(side * x, side * y)
            if side * x < 0.0:
                im += math.pi if side * y >= 0.0 else -math.pi
            sums[i] += strengths[j] * complex(re + offset * x, im + offset * y)
    return sums

"""Kernel X(d) = 1/d: open water and straight bank."""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels.elementary import angle, logarithm

_BLOCK = 64
"""Points in one block: 64 doubles a column stay in the first-level cache."""


@njit(cache=True, error_model="numpy")
def pole_sums(
    tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray
) -> tuple[ComplexArray, ComplexArray]:
    """Sums of g X and of g X' over the poles, X(d) = 1/d.

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
        for k in range(_BLOCK):
            w_re[k] = 0.0
            w_im[k] = 0.0
            s_re[k] = 0.0
            s_im[k] = 0.0
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g_re = strengths[j].real
            g_im = strengths[j].imag
            for k in range(count):
                dx = x[k] - px
                dy = y[k] - py
                q = 1.0 / (dx * dx + dy * dy)
                k_re = dx * q
                k_im = -dy * q
                t_re = g_re * k_re - g_im * k_im
                t_im = g_re * k_im + g_im * k_re
                w_re[k] += t_re
                w_im[k] += t_im
                s_re[k] -= t_re * k_re - t_im * k_im
                s_im[k] -= t_re * k_im + t_im * k_re
        for k in range(count):
            velocity[start + k] = complex(w_re[k], w_im[k])
            slope[start + k] = complex(s_re[k], s_im[k])
    return velocity, slope


@njit(cache=True, error_model="numpy")
def velocity_sums(tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray) -> ComplexArray:
    """Sum of g X over the poles, X(d) = 1/d: as `pole_sums` without the derivative."""
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
        for k in range(_BLOCK):
            w_re[k] = 0.0
            w_im[k] = 0.0
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g_re = strengths[j].real
            g_im = strengths[j].imag
            for k in range(count):
                dx = x[k] - px
                dy = y[k] - py
                q = 1.0 / (dx * dx + dy * dy)
                w_re[k] += (g_re * dx + g_im * dy) * q
                w_im[k] += (g_im * dx - g_re * dy) * q
        for k in range(count):
            velocity[start + k] = complex(w_re[k], w_im[k])
    return velocity


@njit(cache=True, error_model="numpy")
def path_integrals(start: ComplexArray, end: ComplexArray, poles: ComplexArray) -> ComplexArray:
    """Integrals of X along straight chords: log((end - p)/(start - p)).

    The argument is the exact angle that the chord subtends at the pole, in (-pi, pi].
    Returns shape (n, m) [-]; huge or nan if a chord ends on a pole.
    """
    integrals = np.empty((start.shape[0], poles.shape[0]), np.complex128)
    for i in range(start.shape[0]):
        for j in range(poles.shape[0]):
            ax = start[i].real - poles[j].real
            ay = start[i].imag - poles[j].imag
            bx = end[i].real - poles[j].real
            by = end[i].imag - poles[j].imag
            modulus = 0.5 * logarithm((bx * bx + by * by) / (ax * ax + ay * ay))
            integrals[i, j] = complex(modulus, angle(ax * by - ay * bx, ax * bx + ay * by))
    return integrals


@njit(cache=True, error_model="numpy")
def magnitude_sums(tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray) -> FloatArray:
    """Sum of |g X| over the poles, shape (n,) [m2/s]."""
    sums = np.zeros(tau.shape[0])
    x = np.zeros(_BLOCK)
    y = np.zeros(_BLOCK)
    total = np.zeros(_BLOCK)
    for start in range(0, tau.shape[0], _BLOCK):
        count = min(_BLOCK, tau.shape[0] - start)
        for k in range(count):
            x[k] = tau[start + k].real
            y[k] = tau[start + k].imag
        total[:] = 0.0
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g = abs(strengths[j])
            for k in range(count):
                dx = x[k] - px
                dy = y[k] - py
                total[k] += g / math.sqrt(dx * dx + dy * dy)
        for k in range(count):
            sums[start + k] = total[k]
    return sums


@njit(cache=True, error_model="numpy")
def potential_sums(tau: ComplexArray, poles: ComplexArray, strengths: ComplexArray) -> ComplexArray:
    """Sum of g log(tau - p) with principal arguments: cuts run to the left, shape (n,) [m2/s]."""
    sums = np.zeros(tau.shape[0], np.complex128)
    for i in range(tau.shape[0]):
        for j in range(poles.shape[0]):
            x = tau[i].real - poles[j].real
            y = tau[i].imag - poles[j].imag
            sums[i] += strengths[j] * complex(0.5 * logarithm(x * x + y * y), angle(y, x))
    return sums

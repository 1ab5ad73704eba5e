"""Sums of powers of the kernel, sum c_n X^n about several centres: doublets and piers.

With P = sum n c_n X^(n-1) and X' from the kernel, the potential is sum c_n X^n, its derivative X' P and its
second derivative X'^2 dP/dX - 2 X X' P.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray


@njit(error_model="numpy")
def _kernel(d: complex, kappa: float) -> tuple[complex, complex]:
    """X(d) and X'(d), without cancellation far from d = 0; not finite there."""
    if kappa == 0.0:
        square = d.real * d.real + d.imag * d.imag
        inverse = complex(d.real / square, -d.imag / square)
        return inverse, -inverse * inverse
    sign = 1.0 if d.real >= 0.0 else -1.0
    x = sign * d.real
    m = -math.expm1(-x)
    e = math.exp(-x)
    half = math.sin(0.5 * d.imag)
    re = m + 2.0 * e * half * half
    im = sign * e * math.sin(d.imag)
    square = re * re + im * im
    inverse = complex(re / square, -im / square)  # 1 / (1 - exp(-sign d))
    left = complex(e * math.cos(d.imag), -im)
    return sign * (inverse - 0.5), -left * inverse * inverse


@njit(cache=True, error_model="numpy")
def multipole_jets(
    tau: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
    kappa: float,
) -> tuple[ComplexArray, ComplexArray]:
    """First and second derivative of the potential, shape (n,) each [m2/s].

    tau : shape (n,), points [-];  centres : shape (k,) [-];  moments : shape (k, o), c_1 ... c_o [m2/s]
    """
    first = np.zeros(tau.shape[0], np.complex128)
    second = np.zeros(tau.shape[0], np.complex128)
    for i in range(tau.shape[0]):
        for k in range(centres.shape[0]):
            x, change = _kernel(tau[i] - centres[k], kappa)
            polynomial = 0j
            derivative = 0j
            for n in range(moments.shape[1], 0, -1):
                derivative = derivative * x + polynomial
                polynomial = polynomial * x + n * moments[k, n - 1]
            first[i] += change * polynomial
            second[i] += change * (change * derivative - 2.0 * x * polynomial)
    return first, second


@njit(cache=True, error_model="numpy")
def multipole_potentials(
    tau: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
    kappa: float,
) -> ComplexArray:
    """Potential of each centre, shape (n, k) [m2/s]."""
    potential = np.zeros((tau.shape[0], centres.shape[0]), np.complex128)
    for i in range(tau.shape[0]):
        for k in range(centres.shape[0]):
            x, _ = _kernel(tau[i] - centres[k], kappa)
            total = 0j
            for n in range(moments.shape[1], 0, -1):
                total = (total + moments[k, n - 1]) * x
            potential[i, k] = total
    return potential


@njit(cache=True, error_model="numpy")
def multipole_magnitudes(
    tau: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
    kappa: float,
) -> FloatArray:
    """Sum of |X'| sum n |c_n| |X|^(n-1), shape (n,) [m2/s]."""
    total = np.zeros(tau.shape[0])
    for i in range(tau.shape[0]):
        for k in range(centres.shape[0]):
            x, change = _kernel(tau[i] - centres[k], kappa)
            polynomial = 0.0
            for n in range(moments.shape[1], 0, -1):
                polynomial = polynomial * abs(x) + n * abs(moments[k, n - 1])
            total[i] += abs(change) * polynomial
    return total

"""Line elements in the wedge 0 <= arg w <= angle = pi/n: sums over panels far from w = 0 for their length.

A source at s has the field (n/w) [G(n log(w/s)) + G(n (log w - conj log s))], G(d) = 1/(1 - exp(-d)): all of
its flux leaves to infinity. A panel nearby (or its mirror image in the first or the second bank) is
integrated by an exact logarithm and the remainder by Gauss nodes; one further away by nodes alone.

Everywhere: w, shape (n,), places; panels = (a, b, shares, facing), shape (m,) each: ends, strengths over 2 pi
[m2/s], see `segment`; logs, shape (m, j), logarithms of the Gauss nodes; weights, shape (j,), adding to 1.
"""

import cmath
import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels.remainder import (
    decay,
    log_one_plus_exp,
    rest,
    rest_power,
    rest_slope,
)
from forebay.flow.kernels.segment import inverse, mean_inverse, mean_log, own_log, subtended

_NEAR = 1.5
"""Distance from a panel's middle, in lengths, within which its logarithm is taken exactly [-]."""


@njit(cache=True, error_model="numpy")
def off_vertex(w: complex) -> complex:
    """The place itself; the vertex moved by 1e-300."""
    return 1e-300 + 0j if w == 0.0 else w


@njit(cache=True, error_model="numpy")
def logarithm(w: complex, angle: float) -> complex:
    """log w with its cut on the bisector of the land."""
    turned = w * cmath.exp(complex(0.0, -0.5 * angle))
    return complex(math.log(abs(w)), math.atan2(turned.imag, turned.real) + 0.5 * angle)


@njit(cache=True, error_model="numpy")
def _image(s: complex, bank: int, angle: float) -> complex:
    """A place (bank 0) or its mirror image in the first (1) or second bank (2)."""
    if bank == 0:
        return s
    if bank == 1:
        return s.conjugate()
    return s.conjugate() * cmath.exp(complex(0.0, 2.0 * angle))


@njit(cache=True, error_model="numpy")
def _image_log(log_s: complex, bank: int, angle: float) -> complex:
    """Logarithm of `_image` on the sheet where the image lies."""
    if bank == 0:
        return log_s
    return complex(log_s.real, -log_s.imag + (2.0 * angle if bank == 2 else 0.0))


@njit(cache=True, error_model="numpy")
def _is_near(w: complex, log_w: complex, a: complex, b: complex, log_middle: complex) -> bool:
    """Whether a place is close to a panel, on the same sheet."""
    return abs(w - 0.5 * (a + b)) < _NEAR * abs(b - a) and abs(log_w - log_middle) < 2.0


@njit(cache=True, error_model="numpy")
def _facing(a: complex, b: complex, image_a: complex, image_b: complex, facing: float) -> float:
    """Facing of an image: that of the panel if both coincide, else none."""
    apart = abs(a - image_a) + abs(b - image_b)
    return facing if apart <= 1e-12 * (abs(a) + abs(b)) else 0.0


@njit(cache=True, error_model="numpy")
def wedge_jet(
    w: ComplexArray,
    panels: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    logs: ComplexArray,
    weights: FloatArray,
    angle: float,
) -> tuple[ComplexArray, ComplexArray]:
    """Mean fields of the panels and their derivatives, shape (n,) each.

    Panels nearby that follow each other are one segment to the logarithm: nothing happens where they join.
    """
    a, b, shares, facing = panels
    velocity, slope = np.zeros(w.shape[0], np.complex128), np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        z = off_vertex(w[i])
        log_z = logarithm(z, angle)
        for family in range(2):
            first, ahead = 0, _seen_near(z, log_z, (a[0], b[0]), family, angle)
            for k in range(a.shape[0]):
                bank = ahead
                sums = _nodes_jet(log_z, logs[k], weights, bank, angle)
                velocity[i] += shares[k] * sums[0] / z
                slope[i] += shares[k] * sums[1] / z / z
                if k + 1 < a.shape[0]:
                    ahead = _seen_near(z, log_z, (a[k + 1], b[k + 1]), family, angle)
                if bank >= 0 and (k + 1 == a.shape[0] or ahead != bank):
                    start, end = _image(a[first], bank, angle), _image(b[k], bank, angle)
                    faces = _facing(a[first], b[k], start, end, facing[k])
                    whole = shares[first : k + 1].sum()
                    velocity[i] += whole * mean_inverse(z, start, end, faces)
                    slope[i] -= whole * inverse(z - start) * inverse(z - end)
                if ahead != bank or bank < 0:
                    first = k + 1
    return velocity, slope


@njit(cache=True, error_model="numpy")
def _seen_near(z: complex, log_z: complex, ends: tuple[complex, complex], family: int, angle: float) -> int:
    """Bank in which a panel is seen (0: itself) if it is seen nearby, else -1 - bank."""
    a, b = ends
    log_middle = logarithm(0.5 * (a + b), angle)
    bank = 0 if family == 0 else (1 if log_z.imag + log_middle.imag <= angle else 2)
    start, end = _image(a, bank, angle), _image(b, bank, angle)
    return bank if _is_near(z, log_z, start, end, _image_log(log_middle, bank, angle)) else -1 - bank


@njit(cache=True, error_model="numpy")
def _nodes_jet(
    log_z: complex, logs: ComplexArray, weights: FloatArray, seen: int, angle: float
) -> tuple[complex, complex]:
    """z times a panel's field and z^2 times its derivative by nodes, without the logarithm if seen nearby."""
    n = math.pi / angle
    first, second = 0j, 0j
    for j in range(weights.shape[0]):
        if seen >= 0:
            d = log_z - _image_log(logs[j], seen, angle)
            value = n * rest(n * d) - rest(d) + 0.5 * (n - 1.0)
            first += weights[j] * value
            second += weights[j] * (n * n * rest_slope(n * d) - rest_slope(d) - value)
        else:
            d = n * (log_z - _image_log(logs[j], -1 - seen, angle))
            value = decay(d)
            first += weights[j] * n * value
            second += weights[j] * n * value * (n * decay(-d) - 1.0)
    return first, second


@njit(cache=True, error_model="numpy")
def _image_potential(
    z: complex,
    log_z: complex,
    ends: tuple[complex, complex],
    logs: ComplexArray,
    weights: FloatArray,
    angle: float,
) -> complex:
    """Mean of log(exp(d) - 1) - i pi/2, d = n (log z - conj log s), cut nowhere in the wedge."""
    n = math.pi / angle
    a, b = ends
    log_middle = logarithm(0.5 * (a + b), angle)
    bank = 1 if log_z.imag + log_middle.imag <= angle else 2
    start, end = _image(a, bank, angle), _image(b, bank, angle)
    side = 1.0 if bank == 1 else -1.0
    total = 0j
    if not _is_near(z, log_z, start, end, _image_log(log_middle, bank, angle)):
        for j in range(weights.shape[0]):
            d = n * (log_z - _image_log(logs[j], bank, angle))
            total += weights[j] * log_one_plus_exp(d - complex(0.0, side * math.pi))
        return total + complex(-math.log(n), 0.5 * math.pi)
    for j in range(weights.shape[0]):
        log_s = _image_log(logs[j], bank, angle)
        total += weights[j] * (rest_power(n * (log_z - log_s)) - rest_power(log_z - log_s) - log_s)
    if bank == 1:
        return total + mean_log(z, start, end, 1.0 + 0j, side) - complex(0.0, 0.5 * math.pi)
    axis = cmath.exp(complex(0.0, angle))
    return total + mean_log(z, start, end, axis, side) + complex(0.0, angle + 1.5 * math.pi)


@njit(cache=True, error_model="numpy")
def _smooth(
    z: complex, ends: tuple[complex, complex], logs: ComplexArray, weights: FloatArray, angle: float
) -> complex:
    """A panel's potential without the panel's own logarithm: continuous all over the wedge."""
    n = math.pi / angle
    z = off_vertex(z)
    log_z = logarithm(z, angle)
    total = _image_potential(z, log_z, ends, logs, weights, angle)
    for j in range(weights.shape[0]):
        d = log_z - logs[j]
        total += weights[j] * (rest_power(n * d) - rest_power(d) - logs[j])
    return total


@njit(cache=True, error_model="numpy")
def wedge_potential(
    w: ComplexArray,
    panels: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    logs: ComplexArray,
    weights: FloatArray,
    angle: float,
) -> ComplexArray:
    """Integral of the field, cut along the panels and their line beyond the start, shape (n,)."""
    a, b, shares, facing = panels
    total = np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            value = _smooth(w[i], (a[k], b[k]), logs[k], weights, angle)
            total[i] += shares[k] * (value + own_log(w[i], a[k], b[k], facing[k]))
    return total


@njit(cache=True, error_model="numpy")
def wedge_chords(
    chords: tuple[ComplexArray, ComplexArray],
    panels: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    logs: ComplexArray,
    weights: FloatArray,
    angle: float,
) -> ComplexArray:
    """Integrals of the field along straight chords p -> q in the wedge, shape (n,)."""
    p, q = chords
    a, b, shares, facing = panels
    total = np.zeros(p.shape[0], np.complex128)
    for i in range(p.shape[0]):
        for k in range(a.shape[0]):
            ends = (a[k], b[k])
            value = _smooth(q[i], ends, logs[k], weights, angle) - _smooth(
                p[i], ends, logs[k], weights, angle
            )
            total[i] += shares[k] * (value + subtended(p[i], q[i], a[k], b[k], facing[k]))
    return total


@njit(cache=True, error_model="numpy")
def wedge_logs(s: ComplexArray, angle: float) -> ComplexArray:
    """Logarithms of places in the wedge, shape (m, j)."""
    logs = np.empty(s.shape, np.complex128)
    for k in range(s.shape[0]):
        for j in range(s.shape[1]):
            logs[k, j] = logarithm(off_vertex(s[k, j]), angle)
    return logs


@njit(cache=True, error_model="numpy")
def wedge_magnitude(
    w: ComplexArray, panels: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray], angle: float
) -> FloatArray:
    """Sum of the absolute values of the panels' and images' fields, shape (n,), to a few per cent."""
    a, b, shares, facing = panels
    n = math.pi / angle
    total = np.zeros(w.shape[0], np.float64)
    for i in range(w.shape[0]):
        z = off_vertex(w[i])
        log_z = logarithm(z, angle)
        for k in range(a.shape[0]):
            log_middle = logarithm(0.5 * (a[k] + b[k]), angle)
            for family in range(2):
                bank = 0 if family == 0 else (1 if log_z.imag + log_middle.imag <= angle else 2)
                log_s = _image_log(log_middle, bank, angle)
                start, end = _image(a[k], bank, angle), _image(b[k], bank, angle)
                if _is_near(z, log_z, start, end, log_s):
                    exact = mean_inverse(z, start, end, _facing(a[k], b[k], start, end, facing[k]))
                    total[i] += abs(shares[k]) * (abs(exact) + abs(n - 1.0) / abs(z))
                else:
                    total[i] += abs(shares[k]) * n * abs(decay(n * (log_z - log_s)) / z)
    return total

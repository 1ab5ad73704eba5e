"""Line elements in the plane and in the strip 0 <= Im w <= pi: sums over segments of sources.

Everywhere: w, shape (n,), places; a, b, shape (m,), ends of the segments (images are listed as segments of
their own); shares, shape (m,), strengths over 2 pi [m2/s]; facing, shape (m,), see `segment`.
In the strip: nodes, shape (m, j), Gauss nodes on the segments, with weights, shape (j,), that add to 1;
offset is added to the kernel X(d) = coth(d/2)/2. A segment with Im < 0 lies below the strip, so that two of
its poles, s and s + 2 pi i, border on it.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels.remainder import rest, rest_log, rest_slope
from forebay.flow.kernels.segment import inverse, mean_inverse, mean_log, own_log, subtended

_TURN = 2.0 * math.pi


@njit(cache=True, error_model="numpy")
def plain_jet(
    w: ComplexArray, a: ComplexArray, b: ComplexArray, shares: FloatArray, facing: FloatArray
) -> tuple[ComplexArray, ComplexArray]:
    """Sums of the means of 1/(w - s), and their derivatives -1/((w - a)(w - b)), shape (n,) each."""
    velocity, slope = np.zeros(w.shape[0], np.complex128), np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            velocity[i] += shares[k] * mean_inverse(w[i], a[k], b[k], facing[k])
            slope[i] -= shares[k] * inverse(w[i] - a[k]) * inverse(w[i] - b[k])
    return velocity, slope


@njit(cache=True, error_model="numpy")
def plain_potential(
    w: ComplexArray, a: ComplexArray, b: ComplexArray, shares: FloatArray, facing: FloatArray
) -> ComplexArray:
    """Sum of the means of log(w - s), shape (n,)."""
    total = np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            total[i] += shares[k] * own_log(w[i], a[k], b[k], facing[k])
    return total


@njit(cache=True, error_model="numpy")
def plain_chords(
    p: ComplexArray, q: ComplexArray, a: ComplexArray, b: ComplexArray, shares: FloatArray, facing: FloatArray
) -> ComplexArray:
    """Integrals of `plain_jet`'s velocity along straight chords p -> q, shape (n,)."""
    total = np.zeros(p.shape[0], np.complex128)
    for i in range(p.shape[0]):
        for k in range(a.shape[0]):
            total[i] += shares[k] * subtended(p[i], q[i], a[k], b[k], facing[k])
    return total


@njit(cache=True, error_model="numpy")
def plain_magnitude(
    w: ComplexArray, a: ComplexArray, b: ComplexArray, shares: FloatArray, facing: FloatArray
) -> FloatArray:
    """Sum of the absolute values of the parts of the velocity, shape (n,)."""
    total = np.zeros(w.shape[0], np.float64)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            total[i] += abs(shares[k] * mean_inverse(w[i], a[k], b[k], facing[k]))
    return total


@njit(cache=True, error_model="numpy")
def _near(w: complex, a: complex, b: complex) -> complex:
    """The place moved by 2 pi i so that the nearest pole of the segment is the segment itself."""
    return w - complex(0.0, _TURN * np.round((w.imag - 0.5 * (a.imag + b.imag)) / _TURN))


@njit(cache=True, error_model="numpy")
def strip_jet(
    w: ComplexArray,
    segments: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    nodes: ComplexArray,
    weights: FloatArray,
    offset: float,
) -> tuple[ComplexArray, ComplexArray]:
    """Sums of the means of X(w - s) + offset, and their derivatives, shape (n,) each.

    Panels that follow each other are one segment to the logarithm, so that nothing happens where they join.
    """
    a, b, shares, facing = segments
    velocity, slope = np.zeros(w.shape[0], np.complex128), np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        first = 0
        for k in range(a.shape[0]):
            near = _near(w[i], a[k], b[k])
            value, change = complex(offset, 0.0), 0j
            for j in range(weights.shape[0]):
                value += weights[j] * rest(near - nodes[k, j])
                change += weights[j] * rest_slope(near - nodes[k, j])
            last = k + 1
            if last == a.shape[0] or a[last] != b[k] or _near(w[i], a[last], b[last]) != near:
                whole = shares[first : k + 1].sum()
                velocity[i] += whole * mean_inverse(near, a[first], b[k], facing[k])
                slope[i] -= whole * inverse(near - a[first]) * inverse(near - b[k])
                first = last
            velocity[i] += shares[k] * value
            slope[i] += shares[k] * change
    return velocity, slope


@njit(cache=True, error_model="numpy")
def strip_velocity(
    w: ComplexArray,
    segments: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    nodes: ComplexArray,
    weights: FloatArray,
    offset: float,
) -> ComplexArray:
    """As `strip_jet` without the derivative."""
    a, b, shares, facing = segments
    velocity = np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        first = 0
        for k in range(a.shape[0]):
            near = _near(w[i], a[k], b[k])
            value = complex(offset, 0.0)
            for j in range(weights.shape[0]):
                value += weights[j] * rest(near - nodes[k, j])
            last = k + 1
            if last == a.shape[0] or a[last] != b[k] or _near(w[i], a[last], b[last]) != near:
                whole = shares[first : k + 1].sum()
                velocity[i] += whole * mean_inverse(near, a[first], b[k], facing[k])
                first = last
            velocity[i] += shares[k] * value
    return velocity


@njit(cache=True, error_model="numpy")
def _smooth(w: complex, a: complex, b: complex, nodes: ComplexArray, weights: FloatArray) -> complex:
    """The part of a segment's potential that is continuous all over the strip.

    For a segment in the strip: the remainder. For one below it, 0 <= Im(w - s) <= 2 pi: everything, as
    log cosh((w - s - i pi)/2), with the logarithm of its nearer pole taken exactly.
    """
    total = 0j
    if a.imag + b.imag >= 0.0:
        for j in range(weights.shape[0]):
            total += weights[j] * rest_log(w - nodes[j])
        return total
    upper = w.imag - 0.5 * (a.imag + b.imag) > math.pi
    near = w - complex(0.0, _TURN) if upper else w
    side = -1.0 if upper else 1.0
    for j in range(weights.shape[0]):
        total += weights[j] * rest_log(near - nodes[j])
    return total + mean_log(near, a, b, 1.0 + 0j, side) - complex(0.0, 0.5 * math.pi * side)


@njit(cache=True, error_model="numpy")
def strip_potential(
    w: ComplexArray,
    segments: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    nodes: ComplexArray,
    weights: FloatArray,
    offset: float,
) -> ComplexArray:
    """Sum of the means of log sinh((w - s)/2) + offset (w - s), up to constants, shape (n,)."""
    a, b, shares, facing = segments
    total = np.zeros(w.shape[0], np.complex128)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            value = _smooth(w[i], a[k], b[k], nodes[k], weights) + offset * (w[i] - 0.5 * (a[k] + b[k]))
            if a[k].imag + b[k].imag >= 0.0:
                value += own_log(w[i], a[k], b[k], facing[k])
            total[i] += shares[k] * value
    return total


@njit(cache=True, error_model="numpy")
def strip_chords(
    chords: tuple[ComplexArray, ComplexArray],
    segments: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray],
    nodes: ComplexArray,
    weights: FloatArray,
    offset: float,
) -> ComplexArray:
    """Integrals of `strip_velocity` along straight chords p -> q in the strip, shape (n,)."""
    p, q = chords
    a, b, shares, facing = segments
    total = np.zeros(p.shape[0], np.complex128)
    for i in range(p.shape[0]):
        for k in range(a.shape[0]):
            value = _smooth(q[i], a[k], b[k], nodes[k], weights) - _smooth(
                p[i], a[k], b[k], nodes[k], weights
            )
            value += offset * (q[i] - p[i])
            if a[k].imag + b[k].imag >= 0.0:
                value += subtended(p[i], q[i], a[k], b[k], facing[k])
            total[i] += shares[k] * value
    return total


@njit(cache=True, error_model="numpy")
def strip_magnitude(
    w: ComplexArray, segments: tuple[ComplexArray, ComplexArray, FloatArray, FloatArray], offset: float
) -> FloatArray:
    """Sum of the absolute values of the parts of the velocity, shape (n,)."""
    a, b, shares, facing = segments
    total = np.zeros(w.shape[0], np.float64)
    for i in range(w.shape[0]):
        for k in range(a.shape[0]):
            near = _near(w[i], a[k], b[k])
            value = abs(mean_inverse(near, a[k], b[k], facing[k]))
            value += abs(rest(near - 0.5 * (a[k] + b[k]))) + abs(offset)
            total[i] += abs(shares[k]) * value
    return total

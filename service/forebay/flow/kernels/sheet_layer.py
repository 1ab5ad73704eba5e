"""Largest value of a single layer on open edges, where it is largest: on these edges."""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray

FAR = 8.0
"""Half-lengths from an element beyond which all of it counts as at its nearest: ln(8/7) / pi too much [-]."""


@njit(cache=True, error_model="numpy")
def layer_peak(
    places: ComplexArray,
    elements: tuple[ComplexArray, ComplexArray],
    cells: tuple[FloatArray, FloatArray],
    weights: FloatArray,
    size: float,
) -> float:
    """Largest sum of weight ln(size / distance) / pi over the places, never less than it is there.

    elements : middles and halves as vectors, shape (m,) [m]
    cells : middles and widths of an element's parts in [-1, 1], shape (c,);  weights : shape (m, c), >= 0
    """
    middle, half = elements
    peak = -np.inf
    for i in range(places.shape[0]):
        total = 0.0
        for e in range(middle.shape[0]):
            length = abs(half[e])
            distance = abs(places[i] - middle[e])
            if distance > FAR * length:
                total += np.sum(weights[e]) * math.log(size / (distance - length))
                continue
            local = (places[i] - middle[e]) / half[e]
            for c in range(weights.shape[1]):
                span = 0.5 * cells[1][c]
                mean = mean_log((local.real - cells[0][c]) / span, local.imag / span)
                total += weights[e, c] * (math.log(size / (span * length)) - mean)
        peak = max(peak, total)
    return peak / math.pi


@njit(cache=True, error_model="numpy")
def mean_log(x: float, y: float) -> float:
    """Mean of ln |x + iy - s| over s in [-1, 1]."""
    after = (x + 1.0) ** 2 + y * y
    before = (x - 1.0) ** 2 + y * y
    total = y * (math.atan2(x + 1.0, y) - math.atan2(x - 1.0, y))
    if after > 0.0:
        total += 0.5 * (x + 1.0) * math.log(after)
    if before > 0.0:
        total -= 0.5 * (x - 1.0) * math.log(before)
    return 0.5 * total - 1.0

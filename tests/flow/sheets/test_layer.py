"""The layer that bounds what open edges leak, against quadrature at 30 digits."""

import mpmath
import numpy as np
import pytest

from forebay.flow.kernels.sheet_layer import FAR, layer_peak, mean_log
from forebay.flow.sheets.solution import CELL_MIDDLES, CELL_WIDTHS


def quadrature(x, y):
    """Mean of ln |x + iy - s| over s in [-1, 1]."""
    with mpmath.workdps(30):
        cuts = [-1, x, 1] if abs(x) < 1 else [-1, 1]
        return float(mpmath.quad(lambda s: mpmath.log(abs(mpmath.mpc(x - s, y))), cuts) / 2)


@pytest.mark.parametrize(("x", "y"), [(0.3, 0.2), (1.0, 0.0), (5.0, -2.0), (-1.0, 1e-3), (0.0, 0.0)])
def test_mean_of_the_logarithm(x, y):
    assert mean_log(x, y) == pytest.approx(quadrature(x, y), abs=1e-13)  # rounding of a few logarithms


def test_peak_is_never_below_the_layer():
    """Seven elements in a line: the sum over exact cells, and how much too high far elements may be."""
    middle, half = np.arange(7, dtype=np.complex128), np.full(7, 0.5, dtype=np.complex128)
    weights = np.random.default_rng(2).uniform(size=(7, CELL_WIDTHS.size))
    places, size = np.array([0j, 0.5 + 0j, 4 + 0j]), 20.0
    peak = layer_peak(places, (middle, half), (CELL_MIDDLES, CELL_WIDTHS), weights, size)
    exact = max(
        sum(
            weight * (np.log(size / (0.25 * width)) - quadrature(*place))
            for e, row in enumerate(weights)
            for weight, width, place in zip(row, CELL_WIDTHS, _local(z, middle[e], half[e]), strict=True)
        )
        for z in places
    )
    assert peak >= exact / np.pi - 1e-12
    assert peak <= exact / np.pi + np.log(FAR / (FAR - 1.0)) / np.pi * weights.sum()


def _local(z, middle, half):
    """A place as seen from the cells of an element, in halves of these."""
    places = ((z - middle) / half - CELL_MIDDLES) / (0.5 * CELL_WIDTHS)
    return [(float(place.real), float(place.imag)) for place in places]

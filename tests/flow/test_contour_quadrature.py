"""Adaptive quadrature along paths: smooth, peaked, broken and infinite integrands."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow import contour_quadrature
from forebay.flow.contour_quadrature import integrate_numerically
from forebay.flow.paths import Arc, Straight
from forebay.flow.strands import strand_of

NOTHING = np.empty(0, dtype=np.complex128)


def integral(velocity, *pieces, breaks=None):
    strand = strand_of(pieces, NOTHING)
    shares = np.full((strand.start.size, 1), np.nan) if breaks is None else np.array(breaks)
    return integrate_numerically(velocity, strand, shares)


def test_nodes_integrate_polynomials():
    # Kronrod's 15 nodes are exact to degree 22, Gauss's 7 to 13
    assert_allclose(contour_quadrature._KRONROD.sum(), 2.0)
    for degree in range(0, 23, 2):
        exact = 2.0 / (degree + 1)
        assert_allclose(contour_quadrature._KRONROD @ contour_quadrature._NODES**degree, exact, rtol=1e-14)
        if degree < 14:
            assert_allclose(contour_quadrature._GAUSS @ contour_quadrature._NODES**degree, exact, rtol=1e-14)


def test_full_circle_round_a_pole():
    result = integral(lambda z: 1 / z, Arc(0.2j, 1.0, 0.0, 2 * np.pi))
    assert_allclose([result.circulation, result.flux], [0.0, 2 * np.pi], atol=1e-12)
    assert result.error_estimate < 1e-9


@pytest.mark.parametrize("distance", [1e-2, 1e-4, 1e-6])
def test_peak_beside_a_straight_path(distance):
    result = integral(lambda z: 1 / (z - 1j * distance), Straight(-1 + 0j, 2 + 0j), breaks=[[1 / 3]])
    exact = np.log((2 - 1j * distance) / (-1 - 1j * distance))
    # the place itself is known to 1e-16 of the path: 1e-16 / distance
    assert_allclose(
        [result.circulation, result.flux], [exact.real, exact.imag], atol=1e-11 + 1e-15 / distance
    )


def test_jump_at_a_break():
    result = integral(lambda z: np.where(z.real < 0.3, 1.0, 2.0), Straight(0j, 1 + 0j), breaks=[[0.3]])
    assert_allclose(result.circulation, 1.7, rtol=1e-14)
    assert result.error_estimate < 1e-13


def test_logarithm_at_the_end():
    result = integral(lambda z: np.log(np.abs(z)) + 0j, Straight(0j, 1 + 0j))
    assert_allclose(result.circulation, -1.0, atol=1e-11)


def test_value_at_an_infinite_place_counts_as_zero():
    result = integral(lambda z: np.where(z == z[0], np.nan, 1.0) + 0j, Straight(0j, 1 + 0j))
    assert np.isfinite([result.circulation, result.error_estimate]).all()


def test_gives_up_on_the_impossible_with_an_honest_error(monkeypatch):
    monkeypatch.setattr(contour_quadrature, "_LARGEST", 64)
    generator = np.random.default_rng(1)
    result = integral(lambda z: generator.normal(size=z.shape) + 0j, Straight(0j, 1 + 0j))
    assert result.error_estimate > 1e-3

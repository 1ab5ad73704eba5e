"""Conformal maps: inverses, derivatives, and where the cut lies."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.maps import AffineMap, ConformalMap, LogarithmMap

ALONG = complex(np.exp(0.4j))
CORNERS = {
    "acute corner": LogarithmMap(100 + 50j, ALONG, np.pi / 5, 3.0),
    "right corner": LogarithmMap(100 + 50j, ALONG, np.pi / 2, 3.0),
    "reentrant corner": LogarithmMap(100 + 50j, ALONG, 1.6 * np.pi, 3.0),
    "slit": LogarithmMap(100 + 50j, ALONG, 2 * np.pi, 3.0),
}


MAPS: dict[str, ConformalMap] = {"affine": AffineMap(100 + 50j, 0.7 * complex(np.exp(-0.4j))), **CORNERS}


@pytest.fixture(params=list(MAPS.values()), ids=list(MAPS))
def map_and_points(request):
    """Return a map and points strictly inside its water."""
    tau = request.param
    angle = getattr(tau, "angle", np.pi)
    generator = np.random.default_rng(1)
    polar = generator.uniform(0.2, 9.0, 40) * np.exp(1j * generator.uniform(0.02, 0.98, 40) * angle)
    return tau, 100 + 50j + polar * ALONG


def test_inverse_returns_to_the_point(map_and_points):
    tau, z = map_and_points
    # one exponential and one logarithm of numbers near 100 m: a few units in the last place of 112 m
    assert_allclose(tau.inverse(tau.forward(z)), z, rtol=1e-14)


def test_derivatives_agree_with_a_contour_average(map_and_points):
    """Cauchy: the mean of f(z + r t) / (r t)^k over a circle is the k-th Taylor coefficient."""
    tau, z = map_and_points
    turn = np.exp(2j * np.pi * np.arange(32) / 32)
    radius = 0.02 * np.min(np.abs(z - 100 - 50j))
    ring = radius * turn
    for k, derivative in ((1, tau.slope), (2, lambda at: 0.5 * tau.curvature(at))):
        values = tau.forward(z[:3, None] + ring)
        values = values.real + 1j * np.unwrap(values.imag, axis=1)
        coefficient = (values / ring**k).mean(axis=1)
        # rounding of positions near 100 m, 1.4e-14, divided by radius^k with radius >= 4e-3
        assert_allclose(coefficient, derivative(z[:3]), rtol=0, atol=1e-13 / radius**k)


@pytest.mark.parametrize("name", ["acute corner", "right corner", "reentrant corner"])
def test_banks_of_a_corner_lie_on_the_edges_of_the_strip(name):
    tau = CORNERS[name]
    distance = np.geomspace(1e-3, 1e3, 13).astype(np.complex128)
    first = tau.forward(tau.vertex + distance * tau.along)
    second = tau.forward(tau.vertex + distance * tau.along * np.exp(1j * tau.angle))
    # position rounding 1.4e-14 m at 1e-3 m, times n <= 5
    assert_allclose(first.imag, 0.0, atol=1e-10)
    assert_allclose(second.imag, np.pi, atol=1e-10)


def test_cut_lies_on_the_bisector_of_the_land():
    tau = CORNERS["reentrant corner"]
    bisector = tau.angle / 2 + np.pi
    either = tau.forward(tau.vertex + ALONG * np.exp(1j * (bisector + np.array([-1e-6, 1e-6]))))
    assert abs(either[1].imag - either[0].imag) == pytest.approx(
        2 * np.pi * tau.exponent, abs=1e-5
    )  # the gap of 2e-6

"""The linear part of the ambient current: Green's identity, stream function, arcs."""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad

from forebay.flow.gradient import GradientTerm
from forebay.flow.layout import Ambient

GRADIENTS = {
    "shear": ((0.0, 0.2), (0.0, 0.0)),
    "strain": ((0.3, -0.1), (-0.1, -0.3)),
    "rotation": ((0.0, -0.4), (0.4, 0.0)),
    "mixed": ((0.05, 0.2), (-0.1, -0.05)),
}
Z = np.array([1 + 2j, -3 + 0.5j])


def gradient(name):
    return GradientTerm.of(Ambient(gradient=GRADIENTS[name], at=0.5 - 1j), owner=0)


@pytest.mark.parametrize("name", GRADIENTS)
def test_velocity_is_the_matrix_times_the_distance(name):
    away = Z - (0.5 - 1j)
    u, v = np.array(GRADIENTS[name]) @ np.array([away.real, away.imag])
    jet = gradient(name).jet(Z)
    assert_allclose(jet.velocity, u - 1j * v, rtol=1e-15)
    (u_x, u_y), (v_x, _) = GRADIENTS[name]
    assert_allclose(jet.slope, u_x - 0.5j * (u_y + v_x))
    assert_allclose(jet.skew, -0.5j * (v_x - u_y))


@pytest.mark.parametrize("name", GRADIENTS)
def test_closed_chords_give_vorticity_times_area(name):
    corners = np.array([0j, 3 + 0j, 3 + 2j, 0 + 2j])
    total = gradient(name).chords(corners, np.roll(corners, -1)).sum()
    (_, u_y), (v_x, _) = GRADIENTS[name]
    assert_allclose([total.real, total.imag], [(v_x - u_y) * 6.0, 0.0], atol=1e-15)  # Green: exact


@pytest.mark.parametrize("name", GRADIENTS)
def test_stream_function_differs_by_the_flux(name):
    term = gradient(name)
    flux = term.chords(Z[:1], Z[1:]).imag
    assert_allclose(np.diff(term.potential(Z).imag), flux, atol=1e-15)


@pytest.mark.parametrize("name", GRADIENTS)
def test_arc_is_the_integral_of_the_velocity(name):
    term = gradient(name)
    centre, radius, begin, turn = 1 - 0.5j, 2.0, 0.3, -1.1
    end = centre + radius * np.exp(1j * (begin + turn))

    def along(x, part):
        z = centre + radius * np.exp(1j * (begin + turn * x))
        return part(term.jet(np.array([z])).velocity[0] * 1j * turn * (z - centre))

    numerical = complex(*(quad(along, 0, 1, args=(part,), epsabs=1e-13)[0] for part in (np.real, np.imag)))
    start = centre + radius * np.exp(1j * begin)
    found = term.arcs(np.array([centre]), np.array([start]), np.array([end]), np.array([turn]))[0]
    assert abs(found - numerical) <= 1e-13


def test_magnitude_bounds_the_velocity():
    term = gradient("mixed")
    assert (term.magnitude(Z) >= np.abs(term.jet(Z).velocity)).all()

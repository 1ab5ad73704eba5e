"""Surveyed water of shapes whose flow is known in closed form."""

import numpy as np
import pytest

from forebay.flow.layout import EdgeProfile, Layout, OpenEdge, Sink, Surveyed
from forebay.flow.model import compile_layout

EQUI, UNIFORM = EdgeProfile.EQUIPOTENTIAL, EdgeProfile.UNIFORM


def water(outer, *edges, elements=(), tolerance=1e-4):
    shore = Surveyed(tuple(complex(z) for z in outer), (), edges)
    return compile_layout(Layout(1.0, shore=shore, elements=elements, tolerance=tolerance))


def holds(model, z, exact):
    """The bound of the velocity's error is kept at every point."""
    distance = np.minimum(model.distance_to_wall(z), np.abs(model.rings_distance(z)))
    error = np.abs(model.velocity(z) - exact)
    assert np.all(error <= model.bound.velocity(distance) + 1e-12)


@pytest.mark.parametrize("west", EdgeProfile)
@pytest.mark.parametrize("east", EdgeProfile)
def test_rectangle_is_uniform_flow(west, east):
    edges = OpenEdge("west", 3, 1, 2.0, west), OpenEdge("east", 1, 1, None, east)
    model = water([0, 2, 2 + 1j, 1j], *edges)
    z = np.random.default_rng(1).uniform(size=200) * 2 + 1j * np.random.default_rng(2).uniform(size=200)
    assert np.abs(model.velocity(z) - 2.0).max() < 1e-10  # polynomial: rounding times the mesh's condition
    assert np.abs(model.jet(z).slope).max() < 1e-8


@pytest.mark.parametrize("tolerance", [1e-3, 1e-4, 1e-5])
def test_bend_loses_what_the_hodograph_says(tolerance):
    """Two arms of 4 squares and a corner of 1 - 2 ln 2 / pi = 0.559, per unit of flux.

    The same number is common practice for a right-angled bend of a printed resistor, 0.56 squares.
    """
    edges = OpenEdge("east", 1, 1, -1.0, EQUI), OpenEdge("north", 4, 1, None, EQUI)
    model = water([0, 5, 5 + 1j, 1 + 1j, 1 + 5j, 5j], *edges, tolerance=tolerance)
    path = np.array([0.5 + 5j, 0.5 + 0.5j, 5 + 0.5j])
    drop = model.chord(path[:-1], path[1:]).sum().real
    assert abs(drop - (9.0 - 2.0 * np.log(2.0) / np.pi)) < tolerance  # the drop is stationary: far below


def step(count, ratio=2.0):
    """Points and velocities in a channel that widens at once from 1/ratio to 1, by Schwarz and Christoffel.

    z = (1/pi) [log((as - 1)/(as + 1)) / a - log((s - 1)/(s + 1))], W = 1/s for unit flux and
    s = sqrt((t - 1)/(t - a^2)), t in the upper half-plane; the inner corner is 0, the salient (1 - 1/a) i.
    """
    generator = np.random.default_rng(3)
    t = np.exp(generator.uniform(-4, 4, count) + 1j * np.pi * generator.uniform(0.002, 0.998, count))
    s = np.sqrt((t - 1.0) / (t - ratio**2))
    z = (np.log((ratio * s - 1) / (ratio * s + 1)) / ratio - np.log((s - 1) / (s + 1))) / np.pi
    return z, 1.0 / s


def test_step_keeps_its_bound_at_two_thousand_points():
    outer = [0, 7, 7 + 1j, -4 + 1j, -4 + 0.5j, 0.5j]
    edges = OpenEdge("east", 1, 1, -1.0, EQUI), OpenEdge("west", 3, 1, None, EQUI)
    model = water(outer, *edges)
    z, exact = step(2000)
    holds(model, z, exact)
    away = model.distance_to_wall(z) > 0.05
    assert away.sum() > 1000
    # ends are cut at 7 widths and 8 half-widths: exp(-7 pi) = 3e-10; the tolerance of psi is 1e-4
    assert np.abs(model.velocity(z) - exact)[away].max() < 2e-4


def half_strip(z, s, flux):
    """Source of a flux at s in x > 0, 0 < y < 1: itself and three images, each a row."""
    images = (s, np.conj(s), -np.conj(s), -s)
    return sum(flux / 4.0 / np.tanh(np.pi / 2.0 * (z - image)) for image in images)


@pytest.mark.parametrize("profile", EdgeProfile)
@pytest.mark.parametrize("at", [1 + 0.5j, 0.3 + 0.2j, 0.5 + 0.02j, 0.5 + 0.002j, 1 + 0j, 2 + 1j, 0.4j])
def test_sink_in_a_half_strip_keeps_its_bound(at, profile):
    """Sinks in the water and on each wall; the far end is cut at 8 widths, exp(-8 pi) = 1e-11."""
    edge = OpenEdge("east", 1, 1, None, profile)
    model = water([0, 8, 8 + 1j, 1j], edge, elements=(Sink("s", at, 1.0),))
    generator = np.random.default_rng(0)
    z = generator.uniform(0, 3, 2000) + 1j * generator.uniform(0, 1, 2000)
    holds(model, z, half_strip(z, at, -1.0))
    path = np.array([3.0 + 0.01j, 3.0 + 0.99j])
    inflow = model.chord(path[:1], path[1:])[0].imag
    assert abs(inflow + 0.98) < 2e-3  # uniform there to exp(-pi (3 - 2)) of 1/2 % at most on these ends

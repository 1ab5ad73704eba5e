"""Outlines in open water against conformal maps, mirrored twins and circular piers."""

from typing import Any

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Layout,
    Outline,
    Pier,
    Shore,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from reference.piers import Schwarz


def polygon(centre, radius, count=192, axes=1.0):
    """Polygon with the area of the circle, or of the ellipse with a second half-axis `axes` times as long."""
    fit = radius / np.sqrt(np.sinc(2 / count))
    ring = np.exp(2j * np.pi * (np.arange(count) + 0.5) / count)
    return tuple((centre + fit * (ring.real + 1j * axes * ring.imag)).tolist())


def solid(points, velocity=1 + 0j, circulation=0.0, **site):
    outline = Outline("solid", tuple(points), circulation)
    return compile_layout(Layout(1.0, ambient=Ambient(velocity), structures=(outline,), **site))


def about(centre, radius, count=200):
    return centre + radius * np.exp(2j * np.pi * (np.arange(count) + 0.3) / count)


@pytest.mark.parametrize("circulation", [0.0, 2.0])
def test_many_sided_polygon_is_a_circle(circulation):
    """Circle theorem. A polygon of the same area differs as 1/n^2 times the square of the distance."""
    model = solid(polygon(0j, 1.0), np.exp(0.4j), circulation)
    z = about(0j, 1.6)
    exact = np.exp(-0.4j) - np.exp(0.4j) / z**2 - 1j * circulation / (2 * np.pi * z)
    assert np.abs(model.velocity(z) - exact).max() < 1e-5  # bound of psi 1e-5, polygon (pi/192)^4


def test_many_sided_polygon_is_an_ellipse():
    """Joukowski's map z = r t + m / t with half-axes r + m = 1 and r - m = 1/2; polygon as above."""
    model = solid(polygon(0j, 1.0, 256, axes=0.5), np.exp(0.7j))
    r, m = 0.75, 0.25
    t = about(0j, 1.5)
    z = r * t + m / t
    exact = r * (np.exp(-0.7j) - np.exp(0.7j) / t**2) / (r - m / t**2)
    assert np.abs(model.velocity(z) - exact).max() < 1e-4


def test_plate_is_approached_as_it_gets_thinner():
    """Plate from -1 to 1 across the stream: W = -i z / sqrt(z^2 - 1)."""
    z = about(0j, 1.8)
    exact = -1j * z / (np.sqrt(z - 1) * np.sqrt(z + 1))
    errors = []
    for half in (0.02, 0.002, 0.0002):
        corners = (-1 - 1j * half, 1 - 1j * half, 1 + 1j * half, -1 + 1j * half)
        errors.append(np.abs(solid(corners, 1j).velocity(z) - exact).max())
    assert errors[0] > 4 * errors[1]  # in proportion to the thickness, with a logarithm
    assert errors[2] < 2e-3


L_SHAPE = [0j, 1 + 0j, 1 + 2j, 2 + 2j, 2 + 3j, 3j]


def test_groyne_on_a_bank_is_half_of_a_free_solid():
    """L-shaped groyne and the same with its mirror image in open water: two meshes, two kernels."""
    elements = (Sink("s", 4 + 0j, 2.0), Source("o", -3 + 1.5j, 1.0))
    groyne = solid(L_SHAPE, shore=StraightBank(0j, 1 + 0j), elements=elements)
    mirrored = [*(z for z in L_SHAPE[1:]), *(z.conjugate() for z in reversed(L_SHAPE[1:]))]
    twins = (Sink("s", 4 + 0j, 4.0), Source("o", -3 + 1.5j, 1.0), Source("p", -3 - 1.5j, 1.0))
    free = solid(mirrored, elements=twins)
    z = np.array([-1 + 1j, 3 + 1j, 1 + 4j, 1.5 + 1j, -0.2 + 0.1j, 5 + 0.01j])
    reach = groyne.distance_to_wall(z)
    allowed = groyne.bound.velocity(np.minimum(reach, 1e9)) + free.bound.velocity(
        np.abs(free.rings_distance(z))
    )
    error = np.abs(groyne.velocity(z) - free.velocity(z))
    assert np.all(error <= allowed)
    assert error.max() < 1e-3


SHORES: dict[str, tuple[Shore, complex]] = {
    "channel": (Channel(0j, 1 + 0j, 10.0), 3 + 4j),
    "corner": (Corner(0j, 1 + 0j, np.pi / 2), 5 + 4j),
    "headland": (Corner(0j, 1 + 0j, 1.5 * np.pi), -3 + 4j),
    "dead-end": (DeadEnd(0j, 1 + 0j, 10.0), 2.2 + 4j),
    "basin": (Basin(0j, 1 + 0j, 14.0, 10.0), 3 + 2.4j),
}


@pytest.mark.parametrize("name", SHORES)
def test_polygon_is_a_pier_on_every_shore(name):
    """Circular piers are solved by another method; the polygon differs as in the open, (pi/192)^4."""
    shore, at = SHORES[name]
    discharge = 3.0 if name == "basin" else 2.0
    elements = (Sink("s", at + 4, 3.0), Source("t", at + 6 + 1j, discharge), Vortex("v", at - 1 + 1.7j, 1.5))
    site: dict[str, Any] = {
        "shore": shore,
        "elements": elements,
        "ambient": Ambient(1 + 0j if name == "channel" else 0j),
    }
    pier = compile_layout(Layout(1.0, structures=(Pier("p", at, 1.2, 0.7),), **site))
    model = compile_layout(Layout(1.0, structures=(Outline("p", polygon(at, 1.2), 0.7),), **site))
    z = about(at, 1.45)
    assert np.abs(model.velocity(z) - pier.velocity(z)).max() < 1e-5
    step = 1e-5
    slope = (model.velocity(z + step) - model.velocity(z - step)) / (2 * step)
    assert (
        np.abs(model.jet(z).slope - slope).max() < 1e-7
    )  # central difference: step^2 times the third derivative
    chords = model.chords(z, np.roll(z, -1)).sum(axis=0)
    assert abs(chords[-1] - 0.7) < 1e-12
    assert np.abs(chords[:-1]).max() < 1e-12


@pytest.mark.parametrize("stands", ["free", "on the bank"])
@pytest.mark.parametrize("name", SHORES)
def test_velocity_is_the_slope_of_the_potential_beside_long_edges(name, stands):
    """F and W are summed by different kernels, and beside an element both take its integral for its nodes."""
    shore, at = SHORES[name]
    middle = at if stands == "free" else complex(abs(at.real), 1.0)
    square = tuple(middle + corner for corner in (-1 - 1j, 1 - 1j, 1 + 1j, -1 + 1j))
    discharge = 3.0 if name == "basin" else 2.0
    elements = (Sink("s", middle + 4, 3.0), Source("t", middle + 6 + 1j, discharge))
    ambient = Ambient(1 + 0j if name == "channel" else 0j)
    model = compile_layout(
        Layout(1.0, ambient=ambient, shore=shore, elements=elements, structures=(Outline("p", square),))
    )
    z = middle + np.array([1.1, 1.5, 2.5, 1.2 + 0.5j, 1.2j, 2j, -1.3, -1.08 + 0.2j, 1.3 + 1.3j])
    ahead = 0.05 + 0.02j
    nodes, weights = np.polynomial.legendre.leggauss(12)
    inner = z[:, None] + ahead * 0.5 * (1.0 + nodes)
    quadrature = (model.velocity(inner.ravel()).reshape(inner.shape) @ weights) * 0.5 * ahead
    chords = model.chord(z, z + ahead)
    # rounding: sums of some 1e3 terms of the size of the ambient speed
    assert np.abs(chords - quadrature).max() < 1e-11
    step = 1e-5
    slope = (model.velocity(z + step) - model.velocity(z - step)) / (2.0 * step)
    # central difference: step^2 times the third derivative, 1e2 at the nearest corner; rounding 1e-15 / step
    assert np.abs(model.jet(z).slope - slope).max() < 1e-6


def test_polygon_beside_a_bank_is_a_pier():
    """Schwarz's alternating method in 80-bit floats for a circle and its image."""
    pier = Pier("p", 2 + 1.4j, 1.0, 0.4)
    site: dict[str, Any] = {
        "shore": StraightBank(0j, 1 + 0j),
        "ambient": Ambient(1 + 0j),
        "elements": (Source("t", -2 + 2j, 2.0),),
    }
    model = compile_layout(Layout(1.0, structures=(Outline("p", polygon(pier.at, 1.0), 0.4),), **site))
    z = about(pier.at, 1.2, 60)
    exact = Schwarz(Layout(1.0, structures=(pier,), **site)).velocity(z)
    # corners of the polygon as above; the gap of 0.4 is a third of the radius and doubles the speeds
    assert np.abs(model.velocity(z) - exact).max() < 5e-5


@pytest.mark.parametrize("gap", [0.4, 0.1])
def test_pier_beside_a_polygon_is_two_piers(gap):
    """Schwarz's alternating method in 80-bit floats for two circles, and one of them as a polygon."""
    one, other = Pier("p", 0j, 1.0, 0.3), Pier("q", 2.0 + gap + 0j, 1.0, -0.5)
    site: dict[str, Any] = {"ambient": Ambient(1 + 0.3j), "elements": (Source("t", -2 + 2j, 2.0),)}
    oracle = Schwarz(Layout(1.0, structures=(one, other), **site))
    mixed = compile_layout(
        Layout(1.0, structures=(one, Outline("q", polygon(other.at, 1.0), other.circulation)), **site)
    )
    z = np.concatenate([about(0j, 1.02, 40), about(other.at, 1.3, 40)])
    z = z[mixed.wet(z) & (mixed.distance_to_wall(z) > 0.015)]
    exact = oracle.velocity(z)
    assert (
        np.abs(mixed.velocity(z) - exact).max() < 1e-4
    )  # corners of the polygon: (pi/192)^4 over the distance
    assert mixed.boundary_residual < 1e-8

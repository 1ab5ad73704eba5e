"""Velocity, derivatives and chord integrals against the 40-digit oracle; no flow through walls."""

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Core,
    CoreModel,
    Layout,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from reference.oracle import CONTEXT, Oracle, exact
from support.layouts import ALL_KINDS, BANK_KINDS, LINE_KINDS, random_layout
from support.sites import SHORES, place, wall_samples

ROUNDING = 1e-12
"""Asked for, relative to the sum of the terms: some roundings of 1e-16 in the chain of log and coth."""

PLACES = [(0.05, 0.13), (0.33, 0.61), (0.52, 0.47), (0.71, 0.92), (0.97, 0.27)]


def _places(shore_name: str) -> np.ndarray:
    return np.array([place(SHORES[shore_name], *fractions) for fractions in PLACES])


def _error(layout: Layout, z: np.ndarray) -> float:
    """Largest error of the velocity, relative to the sum of the terms."""
    model, oracle = compile_layout(layout), Oracle(layout)
    worst = 0.0
    for point, computed in zip(z, model.velocity(z), strict=True):
        reference = oracle.velocity(complex(point))
        worst = max(worst, float(abs(exact(complex(computed)) - reference.value) / reference.scale))
    return worst


@pytest.mark.parametrize("seed", range(2))
@pytest.mark.parametrize("shore_name", SHORES)
def test_velocity_of_every_element_on_every_shore(shore_name, seed):
    layout = random_layout(shore_name, seed, count=len(ALL_KINDS))
    assert _error(layout, _places(shore_name)) <= ROUNDING


@pytest.mark.parametrize("kind", ALL_KINDS)
@pytest.mark.parametrize("shore_name", SHORES)
def test_velocity_of_one_element(shore_name, kind):
    layout = random_layout(shore_name, 11, kinds=[kind], count=1)
    assert _error(layout, _places(shore_name)) <= ROUNDING


@pytest.mark.parametrize("shore_name", SHORES)
def test_velocity_of_many_elements(shore_name):
    kinds = [kind for kind in ALL_KINDS if kind not in LINE_KINDS]
    layout = random_layout(shore_name, 3, kinds=kinds, count=40)
    assert _error(layout, _places(shore_name)) <= ROUNDING


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize("shore_name", [name for name in SHORES if name != "open-water"])
def test_no_water_crosses_a_wall(shore_name, seed):
    layout = random_layout(shore_name, seed, count=len(ALL_KINDS))
    model = compile_layout(layout)
    for wall in wall_samples(SHORES[shore_name]):
        velocity = model.velocity(wall.points)
        normal = (velocity * wall.along).imag
        # a place on the wall is itself only known to 1e-16 of the coordinates
        assert np.abs(normal / model.magnitude(wall.points)).max() <= ROUNDING


@pytest.mark.parametrize("kind", ["rankine", "lamb-oseen"])
@pytest.mark.parametrize("shore_name", SHORES)
@pytest.mark.parametrize("distance", [0.0, 0.3, 0.999, 1.001, 2.5])
def test_velocity_in_and_about_a_core(shore_name, kind, distance):
    layout = random_layout(shore_name, 5, kinds=[kind], count=1)
    (vortex,) = [element for element in layout.elements if isinstance(element, Vortex)]
    assert vortex.core is not None
    z = np.array(
        [vortex.at + distance * vortex.core.radius * direction for direction in (1, 1j, -0.6 - 0.8j)]
    )
    if distance == 0.0:
        # the free vortex and its core cancel: what is left is the rest of the flow, to the rounding of the
        # swirl
        swirl = abs(vortex.circulation) / (2 * np.pi * vortex.core.radius)
        still = Oracle(layout).velocity(exact(vortex.at) + CONTEXT.mpf("1e-14")).value
        computed = compile_layout(layout).velocity(z)
        assert np.abs(computed - complex(still)).max() <= 1e-12 * swirl + 1e-12 * abs(complex(still))
    else:
        assert _error(layout, z) <= ROUNDING


@pytest.mark.parametrize("kind", ["rankine", "lamb-oseen"])
@pytest.mark.parametrize("shore_name", ["straight-bank", "channel", "dead-end", "basin", "corner-right"])
def test_core_beside_a_wall_lets_no_water_through(shore_name, kind):
    wall = wall_samples(SHORES[shore_name])[0]
    near = complex(wall.points[20] + 1j * wall.along * 1.5)
    vortex = Vortex("gyre", near, 2.0, Core(CoreModel(kind), 1.2))
    layout = Layout(1.0, shore=SHORES[shore_name], elements=(vortex,))
    model = compile_layout(layout)
    normal = (model.velocity(wall.points) * wall.along).imag
    assert np.abs(normal / model.magnitude(wall.points)).max() <= ROUNDING


GRADIENTS = {
    "shear": ((0.0, 0.02), (0.0, 0.0)),
    "strain": ((0.01, 0.03), (0.03, -0.01)),
    "rotation": ((0.0, -0.02), (0.02, 0.0)),
    "all": ((0.01, -0.04), (0.03, -0.01)),
}


@pytest.mark.parametrize("gradient", GRADIENTS.values(), ids=GRADIENTS)
def test_ambient_gradient_in_open_water(gradient):
    base = random_layout("open-water", 8, kinds=["sink", "vortex"], count=3)
    ambient = Ambient(0.3 - 0.2j, gradient, 4 + 3j)
    layout = Layout(base.depth, ambient=ambient, elements=base.elements)
    z = _places("open-water")
    assert _error(layout, z) <= ROUNDING
    jet = compile_layout(layout).jet(z)
    (ux, uy), (vx, vy) = gradient
    without = compile_layout(Layout(base.depth, elements=base.elements)).jet(z)
    # W_z = (u_x - v_y - i(u_y + v_x)) / 2 and W_zbar = (div - i vorticity) / 2, exactly
    expected = complex(ux - vy, -(uy + vx)) / 2
    assert np.abs(jet.slope - without.slope - expected).max() <= 1e-15
    assert np.abs(jet.skew - complex(ux + vy, -(vx - uy)) / 2).max() <= 1e-15


def test_shear_along_a_bank():
    # in the frame of the bank u = S y: no flow through the bank y = 0
    shore = SHORES["straight-bank"]
    assert isinstance(shore, StraightBank)
    along = shore.along
    rate = 0.05
    normal = 1j * along
    rows = [[rate * a * n for n in (normal.real, normal.imag)] for a in (along.real, along.imag)]
    trace = rows[0][0] + rows[1][1]
    gradient = ((rows[0][0] - trace / 2, rows[0][1]), (rows[1][0], rows[1][1] - trace / 2))
    layout = Layout(
        2.0,
        ambient=Ambient(0.2 * along, gradient, shore.point),
        shore=shore,
        elements=(Sink("s", shore.point + 8 * normal, 2.0),),
    )
    assert _error(layout, _places("straight-bank")) <= ROUNDING


QUICK_KINDS = tuple(kind for kind in ALL_KINDS if kind not in LINE_KINDS)
"""Line elements cost the oracle a quadrature each: they have their own tests."""


@pytest.mark.parametrize("kinds", [QUICK_KINDS, LINE_KINDS[:1]], ids=["points", "line"])
@pytest.mark.parametrize("shore_name", SHORES)
def test_jet_is_the_derivative_of_the_velocity(shore_name, kinds):
    layout = random_layout(shore_name, 1, kinds=kinds, count=len(kinds))
    model, oracle = compile_layout(layout), Oracle(layout)
    z = _places(shore_name)[: 3 if kinds is QUICK_KINDS else 1]
    jet = model.jet(z)
    for point, slope, skew in zip(z, jet.slope, jet.skew, strict=True):
        expected, unexpected, scale = _derivatives(oracle, complex(point))
        # line elements are integrated in 25 digits, so differences over 1e-5 are good to 1e-10 at least
        assert abs(complex(slope) - expected) <= 1e-9 * scale
        assert abs(complex(skew) - unexpected) <= 1e-9 * scale


def _derivatives(oracle: Oracle, z: complex) -> tuple[complex, complex, float]:
    """W_z and W_zbar by fourth-order differences over a millimetre, and a scale for their error."""
    step = CONTEXT.mpf("1e-3")

    def across(unit: complex) -> complex:
        far = (
            oracle.velocity(exact(z) + 2 * step * unit).value
            - oracle.velocity(exact(z) - 2 * step * unit).value
        )
        near = oracle.velocity(exact(z) + step * unit).value - oracle.velocity(exact(z) - step * unit).value
        return complex((8 * near - far) / (12 * step))

    along_x, along_y = across(1 + 0j), across(1j)
    scale = float(oracle.velocity(z).scale) + abs(along_x) + abs(along_y)
    return (along_x - 1j * along_y) / 2, (along_x + 1j * along_y) / 2, scale


@pytest.mark.parametrize("kind", ["rankine", "lamb-oseen"])
def test_jet_inside_a_core(kind):
    layout = random_layout("channel", 5, kinds=[kind], count=1)
    vortex = next(element for element in layout.elements if isinstance(element, Vortex))
    at = vortex.at + 0.07 * np.exp(0.4j)
    jet = compile_layout(layout).jet(np.array([at]))
    slope, skew, scale = _derivatives(Oracle(layout), complex(at))
    assert abs(complex(jet.slope[0]) - slope) <= 1e-8 * scale  # differences of order (1e-3 / 0.2)^4
    assert abs(complex(jet.skew[0]) - skew) <= 1e-8 * scale


@pytest.mark.parametrize("kind", ALL_KINDS)
@pytest.mark.parametrize("shore_name", SHORES)
def test_chord_is_the_integral_of_the_velocity(shore_name, kind):
    layout = random_layout(shore_name, 2, kinds=[kind], count=1)
    model = compile_layout(layout)
    starts, ends = _chords(shore_name, layout)
    computed = model.chord(starts, ends)
    by_owner = model.chords(starts, ends)
    assert by_owner.shape == (len(starts), len(model.owners))
    assert np.abs(by_owner.sum(axis=1) - computed).max() <= 1e-12 * (1 + np.abs(computed).max())
    for a, b, value in zip(starts, ends, computed, strict=True):
        expected = _quadrature(model, complex(a), complex(b))
        assert (
            abs(complex(value) - expected) <= 2e-11
        )  # discharges of order one; quadrature converged to 1e-12


def _chords(shore_name: str, layout: Layout) -> tuple[np.ndarray, np.ndarray]:
    z = _places(shore_name)
    if shore_name == "corner-reflex":  # straight chords between far places would cross the land
        return z[[1, 2]], z[[2, 1]] * 0.999 + 0.001 * z[[1, 2]]
    return z[:-1], z[1:]


def _quadrature(model, a: complex, b: complex) -> complex:
    """Composite Gauss-Legendre with 16 nodes on 400 panels: spectrally exact away from singularities."""
    nodes, weights = np.polynomial.legendre.leggauss(16)
    edges = np.linspace(0, 1, 401)
    fractions = (edges[:-1, None] + (nodes + 1) / 2 / 400).ravel()
    values = model.velocity(a + (b - a) * fractions).reshape(-1, 16)
    return complex((values @ weights).sum() / 800 * (b - a))


@pytest.mark.parametrize("kind", ALL_KINDS)
@pytest.mark.parametrize("shore_name", SHORES)
def test_potential_differs_by_the_chord(shore_name, kind):
    layout = random_layout(shore_name, 6, kinds=[kind], count=1)
    model = compile_layout(layout)
    z = _places(shore_name)
    step = 1e-3 * np.exp(0.3j)
    difference = model.potential(z + step) - model.potential(z - step)
    chord = model.chord(z - step, z + step)
    # potentials of up to a few hundred m2/s are subtracted; psi exists in a core as well, phi does not
    assert np.abs((difference - chord).imag).max() <= 1e-12
    if model.has_potential:
        assert np.abs(difference - chord).max() <= 1e-12


@pytest.mark.parametrize("kind", BANK_KINDS)
@pytest.mark.parametrize(
    "shore_name", [name for name in SHORES if name not in {"open-water", "basin", "basin-long"}]
)
def test_element_on_a_bank_gives_its_whole_discharge_to_the_water(shore_name, kind):
    layout = random_layout(shore_name, 4, kinds=[kind], count=1)
    model = compile_layout(layout)
    (element,) = layout.elements
    assert isinstance(element, Source | Sink)
    along = wall_samples(SHORES[shore_name])[0].along
    turns = np.exp(1j * np.pi * np.linspace(0, 1, 201)) * along  # half circle on the water side
    ring = element.at + 0.5 * turns
    flux = model.chord(ring[:-1], ring[1:]).imag.sum()
    expected = (element.discharge if kind == "bank-source" else -element.discharge) / layout.depth
    # positive to the right of travel: anticlockwise round the element, so outward
    assert flux == pytest.approx(expected, abs=1e-12)

"""Flow round piers against the circle theorem, Schwarz's method and the conditions that fix it uniquely."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.layout import Ambient, Layout, Pier, Sink, Source, Vortex
from forebay.flow.model import compile_layout
from reference.piers import ORDER, Schwarz, circle_theorem, rim
from reference.test_piers import CROWD, ONE
from support.layouts import ALL_KINDS, POINT_KINDS, random_layout
from support.sites import SHORES, wall_samples

ROUNDING = 1e-12
assert ORDER >= 120


def _compare_with_circle_theorem(layout: Layout, z: np.ndarray) -> float:
    computed = compile_layout(layout).velocity(z)
    errors = []
    for point, value in zip(z, computed, strict=True):
        reference = circle_theorem(layout, complex(point))
        errors.append(abs(complex(value) - complex(reference.value)) / float(reference.scale))
    return max(errors)


def _about(pier: Pier) -> np.ndarray:
    angles = np.exp(1j * np.array([0.1, 1.3, 2.9, 4.4]))
    return np.concatenate([pier.at + pier.radius * factor * angles for factor in (1.0, 1.01, 1.7, 12.0)])


@pytest.mark.parametrize("seed", range(6))
def test_one_pier_in_open_water_is_exact(seed):
    layout = random_layout("open-water", seed, kinds=POINT_KINDS, count=8, piers=1)
    assert _compare_with_circle_theorem(layout, _about(layout.piers[0])) <= ROUNDING


def test_one_pier_with_circulation():
    assert _compare_with_circle_theorem(ONE, _about(ONE.piers[0])) <= ROUNDING


def test_pier_in_a_strain():
    layout = replace(ONE, ambient=Ambient(0.2 + 0.1j, ((0.03, 0.02), (0.02, -0.03)), 2 - 1j))
    assert _compare_with_circle_theorem(layout, _about(ONE.piers[0])) <= ROUNDING


def test_element_close_to_a_pier():
    layout = Layout(1.0, elements=(Sink("k", 1.001 + 0j, 1.0),), structures=(Pier("p", 0j, 1.0),))
    z = np.array([1.0005 + 0.0005j, 1.5j, -2 + 0j])
    assert _compare_with_circle_theorem(layout, z) <= 1e-11  # the gap of 1e-3 costs three digits of position


def _two(gap: float) -> Layout:
    return Layout(
        1.0,
        ambient=Ambient(0.4 + 0.2j),
        elements=(Sink("k", 3 + 4j, 1.0), Source("s", -5 + 1j, 0.7), Vortex("v", 1 - 3j, 2.0)),
        structures=(Pier("p", 0j, 1.0, 0.5), Pier("r", 2 + gap + 0j, 1.0)),
    )


@pytest.mark.parametrize("layout", [_two(2.0), _two(0.5), CROWD], ids=["far", "near", "bank"])
def test_several_piers(layout):
    model, reference = compile_layout(layout), Schwarz(layout)
    z = np.concatenate([_about(pier) for pier in layout.piers])
    z = z[model.wet(z)]
    error = np.abs(model.velocity(z) - reference.velocity(z)) / model.magnitude(z)
    # the boundary condition is met to the reported residual; the maximum principle carries it into the water
    assert error.max() <= max(1e-11, 10 * model.boundary_residual)
    assert model.boundary_residual <= 1e-9


@pytest.mark.parametrize("seed", range(2))
@pytest.mark.parametrize("piers", [1, 3])
@pytest.mark.parametrize("shore_name", SHORES)
def test_flow_round_piers_meets_what_determines_it(shore_name, piers, seed):
    """No flow through piers and banks, the given circulation, no discharge: there is only one such flow."""
    layout = random_layout(shore_name, seed, kinds=ALL_KINDS, count=7, piers=piers)
    model = compile_layout(layout)
    residual = max(ROUNDING, 2 * model.boundary_residual)
    for pier in layout.piers:
        _check_pier(model, pier, residual)
    for wall in wall_samples(SHORES[shore_name]):
        normal = (model.velocity(wall.points) * wall.along).imag
        assert np.abs(normal / model.magnitude(wall.points)).max() <= ROUNDING
    assert model.boundary_residual <= 1e-8


def _check_pier(model, pier: Pier, residual: float) -> None:
    z = rim(pier)
    velocity = model.velocity(z)
    normal = (velocity * (z - pier.at) / pier.radius).real
    speed = np.abs(velocity).max() + 1e-3 * model.magnitude(z).max()
    assert np.abs(normal).max() <= residual * speed + 1e-12 * model.magnitude(z).max()
    # trapezoid over a circle a little outside the wall: spectrally exact
    ring = pier.at + 1.05 * pier.radius * np.exp(2j * np.pi * np.arange(1024) / 1024)
    turns = (model.velocity(ring) * 2j * np.pi * (ring - pier.at)).mean()
    assert turns.real == pytest.approx(pier.circulation, abs=1e-10)
    assert turns.imag == pytest.approx(0.0, abs=1e-10)

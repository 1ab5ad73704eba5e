"""Shapes that surveys contain: slivers, spikes, slender bars, gaps of a metre, far origins."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    EdgeProfile,
    Island,
    Layout,
    OpenEdge,
    Outline,
    StraightBank,
    Surveyed,
)
from forebay.flow.model import compile_layout

EQUI = EdgeProfile.EQUIPOTENTIAL


def basin(*extra, islands=(), shift=0j, scale=1.0):
    """Box of 10 by 4 with more vertices on its lower side, unit flux from right to left."""
    outer = [0j, *(complex(z) for z in extra), 10 + 0j, 10 + 4j, 4j]
    count = len(outer)
    edges = (
        OpenEdge("right", count - 3, 1, scale, EQUI),
        OpenEdge("left", count - 1, 1, None, EQUI),
    )
    shore = Surveyed(tuple(shift + scale * z for z in outer), islands, edges)
    return compile_layout(Layout(1.0, shore=shore))


SHAPES = {
    "spike of 1 mm": (5 - 5e-4, 5 - 5e-4 + 2j, 5 + 5e-4 + 2j, 5 + 5e-4),
    "slit of 1 mm": (5 - 5e-4, 5 - 5e-4 - 2j, 5 + 5e-4 - 2j, 5 + 5e-4),
    "edges of 6 mm in 1 km": (5, 5 + 6e-5, 5 + 1.2e-4 - 6e-5j),
    "collinear vertex": (5,),
    "needle of 0.3 degrees": (3, 5 + 2j, 3.01),
    "acute corner of water": (4, 4 + 1j, 4 + 1e-4j + 1e-3, 4.5),
}


@pytest.mark.parametrize("name", SHAPES)
def test_shape_is_solved(name):
    model = basin(*SHAPES[name])
    assert model.bound.relative < 2e-3
    path = np.array([0.5 + 3.5j, 9.5 + 3.5j])
    top = model.chord(path + 0.4999j, np.array([0.5, 9.5]) + 0.001j).imag
    assert np.abs(top - top.mean()).max() <= 4.0 * model.bound.absolute  # the same flux at both ends


@pytest.mark.parametrize("gap", [0.5, 1e-2, 1e-3])
def test_island_close_to_a_bank(gap):
    turn = np.exp(-2j * np.pi * (np.arange(24) + 0.5) / 24)
    island = Island("island", tuple((5 + 1j * (0.5 + gap) + 0.5 * turn / np.cos(np.pi / 24)).tolist()))
    model = basin(islands=(island,))
    assert model.bound.relative < 2e-3
    below = model.chord(np.array([5 + 1j * gap]), np.array([5 + 0j]))[0].imag
    assert 0.0 < abs(below) < 0.5  # less than half of the water takes the narrow side
    if gap < 0.1:
        assert drop_in_gap(model, gap) == pytest.approx(below, rel=0.03)


def drop_in_gap(model, gap):
    """Flux through a narrow gap from its potential drop, as in lubrication: drop over the integral of dx / h.

    Good to the square of the slope of its upper side, at most 15 degrees within 0.1 of the middle, over 3.
    """
    x = np.linspace(-0.1, 0.1, 2001)
    half = 0.5 * np.tan(np.pi / 24)
    over = np.maximum(np.abs(x) - half, 0.0) * np.tan(np.pi / 12)
    resistance = np.trapezoid(1.0 / (gap + over), x)
    return -model.chord(np.array([4.9 + 0j]), np.array([5.1 + 0j]))[0].real / resistance


def test_slender_bar():
    bar = Outline("bar", (-50 + 0j, 50 + 0j, 50 + 0.01j, -50 + 0.01j))
    model = compile_layout(Layout(1.0, ambient=Ambient(1j), structures=(bar,)))
    z = np.array([60j, 20 + 30j, -80 + 10j])
    exact = -1j * z / (np.sqrt(z - 50) * np.sqrt(z + 50))
    assert np.abs(model.velocity(z) - exact).max() < 2e-3  # plate of no thickness; 1e-4 of its length thick


def test_place_of_the_origin_does_not_matter():
    near, far = basin(*SHAPES["needle of 0.3 degrees"]), None
    far = basin(*SHAPES["needle of 0.3 degrees"], shift=1e6 - 5e5j)
    z = np.random.default_rng(4).uniform(0.5, 9.5, 50) + 1j * np.random.default_rng(5).uniform(2.5, 3.9, 50)
    # coordinates are known to 1e-10 there, and meshes may differ by an element
    assert np.abs(far.velocity(z + 1e6 - 5e5j) - near.velocity(z)).max() < 2e-4


def test_sense_and_start_of_an_outline_do_not_matter():
    points = (5 + 2j, 7 + 2j, 7 + 4j, 6 + 5j)
    layout = Layout(1.0, ambient=Ambient(1 + 0j), shore=StraightBank(0j, 1 + 0j))
    z = np.array([4 + 1j, 8 + 3j, 6 + 6j])
    values = [
        compile_layout(replace(layout, structures=(Outline("o", ring),))).velocity(z)
        for ring in (points, points[::-1], points[2:] + points[:2])
    ]
    assert np.abs(values[0] - values[1]).max() < 1e-12
    assert np.abs(values[0] - values[2]).max() < 1e-12

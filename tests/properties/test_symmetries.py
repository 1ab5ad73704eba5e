"""The flow follows its layout: superposed, strengthened, enlarged, turned, moved, mirrored."""

from dataclasses import replace

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from forebay.flow.arrays import FloatArray
from forebay.flow.layout import Layout
from forebay.flow.model import FlowModel, compile_layout
from support.layouts import balanced
from support.sites import BASINS, SHORES, ComplexArray, place
from support.strategies import layouts, quiet_places
from support.transforms import enlarged, mirrored, moved, strengthened

PROFILE = settings(derandomize=True, deadline=None, max_examples=60)

ROUNDING = 1e-12
"""Relative to the sum of the terms: the two sides round differently, each by some 1e-14."""

SOLVED = 1e-9
"""With piers the moments are solved for, to a boundary residual of this order."""


def _tolerance(model: FlowModel, z: ComplexArray) -> FloatArray:
    relative = max(ROUNDING, 20 * model.boundary_residual) if model.piers else ROUNDING
    assert relative <= SOLVED
    return relative * model.magnitude(z)


def _agree(model: FlowModel, z: ComplexArray, expected: ComplexArray) -> None:
    wet = model.wet(z)
    difference = np.abs(model.velocity(z) - expected)
    assert (difference <= _tolerance(model, z))[wet].all()


def _part(layout: Layout, shore_name: str, which: slice) -> Layout:
    elements = tuple(e for e in layout.elements if e.name != "balance")[which]
    if shore_name in BASINS:
        elements = balanced(elements, place(SHORES[shore_name], 0.5 / 8, 0.5 / 8))
    return replace(layout, elements=elements)


@PROFILE
@given(layouts(largest=6), st.integers(1, 3))
def test_superposition(named, cut):
    # W(A and B) - W(nothing) = W(A) - W(nothing) + W(B) - W(nothing), with the same current and piers
    shore_name, layout = named
    z = quiet_places(shore_name)
    parts = [_part(layout, shore_name, which) for which in (slice(0, cut), slice(cut, None), slice(0, 0))]
    first, second, nothing = (compile_layout(part).velocity(z) for part in parts)
    _agree(compile_layout(layout), z, first + second - nothing)


@PROFILE
@given(layouts(), st.sampled_from((0.01, 0.3, 7.0, 1000.0)))
def test_stronger_elements_make_a_faster_flow(named, factor):
    shore_name, layout = named
    z = quiet_places(shore_name)
    slow = compile_layout(layout).velocity(z)
    _agree(compile_layout(strengthened(layout, factor)), z, factor * slow)


@PROFILE
@given(layouts(), st.sampled_from((1e-3, 0.2, 12.0, 1e4)))
def test_larger_site_has_the_same_speeds(named, scale):
    shore_name, layout = named
    z = quiet_places(shore_name)
    _agree(compile_layout(enlarged(layout, scale)), scale * z, compile_layout(layout).velocity(z))


@PROFILE
@given(layouts(), st.floats(-3.2, 3.2), st.sampled_from((0j, 30 - 7j, -500 + 900j)))
def test_turned_and_moved(named, angle, shift):
    # W = u - iv turns backwards: W'(unit z + shift) = conj(unit) W(z)
    shore_name, layout = named
    unit = complex(np.exp(1j * angle))
    z = quiet_places(shore_name)
    expected = np.conj(unit) * compile_layout(layout).velocity(z)
    model = compile_layout(moved(layout, unit, shift))
    wet = model.wet(unit * z + shift)
    difference = np.abs(model.velocity(unit * z + shift) - expected)
    # a shift of 1000 m costs 1e-13 m of position, a cell is 4 m wide: well within ten roundings
    assert (difference <= 10 * _tolerance(model, unit * z + shift))[wet].all()


@PROFILE
@given(layouts())
def test_mirrored(named):
    shore_name, layout = named
    z = quiet_places(shore_name)
    expected = np.conj(compile_layout(layout).velocity(z))
    _agree(compile_layout(mirrored(layout)), np.conj(z), expected)


@PROFILE
@given(layouts(), st.randoms(use_true_random=False))
def test_order_of_the_elements_does_not_matter(named, randomness):
    shore_name, layout = named
    z = quiet_places(shore_name)
    shuffled = list(layout.elements)
    randomness.shuffle(shuffled)
    model = compile_layout(replace(layout, elements=tuple(shuffled)))
    _agree(model, z, compile_layout(layout).velocity(z))


@PROFILE
@given(layouts())
def test_depth_divides_discharges_only(named):
    # a discharge over twice the depth is half the strength; circulations and moments are per depth already
    shore_name, layout = named
    z = quiet_places(shore_name)
    elements = tuple(
        replace(e, discharge=2 * e.discharge) if hasattr(e, "discharge") else e for e in layout.elements
    )
    model = compile_layout(replace(layout, depth=2 * layout.depth, elements=elements))
    _agree(model, z, compile_layout(layout).velocity(z))

"""Random rational layouts: the count closes, and every zero is a zero in extended precision."""

import numpy as np
import pytest

from forebay.flow.layout import Corner, Doublet, Layout
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import WATER
from forebay.flow.stagnation.search import search_model
from reference.oracle import CONTEXT, Oracle, exact
from support.layouts import BANK_KINDS, POINT_KINDS, random_layout
from support.sites import SHORES

KINDS = (*POINT_KINDS, *BANK_KINDS)
QUICK, ALL = 27, 1000
"""Layouts tried in every run, and with -m slow."""

CELLS = 11
"""Random layouts put one element in each of 121 cells: up to 100 elements."""


def _layout(seed: int) -> Layout:
    """The seed decides about shore, number and kinds; piers are left to the residual that they report."""
    generator = np.random.default_rng(seed)
    shore_name = list(SHORES)[seed % len(SHORES)]
    count = int(generator.integers(3, 101))
    kinds = list(KINDS)
    generator.shuffle(kinds)
    return random_layout(shore_name, seed, kinds=kinds[: 1 + seed % len(kinds)], count=count, cells=CELLS)


def _newton_step(oracle: Oracle, z: complex) -> float:
    """Distance to the true zero: |W / W'| in 45 digits, W' by a difference over 1e-18 m."""
    step = CONTEXT.mpf("1e-18")
    here = oracle.velocity(exact(z)).value
    slope = (oracle.velocity(exact(z) + step).value - here) / step
    return float(abs(here / slope))


def _check(layout: Layout) -> None:
    result = search_model(compile_layout(layout))
    assert result.complete, (result.degree, result.weight, result.unresolved)
    assert result.expected_count == result.found_count == len(result.points)
    assert result.weight == result.degree
    if layout.ambient.velocity:  # nor are there corners, which count by the exponent of the map
        weight = sum(point.multiplicity * (2 if point.on == WATER else 1) for point in result.points)
        assert weight == result.degree == _poles(layout)
    oracle = Oracle(layout)
    for point in result.points:
        if point.multiplicity > 1 or _is_vertex(layout, point.at):
            continue
        # the inclusion radius is what the certificate promises; rounding of the coordinates comes on top
        assert _newton_step(oracle, point.at) <= point.inclusion_radius + 1e-13 * abs(point.at)


def _poles(layout: Layout) -> int:
    """Degree where a current fills the water: the poles of the velocity on the water and its mirror image.

    The order of the pole, twice for what stands in the water, once for a source or sink on a bank. In a
    channel velocity is one of exp(pi z / width), of the same degree.
    """
    bank = compile_layout(layout).singularities
    return sum((2 if isinstance(s.kind, Doublet) else 1) * (2 if s.on == WATER else 1) for s in bank)


def _is_vertex(layout: Layout, at: complex) -> bool:
    """The map has a branch point at a vertex; the speed there is zero by the exponent of the map."""
    return isinstance(layout.shore, Corner) and abs(at - layout.shore.vertex) < 1e-9


@pytest.mark.parametrize("seed", range(QUICK))
def test_count_closes_and_zeros_are_zeros(seed):
    _check(_layout(seed))


@pytest.mark.slow
@pytest.mark.parametrize("start", range(QUICK, ALL, 10))
def test_thousand_layouts(start):
    for seed in range(start, min(start + 10, ALL)):
        _check(_layout(seed))

"""Outlines and a surveyed reach: first answer, another on the solved walls, evaluation; their growth."""

from collections.abc import Callable, Iterator
from dataclasses import replace
from functools import partial

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import Ambient, Layout, Outline, Sink, StraightBank, Surveyed
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.sheets.adapt import forget_meshes
from forebay.flow.sheets.memo import MEMO
from forebay.flow.sheets.solution import Solution, solve

from .reach import reach
from .timing import Measure, best_of

VERTICES = (8, 32, 128)
SIDE = 200
"""Points along each side of a lattice."""


def _saw(vertices: int) -> Layout:
    """Quay on a bank with as many corners: teeth of 1 m by 1 m."""
    x = np.arange(vertices // 2) * 1.0
    teeth = np.column_stack((x + 3j, x + 0.5 + 4j)).ravel()
    points = (0j, x[-1] + 0.5 + 0j, *(complex(z) for z in teeth[::-1]))
    shore = StraightBank(0j, 1 + 0j)
    return Layout(1.0, ambient=Ambient(1 + 0j), shore=shore, structures=(Outline("quay", points),))


def _first(layout: Layout) -> FlowModel:
    """Compile as if never asked before."""
    MEMO.clear()
    forget_meshes()
    compile_layout.cache_clear()
    return compile_layout(layout)


def _again(layout: Layout, count: list[int]) -> FlowModel:
    """Another sink far from the quay."""
    count[0] += 1
    return compile_layout(replace(layout, elements=(Sink("s", -50 + 1j * (20 + count[0]), 1.0),)))


def _more(layout: Layout, count: list[int]) -> FlowModel:
    """Another discharge through the reach."""
    count[0] += 1
    shore = layout.shore
    if not isinstance(shore, Surveyed):
        raise TypeError(shore)
    edges = tuple(
        edge if edge.discharge is None else replace(edge, discharge=1000.0 + count[0]) for edge in shore.edges
    )
    return compile_layout(replace(layout, shore=replace(shore, edges=edges)))


def measure() -> Iterator[Measure]:
    """Quays of several numbers of vertices: how each time grows; then the reach of the tests' data."""
    unknowns = []
    for vertices in VERTICES:
        layout = _saw(vertices)
        size = _solved(layout).system.size
        unknowns.append(size)
        yield from _rows(layout, _again, f"{vertices} vertices, {size} unknowns")
    growth = np.log(unknowns[-1] / unknowns[0]) / np.log(VERTICES[-1] / VERTICES[0])
    yield Measure("unknowns against vertices, power", float(growth), "-", 1.0)
    layout = Layout(10.0, shore=reach(1000.0))
    yield from _rows(layout, _more, f"the reach, {_solved(layout).system.size} unknowns")


def _solved(layout: Layout) -> Solution:
    boundary = compile_layout(layout).boundary
    if boundary is None:
        raise ValueError(layout)
    return boundary.solution


def _rows(layout: Layout, other: Callable[[Layout, list[int]], FlowModel], size: str) -> Iterator[Measure]:
    """A row for every time of one layout."""
    first = best_of(partial(_first, layout), repeats=1)
    yield Measure(f"first answer, {size}", first, "s", 10.0)
    solution, model = _solved(layout), compile_layout(layout)
    again = best_of(partial(other, layout, [0]), repeats=3)
    yield Measure(f"another flow with its bound, {size}", again, "s", 0.3)
    side = best_of(partial(solve, solution.system, solution.known), repeats=3)
    yield Measure(f"right-hand side, {size}", side, "s", 0.05)
    z = _places(model)
    each = best_of(partial(model.velocity, z), repeats=3) / z.size
    yield Measure(f"velocity, {size}", 1e6 * each, "us", 5.0)


def _places(model: FlowModel) -> ComplexArray:
    """Points of a lattice over the walls that lie in the water, row by row."""
    vertices = np.concatenate([ring.vertices for ring in model.rings])
    x = np.linspace(vertices.real.min(), vertices.real.max(), SIDE)
    y = np.linspace(vertices.imag.min(), vertices.imag.max(), SIDE)
    z = (x + 1j * y[:, None]).ravel()
    return np.asarray(z[model.wet(z)], dtype=np.complex128)

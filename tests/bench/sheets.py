"""Outlines: first answer, another sink on the solved walls, evaluation, against vertices."""

from collections.abc import Iterator
from dataclasses import replace
from functools import partial

import numpy as np

from forebay.flow.layout import Ambient, Layout, Outline, Sink, StraightBank
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.sheets.adapt import forget_meshes
from forebay.flow.sheets.memo import MEMO
from forebay.flow.sheets.solution import solve

from .timing import Measure, best_of

VERTICES = (8, 32, 128)
POINTS = 10_000


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


def measure() -> Iterator[Measure]:
    """Quays of several numbers of vertices: how each time grows."""
    for vertices in VERTICES:
        layout = _saw(vertices)
        boundary = _first(layout).boundary
        if boundary is None:
            raise ValueError(layout)
        solution, model = boundary.solution, compile_layout(layout)
        size = f"{vertices} vertices, {solution.system.size} unknowns"
        z = np.linspace(-20 + 6j, 20 + 6j, POINTS, dtype=np.complex128)
        first = best_of(partial(_first, layout), repeats=2)
        yield Measure(f"first answer, {size}", first, "s", 10.0)
        again = best_of(partial(_again, layout, [0]), repeats=3)
        yield Measure(f"another sink with its bound, {size}", again, "s", 0.3)
        side = best_of(partial(solve, solution.system, solution.known), repeats=3)
        yield Measure(f"right-hand side, {size}", side, "s", 0.05)
        each = best_of(partial(model.velocity, z), repeats=3) / POINTS
        yield Measure(f"velocity, {size}", 1e6 * each, "us", 5.0)

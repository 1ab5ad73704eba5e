"""Hypothesis strategies: layouts whose elements stand in cells of their own, so that nothing overlaps."""

from collections.abc import Sequence

import numpy as np
from hypothesis import strategies as st

from forebay.flow.layout import Layout
from support.layouts import ALL_KINDS, CELLS, assemble
from support.sites import SHORES, ComplexArray, place

STRENGTHS = st.sampled_from((0.25, 0.5, 1.0, 1.75, 3.0, -0.5, -1.25, -2.0))
SPEEDS = st.sampled_from((0.0, 0.1, 0.45, -0.3))
QUIET_CELL = 0
"""Where a basin's balance stands."""


@st.composite
def layouts(
    draw: st.DrawFn,
    shores: Sequence[str] = tuple(SHORES),
    kinds: Sequence[str] = ALL_KINDS,
    largest: int = 5,
    piers: int = 1,
) -> tuple[str, Layout]:
    """Name of a shore and a layout on it, with up to `largest` elements and up to `piers` piers."""
    shore_name = draw(st.sampled_from(list(shores)))
    count = draw(st.integers(1, largest))
    pier_count = draw(st.integers(0, piers))
    wanted = count + pier_count
    cells = draw(st.lists(st.integers(1, CELLS**2 - 1), min_size=wanted, max_size=wanted, unique=True))
    things = [(draw(st.sampled_from(list(kinds))), cell, draw(STRENGTHS)) for cell in cells[:count]]
    return shore_name, assemble(shore_name, things, speed=draw(SPEEDS), piers=cells[count:])


def quiet_places(shore_name: str) -> ComplexArray:
    """Points on the corners of some cells: at least a third of a cell from everything in the water."""
    shore = SHORES[shore_name]
    fractions = [(1, 1), (2, 5), (4, 3), (5, 7), (7, 2), (6, 6)]
    return np.array([place(shore, row / CELLS, column / CELLS) for row, column in fractions])

"""Grid over the map on which many-valued fields are drawn: exact differences along its edges.

The stream function has a different value after every turn round a source, the potential after every
turn round a vortex. What has one value is the difference along a short straight edge, so the lattice
holds those, and no branch of the logarithm is ever chosen.
"""

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np
from scipy import ndimage

from forebay.charts.rings import ring_lines
from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.shores import Wall
from forebay.flow.stagnation.result import Window

GRID_SHIFT = (0.381966, 0.618034)
"""Share of a spacing by which the grid starts outside the window: walls at round coordinates, and
elements on them, then lie on no grid line."""

OUTSIDE = 0
"""Number of the hole that holds the land and all that lies beyond the window."""

ROUNDING = 1e-9
"""Residue of a cell, relative to its edges, up to which it holds nothing."""

PAIRS_AT_A_TIME = 2_000_000
"""Chords times poles in one call of the model, each of which takes 16 bytes there."""

SAMPLES = 8
"""Places looked at along a ring, for each spacing of the grid [-]."""

CLOSE = 0.0625
"""Distance from a ring at which a cell counts as passed, in spacings: half that of the places [-]."""

EIGHT_NEIGHBOURS = np.ones((3, 3), dtype=np.int64)


class Crossing(NamedTuple):
    """Where a level meets an edge: index of the edge, difference of the field from its first node."""

    edge: int
    rise: float


@dataclass(frozen=True, slots=True)
class Lattice:
    """Nodes, edges and cells of a rectangular grid.

    Edges are numbered horizontal first (left to right), then vertical (upwards), each row-major.

    nodes : complex, shape (ny, nx), positions [m]
    steps : complex, shape (edges,), integral of W dz along each edge = circulation + i flux [m2/s]
    wet : shape (ny, nx), node in the water
    usable : shape (ny-1, nx-1), cell in the water or on a straight wall, without singularity
    """

    nodes: ComplexArray
    steps: ComplexArray
    wet: BoolArray
    usable: BoolArray

    @property
    def shape(self) -> tuple[int, int]:
        """Rows and columns of nodes."""
        rows, columns = self.nodes.shape
        return rows, columns

    @property
    def spacing(self) -> float:
        """Distance between neighbouring nodes [m], the same both ways."""
        return float(self.nodes[0, 1].real - self.nodes[0, 0].real)

    @property
    def horizontal_count(self) -> int:
        """Number of horizontal edges."""
        rows, columns = self.shape
        return rows * (columns - 1)

    def edge_nodes(self) -> tuple[IntArray, IntArray]:
        """First and second node of every edge, as flat indices."""
        index = np.arange(self.nodes.size).reshape(self.shape)
        first = np.concatenate([index[:, :-1].ravel(), index[:-1].ravel()])
        second = np.concatenate([index[:, 1:].ravel(), index[1:].ravel()])
        return first, second

    def cell_edges(self) -> IntArray:
        """Edges of every cell, shape (4, ny-1, nx-1): bottom, right, top, left."""
        rows, columns = self.shape
        across = np.arange(rows * (columns - 1)).reshape(rows, columns - 1)
        upward = np.arange((rows - 1) * columns).reshape(rows - 1, columns) + across.size
        return np.stack([across[:-1], upward[:, 1:], across[1:], upward[:, :-1]])

    def edge_cells(self) -> tuple[IntArray, IntArray]:
        """Rows and columns of cells beside every edge, shape (edges, 2); -1 where the grid ends.

        Of a horizontal edge the cells below and above, of a vertical one those left and right.
        """
        rows, columns = self.shape
        cells = np.full((rows + 1, columns + 1), -1)
        cells[1:-1, 1:-1] = np.arange((rows - 1) * (columns - 1)).reshape(rows - 1, columns - 1)
        before = np.concatenate([cells[:-1, 1:-1].ravel(), cells[1:-1, :-1].ravel()])
        after = np.concatenate([cells[1:, 1:-1].ravel(), cells[1:-1, 1:].ravel()])
        return before, after

    def usable_edges(self) -> BoolArray:
        """Whether an edge belongs to a usable cell, shape (edges,)."""
        flags = np.zeros(self.steps.size, dtype=np.bool_)
        flags[self.cell_edges()[:, self.usable].ravel()] = True
        return flags

    def holes(self) -> IntArray:
        """Number of the hole that a cell belongs to, shape (ny-1, nx-1): -1 if usable, 0 if outside.

        Cells that touch in a corner only do not belong together: one can walk through the node between them.
        Cells that touch in a corner only do not belong together: one can walk between them through the node.
        """
        labels, count = ndimage.label(~self.usable)
        rim = np.concatenate([labels[0], labels[-1], labels[:, 0], labels[:, -1]])
        inner = np.setdiff1d(np.arange(1, count + 1), rim)
        numbers = np.full(count + 1, OUTSIDE)
        numbers[0] = -1
        numbers[inner] = np.arange(1, inner.size + 1)
        return np.asarray(numbers[labels], dtype=np.int64)

    def residues(self, holes: IntArray) -> ComplexArray:
        """Integral of W dz anticlockwise round each hole, shape (holes + 1,): circulation + i flux [m2/s].

        Edges inside a hole are met in both directions and drop out; the entry of the outside means nothing.
        """
        steps = np.where(self.usable_edges(), self.steps, 0.0)
        bottom, right, top, left = steps[self.cell_edges()]
        around = (bottom + right - top - left)[~self.usable]
        numbers = holes[~self.usable]
        count = int(holes.max(initial=0)) + 1
        totals = np.zeros(count, dtype=np.complex128)
        np.add.at(totals, numbers, around)
        return totals


def lay_lattice(model: FlowModel, window: Window, columns: int) -> Lattice:
    """Grid of square cells over `window`, `columns` of them across it, with exact edge differences."""
    spacing = (window.x[1] - window.x[0]) / columns
    x = np.arange(window.x[0] - GRID_SHIFT[0] * spacing, window.x[1] + spacing, spacing)
    y = np.arange(window.y[0] - GRID_SHIFT[1] * spacing, window.y[1] + spacing, spacing)
    nodes = np.asarray(x[None, :] + 1j * y[:, None], dtype=np.complex128)
    wet = model.wet(nodes)
    near = ndimage.binary_dilation(wet, structure=EIGHT_NEIGHBOURS)
    across = edge_steps(model, nodes[:, :-1], nodes[:, 1:], near[:, :-1] & near[:, 1:])
    upward = edge_steps(model, nodes[:-1], nodes[1:], near[:-1] & near[1:])
    residue, rounding = cell_residues(across, upward)
    closes = np.abs(residue.imag) <= rounding
    if model.has_potential:
        closes &= np.abs(residue.real) <= rounding
    usable = near_water(wet, nodes, model.walls) & closes
    clear_singular_cells(model, nodes, usable)
    clear_ringed_cells(ring_lines(model.layout), nodes, usable)
    return Lattice(nodes, np.concatenate([across.ravel(), upward.ravel()]), wet, usable)


def edge_steps(model: FlowModel, begin: ComplexArray, end: ComplexArray, wanted: BoolArray) -> ComplexArray:
    """Integral of W dz along each edge that is wanted [m2/s]; nan along the others, which lie on land."""
    steps = np.full(begin.shape, complex(np.nan, np.nan))
    steps[wanted] = exact_steps(model, begin[wanted], end[wanted])
    return steps


def exact_steps(model: FlowModel, begin: ComplexArray, end: ComplexArray) -> ComplexArray:
    """Integral of W dz along straight chords, shape (n,) [m2/s], a few at a time to keep memory small."""
    share = max(PAIRS_AT_A_TIME // max(model.rational.poles.size, 1), 1)
    parts = [
        model.chord(begin[start : start + share], end[start : start + share])
        for start in range(0, begin.size, share)
    ]
    return np.concatenate(parts) if parts else np.zeros(0, dtype=np.complex128)


def near_water(wet: BoolArray, nodes: ComplexArray, walls: tuple[Wall, ...]) -> BoolArray:
    """Cells with a corner in the water, or with the end of a wall in them, where water may hide."""
    found = wet[:-1, :-1] | wet[:-1, 1:] | wet[1:, :-1] | wet[1:, 1:]
    ends = [
        wall.point + length * wall.direction
        for wall in walls
        for length in (-wall.before, wall.after)
        if np.isfinite(length)
    ]
    local = (np.array(ends, dtype=np.complex128) - nodes[0, 0]) / (nodes[0, 1] - nodes[0, 0])
    mark_cells(found, local, marked=True)
    return found


def mark_cells(cells: BoolArray, local: ComplexArray, *, marked: bool) -> None:
    """Set the cells that hold places given in units of the spacing from the first node, in place."""
    column, row = np.floor(local.real), np.floor(local.imag)
    inside = (column >= 0) & (column < cells.shape[1]) & (row >= 0) & (row < cells.shape[0])
    cells[row[inside].astype(int), column[inside].astype(int)] = marked


def cell_residues(across: ComplexArray, upward: ComplexArray) -> tuple[ComplexArray, FloatArray]:
    """Circulation + i flux round every cell, and how much of it rounding explains [m2/s]; nan on land."""
    bottom, top, left, right = across[:-1], across[1:], upward[:, :-1], upward[:, 1:]
    sides = np.abs(bottom) + np.abs(right) + np.abs(top) + np.abs(left)
    return bottom + right - top - left, ROUNDING * sides


def clear_singular_cells(model: FlowModel, nodes: ComplexArray, usable: BoolArray) -> None:
    """Mark the cells that hold a singularity, or whose edges pass one closely, unusable, in place."""
    places = np.array([singularity.at for singularity in model.singularities], dtype=np.complex128)
    spacing = nodes[0, 1].real - nodes[0, 0].real
    for corner in (0.3 + 0.3j, 0.3 - 0.3j, -0.3 + 0.3j, -0.3 - 0.3j):
        mark_cells(usable, (places - nodes[0, 0]) / spacing + corner, marked=False)


def clear_ringed_cells(rings: list[ComplexArray], nodes: ComplexArray, usable: BoolArray) -> None:
    """Mark the cells that a ring or outline passes unusable, in place: the flow ends at its line."""
    spacing = nodes[0, 1].real - nodes[0, 0].real
    for ring in rings:
        local = (ring - nodes[0, 0]) / spacing
        counts = 1 + np.ceil(SAMPLES * np.abs(np.diff(local))).astype(np.int64)
        index = np.repeat(np.arange(counts.size), counts)
        share = (np.arange(index.size) - np.repeat(np.cumsum(counts) - counts, counts)) / counts[index]
        places = local[index] + share * np.diff(local)[index]
        for corner in (0j, CLOSE, -CLOSE, 1j * CLOSE, -1j * CLOSE):
            mark_cells(usable, places + corner, marked=False)


def cell_corners(lattice: Lattice, values: FloatArray) -> FloatArray:
    """Corner values of every cell relative to its lower left one, shape (4, ny-1, nx-1).

    Order: lower left, lower right, upper right, upper left. values : one component of `lattice.steps`.
    """
    bottom, right, _, left = values[lattice.cell_edges()]
    return np.stack([np.zeros_like(bottom), bottom, bottom + right, left])

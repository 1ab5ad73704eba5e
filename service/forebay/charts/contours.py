"""Contour lines of the stream function and the potential, without false lines at branch cuts.

Marching squares on exact edge differences: every crossing of a level with an edge is found once, set
exactly by Newton's method on the chord integral, and joined within each cell with the crossing of equal
value. What a principal branch would draw along its cut cannot arise.
"""

from collections import defaultdict
from collections.abc import Iterable
from dataclasses import dataclass
from enum import Enum
from itertools import pairwise

import numpy as np

from forebay.charts.branches import Branches, single_out
from forebay.charts.cuts import WHOLE, rounds_lower_right
from forebay.charts.lattice import Lattice, cell_corners, exact_steps
from forebay.charts.rings import bank_lines, closed, led_up, opening_lines
from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel

CROWDED = 2.5
"""Lines that may cross a cell; where they stand closer, near a singularity, the cell is left blank."""

NEWTON_STEPS = 20
"""Largest number of corrections of a crossing, each kept between the ends known to bracket it."""

SETTLED = 1e-9
"""Distance from its level, in steps, at which a crossing needs no further correction [-]."""

BISECTIONS = 40
"""Halvings of a segment that ends on land: its end lies on the wall to 1e-12 of a cell."""


LED = 2.5
"""Distance, in spacings of the grid, over which a line that ends before a ring is led up to it [-]."""


class Component(Enum):
    """Which part of the complex potential is contoured."""

    STREAM_FUNCTION = "stream function"
    POTENTIAL = "potential"

    def of(self, values: ComplexArray) -> FloatArray:
        """The component of circulation + i flux."""
        return np.asarray(values.imag if self is Component.STREAM_FUNCTION else values.real, dtype=np.float64)


@dataclass(frozen=True, slots=True)
class LevelLines:
    """Contour lines of one component.

    lines : polylines [m], each on one level; vertices lie on edges of the grid or on a wall
    step : distance of the levels [m2/s]
    breaks : edges across which levels do not agree; 0 unless the residues could not be tied
    """

    lines: tuple[ComplexArray, ...]
    step: float
    breaks: int


@dataclass(frozen=True, slots=True)
class Crossings:
    """Points where levels meet edges: edge, rise of the field from the edge's first node, place."""

    edge: IntArray
    rise: FloatArray
    at: ComplexArray


def draw_levels(
    model: FlowModel,
    lattice: Lattice,
    component: Component,
    *,
    step: float,
    through: complex | None = None,
    apart: float = 0.0,
) -> LevelLines:
    """Lines on which a component of the potential takes the values offset + k step.

    Parameters
    ----------
    model, lattice : the flow and the grid laid over it
    component : stream function or potential (which needs a flow without vorticity)
    step : distance of the levels [m2/s]
    through : a point that shall lie on a level; default: levels keep off the first node in the water [m]
    apart : least distance step / |W| of neighbouring lines; where it is less they are left out [m]

    Returns
    -------
    LevelLines, trimmed at the walls. Cells that hold a singularity, and cells crossed by more than
    CROWDED levels, are blank.

    Notes
    -----
    Vertices are exact to rounding of the chord integral (Newton); which cells a line passes is resolved to
    the spacing of the grid. O(edges x elements).
    """
    rises = component.of(lattice.steps)
    branches = single_out(lattice, rises, step)
    offset = value_at(model, lattice, component, branches=branches, place=through)
    if through is None:
        offset += 0.5 * step  # no level through a node
    crossings = find_crossings(lattice, rises, branches, step=step, offset=offset)
    crossings = settle(model, lattice, component, crossings, step=step)
    pairs = pair_crossings(lattice, rises, crossings, step=step)
    if apart > 0.0:
        roomy = np.abs(model.velocity(crossings.at)) * apart <= step
        pairs = pairs[roomy[pairs].all(axis=1)]
    chains = join(crossings.at.size, pairs)
    lines = trim(model, [crossings.at[chain] for chain in chains])
    lines = led_up(lines, met_by(component, model), LED * lattice.spacing)
    return LevelLines(tuple(lines), step, branches.breaks)


def met_by(component: Component, model: FlowModel) -> list[ComplexArray]:
    """Rings that lines of a component meet squarely: streamlines open edges, equipotentials banks."""
    if component is Component.STREAM_FUNCTION:
        return opening_lines(model.layout)
    return [*bank_lines(model.layout), *map(closed, (outline.points for outline in model.layout.outlines))]


def value_at(
    model: FlowModel, lattice: Lattice, component: Component, *, branches: Branches, place: complex | None
) -> float:
    """Value of the field at a place, from the nearest node that has one; without a place, at the first."""
    known = np.flatnonzero(np.isfinite(branches.values) & lattice.wet.ravel())
    if known.size == 0:
        return 0.0
    if place is None:
        return float(branches.values[known[0]])
    nodes = lattice.nodes.ravel()
    nearest = known[int(np.argmin(np.abs(nodes[known] - place)))]
    chord = model.chord(nodes[[nearest]], np.array([place], dtype=np.complex128))
    gain = float(component.of(chord)[0])
    return float(branches.values[nearest]) + (gain if np.isfinite(gain) else 0.0)


def find_crossings(
    lattice: Lattice, rises: FloatArray, branches: Branches, *, step: float, offset: float
) -> Crossings:
    """Every level on every usable edge that is not crowded, placed by linear interpolation."""
    first, second = lattice.edge_nodes()
    fair = lattice.usable_edges() & (np.abs(rises) <= CROWDED * step)
    cut = np.zeros(rises.size, dtype=np.bool_)
    cut[list(branches.cuts)] = True
    edges = np.flatnonzero(fair & ~cut)
    start = (branches.values[first[edges]] - offset) / step
    found = levels_between(start, start + rises[edges] / step)
    edge = edges[found[0]]
    rise = (found[1] - start[found[0]]) * step
    for index in np.flatnonzero(fair & cut).tolist():
        more = cut_edge_rises(
            float(branches.values[first[index]]) - offset, rises[index], branches.cuts[index], step
        )
        edge = np.concatenate([edge, np.full(more.size, index)])
        rise = np.concatenate([rise, more])
    share = rise / rises[edge]
    nodes = lattice.nodes.ravel()
    return Crossings(edge, rise, nodes[first[edge]] + share * (nodes[second[edge]] - nodes[first[edge]]))


def levels_between(start: FloatArray, end: FloatArray) -> tuple[IntArray, FloatArray]:
    """Whole numbers k with min < k <= max of each pair: index of the pair and k, flattened."""
    low, high = np.minimum(start, end), np.maximum(start, end)
    lowest = np.floor(low) + 1
    count = np.maximum(np.floor(high) - lowest + 1, 0).astype(np.int64)
    index = np.repeat(np.arange(start.size), count)
    within = np.arange(index.size) - np.repeat(np.cumsum(count) - count, count)
    return index, lowest[index] + within


def cut_edge_rises(start: float, rise: float, cuts: Iterable[tuple[float, float]], step: float) -> FloatArray:
    """Rises at which levels meet an edge that cuts cross: on each piece the levels of its own side."""
    pieces: list[FloatArray] = []
    begin = 0.0
    for end, jump in (*cuts, (rise, 0.0)):
        piece = np.array([start + begin]) / step, np.array([start + end]) / step
        pieces.append(levels_between(*piece)[1] * step - start)
        start += jump
        begin = end
    return np.concatenate(pieces)


def settle(
    model: FlowModel, lattice: Lattice, component: Component, crossings: Crossings, *, step: float
) -> Crossings:
    """Crossings moved along their edges to where the exact chord integral has the wanted rise."""
    first, second = lattice.edge_nodes()
    nodes = lattice.nodes.ravel()
    begin = nodes[first[crossings.edge]]
    along = nodes[second[crossings.edge]] - begin
    share = ((crossings.at - begin) / along).real
    low, high = np.zeros_like(share), np.ones_like(share)
    upward = component.of(lattice.steps)[crossings.edge] > 0
    active = np.arange(share.size)
    for _ in range(NEWTON_STEPS):
        place = begin[active] + share[active] * along[active]
        miss = crossings.rise[active] - component.of(exact_steps(model, begin[active], place))
        wrong = np.abs(miss) > SETTLED * step
        active, place, miss = active[wrong], place[wrong], miss[wrong]
        short = (miss > 0) == upward[active]
        low[active[short]], high[active[~short]] = share[active[short]], share[active[~short]]
        with np.errstate(divide="ignore", invalid="ignore"):
            moved = share[active] + miss / component.of(model.velocity(place) * along[active])
        kept = (moved >= low[active]) & (moved <= high[active])
        share[active] = np.where(kept, moved, 0.5 * (low[active] + high[active]))
    return Crossings(crossings.edge, crossings.rise, begin + share * along)


def pair_crossings(lattice: Lattice, rises: FloatArray, crossings: Crossings, *, step: float) -> IntArray:
    """Pairs of crossings that a line joins within a cell, shape (pairs, 2)."""
    cell_edges = lattice.cell_edges().reshape(4, -1)
    corners = cell_corners(lattice, rises).reshape(4, -1)
    span = corners.max(axis=0) - corners.min(axis=0)
    drawn = lattice.usable.ravel() & (span <= CROWDED * step)
    cell, level, number, side = cell_levels(cell_edges, corners, crossings, drawn=drawn)
    order = np.lexsort((level, cell))
    cell, level, number, side = cell[order], level[order], number[order], side[order]
    new = np.ones(cell.size, dtype=np.bool_)
    new[1:] = (np.diff(cell) != 0) | (np.diff(level) > WHOLE * step)
    starts = np.flatnonzero(new)
    sizes = np.diff(np.append(starts, cell.size))
    plain = starts[sizes == 2]
    pairs = [np.stack([number[plain], number[plain + 1]], axis=1)]
    for start in starts[sizes == 4]:
        sorted_by_side = number[start : start + 4][np.argsort(side[start : start + 4])]
        below = bool(rounds_lower_right(corners[:, cell[start]], level[start]))
        pairs.append(sorted_by_side[[[0, 1], [2, 3]] if below else [[0, 3], [1, 2]]])
    return np.concatenate(pairs)


def cell_levels(
    cell_edges: IntArray, corners: FloatArray, crossings: Crossings, *, drawn: BoolArray
) -> tuple[IntArray, FloatArray, IntArray, IntArray]:
    """Each crossing as seen from each drawn cell beside it: cell, value in the cell, crossing, side."""
    order = np.argsort(crossings.edge, kind="stable")
    begin_corner = (0, 1, 3, 0)
    parts = []
    for side in range(4):
        edges = cell_edges[side, drawn]
        low = np.searchsorted(crossings.edge[order], edges, side="left")
        count = np.searchsorted(crossings.edge[order], edges, side="right") - low
        index = np.repeat(np.arange(edges.size), count)
        within = np.arange(index.size) - np.repeat(np.cumsum(count) - count, count)
        number = order[low[index] + within]
        cell = np.flatnonzero(drawn)[index]
        level = corners[begin_corner[side], cell] + crossings.rise[number]
        parts.append((cell, level, number, np.full(cell.size, side)))
    cell, level, number, side_of = (np.concatenate(column) for column in zip(*parts, strict=True))
    return cell, level, number, side_of


def join(count: int, pairs: IntArray) -> list[IntArray]:
    """Chains of crossings, open ones first; a closed chain repeats its first crossing at the end."""
    links: dict[int, list[int]] = defaultdict(list)
    for one, other in pairs.tolist():
        links[one].append(other)
        links[other].append(one)
    seen = np.zeros(count, dtype=np.bool_)
    ends = [number for number, others in links.items() if len(others) == 1]
    return [np.array(follow_links(links, start, seen)) for start in (*ends, *links) if not seen[start]]


def follow_links(links: dict[int, list[int]], start: int, seen: BoolArray) -> list[int]:
    """The chain that begins at `start`, marking what it passes."""
    chain = [start]
    seen[start] = True
    while True:
        onward = [number for number in links[chain[-1]] if not seen[number]]
        if not onward:
            break
        chain.append(onward[0])
        seen[onward[0]] = True
    if len(chain) > 2 and start in links[chain[-1]]:
        chain.append(start)
    return chain


def trim(model: FlowModel, lines: list[ComplexArray]) -> list[ComplexArray]:
    """Lines cut off where they leave the water, their ends on the wall."""
    if not lines:
        return []
    wet = np.split(model.wet(np.concatenate(lines)), np.cumsum([line.size for line in lines])[:-1])
    trimmed: list[ComplexArray] = []
    for line, flags in zip(lines, wet, strict=True):
        if flags.all():
            trimmed.append(line)
        elif flags.any():
            trimmed.extend(wet_pieces(model, line, flags))
    return trimmed


def wet_pieces(model: FlowModel, line: ComplexArray, wet: BoolArray) -> list[ComplexArray]:
    """The parts of one line that lie in the water."""
    changes = np.flatnonzero(np.diff(wet))
    inner = line[np.where(wet[changes], changes, changes + 1)]
    outer = line[np.where(wet[changes], changes + 1, changes)]
    for _ in range(BISECTIONS):
        middle = (inner + outer) / 2
        flags = model.wet(middle)
        inner, outer = np.where(flags, middle, inner), np.where(flags, outer, middle)
    bounds = [0, *(changes + 1), line.size]
    pieces = []
    for index, (begin, end) in enumerate(pairwise(bounds)):
        if wet[begin]:
            head = inner[index - 1 : index] if index else line[:0]
            tail = inner[index : index + 1]
            pieces.append(np.concatenate([head, line[begin:end], tail]))
    return [piece for piece in pieces if piece.size > 1]

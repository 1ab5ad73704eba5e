"""One value per node for a field that has many: cuts along its own level lines.

Values are wanted modulo the contour step. Round a hole (a source, for the stream function) the field
gains its residue; if that is a multiple of the step, nothing is to be done. If not, the lines on
both sides of some cut cannot join, wherever the cut runs. Here it runs along a level line of the
field itself, from the hole to the outside or to another hole: no line of the net crosses it, so no line
is broken; the only trace is one tube beside the cut that carries another share.
"""

from collections import defaultdict
from collections.abc import Iterator
from dataclasses import dataclass, field
from itertools import islice, product
from typing import NamedTuple

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import breadth_first_order

from forebay.charts.lattice import OUTSIDE, Crossing, Lattice, cell_corners
from forebay.flow.arrays import BoolArray, FloatArray, IntArray

WHOLE = 1e-6
"""Distance from a whole number of steps up to which a residue needs no cut [-]."""

TRIES = 40
"""Level lines tried from each hole of a group."""

STARTS = (0.5, 0.2, 0.8, 0.05, 0.95, 0.35, 0.65, 0.01, 0.99)
"""Shares of the rise along an edge of a hole at which level lines are tried."""

ANTICLOCKWISE = (1, 1, -1, -1)
"""Direction of a cell's bottom, right, top and left edge when going round it anticlockwise."""

ENDS = ((0, 1), (1, 2), (3, 2), (0, 3))
"""Corners that a cell's bottom, right, top and left edge run from and to."""

CENTRAL_PAIRS = {0: 1, 1: 0, 2: 3, 3: 2}
"""Edge that a level entering by the key leaves by where it rounds the lower right or upper left corner."""

OTHER_PAIRS = {0: 3, 3: 0, 1: 2, 2: 1}
"""The same where it rounds the lower left or upper right corner."""


class Cut(NamedTuple):
    """Level line from hole `start` to hole `end`; `turn`: sign of the change over it, anticlockwise."""

    start: int
    end: int
    turn: float
    path: tuple[Crossing, ...]


@dataclass(frozen=True, slots=True)
class Branches:
    """Values of one component at the nodes, modulo the contour step.

    values : shape (nodes,), in the units of the field; nan where no usable cell touches the node
    cuts : edge -> crossings as (rise from the first node, jump), sorted along the edge
    breaks : number of edges at which values on both sides do not agree, 0 unless a cut found no way
    """

    values: FloatArray
    cuts: dict[int, tuple[tuple[float, float], ...]] = field(default_factory=dict)
    breaks: int = 0


@dataclass(frozen=True, slots=True)
class CellWalk:
    """Tables for following a level from cell to cell."""

    rises: FloatArray
    corners: FloatArray
    cell_edges: IntArray
    edge_cells: tuple[IntArray, IntArray]
    holes: IntArray

    def follow(self, cell: int, side: int, rise: float) -> tuple[int, list[Crossing]]:
        """Hole that the level reaches, and its crossings, entering usable `cell` by `side`."""
        path = [Crossing(int(self.cell_edges[side, cell]), rise)]
        for _ in range(4 * self.holes.size):
            level = self.corners[ENDS[side][0], cell] + path[-1].rise
            side = leaving_side(self.corners[:, cell], side, level)
            edge = int(self.cell_edges[side, cell])
            path.append(Crossing(edge, float(level - self.corners[ENDS[side][0], cell])))
            cell = self.neighbour(edge, cell)
            if cell < 0:
                return OUTSIDE, path
            if self.holes[cell] >= 0:
                return int(self.holes[cell]), path
            side = (side + 2) % 4
        return -1, path

    def neighbour(self, edge: int, cell: int) -> int:
        """Cell on the other side of an edge, -1 beyond the grid."""
        before, after = self.edge_cells[0][edge], self.edge_cells[1][edge]
        return int(after if before == cell else before)


def leaving_side(corners: FloatArray, side: int, level: float) -> int:
    """Side by which a level leaves a cell that it entered by `side`; saddles by the bilinear interpolant."""
    below = corners < level
    crossed = [
        other for other in range(4) if other != side and below[ENDS[other][0]] != below[ENDS[other][1]]
    ]
    if len(crossed) == 1:
        return crossed[0]
    if not crossed:
        return (side + 2) % 4
    return (CENTRAL_PAIRS if rounds_lower_right(corners, level) else OTHER_PAIRS)[side]


def rounds_lower_right(corners: FloatArray, level: float | FloatArray) -> BoolArray:
    """Whether, in a cell crossed on all sides, a level cuts off the lower right and the upper left corner."""
    lower_left, lower_right, upper_right, upper_left = corners
    twist = lower_left + upper_right - lower_right - upper_left
    saddle = lower_left * upper_right - lower_right * upper_left - level * twist
    # the bilinear saddle value minus the level, times twist; its sign against that of the lower left corner
    return np.asarray((saddle * twist > 0) == (lower_left > level), dtype=np.bool_)


def single_out(lattice: Lattice, rises: FloatArray, step: float) -> Branches:
    """Value of a many-valued field at each node, modulo `step`, with cuts along its level lines.

    Parameters
    ----------
    lattice : the grid
    rises : shape (edges,), difference of the field along each edge: real or imaginary part of `lattice.steps`
    step : distance of the contour levels, in the units of the field

    Returns
    -------
    Branches. The values agree across every edge but where `cuts` says otherwise.

    Notes
    -----
    The cuts form a forest: each hole is tied to the outside, or to the others of a group whose residues add
    up to a whole number of steps. Jump over a cut = residue of all holes behind it. O(edges) beside a few
    walks of O(rows + columns) cells per hole.
    """
    holes = lattice.holes()
    residues = component_residues(lattice, holes, rises)
    cuts = tie_holes(lattice, rises, residues / step)
    jumps = spread_jumps(cuts, residues, rises)
    effective = rises.copy()
    for edge, crossings in jumps.items():
        effective[edge] += sum(jump for _, jump in crossings)
    values = walk_values(lattice, effective)
    first, second = lattice.edge_nodes()
    gap = (values[first] + effective - values[second]) / step
    broken = lattice.usable_edges() & (np.abs(gap - np.round(gap)) > WHOLE)
    return Branches(values, jumps, int(broken.sum()))


def component_residues(lattice: Lattice, holes: IntArray, rises: FloatArray) -> FloatArray:
    """Gain of the field anticlockwise round each hole, in its units."""
    part = Lattice(lattice.nodes, rises.astype(np.complex128), lattice.wet, lattice.usable)
    return np.asarray(part.residues(holes).real, dtype=np.float64)


def tie_holes(lattice: Lattice, rises: FloatArray, turns: FloatArray) -> list[Cut]:
    """Cuts that tie every hole whose gain `turns` (in steps) is not whole to the outside or its group."""
    holes = lattice.holes().ravel()
    walk = CellWalk(
        rises,
        cell_corners(lattice, rises).reshape(4, -1),
        lattice.cell_edges().reshape(4, -1),
        lattice.edge_cells(),
        holes,
    )
    groups = {hole: {hole} for hole in range(turns.size)}
    cuts: list[Cut] = []
    for hole in range(1, turns.size):
        while needs_tie(groups[hole], turns):
            cut = next_cut(walk, groups[hole])
            if cut is None:
                break
            cuts.append(cut)
            merged = groups[cut.start] | groups[cut.end]
            groups.update(dict.fromkeys(merged, merged))
    return cuts


def needs_tie(group: set[int], turns: FloatArray) -> bool:
    """Whether a group of tied holes still leaves a part of a step over and has not reached the outside."""
    total = float(sum(turns[hole] for hole in group))
    return OUTSIDE not in group and abs(total - round(total)) > WHOLE


def next_cut(walk: CellWalk, group: set[int]) -> Cut | None:
    """First level line tried that leads from a hole of the group to the outside, else to another hole."""
    spare = None
    for hole in sorted(group):
        for cut in islice(level_lines(walk, hole), TRIES):
            if cut.end == OUTSIDE:
                return cut
            if cut.end not in group and spare is None:
                spare = cut
    return spare


def level_lines(walk: CellWalk, hole: int) -> Iterator[Cut]:
    """Level lines from the rim of a hole, each to where it ends; first one per side, then more between."""
    rim = [
        (cell, side, neighbour)
        for cell in np.flatnonzero(walk.holes == hole)
        for side in range(4)
        if (neighbour := walk.neighbour(int(walk.cell_edges[side, cell]), int(cell))) >= 0
        and walk.holes[neighbour] == -1
    ]
    for share, (cell, side, neighbour) in product(STARTS, rim):
        rise = float(walk.rises[walk.cell_edges[side, cell]])
        if rise == 0.0:
            continue
        end, path = walk.follow(neighbour, (side + 2) % 4, share * rise)
        if end >= 0:
            yield Cut(hole, end, float(np.sign(rise)) * ANTICLOCKWISE[side], tuple(path))


def spread_jumps(
    cuts: list[Cut], residues: FloatArray, rises: FloatArray
) -> dict[int, tuple[tuple[float, float], ...]]:
    """Jumps that every cut edge needs, as (rise from its first node, jump), sorted along the edge.

    Going anticlockwise round the start of a cut the field has gained the residue of all that hangs on it.
    """
    jumps: dict[int, list[tuple[float, float]]] = defaultdict(list)
    for index, cut in enumerate(cuts):
        gain = gain_behind(cuts, index, residues)
        for crossing in cut.path:
            turn = cut.turn * float(np.sign(rises[crossing.edge]))
            jumps[crossing.edge].append((crossing.rise, -gain * turn))
    return {edge: tuple(sorted(found, key=lambda pair: abs(pair[0]))) for edge, found in jumps.items()}


def gain_behind(cuts: list[Cut], index: int, residues: FloatArray) -> float:
    """Gain of the field anticlockwise round all that hangs on the start of a cut, in its units."""
    behind = holes_behind(cuts, index)
    if OUTSIDE not in behind:
        return float(sum(residues[hole] for hole in behind))
    return -float(sum(residues[hole] for hole in beyond(cuts, index)))


def beyond(cuts: list[Cut], index: int) -> set[int]:
    """Holes that hang on the end of a cut."""
    cut = cuts[index]
    turned = [*cuts[:index], Cut(cut.end, cut.start, cut.turn, cut.path), *cuts[index + 1 :]]
    return holes_behind(turned, index)


def holes_behind(cuts: list[Cut], index: int) -> set[int]:
    """Holes tied together at the start of a cut once the cut itself is taken away."""
    behind = {cuts[index].start}
    others = [cut for number, cut in enumerate(cuts) if number != index]
    grown = True
    while grown:
        size = len(behind)
        for cut in others:
            if cut.start in behind or cut.end in behind:
                behind |= {cut.start, cut.end}
        grown = len(behind) > size
    return behind


def walk_values(lattice: Lattice, rises: FloatArray) -> FloatArray:
    """Sum of the differences from a first node of each connected piece of water; nan off the usable edges."""
    used = lattice.usable_edges()
    first, second = (ends[used] for ends in lattice.edge_nodes())
    graph = coo_array((np.ones(first.size), (first, second)), shape=(lattice.nodes.size,) * 2).tocsr()
    keys = np.concatenate([first * lattice.nodes.size + second, second * lattice.nodes.size + first])
    order_of_keys = np.argsort(keys)
    sorted_keys = keys[order_of_keys]
    signed = np.concatenate([rises[used], -rises[used]])[order_of_keys]
    values = np.full(lattice.nodes.size, np.nan)
    for start in np.unique(first):
        if np.isfinite(values[start]):
            continue
        order, parents = breadth_first_order(graph, start, directed=False)
        origins = parents[order[1:]].astype(np.int64)  # 32 bits do not hold the square of the number of nodes
        hops = signed[np.searchsorted(sorted_keys, origins * lattice.nodes.size + order[1:])]
        total = {int(start): 0.0}
        for node, origin, hop in zip(order[1:].tolist(), origins.tolist(), hops.tolist(), strict=True):
            total[node] = total[origin] + hop
        values[order] = np.array([total[node] for node in order.tolist()])
    return values

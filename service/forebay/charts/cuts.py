"""Cuts of a many-valued field along its own level lines, followed from cell to cell."""

from collections.abc import Iterator
from dataclasses import dataclass
from itertools import islice, product
from typing import NamedTuple

import numpy as np

from forebay.charts.lattice import OUTSIDE, Crossing, Lattice, cell_corners
from forebay.flow.arrays import BoolArray, FloatArray, IntArray

WHOLE = 1e-6
"""Distance from a whole number of steps up to which a residue needs no cut [-]."""

TRIES = 40
"""Level lines tried from each hole of a group."""

INWARD_TRIES = 400
"""Level lines tried from the outside when none was found that leaves a group."""

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

    def sides(self) -> Iterator[tuple[IntArray, IntArray, IntArray]]:
        """For each side of all cells: the cells before and after that edge, and the cells themselves."""
        cells = np.arange(self.holes.size)
        for edges in self.cell_edges:
            yield self.edge_cells[0][edges], self.edge_cells[1][edges], cells

    def turn_at(self, hole: int, edge: int) -> float:
        """Sign of the field's change along an edge of a hole, going round the hole anticlockwise."""
        pair = self.edge_cells[0][edge], self.edge_cells[1][edge]
        cell = int(next(number for number in pair if number >= 0 and self.holes[number] == hole))
        side = int(np.flatnonzero(self.cell_edges[:, cell] == edge)[0])
        return float(np.sign(self.rises[edge])) * ANTICLOCKWISE[side]

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
    return spare or next((cut for cut in inward_lines(walk) if cut.start in group), None)


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


def inward_lines(walk: CellWalk) -> Iterator[Cut]:
    """Level lines from the outside to a hole, at most INWARD_TRIES tried, given as cuts from hole to outside.

    They find the few lines that leave a doublet for good, which starts on its own rim miss.
    """
    holes = np.append(walk.holes, OUTSIDE)  # cell -1 lies beyond the grid
    beyond = [np.where(before == cells, after, before) for before, after, cells in walk.sides()]
    rim = np.argwhere((holes[np.stack(beyond)] == OUTSIDE) & (walk.holes == -1))
    for side, cell in rim[:: 1 + len(rim) // INWARD_TRIES].tolist():
        rise = float(walk.rises[walk.cell_edges[side, cell]])
        end, path = walk.follow(cell, side, 0.5 * rise) if rise != 0.0 else (OUTSIDE, [])
        if end > OUTSIDE:
            yield Cut(end, OUTSIDE, walk.turn_at(end, path[-1].edge), tuple(reversed(path)))

"""One value per node for a field that has many: cuts along its own level lines.

Values are wanted modulo the contour step. Round a hole (a source, for the stream function) the field
gains its residue; if that is a multiple of the step, nothing is to be done. If not, the lines on
both sides of some cut cannot join, wherever the cut runs. Here it runs along a level line of the
field itself, from the hole to the outside or to another hole: no line of the net crosses it, so no line
is broken; the only trace is one tube beside the cut that carries another share.
"""

from collections import defaultdict
from dataclasses import dataclass, field

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import breadth_first_order

from forebay.charts.cuts import WHOLE, Cut, tie_holes
from forebay.charts.lattice import OUTSIDE, Lattice
from forebay.flow.arrays import FloatArray, IntArray


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

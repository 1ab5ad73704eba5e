"""Unknowns of a mesh: which column stands for which part of the density, and what is known of it."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.sheets.mesh import DEGREE, Mesh
from forebay.flow.sheets.ring import EdgeKind, Ring


@dataclass(frozen=True, eq=False)
class Unknowns:
    """Columns of a mesh.

    The density is F on the water's side less F on the other: phi + i psi on the ring round surveyed water,
    with psi one unknown constant for every run of land between equipotential edges and phi one for every
    equipotential edge but the first; phi on a solid. Bubbles vanish at both ends of an element.

    real, imag : shape (nodes,), column of the real and of the imaginary part at a node, -1 for none
    bubble : shape (m,), first of the bubble columns of an element
    potential : shape (m,), column of the potential on equipotential elements, -1 for the first edge's, 0
    level : shape (m,), column of psi on a closed solid, -1 elsewhere
    constant : column of a real constant in F, -1 without equipotential edges
    count : number of unknowns, which is that of the rows
    """

    real: IntArray
    imag: IntArray
    bubble: IntArray
    potential: IntArray
    level: IntArray
    constant: int
    count: int


class _Columns:
    def __init__(self, mesh: Mesh) -> None:
        self.mesh = mesh
        self.count = 0
        self.real = np.full(mesh.node_count, -1, dtype=np.int64)
        self.imag = np.full(mesh.node_count, -1, dtype=np.int64)
        self.potential = np.full(mesh.count, -1, dtype=np.int64)
        self.level = np.full(mesh.count, -1, dtype=np.int64)
        self.constant = -1

    def next(self) -> int:
        self.count += 1
        return self.count - 1

    def solid(self, first: int, last: int, *, closed: bool) -> None:
        """Phi at every node but the first, where it is 0; psi of a closed one."""
        nodes = self.mesh.first_node[first : last + 1][1:].tolist()
        if closed:
            self.level[first : last + 1] = self.next()
        else:
            nodes.append(int(self.mesh.last_node[last]))
        for node in nodes:
            self.real[node] = self.next()

    def outer(self, last: int) -> None:
        """Ring round surveyed water; begins with an equipotential edge if it has one."""
        mesh = self.mesh
        open_ = mesh.is_equipotential[: last + 1]
        groups = mesh.group[: last + 1]
        edges = {
            g: -1 if k == 0 else self.next() for k, g in enumerate(dict.fromkeys(groups[open_].tolist()))
        }
        runs = np.cumsum(~open_ & np.concatenate(([True], open_[:-1]))) - 1
        levels = [self.next() for _ in range(int(runs.max()) + 1)]
        self.constant = self.next() if edges else -1
        for e in range(last + 1):
            if open_[e]:
                self.potential[e] = edges[int(groups[e])]
            self._outer_node(e, e - 1 if e else last, open_, edges, levels, runs)

    def _outer_node(
        self,
        e: int,
        before: int,
        open_: BoolArray,
        edges: dict[int, int],
        levels: list[int],
        runs: IntArray,
    ) -> None:
        node, groups = self.mesh.first_node[e], self.mesh.group
        if open_[e] and open_[before] and groups[e] == groups[before]:
            self.real[node], self.imag[node] = edges[int(groups[e])], self.next()
        elif open_[e] or open_[before]:
            self.real[node] = edges[int(groups[e if open_[e] else before])]
            self.imag[node] = levels[int(runs[before if open_[e] else e])]
        else:
            self.imag[node] = levels[int(runs[e])]
            if e or edges:
                self.real[node] = self.next()


def unknowns_of(mesh: Mesh) -> Unknowns:
    """Columns of a mesh."""
    columns = _Columns(mesh)
    for k, ring in enumerate(mesh.rings):
        first, last = int(mesh.bounds[k]), int(mesh.bounds[k + 1]) - 1
        if ring.is_solid:
            columns.solid(first, last, closed=ring.closed)
        else:
            columns.outer(last)
    bubble = columns.count + (DEGREE - 1) * np.arange(mesh.count)
    return Unknowns(
        columns.real,
        columns.imag,
        bubble,
        columns.potential,
        columns.level,
        columns.constant,
        columns.count + (DEGREE - 1) * mesh.count,
    )


@dataclass(frozen=True, eq=False)
class Levels:
    """What is known of psi along the rings for given discharges, up to what elements add.

    target : shape (m, 2), psi at both ends of every element that is no equipotential one [m2/s]
    density : shape (m, 4), Legendre coefficients of the known part of the density [m2/s]
    """

    target: FloatArray
    density: ComplexArray


def levels_of(mesh: Mesh, outflows: dict[str, float], logs: tuple[complex, ...]) -> Levels:
    """Known psi and density.

    outflows : out of the water through every open edge [m2/s]
    logs : coefficient of log(z - start) for every ring [m2/s]; the density jumps there by -2 pi i of it, less
        what stand-ins jump by
    """
    target = np.zeros((mesh.count, 2))
    density = np.zeros((mesh.count, 2), dtype=np.complex128)
    for k, (ring, log) in enumerate(zip(mesh.rings, logs, strict=True)):
        first, last = int(mesh.bounds[k]), int(mesh.bounds[k + 1]) - 1
        if not ring.is_solid:
            _outer_levels(mesh, ring, outflows, target, density)
            if mesh.is_equipotential[0]:
                density[first, 0] -= 1j * target[last, 1]
        density[last, 1] += 2.0 * np.pi * log.imag
    return Levels(target, straight(density))


def straight(ends: ComplexArray) -> ComplexArray:
    """Legendre coefficients of densities linear between both ends of elements, shape (m, 2) -> (m, 4)."""
    coefficients = np.zeros((ends.shape[0], DEGREE + 1), dtype=np.complex128)
    coefficients[:, 0], coefficients[:, 1] = 0.5 * ends.sum(axis=1), 0.5 * (ends[:, 1] - ends[:, 0])
    return coefficients


def _outer_levels(
    mesh: Mesh, ring: Ring, outflows: dict[str, float], target: FloatArray, density: ComplexArray
) -> None:
    """Psi grows along the ring by what leaves: at once on equipotential edges, evenly on uniform ones."""
    count = int(mesh.bounds[1])
    names = np.array(ring.edges)[mesh.edge[:count]]
    lengths, kind = 2.0 * np.abs(mesh.half[:count]), mesh.kind[:count]
    opened = kind == EdgeKind.EQUIPOTENTIAL
    gains = np.zeros(count)
    for name, outflow in outflows.items():
        chosen = (names == name) & (kind == EdgeKind.UNIFORM)
        gains[chosen] = outflow * lengths[chosen] / lengths[chosen].sum()
        first = np.flatnonzero((names == name) & opened)[:1]
        gains[first] = outflow
    after = np.cumsum(gains)
    target[:count] = np.column_stack((after - gains, after))
    _outer_density(opened, target, density)


def _outer_density(opened: BoolArray, target: FloatArray, density: ComplexArray) -> None:
    """Psi of the density on every run of land counts from the run's beginning."""
    count = opened.size
    starts = np.flatnonzero(~opened & np.concatenate(([True], opened[:-1])))
    run = np.searchsorted(starts, np.arange(count), "right") - 1
    base = target[starts, 0][np.maximum(run, 0)]
    density[:count] = np.where(opened[:, None], 0.0, 1j * (target[:count] - base[:, None]))
    before = np.roll(density[:count, 1], 1)
    entering = opened & ~np.roll(opened, 1)
    density[:count, 0][entering] = before[entering]
    density[:count, 1][opened] = np.roll(density[:count, 0], -1)[opened]

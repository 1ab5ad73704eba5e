"""Elements: the edges of all rings cut into pieces, fine where the flow changes fast."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.sheets.ring import EdgeKind, Ring

DEGREE = 3
"""Degree of the density on an element; three points a element obey the condition there [-]."""
_RATIO = 0.25
"""Length of an element over that of its neighbour away from the vertex, after a split [-]."""
_GAIN = 2.6
"""By how much one such split lowers the residual at a vertex, at least: sizes the number of splits [-]."""


@dataclass(frozen=True, eq=False)
class Mesh:
    """Elements in the order of the rings and along them.

    rings : the walls;  cuts : for every edge of every ring, shares of its length from 0 to 1
    """

    rings: tuple[Ring, ...]
    cuts: tuple[FloatArray, ...]

    @cached_property
    def count(self) -> int:
        """Number of elements."""
        return sum(cut.size - 1 for cut in self.cuts)

    @cached_property
    def ring(self) -> IntArray:
        """Ring of every element."""
        of_edge = np.repeat(np.arange(len(self.rings)), [ring.starts.size for ring in self.rings])
        return np.repeat(of_edge, self._pieces)

    @cached_property
    def edge(self) -> IntArray:
        """Edge of every element within its ring."""
        of_edge = np.concatenate([np.arange(ring.starts.size) for ring in self.rings])
        return np.repeat(of_edge, self._pieces)

    @cached_property
    def _pieces(self) -> IntArray:
        return np.array([cut.size - 1 for cut in self.cuts], dtype=np.int64)

    @cached_property
    def shares(self) -> tuple[FloatArray, FloatArray]:
        """Where every element starts and ends, as shares of its edge."""
        return np.concatenate([cut[:-1] for cut in self.cuts]), np.concatenate([cut[1:] for cut in self.cuts])

    @cached_property
    def start(self) -> ComplexArray:
        """First end of every element, x + iy [m]."""
        return self._place(self.shares[0])

    @cached_property
    def end(self) -> ComplexArray:
        """Second end of every element, x + iy [m]."""
        return self._place(self.shares[1])

    def _place(self, share: FloatArray) -> ComplexArray:
        starts = np.repeat(np.concatenate([ring.starts for ring in self.rings]), self._pieces)
        ends = np.repeat(np.concatenate([ring.ends for ring in self.rings]), self._pieces)
        return np.where(share == 1.0, ends, starts + (ends - starts) * share)

    @cached_property
    def middle(self) -> ComplexArray:
        """Middle of every element, x + iy [m]."""
        return 0.5 * (self.start + self.end)

    @cached_property
    def half(self) -> ComplexArray:
        """Half of every element as a vector along the ring [m]."""
        return 0.5 * (self.end - self.start)

    @cached_property
    def direction(self) -> ComplexArray:
        """Unit vector along every element."""
        return self.half / np.abs(self.half)

    @cached_property
    def kind(self) -> IntArray:
        """`EdgeKind` of every element."""
        kinds = np.array([kind for ring in self.rings for kind in ring.kinds], dtype=np.int64)
        return np.asarray(np.repeat(kinds, self._pieces), dtype=np.int64)

    @cached_property
    def group(self) -> IntArray:
        """Number of the open edge that an element belongs to, by its name; -1 on land."""
        names = list(dict.fromkeys(n for r in self.rings for n, k in zip(r.edges, r.kinds, strict=True) if k))
        groups = [
            names.index(n) if k else -1 for r in self.rings for n, k in zip(r.edges, r.kinds, strict=True)
        ]
        return np.repeat(np.array(groups, dtype=np.int64), self._pieces)

    @cached_property
    def bounds(self) -> IntArray:
        """Index of every ring's first element, and their number at the end."""
        return np.append(np.searchsorted(self.ring, np.arange(len(self.rings))), self.count)

    @cached_property
    def is_equipotential(self) -> BoolArray:
        """Whether the potential rather than the stream function is known on an element."""
        return np.asarray(self.kind == EdgeKind.EQUIPOTENTIAL, dtype=np.bool_)

    @cached_property
    def first_node(self) -> IntArray:
        """Node at the start of every element; nodes are numbered along the rings."""
        before = np.cumsum([0, *(not ring.closed for ring in self.rings)])[self.ring]
        return np.asarray(np.arange(self.count) + before, dtype=np.int64)

    @cached_property
    def last_node(self) -> IntArray:
        """Node at the end of every element."""
        last = self.first_node + 1
        for k, ring in enumerate(self.rings):
            if ring.closed:
                last[self.bounds[k + 1] - 1] = self.first_node[self.bounds[k]]
        return last

    @property
    def node_count(self) -> int:
        """Number of nodes."""
        return self.count + sum(not ring.closed for ring in self.rings)

    @cached_property
    def inward(self) -> ComplexArray:
        """Unit vectors into the water at both ends of every element, shape (m, 2)."""
        across = 1j * np.column_stack((self.direction, self.direction))
        for k, ring in enumerate(self.rings):
            run = slice(int(self.bounds[k]), int(self.bounds[k + 1]))
            after = self.direction[run]
            before = np.roll(after, 1)
            halves = after * np.exp(0.5j * (np.pi - np.angle(after / before)))
            first = 0 if ring.closed else 1
            across[run, 0][first:] = halves[first:]
            across[run, 1][: after.size - first] = np.roll(halves, -1)[: after.size - first]
        return across

    def points(self, abscissae: FloatArray) -> tuple[ComplexArray, IntArray]:
        """Points at the same places of every element, x + iy [m], and the element of each; shape (m p,)."""
        z = self.middle[:, None] + self.half[:, None] * abscissae
        return z.ravel(), np.repeat(np.arange(self.count), abscissae.size)

    def refined(self, indicator: FloatArray, tolerance: float) -> "Mesh":
        """Elements above the tolerance split: towards the vertex that they touch, else in halves.

        indicator : shape (m,), in the unit of the tolerance
        """
        cuts, position = [], 0
        for cut in self.cuts:
            values = indicator[position : position + cut.size - 1]
            position += cut.size - 1
            cuts.append(_split(cut, values, tolerance) if np.any(values > tolerance) else cut)
        return Mesh(self.rings, tuple(cuts))

    def halved(self, chosen: BoolArray) -> "Mesh":
        """Chosen elements, shape (m,), in halves."""
        cuts, position = [], 0
        for cut in self.cuts:
            middles = (0.5 * (cut[:-1] + cut[1:]))[chosen[position : position + cut.size - 1]]
            position += cut.size - 1
            cuts.append(np.sort(np.concatenate((cut, middles))))
        return Mesh(self.rings, tuple(cuts))


def _split(cut: FloatArray, values: FloatArray, tolerance: float) -> FloatArray:
    """Shares of one edge with more of them where the values exceed the tolerance."""
    new, final = [float(cut[0])], cut.size - 2
    for j, value in enumerate(values):
        begin, length = float(cut[j]), float(cut[j + 1] - cut[j])
        if value > tolerance:
            steps = min(max(int(np.ceil(np.log(value / tolerance) / np.log(_GAIN))), 1), 3)
            if j == 0 and final > 0:
                new += [begin + length * _RATIO**level for level in range(steps, 0, -1)]
            elif j == final and final > 0:
                new += [float(cut[j + 1]) - length * _RATIO**level for level in range(1, steps + 1)]
            else:
                new.append(begin + 0.5 * length)
        new.append(float(cut[j + 1]))
    return np.array(new)


def coarse_mesh(rings: tuple[Ring, ...], longest: tuple[float, ...]) -> Mesh:
    """Every edge in equal pieces no longer than the ring's `longest` [m]."""
    sizes = zip(rings, longest, strict=True)
    counts = np.concatenate([np.ceil(ring.lengths / limit).astype(np.int64) for ring, limit in sizes])
    return Mesh(rings, tuple(np.linspace(0.0, 1.0, count + 1) for count in counts.tolist()))

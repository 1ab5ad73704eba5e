"""Rings by the length along them, and where elements stand on them."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.features import Line, Singularity
from forebay.flow.kernels.ring_walls import nearest_edges
from forebay.flow.model import FlowModel
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.term import SheetTerm

_AT_NODE = 1e-12
"""Distance from the end of an element, over the ring's length, that is at it [-]."""


@dataclass(frozen=True, eq=False)
class RingTrack:
    """One ring of a mesh.

    mesh : of all rings;  number : of the ring among them
    """

    mesh: Mesh
    number: int

    @property
    def _first(self) -> int:
        """Index of the ring's first element."""
        return int(self.mesh.bounds[self.number])

    @cached_property
    def _starts(self) -> FloatArray:
        """Where the ring's elements start, and where the last one ends [m]."""
        own = slice(self._first, int(self.mesh.bounds[self.number + 1]))
        return np.concatenate([[0.0], np.cumsum(2.0 * np.abs(self.mesh.half[own]))])

    @property
    def length(self) -> float:
        """Of the whole ring [m]."""
        return float(self._starts[-1])

    @property
    def closed(self) -> bool:
        """Whether its end leads back to its start."""
        return self.mesh.rings[self.number].closed

    def elements(self, s: FloatArray) -> IntArray:
        """Index of the element at lengths along the ring, shape (n,)."""
        own = np.searchsorted(self._starts, s, side="right") - 1
        return np.asarray(self._first + np.clip(own, 0, self._starts.size - 2), dtype=np.int64)

    def places(self, s: FloatArray) -> ComplexArray:
        """Places at lengths along the ring, shape (n,) [m]."""
        element = self.elements(s)
        ahead = s - self._starts[element - self._first]
        return np.asarray(self.mesh.start[element] + ahead * self.mesh.direction[element])

    def length_at(self, element: int, z: complex) -> float:
        """Length along the ring at the place of an element nearest to z [m]."""
        arm = (z - self.mesh.start[element]) * np.conj(self.mesh.direction[element])
        own = element - self._first
        return float(self._starts[own] + np.clip(arm.real, 0.0, self._starts[own + 1] - self._starts[own]))

    def inward(self, s: float) -> complex:
        """Unit vector into the water, at a vertex halfway between its edges."""
        element = int(self.elements(np.array([s]))[0])
        own = element - self._first
        ends = np.abs(self._starts[own : own + 2] - s) <= _AT_NODE * self.length
        if ends.any():
            return complex(self.mesh.inward[element, int(np.argmax(ends))])
        return complex(1j * self.mesh.direction[element])

    def cuts(self, a: float, b: float) -> FloatArray:
        """From a to b with the ends of elements between, a < b; on a closed ring they may run past it [m]."""
        rounds = (
            np.arange(np.floor(a / self.length), np.floor(b / self.length) + 1.0) if self.closed else [0.0]
        )
        nodes = np.concatenate([self._starts[:-1] + k * self.length for k in rounds])
        return np.concatenate([[a], nodes[(nodes > a) & (nodes < b)], [b]])

    def way(self, a: float, b: float) -> ComplexArray:
        """Places from a to b along the ring, with all ends of elements between [m]."""
        cuts = self.cuts(min(a, b), max(a, b))
        return self.places(self.wrapped(cuts if a <= b else cuts[::-1]))

    def spread(self, parts: FloatArray) -> FloatArray:
        """Lengths at the same parts of every element, parts in (0, 1), ascending [m]."""
        return np.asarray((self._starts[:-1, None] + np.diff(self._starts)[:, None] * parts).ravel())

    def wrapped(self, s: FloatArray) -> FloatArray:
        """Lengths on a closed ring brought within one round [m]."""
        return np.asarray(np.mod(s, self.length)) if self.closed else s


@dataclass(frozen=True, slots=True)
class Opening:
    """Where an element stands on a ring.

    track : the ring;  low, high : from where to where along it [m]; one place for a point element
    toward : 1 if the water beside it runs to it, -1 if it comes from it
    """

    track: RingTrack
    low: float
    high: float
    toward: float

    def is_convex(self, *, at_end: bool) -> bool:
        """Whether it ends in a vertex at which the water turns by more than half a circle."""
        mesh, edge_end = self.track.mesh, self.high if at_end else self.low
        step = _BESIDE * (self.high - self.low)
        inner, outer = (edge_end - step, edge_end + step) if at_end else (edge_end + step, edge_end - step)
        s = self.track.wrapped(np.array([inner, outer]))
        one, other = mesh.direction[self.track.elements(s)]
        bend = float(np.angle(other / one)) * (1.0 if at_end else -1.0)
        return bend < -_STRAIGHT


_BESIDE = 1e-7
"""Distance from the end of a stretch, over its length, that is beside it [-]."""
_STRAIGHT = 1e-6
"""Bends below this are none [rad]."""


def mesh_of(model: FlowModel) -> Mesh | None:
    """Elements of a model's rings, None without rings."""
    return next((term.mesh for term in model.terms if isinstance(term, SheetTerm)), None)


def opening_of(model: FlowModel, mesh: Mesh, element: Singularity | Line) -> Opening | None:
    """Where an element stands on a ring, None for one that does not."""
    if element.wall is None or element.wall in model.walls:
        return None
    if isinstance(element, Line):
        middle, half, flow = (
            0.5 * (element.start + element.end),
            0.5 * abs(element.end - element.start),
            element.flux,
        )
    else:
        middle, half, flow = element.at, 0.0, element.strength.real
    number, at = _nearest(mesh, middle)
    return Opening(RingTrack(mesh, number), at - half, at + half, 1.0 if flow < 0.0 else -1.0)


def _nearest(mesh: Mesh, z: complex) -> tuple[int, float]:
    """Ring on which a place lies and the length along it [m]."""
    element = int(nearest_edges(np.array([z]), mesh.start, mesh.end)[1][0])
    number = int(mesh.ring[element])
    before = np.abs(mesh.half[int(mesh.bounds[number]) : element])
    return number, 2.0 * float(before.sum()) + abs(z - mesh.start[element])

"""Rings: walls of outlines and of surveyed shores as runs of straight edges with the water on the left."""

from dataclasses import dataclass, field
from enum import IntEnum
from functools import cached_property

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray


class EdgeKind(IntEnum):
    """What an edge lets through: nothing, water square to it, water at one speed."""

    LAND = 0
    EQUIPOTENTIAL = 1
    UNIFORM = 2


@dataclass(frozen=True, eq=False)
class Ring:
    """A wall or several in a row: straight edges, water on their left.

    name : of the outline, the island, or "bank" for the outer ring of a surveyed shore
    vertices : shape (k,), x + iy [m]; a closed ring has k edges and does not repeat its first vertex,
        an open one, from bank to bank, has k - 1
    closed : whether the last vertex leads back to the first
    edges : name of every edge: the ring's own, or an open edge's
    kinds : what every edge lets through
    is_solid : whether a solid stands to the right, rather than everything beyond a surveyed shore
    owner : index among the model's owners;  circulation : round a closed solid [m2/s]
    body : shape (b,), the whole solid, what stands behind a bank included [m]; empty for an outer ring
    """

    name: str
    vertices: ComplexArray
    closed: bool
    edges: tuple[str, ...]
    kinds: tuple[EdgeKind, ...]
    is_solid: bool
    owner: int
    circulation: float = 0.0
    body: ComplexArray = field(default_factory=lambda: np.empty(0, dtype=np.complex128))

    @cached_property
    def starts(self) -> ComplexArray:
        """First end of every edge [m]."""
        return self.vertices if self.closed else self.vertices[:-1]

    @cached_property
    def ends(self) -> ComplexArray:
        """Second end of every edge [m]."""
        return np.roll(self.vertices, -1) if self.closed else self.vertices[1:]

    @cached_property
    def lengths(self) -> FloatArray:
        """Length of every edge [m]."""
        return np.abs(self.ends - self.starts)

    @cached_property
    def is_land(self) -> BoolArray:
        """Whether an edge is land, edge by edge."""
        return np.array([kind is EdgeKind.LAND for kind in self.kinds], dtype=np.bool_)

    @cached_property
    def water_angles(self) -> FloatArray:
        """Angle on the water's side at every vertex where two edges meet, nan at the ends of an open ring."""
        step = self.ends - self.starts
        turn = np.angle(step / np.roll(step, 1))
        angles = np.pi - turn
        if not self.closed:
            angles = np.append(angles, np.nan)
            angles[0] = np.nan
        return angles

    @property
    def breadth(self) -> float:
        """Root of the area within a closed ring [m]."""
        area = 0.5 * float(np.sum((np.conj(self.vertices) * np.roll(self.vertices, -1)).imag))
        return float(np.sqrt(abs(area)))

    @property
    def diameter(self) -> float:
        """Diagonal of the box round the ring [m]."""
        return float(abs(complex(np.ptp(self.vertices.real), np.ptp(self.vertices.imag))))

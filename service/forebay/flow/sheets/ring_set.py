"""All rings of a layout as walls: what is water, how far the nearest wall is, and what stands on one."""

from collections.abc import Iterable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.kernels.ring_walls import nearest_edges, rings_around
from forebay.flow.sheets.ring import Ring
from forebay.flow.shores import Wall


@dataclass(frozen=True, eq=False)
class RingSet:
    """Rings in their order."""

    rings: tuple[Ring, ...]

    @cached_property
    def _edges(self) -> tuple[ComplexArray, ComplexArray]:
        return _joined([ring.starts for ring in self.rings]), _joined([ring.ends for ring in self.rings])

    @cached_property
    def _land(self) -> tuple[ComplexArray, ComplexArray, IntArray]:
        """Land edges and the ring of each."""
        chosen = np.concatenate([ring.is_land for ring in self.rings])
        ring = np.repeat(np.arange(len(self.rings)), [ring.starts.size for ring in self.rings])
        return self._edges[0][chosen], self._edges[1][chosen], ring[chosen]

    @cached_property
    def _bodies(self) -> tuple[ComplexArray, ComplexArray, IntArray]:
        bodies = [ring.body for ring in self.rings if ring.is_solid]
        starts, ends = _joined(bodies), _joined([np.roll(body, -1) for body in bodies])
        return starts, ends, np.cumsum([0, *(body.size for body in bodies)])

    def inside(self, z: ComplexArray) -> BoolArray:
        """Whether points, any shape, lie in the water as far as the rings know, walls undecided."""
        at = np.ascontiguousarray(z, dtype=np.complex128).ravel()
        wet = rings_around(at, *self._bodies) < 0
        for ring in self.rings:
            if not ring.is_solid:
                bounds = np.array([0, ring.starts.size])
                wet &= rings_around(at, ring.starts, ring.ends, bounds) == 0
        return np.asarray(wet.reshape(np.shape(z)), dtype=np.bool_)

    def outline_at(self, z: complex) -> bool:
        """Whether a point lies in a solid of its own, not behind the banks of surveyed water."""
        return bool(rings_around(np.array([z]), *self._bodies)[0] >= 0)

    def gap(self, z: ComplexArray) -> FloatArray:
        """Distance to the nearest edge, open ones included [m]."""
        at = np.ascontiguousarray(z, dtype=np.complex128).ravel()
        return nearest_edges(at, *self._edges)[0].reshape(np.shape(z))

    def gap_beside(self, z: complex, wall: Wall | None) -> float:
        """Distance to the nearest edge that is no part of a wall, or where that wall ends [m]."""
        starts, ends = self._edges
        if wall is not None:
            middles = 0.5 * (starts + ends)
            apart = np.asarray(wall.distance(middles)) > _PART * np.abs(ends - starts)
            starts, ends = starts[apart], ends[apart]
        return float(nearest_edges(np.array([z]), starts, ends)[0][0])

    def wet(self, z: ComplexArray, reach: float) -> BoolArray:
        """Whether points lie in the water or within `reach` [m] of a ring."""
        at = np.asarray(z, dtype=np.complex128)
        wet = self.inside(at)
        if reach > 0.0 and not np.all(wet):
            dry = ~wet
            wet = wet.copy()
            wet[dry] = self.gap(at[dry]) <= reach
        return wet

    def distance(self, z: ComplexArray) -> FloatArray:
        """Distance to the nearest land edge [m], inf without any, negative on land."""
        at = np.ascontiguousarray(z, dtype=np.complex128).ravel()
        starts, ends, _ = self._land
        distance = nearest_edges(at, starts, ends)[0].reshape(np.shape(z))
        return np.asarray(np.where(self.inside(z), distance, -distance), dtype=np.float64)

    def distances(self, z: ComplexArray) -> FloatArray:
        """Distance to the land of each ring, shape (rings, *z.shape) [m]."""
        at = np.ascontiguousarray(z, dtype=np.complex128).ravel()
        starts, ends, ring = self._land
        rows = [nearest_edges(at, starts[ring == k], ends[ring == k])[0] for k in range(len(self.rings))]
        return np.reshape(rows, (len(self.rings), *np.shape(z)))

    def edges_at(self, z: complex, reach: float) -> tuple[tuple[Ring, int], ...]:
        """Edges within `reach` [m] of a point, by ring and number."""
        found = []
        for ring in self.rings:
            span = ring.ends - ring.starts
            share = np.clip(((z - ring.starts) / span).real, 0.0, 1.0)
            near = np.flatnonzero(np.abs(z - ring.starts - share * span) <= reach)
            found += [(ring, int(edge)) for edge in near]
        return tuple(found)

    def on_open_edge(self, places: Iterable[complex], reach: float) -> bool:
        """Whether all places lie within `reach` [m] of one and the same open edge."""
        touched = [
            {(id(ring), edge) for ring, edge in self.edges_at(at, reach) if not ring.is_land[edge]}
            for at in places
        ]
        return bool(set.intersection(*touched))

    def crossed(self, a: complex, b: complex, reach: float) -> bool:
        """Whether a straight line in the water crosses a ring by more than `reach` [m]."""
        starts, ends = self._edges
        along, across = (b - a) / abs(b - a), (ends - starts) / np.abs(ends - starts)
        one, other = ((z - a) * np.conj(along) for z in (starts, ends))
        first, second = ((z - starts) * np.conj(across) for z in (a, b))
        parted = (np.minimum(one.imag, other.imag) < -reach) & (np.maximum(one.imag, other.imag) > reach)
        beyond = (np.minimum(first.imag, second.imag) < -reach) & (
            np.maximum(first.imag, second.imag) > reach
        )
        return bool(np.any(parted & beyond)) or not bool(self.wet(np.array([0.5 * (a + b)]), reach)[0])

    def wall_at(self, z: complex, reach: float) -> Wall | None:
        """The edge on which a point stands, as a wall; None off the rings."""
        found = self.edges_at(z, reach)
        return wall_of(*found[0]) if found else None

    @cached_property
    def salient(self) -> ComplexArray:
        """Vertices at which the water turns by more than half a circle: no velocity there [m]."""
        sharp = [ring.vertices[ring.water_angles > np.pi * (1.0 + _STRAIGHT)] for ring in self.rings]
        return _joined(sharp)


NO_RINGS = RingSet(())
"""Nothing but straight banks and piers."""
_STRAIGHT = 1e-6
"""Bends below this part of half a circle are none [-]."""


_PART = 1e-6
"""Distance of an edge's middle from a wall, over the edge's length, within which it is part of it [-]."""


def wall_of(ring: Ring, edge: int) -> Wall:
    """An edge of a ring as a wall with its name."""
    start, end = complex(ring.starts[edge]), complex(ring.ends[edge])
    length = abs(end - start)
    return Wall(ring.edges[edge], start, (end - start) / length, 0.0, length)


def stretch_of(ring: Ring, edge: int, straight: float) -> Wall:
    """An edge as a wall, with those of its kind before and after it that go straight on.

    straight : distance from the edge's line within which they do [m]
    """
    wall = wall_of(ring, edge)
    first, last = _straight_on(ring, edge, -1, straight), _straight_on(ring, edge, 1, straight)
    before, after = (
        float(((z - wall.point) * wall.direction.conjugate()).real)
        for z in (ring.starts[first], ring.ends[last])
    )
    return Wall(wall.name, wall.point, wall.direction, -before, after)


def _straight_on(ring: Ring, edge: int, step: int, straight: float) -> int:
    """The last edge in a direction along the ring that continues an edge."""
    wall, count, last = wall_of(ring, edge), ring.starts.size, edge
    for _ in range(count - 1):
        after = last + step
        if not ring.closed and not 0 <= after < count:
            break
        after %= count
        far = complex(ring.ends[after] if step > 0 else ring.starts[after])
        local = (far - wall.point) * wall.direction.conjugate()
        known = complex(ring.ends[last] if step > 0 else ring.starts[last])
        advance = step * ((far - known) * wall.direction.conjugate()).real
        if ring.kinds[after] != ring.kinds[edge] or abs(local.imag) > straight or advance <= 0.0:
            break
        last = after
    return last


def inner_point(ring: Ring) -> complex:
    """A place in a solid far from its wall, x + iy [m]: the best of a lattice of 40 by 40."""
    body, ends = ring.body, np.roll(ring.body, -1)
    x = np.linspace(body.real.min(), body.real.max(), 42)[1:-1]
    y = np.linspace(body.imag.min(), body.imag.max(), 42)[1:-1]
    lattice = (x + 1j * y[:, None]).ravel()
    lattice = np.concatenate((lattice, _beside_edges(body, ends)))
    inside = lattice[rings_around(lattice, body, ends, np.array([0, body.size])) == 0]
    distance, _ = nearest_edges(inside, ring.starts, ring.ends)
    return complex(inside[np.argmax(distance)])


def _beside_edges(starts: ComplexArray, ends: ComplexArray) -> ComplexArray:
    """Points inside next to the middle of every edge, for solids thinner than a lattice's step."""
    step = ends - starts
    offsets = np.array([1e-1, 1e-2, 1e-3, 1e-4])
    beside = 0.5 * (starts + ends)[:, None] - 1j * step[:, None] * offsets
    return np.asarray(beside.ravel(), dtype=np.complex128)


def _joined(parts: list[ComplexArray]) -> ComplexArray:
    return np.concatenate([np.empty(0, dtype=np.complex128), *parts])

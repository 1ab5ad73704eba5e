"""Rings: a client's list of vertices as the outline of an area, mended where that changes nothing."""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import StrEnum

import numpy as np
import shapely
from scipy.spatial import cKDTree
from shapely import Polygon

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.errors import Path
from forebay.trade.survey.errors import RingError

REACH = 1e-6
"""Vertices nearer than this part of the site's size are one: edges shorter than that mean nothing [-]."""

MOST_LOST = 1e-4
"""Part of a ring's area that may be cut off with a loop or spike; as much as the flow is solved to [-]."""


class ChangeKind(StrEnum):
    """What was done to the geometry."""

    REPEATED_VERTEX = "repeated-vertex"
    REVERSED_RING = "reversed-ring"
    LOOP_CUT = "loop-cut"
    ISLAND_DROPPED = "island-dropped"
    SIMPLIFIED = "simplified"
    EDGE_END_MOVED = "edge-end-moved"
    MERGED_WITH_LAND = "merged-with-land"


@dataclass(frozen=True, slots=True)
class Change:
    """A change to a ring.

    path : of the ring or open edge;  count : vertices taken away or moved
    distance : largest distance by which the boundary or a point moved [m];  at : where, x + iy [m]
    """

    kind: ChangeKind
    path: Path
    count: int
    distance: float
    at: complex | None = None


@dataclass(frozen=True, eq=False, slots=True)
class Ring:
    """Vertices of a ring, the first not repeated.

    points : shape (n,), x + iy [m];  origins : shape (n,), index of each in the client's list
    path : of the client's list
    """

    points: ComplexArray
    origins: IntArray
    path: Path

    @property
    def polygon(self) -> Polygon:
        """The area inside."""
        return polygon_of(self.points)

    @property
    def signed_area(self) -> float:
        """Area [m2], positive if the vertices run anticlockwise."""
        return signed_area(self.points)

    def vertex_path(self, near: complex) -> Path:
        """Path to the client's vertex nearest to a place."""
        return (*self.path, int(self.origins[int(np.argmin(np.abs(self.points - near)))]))


def pairs(points: ComplexArray) -> FloatArray:
    """Coordinates of places, shape (n, 2)."""
    return np.stack([points.real, points.imag], axis=-1)


def places(coordinates: FloatArray) -> ComplexArray:
    """Places x + iy of coordinates of shape (n, 2)."""
    return np.asarray(coordinates[:, 0] + 1j * coordinates[:, 1], dtype=np.complex128)


def polygon_of(points: ComplexArray, holes: Sequence[ComplexArray] = ()) -> Polygon:
    """Polygon of a ring with holes."""
    return Polygon(pairs(points), [pairs(hole) for hole in holes])


def signed_area(points: ComplexArray) -> float:
    """Area inside a ring [m2], positive if it runs anticlockwise."""
    local = points - points[0]
    return 0.5 * float(np.sum((np.conj(local) * np.roll(local, -1)).imag))


def size_of(points: ComplexArray) -> float:
    """Diagonal of the rectangle about places [m]."""
    return float(np.hypot(np.ptp(points.real), np.ptp(points.imag)))


def mended_ring(
    points: ComplexArray, path: Path, *, size: float, clockwise: bool = False
) -> tuple[Ring, tuple[Change, ...]]:
    """Ring of a client's vertices.

    Parameters
    ----------
    points : shape (n,), as given, with or without the closing point [m];  path : of the list
    size : of the whole site [m];  clockwise : sense in which the ring shall run

    Returns
    -------
    The ring, without repeated vertices, loops and spikes, and what was changed; a closing point is no change.

    Raises
    ------
    RingError : fewer than three vertices are left, the ring holds no area, or crosses itself so that more
        than MOST_LOST of its area would be lost
    """
    ring, changes = _without_repeats(points, path, REACH * size)
    if ring.points.size < 3 or abs(ring.signed_area) <= (REACH * size) ** 2:
        raise RingError("the vertices enclose no area", path)
    if not ring.polygon.is_valid:
        ring, cut = _without_loops(ring)
        changes.append(cut)
    if (ring.signed_area < 0.0) != clockwise:
        ring = replace(ring, points=ring.points[::-1].copy(), origins=ring.origins[::-1].copy())
        changes.append(Change(ChangeKind.REVERSED_RING, path, 0, 0.0))
    return ring, tuple(changes)


def _without_repeats(points: ComplexArray, path: Path, reach: float) -> tuple[Ring, list[Change]]:
    count = points.size - 1 if points.size > 1 and points[0] == points[-1] else points.size
    kept: list[int] = []
    for index in range(count):
        if not kept or abs(points[index] - points[kept[-1]]) > reach:
            kept.append(index)
    while len(kept) > 1 and abs(points[kept[-1]] - points[kept[0]]) <= reach:
        kept.pop()
    ring = Ring(points[kept], np.array(kept, dtype=np.int64), path)
    dropped = np.setdiff1d(np.arange(count), kept)
    if dropped.size == 0:
        return ring, []
    gaps = np.asarray(cKDTree(pairs(ring.points)).query(pairs(points[dropped]))[0])
    far = int(np.argmax(gaps))
    at = complex(points[dropped[far]])
    return ring, [Change(ChangeKind.REPEATED_VERTEX, path, int(dropped.size), float(gaps[far]), at)]


def _without_loops(ring: Ring) -> tuple[Ring, Change]:
    """The ring without small loops and without spikes of no width."""
    area = abs(ring.signed_area)
    whole = shapely.make_valid(ring.polygon, method="structure", keep_collapsed=False)
    largest = max((part for part in shapely.get_parts(whole)), key=shapely.area, default=None)
    if largest is None or largest.interiors:
        raise _crossing(ring)
    if abs(whole.area - area) + whole.area - largest.area > MOST_LOST * area:
        raise _crossing(ring)
    points = places(shapely.get_coordinates(largest.exterior)[:-1])
    if signed_area(points) * ring.signed_area < 0.0:
        points = points[::-1].copy()
    nearest = cKDTree(pairs(ring.points)).query(pairs(points))[1]
    mended = Ring(points, ring.origins[nearest], ring.path)
    lost = np.setdiff1d(np.arange(ring.points.size), nearest)
    gap, at = displacement(ring.points[lost], points)
    return mended, Change(ChangeKind.LOOP_CUT, ring.path, int(lost.size), gap, at)


def displacement(points: ComplexArray, ring: ComplexArray) -> tuple[float, complex | None]:
    """Largest distance of places from a ring [m], and where; 0 and None without places."""
    if points.size == 0:
        return 0.0, None
    line = shapely.linestrings(pairs(np.append(ring, ring[0])))
    gaps = np.asarray(shapely.distance(line, shapely.points(pairs(points))))
    far = int(np.argmax(gaps))
    return float(gaps[far]), complex(points[far])


def _crossing(ring: Ring) -> RingError:
    """The error that says where a ring crosses itself."""
    reason = shapely.is_valid_reason(ring.polygon)
    at = complex(*(float(part) for part in reason[reason.index("[") + 1 : -1].split()))
    return RingError(
        f"the ring crosses or touches itself at x = {at.real:.9g} m, y = {at.imag:.9g} m",
        ring.vertex_path(at),
    )


def inscribed_circle(points: ComplexArray) -> tuple[complex, float]:
    """Centre [m] and radius [m] of the largest circle inside a ring, to 1 % of its size."""
    spoke = shapely.maximum_inscribed_circle(polygon_of(points), tolerance=0.01 * size_of(points))
    centre, rim = places(shapely.get_coordinates(spoke)).tolist()
    return centre, abs(rim - centre)

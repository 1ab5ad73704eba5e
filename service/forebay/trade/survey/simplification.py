"""Fewer vertices for the same water: what a survey holds beyond the tolerance asked for is left out."""

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
import shapely

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import OpenEdge
from forebay.trade.survey.islands import are_free
from forebay.trade.survey.open_edges import edge_numbers
from forebay.trade.survey.rings import Change, ChangeKind, Ring, displacement, pairs, places

HALVINGS = 8
"""Times that the tolerance is halved where fewer vertices would let rings touch."""


@dataclass(frozen=True, slots=True)
class Simplified:
    """Rings with fewer vertices: outer one first, then islands; the open edges in their new numbers."""

    rings: tuple[Ring, ...]
    edges: tuple[OpenEdge, ...]
    changes: tuple[Change, ...]


def simplified(
    rings: tuple[Ring, ...], edges: tuple[OpenEdge, ...], *, tolerance: float, reach: float
) -> Simplified:
    """Rings without the vertices that lie within a tolerance of what is left.

    Parameters
    ----------
    rings : outer ring first, then islands;  edges : parts of the outer ring whose vertices all stay
    tolerance : largest distance of a vertex left out from the new ring [m]
    reach : distance at which rings count as touching [m]

    Returns
    -------
    Simplified. Rings neither cross nor touch afterwards; where `tolerance` would let them, it is halved as
    often as needed, HALVINGS times at most, then nothing is left out.

    References
    ----------
    D. H. Douglas and T. K. Peucker, Cartographica 10 (1973) 112-122, kept from crossings by the library.
    """
    for halving in range(HALVINGS + 1):
        fewer, numbered = _thinned(rings, edges, tolerance / 2**halving)
        if are_free(fewer[0], fewer[1:], reach):
            return Simplified(fewer, numbered, _changes(rings, fewer))
    return Simplified(rings, edges, ())


def _thinned(
    rings: tuple[Ring, ...], edges: tuple[OpenEdge, ...], tolerance: float
) -> tuple[tuple[Ring, ...], tuple[OpenEdge, ...]]:
    """All rings simplified together, so that none can cross another."""
    outer = rings[0].points
    stations = _stations(edges, outer.size)
    parts = [np.arange(first, last + 1) % outer.size for first, last in pairwise(stations)]
    lines = [pairs(outer[part]) for part in parts]
    lines += [pairs(np.append(ring.points, ring.points[0])) for ring in rings[1:]]
    thin = shapely.get_parts(
        shapely.simplify(shapely.MultiLineString(lines), tolerance, preserve_topology=True)
    )
    kept = [places(shapely.get_coordinates(line)) for line in thin]
    new_outer = np.concatenate([line[:-1] for line in kept[: len(parts)]])
    starts = np.cumsum([0, *(line.size - 1 for line in kept[: len(parts)])])
    where = {station % outer.size: int(start) for station, start in zip(stations, starts, strict=True)}
    where[stations[0] % outer.size] = 0
    numbered = tuple(replace(edge, first=where[edge.first]) for edge in edges)
    fewer = [_as_ring(new_outer, rings[0])]
    fewer += [_as_ring(line[:-1], ring) for line, ring in zip(kept[len(parts) :], rings[1:], strict=True)]
    return tuple(fewer), numbered


def _stations(edges: tuple[OpenEdge, ...], vertices: int) -> list[int]:
    """Vertices of the outer ring that stay, in order, once round: those of the open edges, or the first."""
    stay = {number for edge in edges for number in edge_numbers(edge, vertices)}
    stay |= {(edge.first + edge.count) % vertices for edge in edges}
    ordered = sorted(stay) or [0]
    return [*ordered, ordered[0] + vertices]


def _as_ring(points: ComplexArray, ring: Ring) -> Ring:
    """Ring of some of a ring's vertices."""
    number = {complex(point): int(origin) for point, origin in zip(ring.points, ring.origins, strict=True)}
    return Ring(points, np.array([number[complex(point)] for point in points], dtype=np.int64), ring.path)


def _changes(rings: tuple[Ring, ...], fewer: tuple[Ring, ...]) -> tuple[Change, ...]:
    """What was left out of each ring."""
    changes = []
    for before, after in zip(rings, fewer, strict=True):
        gone = before.points[~np.isin(before.points, after.points)]
        if gone.size:
            gap, at = displacement(gone, after.points)
            changes.append(Change(ChangeKind.SIMPLIFIED, before.path, int(gone.size), gap, at))
    return tuple(changes)

"""Open edges: which part of the outer ring the water crosses, found from two points near its ends."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import Path
from forebay.flow.layout import EdgeProfile, OpenEdge
from forebay.trade.survey.errors import OpenEdgeError
from forebay.trade.survey.rings import Change, ChangeKind

REACH = 0.05
"""Part of the distance between its two points within which a vertex of the ring ends an open edge [-]."""

MOVED = 1e-6
"""The same part, from which it is said that the end of an open edge was moved on to the vertex [-]."""

LONGEST = 2.0
"""Length of an open edge along the ring over the distance between its points, beyond which it is none [-]."""

CLEAR = 1.2
"""The way round the ring that is not meant must be so many times as long as the one that is [-]."""


@dataclass(frozen=True, slots=True)
class EdgeSurvey:
    """An open edge as a client writes it: between two points, in any order, x + iy [m].

    discharge : into the water [m3/s], None: what continuity gives
    """

    name: str
    start: complex
    end: complex
    discharge: float | None = None
    profile: EdgeProfile = EdgeProfile.EQUIPOTENTIAL


def located_edge(outer: ComplexArray, edge: EdgeSurvey, path: Path) -> tuple[OpenEdge, tuple[Change, ...]]:
    """The part of the outer ring that an open edge is, and how far its ends moved on to vertices.

    Parameters
    ----------
    outer : shape (n,), vertices of the outer ring, anticlockwise [m];  path : of the open edge

    Raises
    ------
    OpenEdgeError : a point is further than REACH from every vertex, both points are one, or the ring between
        them is no line from one to the other (LONGEST, CLEAR)
    """
    chord = abs(edge.end - edge.start)
    ends, moved = [], []
    for name, at in (("start", edge.start), ("end", edge.end)):
        vertex = int(np.argmin(np.abs(outer - at)))
        gap = float(abs(outer[vertex] - at))
        if gap > REACH * chord or chord == 0.0:
            raise OpenEdgeError(
                f"the nearest vertex of the outer ring is {gap:.4g} m away, and the edge {chord:.4g} m long; "
                f"at most {100 * REACH:g} % of its length is allowed",
                (*path, name),
            )
        ends.append(vertex)
        if gap > MOVED * chord:
            moved.append(Change(ChangeKind.EDGE_END_MOVED, (*path, name), 1, gap, at))
    first, count = _shorter_way(outer, ends[0], ends[1], path)
    return OpenEdge(edge.name, first, count, edge.discharge, edge.profile), tuple(moved)


def _shorter_way(outer: ComplexArray, one: int, other: int, path: Path) -> tuple[int, int]:
    """First vertex and number of edges of the shorter way along the ring between two vertices."""
    if one == other:
        raise OpenEdgeError("both points lead to the same vertex of the outer ring", path)
    lengths = np.abs(np.roll(outer, -1) - outer)
    ways = []
    for first, last in ((one, other), (other, one)):
        count = (last - first) % outer.size
        ways.append((float(np.take(lengths, range(first, first + count), mode="wrap").sum()), first, count))
    (short, first, count), (long, _, _) = sorted(ways)
    chord = abs(outer[one] - outer[other])
    if short > LONGEST * chord or long < CLEAR * short:
        raise OpenEdgeError(
            f"the outer ring between the two points is {short:.4g} m one way and {long:.4g} m the other, for "
            f"{chord:.4g} m between them: it is not plain which part is open",
            path,
        )
    return first, count


def require_apart(edges: tuple[OpenEdge, ...], vertices: int, path: Path) -> None:
    """Refuse open edges that share a part of the ring, or leave no bank, or no more than one to continuity.

    Raises
    ------
    OpenEdgeError : its path is that of the second one at fault
    """
    owner: dict[int, int] = {}
    for index, edge in enumerate(edges):
        for part in edge_numbers(edge, vertices):
            if owner.setdefault(part, index) != index:
                raise OpenEdgeError(f"the edge overlaps open_edges/{owner[part]}", (*path, index))
    left_open = [index for index, edge in enumerate(edges) if edge.discharge is None]
    if len(left_open) > 1:
        raise OpenEdgeError(
            f"continuity gives one discharge only, and open_edges/{left_open[0]} has none either",
            (*path, left_open[1]),
        )


def edge_numbers(edge: OpenEdge, vertices: int) -> list[int]:
    """Edges of the ring that an open edge consists of."""
    return [(edge.first + step) % vertices for step in range(edge.count)]

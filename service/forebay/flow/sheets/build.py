"""Rings of a layout: its surveyed shore, and the outlines among its structures."""

from dataclasses import replace

import numpy as np

from forebay.flow.arrays import IntArray
from forebay.flow.errors import (
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
    Path,
    UnsolvableBoundaryError,
)
from forebay.flow.kernels.ring_walls import first_contact, rings_around
from forebay.flow.layout import EdgeProfile, Island, Layout, Outline, Surveyed
from forebay.flow.maps import LogarithmMap
from forebay.flow.sheets.clip import Cut, clockwise, cut_at_banks, distinct
from forebay.flow.sheets.ring import EdgeKind, Ring
from forebay.flow.shores import Frame

BANK = "bank"
"""Name of the land round surveyed water."""
_TOUCHING = 1e-9
"""Distance over the scale below which two rings touch [-]."""
_WIDEST = float(np.deg2rad(300.0))
"""Widest corner for outlines: behind a thinner wedge of land they would see each other's far side [rad]."""
_KINDS = {EdgeProfile.EQUIPOTENTIAL: EdgeKind.EQUIPOTENTIAL, EdgeProfile.UNIFORM: EdgeKind.UNIFORM}


def rings_of(layout: Layout, frame: Frame, scale: float) -> tuple[Ring, ...]:
    """Rings of a layout, the outer ring of a surveyed shore first, then its islands, then outlines.

    Raises
    ------
    OverlappingStructuresError : two rings, or two parts of one, touch
    ElementOnLandError : an outline has no part in the water
    UnsolvableBoundaryError : an outline shuts off water, or an open edge does not fit
    """
    rings: list[Ring] = []
    paths: list[Path] = []
    if isinstance(layout.shore, Surveyed):
        rings.append(_outer(layout.shore))
        paths.append(("shore",))
        for k, island in enumerate(layout.shore.islands):
            rings.append(_named(_island(island), layout.shore, k + 1, island.points))
            paths.append(("shore", "islands", k))
    first = len(layout.elements) + 1
    for k, structure in enumerate(layout.structures):
        if isinstance(structure, Outline):
            rings.append(_outline(structure, frame, first + k, ("structures", k)))
            paths.append(("structures", k))
    if rings:
        _check_apart(rings, paths, scale)
    return tuple(rings)


def _solid(named: Island | Outline, cut: Cut, owner: int) -> Ring:
    points = cut.runs[0]
    count = points.size if cut.closed else points.size - 1
    return Ring(
        name=named.name,
        vertices=points,
        closed=cut.closed,
        edges=(named.name,) * count,
        kinds=(EdgeKind.LAND,) * count,
        is_solid=True,
        owner=owner,
        circulation=named.circulation,
        body=cut.body,
    )


def _island(island: Island) -> Ring:
    points = clockwise(distinct(np.array(island.points, dtype=np.complex128)))
    return _solid(island, Cut((points,), closed=True, body=points), 0)


def _outline(outline: Outline, frame: Frame, owner: int, path: Path) -> Ring:
    points = np.array(outline.points, dtype=np.complex128)
    if isinstance(frame.map, LogarithmMap) and frame.map.angle > _WIDEST:
        raise UnsolvableBoundaryError("outlines need a corner of at most 300 degrees", path)
    cut = cut_at_banks(points, frame)
    _check_cut(cut, outline, frame, path)
    return _solid(outline, cut, owner)


def _check_cut(cut: Cut, outline: Outline, frame: Frame, path: Path) -> None:
    if not cut.runs:
        raise ElementOnLandError("the outline has no part in the water", path)
    if len(cut.runs) > 1:
        raise UnsolvableBoundaryError(
            "the outline meets the banks in more than one place and shuts off a part of the water", path
        )
    if cut.closed:
        return
    if outline.circulation != 0.0:
        raise ElementMisplacedError(
            "only an outline that stands free in the water has a circulation", (*path, "circulation")
        )
    if isinstance(frame.map, LogarithmMap):
        reach = _TOUCHING * float(np.max(np.abs(cut.runs[0] - frame.map.vertex)))
        if min(abs(cut.runs[0][k] - frame.map.vertex) for k in (0, -1)) <= reach:
            raise UnsolvableBoundaryError("the outline ends in the vertex of the corner", path)


def _outer(shore: Surveyed) -> Ring:
    """Outer ring, beginning with an open edge, with a potential on it if there is such a one."""
    points = np.array(shore.outer, dtype=np.complex128)
    names, kinds = [BANK] * points.size, [EdgeKind.LAND] * points.size
    for j, edge in enumerate(shore.edges):
        for k in range(edge.first, edge.first + edge.count):
            if names[k % points.size] != BANK:
                raise UnsolvableBoundaryError("the open edge overlaps another", ("shore", "edges", j))
            names[k % points.size], kinds[k % points.size] = edge.name, _KINDS[edge.profile]
    _check_edges(shore, kinds)
    order = sorted(shore.edges, key=lambda edge: edge.profile is not EdgeProfile.EQUIPOTENTIAL)
    turn = order[0].first % points.size if order else 0
    names, kinds = names[turn:] + names[:turn], kinds[turn:] + kinds[:turn]
    vertices = np.roll(points, -turn)
    ring = Ring(BANK, vertices, closed=True, edges=tuple(names), kinds=tuple(kinds), is_solid=False, owner=0)
    return _named(ring, shore, 0, shore.outer)


def _named(ring: Ring, shore: Surveyed, number: int, points: tuple[complex, ...]) -> Ring:
    """A ring with the names of the stretches on it; points : as the shore has them."""
    named = {points[k]: s.name for s in shore.stretches if s.ring == number for k in s.edges}
    edges = tuple(named.get(complex(z), name) for z, name in zip(ring.starts, ring.edges, strict=True))
    return replace(ring, edges=edges)


def _check_edges(shore: Surveyed, kinds: list[EdgeKind]) -> None:
    """Between two open edges there is land, where the water between them is parted."""
    for j, edge in enumerate(shore.edges):
        after = kinds[(edge.first + edge.count) % len(kinds)]
        if after is not EdgeKind.LAND or edge.count >= len(kinds):
            raise UnsolvableBoundaryError(
                "no land parts the open edge from the next", ("shore", "edges", j, "count")
            )


def _check_apart(rings: list[Ring], paths: list[Path], scale: float) -> None:
    """No ring touches itself or another, and no solid stands in another."""
    starts, ends = (np.concatenate([getattr(r, side) for r in rings]) for side in ("starts", "ends"))
    owner = np.repeat(np.arange(len(rings)), [ring.starts.size for ring in rings])
    one, other = first_contact(starts, ends, _links(rings), _TOUCHING * scale)
    if one >= 0:
        path, near = paths[owner[max(one, other)]], paths[owner[min(one, other)]]
        what = "itself" if path == near else "/".join(str(step) for step in near)
        raise OverlappingStructuresError(f"the ring touches or crosses {what}", path)
    _check_nesting(rings, paths)


def _links(rings: list[Ring]) -> IntArray:
    """Edges before and after every edge."""
    links, first = [], 0
    for ring in rings:
        count = ring.starts.size
        index = first + np.arange(count)
        before, after = first + (np.arange(count) - 1) % count, first + (np.arange(count) + 1) % count
        if not ring.closed:
            before[0], after[-1] = -1, -1
        links.append(np.column_stack((before, after, index))[:, :2])
        first += count
    return np.ascontiguousarray(np.concatenate(links), dtype=np.int64)


def _check_nesting(rings: list[Ring], paths: list[Path]) -> None:
    closed = [k for k, ring in enumerate(rings) if ring.closed]
    for k, ring in enumerate(rings):
        probe = ring.vertices[:1]
        for j in closed:
            if j == k:
                continue
            bounds = np.array([0, rings[j].starts.size])
            inside = rings_around(probe, rings[j].starts, rings[j].ends, bounds)[0] == 0
            if inside and rings[j].is_solid:
                raise OverlappingStructuresError("the outline stands inside another", paths[k])
            if not inside and not rings[j].is_solid:
                raise ElementOnLandError("the outline stands outside the surveyed water", paths[k])

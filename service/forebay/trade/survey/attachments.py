"""Outlines that grow out of surveyed banks or islands: cut out of the water, they become part of the land."""

from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np
import shapely

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import OverlappingStructuresError, Path
from forebay.flow.layout import Island, Layout, OpenEdge, Outline, Stretch, Surveyed
from forebay.trade.survey.rings import (
    MOST_LOST,
    REACH,
    Change,
    ChangeKind,
    places,
    polygon_of,
    signed_area,
    size_of,
)


@dataclass(frozen=True, slots=True)
class Attached:
    """Surveyed water less the outlines that touch its land; `merged`: their numbers among the structures."""

    shore: Surveyed
    merged: tuple[int, ...]

    @property
    def changes(self) -> tuple[Change, ...]:
        """What is said of it."""
        return tuple(
            Change(ChangeKind.MERGED_WITH_LAND, ("structures", index), 0, 0.0) for index in self.merged
        )


def with_attached(layout: Layout) -> Layout:
    """The layout with outlines on surveyed land made part of that land.

    Raises
    ------
    OverlappingStructuresError : one parts the water, or joins an island with a bank or another island
    """
    if not isinstance(layout.shore, Surveyed) or not layout.outlines:
        return layout
    found = attached(layout.shore, layout.structures)
    kept = tuple(s for index, s in enumerate(layout.structures) if index not in found.merged)
    return replace(layout, shore=found.shore, structures=kept)


@lru_cache(maxsize=32)
def attached(shore: Surveyed, structures: tuple[object, ...]) -> Attached:
    """Water less the outlines among `structures` that touch or cross a ring of it."""
    water = polygon_of(np.array(shore.outer), [np.array(island.points) for island in shore.islands])
    reach, merged = REACH * size_of(np.array(shore.outer)), []
    solids: list[tuple[str, shapely.Polygon]] = []
    for index, outline in enumerate(structures):
        if not isinstance(outline, Outline):
            continue
        solid = polygon_of(np.array(outline.points))
        if shapely.distance(water.boundary, solid) <= reach:
            water = _less(water, solid.buffer(reach, join_style="mitre"), ("structures", index))
            merged.append(index)
            solids.append((outline.name, solid))
    if not merged:
        return Attached(shore, ())
    rebuilt = _rebuilt(shore, water)
    return Attached(replace(rebuilt, stretches=_stretches(rebuilt, solids, 2.0 * reach)), tuple(merged))


def _stretches(
    shore: Surveyed, solids: list[tuple[str, shapely.Polygon]], reach: float
) -> tuple[Stretch, ...]:
    """Which edges of the rings are those of solids: all of them lies within `reach` of the solid's own."""
    found = []
    for number, points in enumerate([shore.outer, *(island.points for island in shore.islands)]):
        ends = np.array(points, dtype=np.complex128)
        lines = shapely.linestrings(
            [[(a.real, a.imag), (b.real, b.imag)] for a, b in zip(ends, np.roll(ends, -1), strict=True)]
        )
        for name, solid in solids:
            beside = shapely.covers(shapely.buffer(solid.exterior, 2.0 * reach), lines)
            if beside.any():
                found.append(Stretch(name, number, tuple(np.flatnonzero(beside).tolist())))
    return tuple(found)


def _less(water: shapely.Polygon, solid: shapely.Polygon, path: Path) -> shapely.Polygon:
    """Water without a solid on its edge, in one piece and with as many islands."""
    parts = [part for part in shapely.get_parts(water.difference(solid)) if part.geom_type == "Polygon"]
    largest = max(parts, key=shapely.area)
    if sum(part.area for part in parts) - largest.area > MOST_LOST * solid.area:
        raise OverlappingStructuresError("it parts the water", path)
    if len(largest.interiors) != len(water.interiors):
        raise OverlappingStructuresError("it joins an island with a bank or another island", path)
    return largest


def _rebuilt(shore: Surveyed, water: shapely.Polygon) -> Surveyed:
    """Shore of the water that is left; islands keep their names, open edges their vertices."""
    outer = _turned(water.exterior, anticlockwise=True)
    rings = [_turned(ring, anticlockwise=False) for ring in water.interiors]
    solids = [polygon_of(ring) for ring in rings]
    islands = []
    for island in shore.islands:
        old = polygon_of(np.array(island.points))
        number = max(range(len(rings)), key=lambda k: shapely.intersection(old, solids[k]).area)
        islands.append(Island(island.name, tuple(rings[number].tolist()), island.circulation))
    edges = tuple(_found_again(edge, shore.outer, outer) for edge in shore.edges)
    return Surveyed(tuple(outer.tolist()), tuple(islands), edges)


def _turned(ring: shapely.LinearRing, *, anticlockwise: bool) -> ComplexArray:
    points = places(shapely.get_coordinates(ring)[:-1])
    return points if (signed_area(points) > 0.0) == anticlockwise else points[::-1].copy()


def _found_again(edge: OpenEdge, before: tuple[complex, ...], outer: ComplexArray) -> OpenEdge:
    return replace(edge, first=int(np.argmin(np.abs(outer - before[edge.first]))))

"""Surveyed water: a polygon with islands and open edges as a client has it, made a shore of the flow."""

from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import Path, TooLargeError
from forebay.flow.layout import OpenEdge, Surveyed
from forebay.trade.survey.errors import RingError
from forebay.trade.survey.grids import (
    WGS84,
    MapGrid,
    known_system,
    projected_grid,
    require_one_side,
    scale_error,
    serves_as_grid,
    tangent_grid,
    to_system,
)
from forebay.trade.survey.islands import IslandSurvey, named_islands, require_free
from forebay.trade.survey.open_edges import EdgeSurvey, located_edge, require_apart
from forebay.trade.survey.rings import (
    REACH,
    Change,
    ChangeKind,
    Ring,
    mended_ring,
    pairs,
    places,
    polygon_of,
    size_of,
)
from forebay.trade.survey.simplification import simplified

LOCAL = "local"
"""Coordinates are metres of a local plan."""

MOST_GIVEN = 20_000
"""Vertices of a survey, all rings together."""

MOST_SOLVED = 1_500
"""Vertices of the rings that are solved, after simplification: each takes a dozen unknowns, and their cube in
time."""

CRS: Path = ("shore", "crs")
COORDINATES: Path = ("shore", "water", "coordinates")
EDGES: Path = ("shore", "open_edges")
ISLANDS: Path = ("shore", "islands")


@dataclass(frozen=True, slots=True)
class Survey:
    """Surveyed water as a client writes it.

    rings : outer ring first, vertices x + iy (longitude + i latitude) in the units of `system`
    system : LOCAL [m] or "EPSG:n" of all positions here
    grid : "EPSG:n" of the layout's x, y;  grid_path : where the client says so
    edges, islands : their places likewise in `system`
    tolerance : vertices that lie closer to the simplified rings are left out [m]; 0: none
    """

    rings: tuple[tuple[complex, ...], ...]
    system: str = LOCAL
    grid: str | None = None
    grid_path: Path = ("grid",)
    edges: tuple[EdgeSurvey, ...] = ()
    islands: tuple[IslandSurvey, ...] = ()
    tolerance: float = 0.0


@dataclass(frozen=True, slots=True)
class SurveyedWater:
    """A shore for the flow, with all that was done to the survey on the way.

    shore : rings in the layout's x, y [m];  grid : the grid of these, None for a local plan
    scale_error : largest error of lengths in it [-], None for a local plan
    changes : what was mended, moved and left out;  area : of the water [m2]
    given, vertices : number of vertices before and after;  island_paths : where each island's ring is given
    """

    shore: Surveyed
    grid: MapGrid | None
    scale_error: float | None
    changes: tuple[Change, ...]
    area: float
    given: int
    vertices: int
    island_paths: tuple[Path, ...]


@lru_cache(maxsize=32)
def surveyed_water(survey: Survey) -> SurveyedWater:
    """Shore of a survey.

    Raises
    ------
    LayoutError : a class of `trade.survey.errors`, whose path leads into the shore
    TooLargeError : more vertices than MOST_GIVEN, or than MOST_SOLVED are left
    """
    given = sum(len(ring) for ring in survey.rings)
    if given > MOST_GIVEN:
        raise _too_many(given, MOST_GIVEN)
    grid, survey, error = _on_grid(survey)
    size = size_of(np.array(survey.rings[0], dtype=np.complex128))
    rings, changes = _mended(survey.rings, size)
    require_free(rings[0], rings[1:], REACH * size)
    edges, moved = _located(rings[0], survey.edges)
    changes += moved
    if survey.tolerance > 0.0:
        fewer = simplified(rings, edges, tolerance=survey.tolerance, reach=REACH * size)
        rings, edges, changes = fewer.rings, fewer.edges, changes + fewer.changes
    vertices = sum(ring.points.size for ring in rings)
    if vertices > MOST_SOLVED:
        raise _too_many(vertices, MOST_SOLVED)
    islands = named_islands(rings[1:], survey.islands, ISLANDS)
    shore = Surveyed(tuple(rings[0].points.tolist()), islands, edges)
    area = sum(ring.signed_area for ring in rings)
    paths = tuple(ring.path for ring in rings[1:])
    return SurveyedWater(shore, grid, error, changes, area, given, vertices, paths)


def _too_many(asked: int, limit: int) -> TooLargeError:
    return TooLargeError(
        f"{asked} vertices of the shore are left; the limit is {limit}; `simplify` leaves fewer",
        ("layout", *COORDINATES),
        asked=asked,
        limit=limit,
    )


def _mended(
    rings: tuple[tuple[complex, ...], ...], size: float
) -> tuple[tuple[Ring, ...], tuple[Change, ...]]:
    """Rings of the polygon, water on their left; an island without area is dropped."""
    kept: list[Ring] = []
    changes: list[Change] = []
    for number, points in enumerate(rings):
        path = (*COORDINATES, number)
        at = np.array(points, dtype=np.complex128)
        try:
            ring, done = mended_ring(at, path, size=size, clockwise=number > 0)
        except RingError:
            if number == 0 or size_of(at) > REACH * size:
                raise
            changes.append(Change(ChangeKind.ISLAND_DROPPED, path, len(points), size_of(at), complex(at[0])))
            continue
        kept.append(ring)
        changes += done
    return tuple(kept), tuple(changes)


def _located(outer: Ring, surveys: tuple[EdgeSurvey, ...]) -> tuple[tuple[OpenEdge, ...], tuple[Change, ...]]:
    found = [located_edge(outer.points, edge, (*EDGES, index)) for index, edge in enumerate(surveys)]
    edges = tuple(edge for edge, _ in found)
    require_apart(edges, outer.points.size, EDGES)
    return edges, tuple(change for _, moved in found for change in moved)


def _on_grid(survey: Survey) -> tuple[MapGrid | None, Survey, float | None]:
    """The grid, the survey with every position in it, and how far lengths in the grid are off."""
    if survey.system == LOCAL:
        grid = None if survey.grid is None else projected_grid(survey.grid, survey.grid_path)
        outer = np.array(survey.rings[0], dtype=np.complex128)
        return grid, survey, None if grid is None else scale_error(grid, corners(outer), survey.grid_path)
    system = known_system(survey.system, CRS)
    if system.is_geographic:
        require_one_side(np.array(survey.rings[0]).real, (*COORDINATES, 0))
    grid = _grid_of(survey)
    moved = _moved(survey, grid)
    blamed = CRS if survey.grid is None else survey.grid_path
    return grid, moved, scale_error(grid, corners(np.array(moved.rings[0])), blamed)


def _grid_of(survey: Survey) -> MapGrid:
    """The grid asked for; else the system of the positions if it counts metres; else a tangent one."""
    if survey.grid is not None:
        return projected_grid(survey.grid, survey.grid_path)
    if serves_as_grid(survey.system):
        return MapGrid(survey.system, survey.system)
    outer = pairs(np.array(survey.rings[0], dtype=np.complex128))
    middle = polygon_of(places(to_system(outer, survey.system, WGS84, (*COORDINATES, 0)))).centroid
    return tangent_grid(middle.x, middle.y)


def _moved(survey: Survey, grid: MapGrid) -> Survey:
    """The survey with every position in the grid."""

    def move(points: tuple[complex, ...], path: Path) -> tuple[complex, ...]:
        before = pairs(np.array(points, dtype=np.complex128))
        return tuple(places(to_system(before, survey.system, grid.definition, path)).tolist())

    def move_edge(edge: EdgeSurvey, path: Path) -> EdgeSurvey:
        return replace(edge, start=move((edge.start,), path)[0], end=move((edge.end,), path)[0])

    rings = tuple(move(ring, (*COORDINATES, number)) for number, ring in enumerate(survey.rings))
    edges = tuple(move_edge(edge, (*EDGES, index)) for index, edge in enumerate(survey.edges))
    islands = tuple(
        replace(island, at=move((island.at,), (*ISLANDS, index))[0])
        for index, island in enumerate(survey.islands)
    )
    return replace(survey, rings=rings, system=LOCAL, grid=None, edges=edges, islands=islands)


def corners(points: ComplexArray) -> ComplexArray:
    """Corners and middle of the rectangle about places: where the scale of a grid is looked at."""
    x, y = (np.array([part.min(), part.max()]) for part in (points.real, points.imag))
    rectangle = (x[:, None] + 1j * y[None, :]).ravel()
    return np.asarray([*rectangle, rectangle.mean()], dtype=np.complex128)

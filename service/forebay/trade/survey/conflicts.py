"""What stands in whose way: elements, piers and outlines on land, in one another, or across each other."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
import shapely

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import (
    DuplicateNameError,
    ElementInStructureError,
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
    Path,
)
from forebay.flow.layout import (
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    Outline,
    Pier,
    Structure,
    Surveyed,
    Vortex,
)
from forebay.flow.placement import places
from forebay.flow.settling import ASHORE
from forebay.trade.survey.rings import pairs, polygon_of, size_of

TOUCHING = 1e-9
"""Distances below this part of the size of rings and outlines count as contact [-]."""


@dataclass(frozen=True, eq=False, slots=True)
class Body:
    """A structure with its shape: a polygon, or the centre of a pier and its radius [m]."""

    path: Path
    shape: shapely.Geometry
    radius: float = 0.0


def check_conflicts(layout: Layout) -> None:
    """Refuse a layout whose outlines or surveyed rings are in conflict with what else it holds.

    Layouts with neither are left to the flow's own checks, and so is what depends on a straight bank.

    Raises
    ------
    OverlappingStructuresError : an outline touches or crosses another, a pier a ring or an outline
    ElementInStructureError : an element lies inside an outline, or a line crosses it
    ElementOnLandError : an element, pier or outline lies outside the surveyed water
    ElementMisplacedError : a vortex or doublet stands on a bank, anything on an open edge
    DuplicateNameError : an open edge, element or structure is called like an island or another
    """
    bodies = [_body(structure, ("structures", k)) for k, structure in enumerate(layout.structures)]
    outlines = [body for body in bodies if body.radius == 0.0]
    if not outlines and not isinstance(layout.shore, Surveyed):
        return
    reach = TOUCHING * _size(layout)
    _check_bodies(bodies, reach)
    for index, element in enumerate(layout.elements):
        _check_element(element, outlines, reach=reach, path=("elements", index))
    if isinstance(layout.shore, Surveyed):
        _check_names(layout, layout.shore)
        _check_water(layout, layout.shore, bodies, _size(layout))


def _body(structure: Structure, path: Path) -> Body:
    match structure:
        case Pier():
            return Body(path, shapely.Point(structure.at.real, structure.at.imag), structure.radius)
        case Outline():
            return Body(path, polygon_of(np.array(structure.points)))


def _size(layout: Layout) -> float:
    points = [point for outline in layout.outlines for point in outline.points]
    if isinstance(layout.shore, Surveyed):
        points += layout.shore.outer
    return size_of(np.array(points, dtype=np.complex128))


def _check_bodies(bodies: list[Body], reach: float) -> None:
    """Refuse outlines that touch or cross another structure; piers among themselves are the flow's matter."""
    shapes = np.array([body.shape for body in bodies])
    radii = np.array([body.radius for body in bodies])
    for index, outline in enumerate(bodies):
        if outline.radius > 0.0:
            continue
        gaps = shapely.distance(outline.shape, shapes) - radii
        gaps[index] = np.inf
        nearest = int(np.argmin(gaps))
        if gaps[nearest] <= reach:
            raise OverlappingStructuresError(f"it touches or overlaps structures/{nearest}", outline.path)


def _check_element(element: Element, outlines: list[Body], *, reach: float, path: Path) -> None:
    """Refuse an element inside an outline; on its wall it may stand, but for vortices and doublets."""
    shape = _shape(element)
    for outline in outlines:
        inside = shapely.length(shapely.intersection(shape, outline.shape.buffer(-reach)))
        within = outline.shape.contains(shape) and outline.shape.exterior.distance(shape) > reach
        if inside > 0.0 or within:
            raise ElementInStructureError(
                f"the element lies in or crosses structures/{outline.path[1]}", (*path, _step(element))
            )
        on_wall = outline.shape.exterior.distance(shape) <= reach
        if on_wall and isinstance(element, Vortex | Doublet):
            raise ElementMisplacedError("a vortex or doublet cannot stand on a wall", (*path, "at"))


def _shape(element: Element) -> shapely.Geometry:
    at = pairs(np.array([place for _, place in places(element)], dtype=np.complex128))
    return shapely.Point(at[0]) if len(at) == 1 else shapely.LineString(at)


def _step(element: Element) -> str:
    return "to" if isinstance(element, LineSink | LineSource) else "at"


def _check_names(layout: Layout, shore: Surveyed) -> None:
    taken = {island.name for island in shore.islands}
    named: list[tuple[Path, str]] = [
        (("shore", "open_edges", index), edge.name) for index, edge in enumerate(shore.edges)
    ]
    named += [(("elements", index), element.name) for index, element in enumerate(layout.elements)]
    named += [(("structures", index), solid.name) for index, solid in enumerate(layout.structures)]
    for path, name in named:
        if name in taken:
            raise DuplicateNameError("something else has this name", (*path, "name"))
        taken.add(name)


def _check_water(layout: Layout, shore: Surveyed, bodies: list[Body], size: float) -> None:
    """Refuse what lies outside surveyed water or on its open edges, and piers and outlines on its rings."""
    islands = [np.array(island.points) for island in shore.islands]
    water = polygon_of(np.array(shore.outer), islands)
    wide, openings = water.buffer(ASHORE * size), shapely.MultiLineString(list(_opening_lines(shore)))
    for index, element in enumerate(layout.elements):
        shape, path = _shape(element), ("elements", index, _step(element))
        if not wide.covers(shape):
            raise ElementOnLandError("it lies on land, or across it", path)
        if openings.distance(shape) <= ASHORE * size:
            raise ElementMisplacedError("an element cannot stand on an open edge", path)
        if isinstance(element, Vortex | Doublet) and water.boundary.distance(shape) <= TOUCHING * size:
            raise ElementMisplacedError("a vortex or doublet cannot stand on a bank", path)
    for body in bodies:
        if not water.intersects(body.shape):
            raise ElementOnLandError("the structure lies wholly on land", body.path)
        if body.radius > 0.0 and water.boundary.distance(body.shape) - body.radius <= TOUCHING * size:
            raise OverlappingStructuresError("the pier touches a bank", (*body.path, "radius"))
        if openings.distance(body.shape) - body.radius <= TOUCHING * size:
            raise OverlappingStructuresError("a structure cannot stand on an open edge", body.path)


def _opening_lines(shore: Surveyed) -> Iterator[list[tuple[float, float]]]:
    """Coordinates of each open edge."""
    outer: ComplexArray = np.array(shore.outer, dtype=np.complex128)
    for edge in shore.edges:
        run = np.take(outer, range(edge.first, edge.first + edge.count + 1), mode="wrap")
        yield [(point.real, point.imag) for point in run.tolist()]

"""Elements that stand on rings: they act on the water's side alone, as on any bank."""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.layout import Element, Layout, LineElement, LineSink, LineSource
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.ring_set import RingSet, inner_point, stretch_of
from forebay.flow.shores import Wall

DOUBLED = 2.0
"""Strength on a straight wall over that in the water: half of it goes to the land's side, unseen [-]."""


@dataclass(frozen=True, slots=True)
class Footing:
    """Where an element stands on a ring.

    wall : the edge as a wall;  ring : the ring
    inner : where in a solid what goes to the land's side is taken away again, x + iy [m]; None without one
    """

    wall: Wall
    ring: Ring
    inner: complex | None


_STRAIGHT = 1e-9
"""How far the edges under a line may bend, over its length, and still be one stretch [-]."""
Footings = dict[int, Footing]
"""By the index of the element in its layout."""


def footings(layout: Layout, rings: RingSet, reach: float) -> Footings:
    """Which elements stand on rings, within `reach` [m]."""
    found = {}
    for k, element in enumerate(layout.elements):
        footing = footing_of(element, rings, reach)
        if footing is not None:
            found[k] = footing
    return found


def footing_of(element: Element, rings: RingSet, reach: float) -> Footing | None:
    """Stretch of wall, straight over one edge or several, on which an element stands with all its length."""
    places = _points(element)
    straight = min(reach, _STRAIGHT * abs(places[-1] - places[0]))
    for ring, edge in rings.edges_at(places[0], reach):
        wall = stretch_of(ring, edge, straight)
        if bool(np.all(wall.distance(np.array(places)) <= reach)):
            return Footing(wall, ring, inner_point(ring) if ring.is_solid else None)
    return None


def _points(element: Element) -> tuple[complex, ...]:
    if isinstance(element, LineSource | LineSink):
        return element.start, element.end
    return (element.at,)


def put_on_rings(layout: Layout, rings: RingSet, touching: float, ashore: float) -> Layout:
    """The layout with elements that touch a ring, or lie within `ashore` [m] on land, exactly on it."""
    if not rings.rings:
        return layout
    elements = tuple(_moved(element, rings, touching, ashore) for element in layout.elements)
    unmoved = all(new is old for new, old in zip(elements, layout.elements, strict=True))
    return layout if unmoved else replace(layout, elements=elements)


def _moved(element: Element, rings: RingSet, touching: float, ashore: float) -> Element:
    if isinstance(element, LineSource | LineSink):
        return _moved_line(element, rings, touching, ashore)
    at = _on_ring(element.at, rings, touching, ashore)
    return element if at == element.at else replace(element, at=at)


def _moved_line(line: LineElement, rings: RingSet, touching: float, ashore: float) -> LineElement:
    start, end = (_on_ring(z, rings, touching, ashore) for z in (line.start, line.end))
    return line if (start, end) == (line.start, line.end) else replace(line, start=start, end=end)


def _on_ring(z: complex, rings: RingSet, touching: float, ashore: float) -> complex:
    reach = touching if bool(rings.inside(np.array([z]))[0]) else ashore
    wall = rings.wall_at(z, reach)
    return z if wall is None else complex(wall.nearest(np.asarray(z)))

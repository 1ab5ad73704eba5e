"""Distances between things of a layout, before anything is computed."""

import math

from forebay.flow.layout import (
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Element,
    LineSink,
    LineSource,
    OpenWater,
    Pier,
    Shore,
    StraightBank,
    Surveyed,
)


def bank_distance(shore: Shore, z: complex) -> float:  # noqa: PLR0911
    """Distance from a place in the water to the nearest bank [m]; infinite in open water."""
    match shore:
        case OpenWater():
            return math.inf
        case StraightBank(point=point, along=along):
            return _across(z, point, along)
        case Channel(point=point, along=along, width=width):
            return _within(_across(z, point, along), width)
        case Corner(vertex=vertex, along=along, interior_angle=angle):
            second = along * complex(math.cos(angle), math.sin(angle))
            return min(_to_ray(z, vertex, along), _to_ray(z, vertex, second))
        case DeadEnd(point=point, along=along, width=width):
            return min(_within(_across(z, point, along), width), _ahead(z, point, along))
        case Basin(corner=corner, along=along, length=length, width=width):
            ahead = _within(_ahead(z, corner, along), length)
            return min(_within(_across(z, corner, along), width), ahead)
        case Surveyed():
            rings = (shore.outer, *(island.points for island in shore.islands))
            return min(ring_distance(z, ring) for ring in rings)


def ring_distance(z: complex, ring: tuple[complex, ...]) -> float:
    """Distance from a place to the nearest edge of a ring [m]."""
    return min(_to_segment(z, start, end) for start, end in zip(ring, ring[1:] + ring[:1], strict=True))


def _across(z: complex, point: complex, along: complex) -> float:
    """Distance to the left of a line through `point` along `along`."""
    return ((z - point) * along.conjugate()).imag


def _ahead(z: complex, point: complex, along: complex) -> float:
    return ((z - point) * along.conjugate()).real


def _within(distance: float, width: float) -> float:
    return min(distance, width - distance)


def _to_ray(z: complex, vertex: complex, along: complex) -> float:
    if _ahead(z, vertex, along) < 0.0:
        return abs(z - vertex)
    return abs(_across(z, vertex, along))


def distance_to(thing: Element | Pier, z: complex) -> float:
    """Distance from a place to an element, or to the wall of a pier [m]."""
    match thing:
        case LineSource(start=start, end=end) | LineSink(start=start, end=end):
            return _to_segment(z, start, end)
        case Pier(at=at, radius=radius):
            return abs(z - at) - radius
        case _:
            return abs(z - thing.at)


def _to_segment(z: complex, start: complex, end: complex) -> float:
    chord = end - start
    share = ((z - start) * chord.conjugate()).real / abs(chord) ** 2
    return abs(z - start - min(max(share, 0.0), 1.0) * chord)


def ends_of(thing: Element | Pier) -> tuple[complex, ...]:
    """Both ends of a line element, the place of anything else [m]."""
    match thing:
        case LineSource(start=start, end=end) | LineSink(start=start, end=end):
            return start, end
        case _:
            return (thing.at,)


def element_bank_distance(shore: Shore, element: Element) -> float:
    """Distance of an element to the nearest bank [m]; of a line element, the nearer end's."""
    nearest = min(bank_distance(shore, end) for end in ends_of(element))
    if isinstance(shore, Corner):
        nearest = min(nearest, distance_to(element, shore.vertex))
    return nearest

"""Layouts turned, moved, mirrored, enlarged and added up; the flow must follow."""

from cmath import rect
from collections.abc import Callable
from dataclasses import replace

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Core,
    Corner,
    DeadEnd,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenWater,
    Shore,
    Sink,
    Source,
    StraightBank,
    Surveyed,
    Vortex,
)

Move = Callable[[complex], complex]


def _moved_element(element: Element, move: Move, turn: Move, spin: float, scale: float) -> Element:
    """The element at its new place; discharges grow with lengths, moments with their square."""
    match element:
        case Source() | Sink():
            return replace(element, at=move(element.at), discharge=element.discharge * scale)
        case LineSource() | LineSink():
            start, end = move(element.start), move(element.end)
            return replace(element, start=start, end=end, discharge=element.discharge * scale)
        case Vortex():
            core = element.core and Core(element.core.model, element.core.radius * scale)
            circulation = spin * element.circulation * scale
            return replace(element, at=move(element.at), circulation=circulation, core=core)
        case Doublet():
            return replace(element, at=move(element.at), moment=turn(element.moment) * scale**2)


def _moved(
    layout: Layout, shore: Shore, move: Move, turn: Move, *, spin: float = 1.0, scale: float = 1.0
) -> Layout:
    if layout.ambient.has_gradient:
        raise NotImplementedError
    elements = tuple(_moved_element(element, move, turn, spin, scale) for element in layout.elements)
    structures = tuple(
        replace(p, at=move(p.at), radius=p.radius * scale, circulation=spin * p.circulation * scale)
        for p in layout.piers
    )
    ambient = Ambient(turn(layout.ambient.velocity))
    return replace(layout, ambient=ambient, shore=shore, elements=elements, structures=structures)


def _moved_shore(shore: Shore, move: Move, turn: Move, scale: float = 1.0) -> Shore:
    match shore:
        case Surveyed():
            raise NotImplementedError
        case OpenWater():
            return shore
        case StraightBank():
            return StraightBank(move(shore.point), turn(shore.along))
        case Channel():
            return Channel(move(shore.point), turn(shore.along), shore.width * scale)
        case Corner():
            return Corner(move(shore.vertex), turn(shore.along), shore.interior_angle)
        case DeadEnd():
            return DeadEnd(move(shore.point), turn(shore.along), shore.width * scale)
        case Basin():
            return Basin(move(shore.corner), turn(shore.along), shore.length * scale, shore.width * scale)


def moved(layout: Layout, unit: complex, shift: complex) -> Layout:
    """The layout turned by the unit complex number and shifted."""

    def move(z: complex) -> complex:
        return unit * z + shift

    def turn(vector: complex) -> complex:
        return unit * vector

    return _moved(layout, _moved_shore(layout.shore, move, turn), move, turn)


def enlarged(layout: Layout, scale: float) -> Layout:
    """Every length `scale` times as long at the same speeds."""

    def move(z: complex) -> complex:
        return scale * z

    def turn(vector: complex) -> complex:
        return vector

    return _moved(layout, _moved_shore(layout.shore, move, turn, scale), move, turn, scale=scale)


def _mirrored_shore(shore: Shore) -> Shore:
    """The mirror image with the water on the left again."""
    match shore:
        case Surveyed():
            raise NotImplementedError
        case OpenWater():
            return shore
        case StraightBank():
            return StraightBank(shore.point.conjugate(), -shore.along.conjugate())
        case Channel():
            return Channel(shore.point.conjugate(), -shore.along.conjugate(), shore.width)
        case Corner():
            second = shore.along * rect(1.0, shore.interior_angle)
            return Corner(shore.vertex.conjugate(), second.conjugate(), shore.interior_angle)
        case DeadEnd():
            left = shore.point + 1j * shore.along * shore.width
            return DeadEnd(left.conjugate(), shore.along.conjugate(), shore.width)
        case Basin():
            left = shore.corner + 1j * shore.along * shore.width
            return Basin(left.conjugate(), shore.along.conjugate(), shore.length, shore.width)


def mirrored(layout: Layout) -> Layout:
    """The mirror image in the x axis: what turned anticlockwise turns clockwise."""

    def flip(z: complex) -> complex:
        return z.conjugate()

    return _moved(layout, _mirrored_shore(layout.shore), flip, flip, spin=-1.0)


def strengthened(layout: Layout, factor: float) -> Layout:
    """Current, discharges, circulations and moments times a positive factor."""
    elements = tuple(_strengthened_element(element, factor) for element in layout.elements)
    structures = tuple(replace(p, circulation=p.circulation * factor) for p in layout.piers)
    ambient = Ambient(layout.ambient.velocity * factor)
    return replace(layout, ambient=ambient, elements=elements, structures=structures)


def _strengthened_element(element: Element, factor: float) -> Element:
    match element:
        case Source() | Sink() | LineSource() | LineSink():
            return replace(element, discharge=element.discharge * factor)
        case Vortex():
            return replace(element, circulation=element.circulation * factor)
        case Doublet():
            return replace(element, moment=element.moment * factor)

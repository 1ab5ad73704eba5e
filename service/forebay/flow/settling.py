"""Elements that stand on a bank up to rounding of their coordinates are put on to it."""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.layout import Element, Layout, LineSink, LineSource
from forebay.flow.placement import TOUCHING, check_layout, scale_of
from forebay.flow.sheets.build import rings_of
from forebay.flow.sheets.checks import check_rings
from forebay.flow.sheets.ring_set import RingSet
from forebay.flow.sheets.standing import put_on_rings
from forebay.flow.shores import Frame, frame_of

ASHORE = 1e-5
"""How far on land, as part of the layout's scale, an element may lie and still be taken to stand on the bank:
a millimetre in a channel of 100 m, what map coordinates are rounded to [-]."""


@dataclass(frozen=True, slots=True)
class Ground:
    """A layout checked and settled in its frame.

    layout, frame : see there;  scale : length scale [m];  rings : of outlines and surveyed shores
    """

    layout: Layout
    frame: Frame
    scale: float
    rings: RingSet


def grounded(layout: Layout) -> Ground:
    """A layout with everything where it stands.

    Raises
    ------
    LayoutError : the subclass names the fault, `path` the place
    """
    middle, scale = scale_of(layout)
    frame = frame_of(layout.shore, middle, scale)
    rings = RingSet(rings_of(layout, frame, scale))
    moved = settled(layout, frame, scale, rings)
    check_layout(moved, frame, scale)
    check_rings(moved, rings, TOUCHING * scale)
    return Ground(moved, frame, scale, rings)


def settled(layout: Layout, frame: Frame, scale: float, rings: RingSet) -> Layout:
    """The layout with sources, sinks and lines that touch a bank, or lie just ashore, exactly on it.

    The same object if nothing moves. Piers stay where they are: one that touches a bank is refused.
    """
    elements = tuple(_settled(element, frame, scale) for element in layout.elements)
    unmoved = all(new is old for new, old in zip(elements, layout.elements, strict=True))
    moved = layout if unmoved else replace(layout, elements=elements)
    return put_on_rings(moved, rings, TOUCHING * scale, ASHORE * scale)


def _settled(element: Element, frame: Frame, scale: float) -> Element:
    if isinstance(element, LineSource | LineSink):
        start, end = _ashore(element.start, frame, scale), _ashore(element.end, frame, scale)
        same = start == element.start and end == element.end
        return element if same else replace(element, start=start, end=end)
    at = _ashore(element.at, frame, scale)
    return element if at == element.at else replace(element, at=at)


def _ashore(at: complex, frame: Frame, scale: float) -> complex:
    z = np.asarray(at)
    wet = bool(frame.wet(frame.map.forward(z), np.zeros(())))
    reach = (TOUCHING if wet else ASHORE) * scale
    return next((complex(wall.nearest(z)) for wall in frame.walls if float(wall.distance(z)) <= reach), at)

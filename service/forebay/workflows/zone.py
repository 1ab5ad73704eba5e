"""Zone of influence of an intake: where the speed, or what it adds to it, exceeds a limit."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from enum import StrEnum
from functools import partial

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Layout, LineSink, LineSource, Sink, Source, outflow
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.point_intake.field import near_field
from forebay.flow.point_intake.speeds import near_field_speeds, plane_speeds
from forebay.flow.point_intake.zone import Look, Zone, enclose_zone

WIDENINGS = 6
"""Times that a window which the zone reaches is doubled before the answer says so."""

START_REACH = 1.5
"""First half-width of the window over the distance at which the intake alone makes the limit [-]."""

LEAST_DISCHARGE = 1e-9
"""Discharge of an intake that is left out, over its own: its place stays in the flow [-]."""

PLANE_TOLERANCE, SPACE_TOLERANCE = 0.01, 0.2
"""Undecided part of the zone at which its search ends, in the plane and in three dimensions [-]."""


class ZoneSpeed(StrEnum):
    """Which speed is compared with the limit."""

    INDUCED = "induced"
    TOTAL = "total"


class ZoneStatus(StrEnum):
    """How far the zone is known."""

    COMPLETE = "complete"
    REACHES_WINDOW = "reaches-window"
    EMPTY = "empty"


@dataclass(frozen=True, slots=True)
class Enquiry:
    """What zone is wanted.

    element : name of a sink or source;  limit : speed [m/s];  speed : which one
    elevations : of point openings above the bed [m], None for the depth-mean flow
    half_width : of the window about the element [m], None to let it grow
    """

    element: str
    limit: float
    speed: ZoneSpeed = ZoneSpeed.INDUCED
    elevations: Mapping[str, float] | None = None
    half_width: float | None = None


@dataclass(frozen=True, slots=True)
class Estimate:
    """A number between two others; `least` and `largest` are proven in the plane, estimates in depth."""

    value: float
    least: float
    largest: float


@dataclass(frozen=True, slots=True)
class InfluenceZone:
    """Zone of influence.

    area : in plan [m2];  volume : [m3];  reach : largest distance in plan from the element's middle [m]
    window : x from, x to, y from, y to [m];  is_certified : whether the bounds are proven
    middle : of the element [m]
    """

    status: ZoneStatus
    area: Estimate
    volume: Estimate
    reach: Estimate
    window: tuple[float, float, float, float]
    is_certified: bool
    middle: complex = 0j


def find_influence_zone(layout: Layout, enquiry: Enquiry) -> InfluenceZone:
    """Where the speed about an intake or outfall exceeds a limit, within a window about it.

    Parameters
    ----------
    layout : the site
    enquiry : element, limit, which speed, and whether in three dimensions

    Returns
    -------
    InfluenceZone. `induced` is the length of the difference between the velocities with and without the
    element, the ambient current unchanged; `total` the speed itself, other elements' zones in the window
    included. In the plane every box is proven inside or outside by bounds of the velocity, but for boxes
    across walls that were solved for; there, and in three dimensions, bounds come from corners and are
    estimates.

    Raises
    ------
    UnknownNameError : no such source or sink, path ("element",)
    LayoutError : as `compile_layout`; a closed basin is unbalanced without the element
    ElevationMissingError : three dimensions, but no opening has an elevation
    """
    element = _named(layout, enquiry.element)
    middle = element.at if isinstance(element, Sink | Source) else 0.5 * (element.start + element.end)
    model = compile_layout(layout)
    look, tolerance = _look(model, enquiry)
    half = enquiry.half_width or _first_width(layout, element, enquiry.limit)
    enclose = partial(_enclosed, look, layout.depth, middle, enquiry, tolerance)
    zone, touches = enclose(half)
    for _ in range(WIDENINGS if enquiry.half_width is None else 0):
        if not touches:
            break
        half *= 2.0
        zone, touches = enclose(half)
    found = _described(zone, enquiry, layout.depth, middle, (half, touches))
    return replace(found, is_certified=found.is_certified and not model.rings)


def _named(layout: Layout, name: str) -> Sink | Source | LineSink | LineSource:
    for element in layout.elements:
        if element.name == name and isinstance(element, Sink | Source | LineSink | LineSource):
            return element
    raise UnknownNameError("no source or sink of the layout has this name", ("element",))


def _look(model: FlowModel, enquiry: Enquiry) -> tuple[Look, float]:
    without = _without(model.layout, enquiry.element) if enquiry.speed is ZoneSpeed.INDUCED else None
    if enquiry.elevations is None:
        return plane_speeds(model, without), PLANE_TOLERANCE
    return near_field_speeds(near_field(model, enquiry.elevations), without), SPACE_TOLERANCE


def _without(layout: Layout, name: str) -> FlowModel:
    """The flow with next to nothing through one element, so that shores and scales stay as they are."""
    elements = tuple(
        replace(element, discharge=LEAST_DISCHARGE * element.discharge)
        if element.name == name and isinstance(element, Sink | Source | LineSink | LineSource)
        else element
        for element in layout.elements
    )
    return compile_layout(replace(layout, elements=elements))


def _first_width(layout: Layout, element: Sink | Source | LineSink | LineSource, limit: float) -> float:
    alone = abs(outflow(element)) / layout.depth / (2.0 * np.pi * limit)
    span = 0.0 if isinstance(element, Sink | Source) else abs(element.end - element.start)
    return float(START_REACH * alone + 0.75 * span)


def _enclosed(
    look: Look, depth: float, middle: complex, enquiry: Enquiry, tolerance: float, half: float
) -> tuple[Zone, bool]:
    """Zone in a window of a half-width, and whether it reaches the window's edge."""
    low, high = _corners(middle, half)
    if enquiry.elevations is not None:
        low, high = np.append(low, 0.0), np.append(high, depth)
    zone = enclose_zone(look, low, high, enquiry.limit, tolerance)
    ends = (zone.inside - zone.inside_half, zone.inside + zone.inside_half, zone.undecided)
    return zone, any(_touches(boxes, low, high, 2.0 * zone.half) for boxes in ends)


def _touches(boxes: FloatArray, low: FloatArray, high: FloatArray, edge: FloatArray) -> bool:
    plan, reach = boxes[:, :2], edge[:2]
    return bool(np.any((plan < low[:2] + reach) | (plan > high[:2] - reach)))


def _corners(middle: complex, half: float) -> tuple[FloatArray, FloatArray]:
    centre = np.array([middle.real, middle.imag])
    return centre - half, centre + half


def _described(
    zone: Zone, enquiry: Enquiry, depth: float, middle: complex, window: tuple[float, bool]
) -> InfluenceZone:
    half, touches = window
    low, high = _corners(middle, half)
    size = Estimate(zone.size, zone.least, zone.largest)
    if enquiry.elevations is None:
        area, volume = size, Estimate(*(depth * part for part in (size.value, size.least, size.largest)))
    else:
        sure, maybe = zone.plan_area()
        area, volume = Estimate(0.5 * (sure + maybe), sure, maybe), size
    sure, maybe = zone.reach(middle)
    status = ZoneStatus.REACHES_WINDOW if touches else ZoneStatus.COMPLETE
    return InfluenceZone(
        status=ZoneStatus.EMPTY if zone.largest == 0.0 else status,
        area=area,
        volume=volume,
        reach=Estimate(0.5 * (sure + maybe), sure, maybe),
        window=(float(low[0]), float(high[0]), float(low[1]), float(high[1])),
        is_certified=enquiry.elevations is None,
        middle=middle,
    )

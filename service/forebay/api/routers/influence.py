"""influence/zone: where the speed about an intake exceeds a limit."""

from typing import Any

import numpy as np
from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.field import FieldModel
from forebay.api.schemas.influence import ZoneRequest, ZoneResult
from forebay.trade.applicability.site import Readings
from forebay.workflows.zone import InfluenceZone, find_influence_zone

BOXES = 100_000
"""Boxes that a zone may take to enclose, all windows together."""

EFFORT_A_BOX = 5_000
"""Work for one box in three dimensions, beyond the plane flow, counted in pairs of element and point."""


def compute(request: ZoneRequest, _media_type: str) -> Outcome:
    layout = request.flow_layout()
    found = find_influence_zone(layout, request.enquiry())
    resolved = request.model is FieldModel.POINT_INTAKE_3D
    edge = np.array([found.middle + found.reach.value])  # the depth mean must hold where the zone ends
    readings = Readings(points=edge, resolves_openings=resolved)
    return reviewed(request, layout, written(found), readings)


def written(zone: InfluenceZone) -> dict[str, Any]:
    """Fields of a zone."""
    sizes = {"area": zone.area, "volume": zone.volume, "reach": zone.reach}
    fields: dict[str, Any] = {"status": zone.status, "is_certified": zone.is_certified}
    for name, size in sizes.items():
        fields |= {name: size.value, f"{name}_least": size.least, f"{name}_largest": size.largest}
    return {**fields, "window": list(zone.window)}


def price(request: ZoneRequest) -> Price:
    in_depth = request.model is FieldModel.POINT_INTAKE_3D
    effort = request.layout.effort + (EFFORT_A_BOX * BOXES if in_depth else 10 * BOXES)
    return Price(BOXES, request.layout.size, effort=effort, lengthy=True, path=("layout",))


ZONE = Operation(
    operation_id="findInfluenceZone",
    path="/v1/influence/zone",
    summary="Area, volume and reach of the zone where an intake's speed exceeds a limit",
    description=(
        "The part of a window about a source or sink in which the speed that it induces, or the whole speed, "
        "exceeds a limit: area in plan, volume and reach, each with a least and a largest value. In the "
        "depth-mean flow these are proven; with `point-intake-3d` they are estimates. A zone that reaches "
        "the edge of its window says so: beyond it more may lie."
    ),
    request=ZoneRequest,
    result=ZoneResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, ZONE)

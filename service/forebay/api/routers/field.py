"""field/sample: the field of a layout at points."""

from dataclasses import replace
from typing import Any

from fastapi import APIRouter

from forebay.api.encoders.arrow import STREAM
from forebay.api.encoders.coverage import coverage
from forebay.api.encoders.csv_table import TABLE
from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.npy import ARRAY
from forebay.api.limits import Price
from forebay.api.media import COLUMNS, JSON
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.review import readings_of, reviewed
from forebay.api.routers.serving import serve
from forebay.api.schemas.field import FieldModel, FieldResult, SampleRequest
from forebay.api.schemas.places import At
from forebay.workflows.near_field import NearFieldSamples, sample_near_field
from forebay.workflows.sample import FieldSamples, Quantity, sample_field

OF_DENSITY = frozenset({Quantity.PRESSURE_GRADIENT_ALONG, Quantity.PRESSURE_GRADIENT_ACROSS})
"""Quantities that depend on the density of the water."""


EFFORT_NEAR = 2_000
"""Work for the near field of one opening at one place, counted in pairs of element and point."""


def compute(request: SampleRequest, _media_type: str) -> Outcome:
    if request.model is FieldModel.POINT_INTAKE_3D:
        return compute_near_field(request)
    layout = request.flow_layout()
    samples = sample_field(layout, request.at.positions(request.unit_system), request.wanted())
    readings = readings_of(samples.columns, assumed(request))
    return reviewed(request, layout, written(samples, request.at), readings)


def compute_near_field(request: SampleRequest) -> Outcome:
    """The same with the near field of openings of known elevation."""
    layout, units, heights = (
        request.flow_layout(),
        request.unit_system,
        request.at.heights(request.unit_system),
    )
    if heights is None:
        raise TypeError("a request without heights passed its validation")
    places = (request.at.positions(units), heights)
    samples = sample_near_field(layout, request.site_data().elevations, places, request.wanted())
    readings = replace(readings_of(samples.columns), resolves_openings=True)
    result = {**written(samples, request.at), "wall_leak": samples.wall_leak}
    return reviewed(request, layout, result, readings)


def assumed(request: SampleRequest) -> float | None:
    """Temperature [degC] that nobody gave, if what is asked for depends on it."""
    return request.layout.water.assumed_temperature if OF_DENSITY & set(request.wanted()) else None


def written(samples: FieldSamples | NearFieldSamples, at: At) -> dict[str, Any]:
    """Fields of a sample."""
    flagged = [{"index": flag.index, "status": flag.status} for flag in samples.flagged]
    return {**samples.columns, "shape": at.shape, "flagged": flagged}


def price(request: SampleRequest) -> Price:
    count = request.at.count
    columns = 5 + len(request.wanted())
    layout = request.layout
    near = EFFORT_NEAR * count * layout.size if request.model is FieldModel.POINT_INTAKE_3D else 0
    return Price(count, layout.size, values=columns * count, effort=layout.effort + near, path=("at",))


SAMPLE = Operation(
    operation_id="sampleField",
    path="/v1/field/sample",
    summary="Velocity and derived quantities at points, along a line or on a grid",
    description=(
        "Columns of the same length as the points. A point on land or on a singularity has null "
        "values and is listed in `flagged`, as is a point on a line element in the water, where the "
        "velocity jumps and the mean of both sides is given. Derivatives are exact, not differences. "
        "`head_change` and `pressure_coefficient` are Bernoulli against the ambient speed. With "
        '`"model": "point-intake-3d"` sources and sinks that have an `elevation` are points between bed and '
        "surface, at places with heights: columns `z` and `w` are added. With "
        "`Accept: text/csv` the columns come as a table. As `application/octet-stream` a body is the request "
        "on one line of JSON without `at`, a line feed, then all x and all y as float64, little-endian."
    ),
    request=SampleRequest,
    result=FieldResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, TABLE, ARRAY, STREAM, coverage(FieldResult)),
    readable=(JSON, COLUMNS),
)

router = APIRouter()
serve(router, SAMPLE)

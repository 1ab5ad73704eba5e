"""assessment: the whole job for one layout in one answer."""

from dataclasses import asdict, replace
from typing import Any

from fastapi import APIRouter

from forebay.api.limits import Price
from forebay.api.operation import Operation, Outcome
from forebay.api.review import COMPUTED, readings_of, reviewed
from forebay.api.routers import field, stagnation, stress, withdrawal
from forebay.api.routers.serving import serve
from forebay.api.schemas.assessment import CAUTIONS, AssessmentRequest, AssessmentResult
from forebay.api.schemas.contour import flow_contours
from forebay.workflows.assessment import NOWHERE, Assessment, Questions, assess_layout
from forebay.workflows.withdrawal import Withdrawal


def compute(request: AssessmentRequest, _media_type: str) -> Outcome:
    layout, units = request.flow_layout(), request.unit_system
    questions = Questions(
        transects=flow_contours(request.transects, units, "transects"),
        points=NOWHERE if request.at is None else request.at.positions(units),
        quantities=tuple(dict.fromkeys(str(quantity) for quantity in request.quantities)),
    )
    assessment = assess_layout(layout, questions)
    samples = assessment.samples
    assumed = request.layout.water.assumed_temperature
    readings = COMPUTED if samples is None else readings_of(samples.columns, assumed)
    readings = replace(readings, has_dissipation=samples is not None)
    return reviewed(request, layout, written(assessment, request), readings)


def written(assessment: Assessment, request: AssessmentRequest) -> dict[str, Any]:
    """Fields of an assessment."""
    samples = assessment.samples
    return {
        "withdrawal": withdrawal.written(Withdrawal(assessment.intakes)),
        "stagnation": stagnation.written(assessment.stagnation),
        "ends": [{"name": end.name, "inflow": end.inflow, "end_speed": end.speed} for end in assessment.ends],
        "boundary_residual": assessment.boundary_residual,
        "transects": [asdict(integral) for integral in assessment.transects],
        "field": samples and request.at and field.written(samples, request.at),
        "stress": samples and stress.all_written(assessment.stress, request.flow_layout().water),
        "cautions": CAUTIONS,
    }


def price(request: AssessmentRequest) -> Price:
    count = 0 if request.at is None else request.at.count
    values = (5 + len(request.quantities) + stress.VALUES_A_STATE) * count
    return Price(count, request.layout.size, values=values, lengthy=True, path=("at",))


ASSESS = Operation(
    operation_id="assessLayout",
    path="/v1/assessment",
    summary="The whole job for one layout in one answer",
    description=(
        "Where each intake's water comes from, where the water stands still, the far field; with "
        "`transects` the fluxes over them, with `at` the field and its stress there. Screening "
        "level: not for the safety of divers, swimmers or craft; regulators' criteria and licensed "
        "engineers decide."
    ),
    request=AssessmentRequest,
    result=AssessmentResult,
    compute=compute,
    price=price,
)

router = APIRouter()
serve(router, ASSESS)

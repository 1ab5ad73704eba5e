"""assessment: the whole job for one layout in one answer, or as a calculation sheet."""

from collections.abc import Callable
from dataclasses import asdict, replace
from functools import partial
from typing import Any

from fastapi import APIRouter

from forebay.api.encoders.envelope_json import ENVELOPE
from forebay.api.encoders.sheets import SHEETS
from forebay.api.limits import Price
from forebay.api.media import JSON
from forebay.api.operation import Operation
from forebay.api.outcome import Outcome
from forebay.api.problems import pointer
from forebay.api.review import COMPUTED, readings_of, reviewed
from forebay.api.routers import field, stagnation, withdrawal
from forebay.api.routers.asked_parts import ROUTES, Asked, ask_routes, each_once, prices, within
from forebay.api.routers.serving import serve
from forebay.api.schemas.assessment import CAUTIONS, AssessmentRequest, AssessmentResult, PartName
from forebay.api.schemas.contour import flow_contours
from forebay.api.summary import Told, summary_of
from forebay.api.units import UnitSystem
from forebay.api.verdicts import rule_verdicts, verdicts_of
from forebay.charts.arrival_curves import Course, draw_arrivals
from forebay.charts.options import FlowNetOptions, Picture
from forebay.charts.units import SI, US
from forebay.workflows.assessment import NOWHERE, Assessment, Questions, assess_layout
from forebay.workflows.assessment_picture import draw_assessment
from forebay.workflows.parts import Part, attempt
from forebay.workflows.withdrawal import Withdrawal
from forebay.workflows.zones_picture import draw_intake_zones

NET_CAPTION = (
    "Flow net: streamlines of equal flux, equipotentials, speed, stagnation points, dividing streamlines. "
    "Plan, depth-mean potential flow."
)

ZONES_CAPTION = "Zones of the intakes: the water that each takes. Plan, depth-mean potential flow."

ARRIVALS_CAPTION = (
    "Arrival of each release at the intakes that it reaches: share against time, by the mean flow."
)

PICTURE_SIZE = (640, 520)
"""Width and height of a sheet's pictures [px], at which its letters are as large as those of a table."""


def compute(request: AssessmentRequest, media_type: str) -> Outcome:
    layout = request.flow_layout()
    assessment = assess_layout(layout, questions_of(request))
    samples = assessment.field.answer
    assumed = request.layout.water.assumed_temperature
    readings = COMPUTED if samples is None else readings_of(samples.columns, assumed)
    asked = ask_routes(request)
    outcome = reviewed(request, layout, written(assessment, request) | asked_written(asked), readings)
    outcome = replace(outcome, warnings=each_once((*outcome.warnings, *asked.notices())))
    outcome = replace(outcome, result=told(assessment, asked, outcome, request) | outcome.result)
    return (
        outcome if media_type == JSON else replace(outcome, pictures=pictures_of(assessment, asked, request))
    )


def pictures_of(assessment: Assessment, asked: Asked, request: AssessmentRequest) -> dict[str, bytes]:
    """Pictures of a sheet by their captions; a picture that failed is a caption that says so."""
    units = US if request.unit_system is UnitSystem.US else SI
    layout, title, intakes = request.flow_layout(), request.sheet.site, assessment.withdrawal.answer
    net = FlowNetOptions(title=title or "Flow net", size=PICTURE_SIZE, units=units)
    zones = replace(net, title=title or "Zones of the intakes")
    drawings = {NET_CAPTION: partial(draw_assessment, layout, assessment, net)}
    if intakes:
        drawings[ZONES_CAPTION] = partial(draw_intake_zones, layout, intakes, zones)
    if courses := courses_of(asked.result(PartName.SPILL)):
        drawings[ARRIVALS_CAPTION] = partial(draw_arrivals, courses, replace(net, title=title or "Arrivals"))
    return dict(picture_of(caption, draw) for caption, draw in drawings.items())


def courses_of(spill: dict[str, Any] | None) -> tuple[Course, ...]:
    """Arrivals of every release at every intake that it reaches."""
    return tuple(
        Course(f"{release['name']} at {column['intake']}", release["curve"]["time"], column["share"], last)
        for release in (spill or {}).get("releases", ())
        for column in release["curve"]["by_intake"]
        for last in (at["last_time"] for at in release["arrivals"] if at["intake"] == column["intake"])
    )


def picture_of(caption: str, draw: Callable[[], Picture]) -> tuple[str, bytes]:
    """Caption and bytes of a picture; no bytes, and the reason in the caption, if it could not be drawn."""
    drawn = attempt(draw)
    if drawn.answer is None:
        return f"{caption} This picture could not be drawn: {drawn.reason} ({drawn.problem}).", b""
    return caption, drawn.answer.data


def questions_of(request: AssessmentRequest) -> Questions:
    """What a request asks beside intakes and stagnation points, in SI."""
    units = request.unit_system
    return Questions(
        transects=flow_contours(request.transects, units, "transects"),
        points=NOWHERE if request.at is None else request.at.positions(units),
        quantities=tuple(dict.fromkeys(str(quantity) for quantity in request.quantities)),
    )


def told(
    assessment: Assessment, asked: Asked, outcome: Outcome, request: AssessmentRequest
) -> dict[str, Any]:
    """Summary, verdicts, and what became of each part."""
    parts = [
        part_written(name, asked.parts[name] if name in ROUTES else getattr(assessment, name))
        for name in PartName
    ]
    layout, units = request.flow_layout(), request.unit_system
    verdicts = [*verdicts_of(assessment, layout), *rule_verdicts(outcome.result, units)]
    about = Told(layout, assessment, outcome.result, outcome.warnings, units)
    return {"summary": summary_of(about, parts, verdicts), "verdicts": verdicts, "parts": parts}


def part_written(name: PartName, part: Part[Any]) -> dict[str, Any]:
    """Fields of what became of a part."""
    place = pointer(within(name, part.path)) if part.path else None
    fields = {"part": name, "status": part.status, "problem": part.problem, "reason": part.reason}
    return {**fields, "pointer": place}


def asked_written(asked: Asked) -> dict[str, Any]:
    """Answers of the parts that have routes of their own; None for a part without one."""
    return {str(name): asked.result(name) for name in ROUTES}


def written(assessment: Assessment, request: AssessmentRequest) -> dict[str, Any]:
    """Answers of the parts; None for a part without one."""
    flow, search, intakes = assessment.flow.answer, assessment.stagnation.answer, assessment.withdrawal.answer
    transects, samples = assessment.transects.answer, assessment.field.answer
    recirculation = assessment.recirculation.answer
    ends = flow and [{"name": end.name, "inflow": end.inflow, "end_speed": end.speed} for end in flow.ends]
    return {
        "withdrawal": None if intakes is None else withdrawal.written(Withdrawal(intakes)),
        "recirculation": None if recirculation is None else [asdict(found) for found in recirculation],
        "stagnation": search and stagnation.written(search),
        "ends": ends,
        "boundary_residual": flow and flow.boundary_residual,
        "transects": transects and [asdict(integral) for integral in transects],
        "field": samples and request.at and field.written(samples, request.at),
        "cautions": CAUTIONS,
    }


def price(request: AssessmentRequest) -> Price:
    count = 0 if request.at is None else request.at.count
    values = (5 + len(request.quantities)) * count
    asked = prices(request)
    return Price(
        count,
        request.layout.size,
        values=values + sum(price.values for price in asked),
        effort=request.layout.effort + sum(price.effort for price in asked),
        lengthy=True,
        path=("at",),
    )


ASSESS = Operation(
    operation_id="assessLayout",
    path="/v1/assessment",
    summary="The whole job for one layout in one answer",
    description=(
        "Where each intake's water comes from, where the water stands still, the far field; with "
        "`transects` the fluxes over them, with `at` the field and its stress there. `parts` says of "
        "each part whether it was computed; one that fails does not sink the others. `summary` tells "
        "the whole in ten lines, `verdicts` every rule that was applied. Screening level: not for the "
        "safety of divers, swimmers or craft; regulators' criteria and licensed engineers decide."
    ),
    request=AssessmentRequest,
    result=AssessmentResult,
    compute=compute,
    price=price,
    encoders=(ENVELOPE, *SHEETS),
)

router = APIRouter()
serve(router, ASSESS)

"""Catalogues: water properties and the limits of this service."""

from dataclasses import asdict
from typing import Annotated, Any

from fastapi import APIRouter, Query, Request
from starlette.responses import Response

from forebay.api import envelope
from forebay.api.media import JSON, negotiate
from forebay.api.problems import Problem
from forebay.api.refusals import written_facts
from forebay.api.routers.serving import documented
from forebay.api.schemas.catalogues import CriteriaResult, LimitsResult, WaterResult
from forebay.api.schemas.common import Answer
from forebay.api.schemas.review import WarningsResult
from forebay.api.units import UnitSystem
from forebay.api.validation import require_known_once
from forebay.flow.errors import FlowError
from forebay.trade.criteria import NOT_LISTED, Criterion
from forebay.trade.criteria_catalogue import list_criteria
from forebay.trade.submergence.rules import NOT_LISTED as RULES_NOT_LISTED
from forebay.trade.submergence.rules import RULES, Rule
from forebay.trade.warning_catalogue import WARNINGS
from forebay.trade.water import LEFT_OUT, SOURCES, water_properties

router = APIRouter(tags=["catalogues"])

Temperature = Annotated[
    float,
    Query(
        ge=-50,
        le=200,
        allow_inf_nan=False,
        description="Temperature",
        json_schema_extra={"unit": "Cel"},
        examples=[12],
    ),
]
Salinity = Annotated[
    float,
    Query(
        ge=0,
        le=100,
        allow_inf_nan=False,
        description="Salinity",
        json_schema_extra={"unit": "g/kg"},
        examples=[0],
    ),
]
Units = Annotated[UnitSystem, Query(description="Units of the parameters and of the answer")]
Digits = Annotated[
    int,
    Query(
        ge=4,
        le=17,
        description="Significant digits of the answer's numbers; 17 gives each exactly",
        json_schema_extra={"unit": "1"},
        examples=[9],
    ),
]
WATER_PARAMETERS = ("temperature", "salinity", "unit_system", "digits")
"""Query parameters of GET /v1/water."""

PLAIN = envelope.Written()
"""How an answer is written for which nothing can be asked."""


def answer(
    request: Request, model: type[Answer], result: dict[str, Any], written: envelope.Written = PLAIN
) -> Response:
    """Envelope of a catalogue."""
    media_type = negotiate(request.headers.get("accept"), (JSON,))
    document = envelope.document(model, result, request=written)
    return Response(envelope.encode(document), media_type=media_type)


@router.get(
    "/v1/water",
    operation_id="readWater",
    summary="Properties of water",
    description="Density, viscosity and what else the computations take from temperature and salinity, each "
    "with its source; what is neglected is named.",
    **documented(WaterResult),
)
async def read_water(
    *,
    temperature: Temperature,
    salinity: Salinity = 0.0,
    unit_system: Units = UnitSystem.SI,
    digits: Digits = 9,
    request: Request,
) -> Response:
    require_known_once(request.query_params.multi_items(), WATER_PARAMETERS)
    result = water(temperature, salinity, unit_system)
    return answer(request, WaterResult, result, envelope.Written(unit_system, digits))


def water(temperature: float, salinity: float, units: UnitSystem) -> dict[str, Any]:
    """Properties in SI with their sources; an error names the query parameter."""
    try:
        properties = water_properties(units.read(temperature, "Cel"), salinity)
    except FlowError as error:
        errors = ({"parameter": str(error.path[0]), "detail": error.detail},)
        raise Problem(error.code, error.detail, errors=errors, facts=written_facts(error, units)) from None
    return {**asdict(properties), "sources": SOURCES, "left_out": LEFT_OUT}


@router.get(
    "/v1/criteria",
    operation_id="listCriteria",
    summary="Published limits for fish-protection screens, and rules for submergence",
    description="Every criterion that a check can be asked for by its id, as published and in SI, with the "
    "document it stands in and what is known of its standing.",
    **documented(CriteriaResult),
)
async def read_criteria(request: Request) -> Response:
    result = {
        "criteria": [criterion(record) for record in list_criteria()],
        "submergence_rules": [submergence_rule(rule) for rule in RULES],
        "not_listed": NOT_LISTED | RULES_NOT_LISTED,
    }
    return answer(request, CriteriaResult, result)


def criterion(record: Criterion) -> dict[str, Any]:
    """Fields of one limit."""
    copied = ("id", "body", "document", "year", "jurisdiction", "applies_to", "quantity", "definition")
    fields = {name: getattr(record, name) for name in copied}
    return fields | {
        "limit": record.limit_si,
        "unit": record.unit_si,
        "published_limit": f"{record.limit} {record.unit}",
        "confidence": record.confidence,
        "cleaned": record.cleaned,
        "note": record.note,
        "source": record.source,
    }


def submergence_rule(rule: Rule) -> dict[str, Any]:
    """Fields of one rule."""
    copied = ("id", "formula", "datum", "standing", "note", "source")
    fields = {name: getattr(rule, name) for name in copied}
    return fields | {"applies_to": sorted(rule.applies_to)}


@router.get(
    "/v1/warnings",
    operation_id="listWarnings",
    summary="Every kind of warning with its threshold and source",
    description="What each code in `warnings` of an answer means, from which value on it is given, and who "
    "says so. Codes are permanent.",
    **documented(WarningsResult),
)
async def read_warnings(request: Request) -> Response:
    return answer(request, WarningsResult, {"warnings": [asdict(kind) for kind in WARNINGS]})


@router.get(
    "/v1/limits",
    operation_id="readLimits",
    summary="What one request may ask for",
    description="Bytes, points, elements and seconds beyond which this installation refuses a request. "
    "`POST /v1/estimate` prices a request against them.",
    **documented(LimitsResult),
)
async def read_limits(request: Request) -> Response:
    return answer(request, LimitsResult, request.app.state.limits._asdict())

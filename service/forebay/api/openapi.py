"""The OpenAPI document: what the routes declare, plus the schemas that they refer to by name."""

from typing import Any

from fastapi import FastAPI
from fastapi.openapi.utils import get_openapi
from pydantic import BaseModel
from pydantic.json_schema import models_json_schema

from forebay import __version__
from forebay.api.openapi_dialect import settle_discriminators, translated
from forebay.api.problems import MEDIA_TYPE, Problem, ProblemKind, catalogue
from forebay.api.routers.serving import ENVELOPES, REQUESTS, problem_responses
from forebay.api.schemas.boundary import BoundaryValue
from forebay.api.schemas.catalogues import ProblemDocument, ProblemExplanation, Provenance, WarningValue

REFERENCE = "#/components/schemas/{model}"

DESCRIPTION = """\
Forebay screens sites for water intakes and outfalls by depth-mean plane potential flow: where each
intake's water comes from, how much outfall water comes back, what the screens see, where the water stands
still.

**Screening level.** The flow is steady, inviscid and uniform over the depth. Answers are not for the safety
of divers, swimmers or craft. Regulators' criteria and licensed engineers decide; a warning in an answer says
where its numbers should not be trusted.

Conventions: x, y in a local plan grid; angles anticlockwise from +x; circulation anticlockwise positive; flux
positive towards the right of the direction of travel; stress positive in tension. The schemas give SI units;
`"unit_system": "us"` reads and answers in ft, ft/s, ft3/s, lbf/ft2, degF. `units` in every answer names the
unit of every number in UCUM codes. A value that does not exist is `null` with a status. Errors are problem
details (RFC 9457) whose `type` can be read.
"""


TAGS = {
    "assessment": "The whole job for one layout",
    "field": "Velocity and what follows from it",
    "stagnation": "Where the water stands still",
    "contour": "Circulation and flux",
    "stress": "Strain and stress",
    "withdrawal": "Where intakes' water comes from",
    "spill": "Whether and when a spill arrives",
    "screen": "Fish-protection screens",
    "submergence": "Inlets under a free surface",
    "influence": "How far an intake is felt",
    "layout": "Judging a layout before computing",
    "estimate": "What a request would cost",
    "chart": "Pictures",
    "catalogues": "Limits, warnings, criteria, water",
    "operation": "Running the service",
}
"""Groups of routes in the order of the page."""

EVERYWHERE = (413, 500)
"""Statuses of the problems that every route can answer with, whatever it does."""

ACCESS = (401, 403, 429)
"""Statuses of the problems that every route but the open ones can answer with, if the service has tokens."""

OPEN_ROUTES = frozenset({"isAlive", "isReady", "readIndex", "explainProblem"})
"""Operations that need no token: for who watches the service, who arrives, and who is told of a problem."""

TOKEN = {
    "type": "http",
    "scheme": "bearer",
    "description": "Where the service has been given tokens; on loopback it needs none",
}

NEXT = {
    "searchStagnation": "Where the water of this layout stands still",
    "traceWithdrawal": "Where the water of its intakes comes from",
    "assessLayout": "The whole job for it",
    "drawFlowNet": "Its picture",
}
"""Operations that take the body of a review as it is."""


def build_document(app: FastAPI) -> dict[str, Any]:
    """OpenAPI 3.1 document of an application."""
    document = get_openapi(
        title="Forebay",
        version=__version__,
        summary="Screening of water intakes and outfalls",
        description=DESCRIPTION,
        routes=app.routes,
        tags=[{"name": name, "description": text} for name, text in TAGS.items()],
        servers=[{"url": ".", "description": "Where this document was read"}],
        contact={"name": "Those who run this service"},
        license_info={"name": "Apache-2.0", "identifier": "Apache-2.0"},
    )
    schemas = document.setdefault("components", {}).setdefault("schemas", {})
    for unused in ("HTTPValidationError", "ValidationError"):
        schemas.pop(unused, None)
    schemas |= _model_schemas()
    schemas |= {name: _envelope(result.__name__) for name, result in ENVELOPES.items()}
    schemas["Problem"] = schemas.pop("ProblemDocument")
    document["components"]["schemas"] = dict(sorted(schemas.items()))
    document["components"]["securitySchemes"] = {"bearerToken": TOKEN}
    document["security"] = [{}, {"bearerToken": []}]
    for item in document["paths"].values():
        for operation in item.values():
            _complete(operation)
    translated_document: dict[str, Any] = translated(document)
    settle_discriminators(translated_document["components"]["schemas"])
    return translated_document


def _model_schemas() -> dict[str, Any]:
    models: list[type[BaseModel]] = [*REQUESTS.values(), *ENVELOPES.values()]
    models += [BoundaryValue, ProblemDocument, ProblemExplanation, Provenance, WarningValue]
    _, schema = models_json_schema([(model, "validation") for model in models], ref_template=REFERENCE)
    definitions: dict[str, Any] = schema["$defs"]
    return definitions


def _envelope(result: str) -> dict[str, Any]:
    references = {
        name: {"$ref": REFERENCE.format(model=name)}
        for name in (result, "BoundaryValue", "WarningValue", "Provenance")
    }
    return {
        "type": "object",
        "required": ["result", "units", "warnings", "provenance"],
        "properties": {
            "result": references[result],
            "boundary": references["BoundaryValue"],
            "units": {
                "type": "object",
                "additionalProperties": {"type": "string"},
                "description": "UCUM code of every numeric field of result and boundary, by name",
                "examples": [{"u": "m/s"}],
            },
            "warnings": {"type": "array", "items": references["WarningValue"]},
            "provenance": references["Provenance"],
        },
    }


def _complete(operation: dict[str, Any]) -> None:
    """Declare what holds for all routes: access, failures, and after a review what to do next."""
    is_open, responses = operation["operationId"] in OPEN_ROUTES, operation["responses"]
    if is_open:
        operation["security"] = []
    _declare_failures(responses, EVERYWHERE if is_open else (*EVERYWHERE, *ACCESS))
    _name_problems(responses)
    if operation["operationId"] == "reviewLayout":
        responses["200"]["links"] = {
            name: {"operationId": name, "requestBody": "$request.body", "description": text}
            for name, text in NEXT.items()
        }


def _declare_failures(responses: dict[str, Any], statuses: tuple[int, ...]) -> None:
    """Add the problems that any route can answer with, in the order of their statuses."""
    known = {kind.status for kind in catalogue().values()}
    for status, response in problem_responses(tuple(known & set(statuses))).items():
        responses.setdefault(str(status), response)
    ordered = sorted(responses.items())
    responses.clear()
    responses.update(ordered)


def _name_problems(responses: dict[str, Any]) -> None:
    """Say which codes a status can mean; drop the framework's own error, which never leaves the service."""
    for status, response in list(responses.items()):
        if "application/json" in response.get("content", {}) and status == "422":
            del responses[status]
        elif MEDIA_TYPE in response.get("content", {}):
            kinds = {code: kind for code, kind in catalogue().items() if kind.status == int(status)}
            response["description"] = "; ".join(f"`{code}`: {kind.title}" for code, kind in kinds.items())
            response["content"][MEDIA_TYPE]["example"] = _example(*next(iter(kinds.items())))


def _example(code: str, kind: ProblemKind) -> dict[str, Any]:
    """A problem of this kind as it arrives."""
    problem = Problem(code, kind.cause)
    if code == "invalid-request":
        errors = ({"pointer": "#/layout/depth", "detail": "Input should be greater than or equal to 0.001"},)
        problem = Problem(code, "1 error in the request", errors=errors)
    return problem.body("6f1c0c1e-6c1f-4a53-9d3b-3c2f0d1f6d0a")

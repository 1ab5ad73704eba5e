"""Answers of the catalogues: water, limits, warnings, criteria, and the parts every envelope has."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.quantities import (
    AccelerationValue,
    BytesValue,
    CountValue,
    DensityValue,
    KinematicValue,
    OwnUnitValue,
    PressureValue,
    SalinityValue,
    SurfaceTensionValue,
    TemperatureValue,
    TimeValue,
    ViscosityValue,
)
from forebay.trade.submergence.inlet import Datum, InletKind
from forebay.trade.submergence.rules import Standing


class WaterResult(Answer):
    """Properties of water at atmospheric pressure."""

    temperature: TemperatureValue
    salinity: SalinityValue
    density: DensityValue
    dynamic_viscosity: ViscosityValue
    kinematic_viscosity: KinematicValue
    surface_tension: SurfaceTensionValue
    vapour_pressure: PressureValue
    gravity: AccelerationValue
    sources: Annotated[dict[str, str], Field(description="Publication of each property")]
    left_out: Annotated[str, Field(description="What the properties do not contain")]


class LimitsResult(Answer):
    """What one request may ask for."""

    max_body: Annotated[BytesValue, Field(description="Bytes of a request body")]
    max_points: Annotated[CountValue, Field(description="Points of one request")]
    max_elements: Annotated[CountValue, Field(description="Elements and structures of a layout")]
    max_pairs: Annotated[CountValue, Field(description="Pairs of element and point")]
    max_values: Annotated[CountValue, Field(description="Numbers in an answer")]
    deadline: Annotated[TimeValue, Field(description="Longest computation, waiting for a worker included")]
    workers: Annotated[CountValue, Field(description="Processes for large computations")]
    queue: Annotated[CountValue, Field(description="Large computations that may wait")]
    worker_memory: Annotated[BytesValue, Field(description="Memory of one computation in a worker process")]
    token_concurrency: Annotated[CountValue, Field(description="Computations of one token at a time")]
    max_vertices: Annotated[CountValue, Field(description="Vertices of a surveyed shore as given")]
    max_solved_vertices: Annotated[CountValue, Field(description="After mending and simplification")]


class CriterionValue(Answer):
    """One published limit for fish-protection screens."""

    id: Annotated[str, Field(examples=["epa-new-large-through-slot"])]
    body: Annotated[str, Field(description="Who issued it")]
    document: str
    year: Annotated[int | None, Field(examples=[1997], json_schema_extra={"unit": "a"})]
    jurisdiction: str
    applies_to: str
    quantity: Annotated[str, Field(description="What is limited", examples=["max-approach"])]
    definition: Annotated[str, Field(description="What exactly is limited")]
    limit: OwnUnitValue
    unit: Annotated[str, Field(description="UCUM code of the unit of `limit`", examples=["m/s"])]
    published_limit: Annotated[str, Field(description="As the document writes it", examples=["0.4 ft/s"])]
    confidence: Annotated[str, Field(description="Whether the document was read", examples=["document-read"])]
    cleaned: Annotated[str, Field(description="Screens it is for: any, active, passive", examples=["any"])]
    note: str
    source: str


class SubmergenceRuleValue(Answer):
    """Published rule for the least submergence of an inlet."""

    id: Annotated[str, Field(examples=["hydraulic-institute"])]
    formula: str
    datum: Annotated[Datum, Field(description="Of inlets that are not upright; else the lip")]
    applies_to: Annotated[list[InletKind], Field(examples=[["bell"]])]
    standing: Annotated[Standing, Field(description="quoted: read in texts that quote it")]
    note: str
    source: str


class CriteriaResult(Answer):
    """Published limits and rules, and documents from which none is listed."""

    criteria: list[CriterionValue]
    submergence_rules: list[SubmergenceRuleValue]
    not_listed: Annotated[dict[str, str], Field(description="Document, and why it is not listed")]


class WarningValue(Answer):
    """A number that was computed but should not be trusted as it stands."""

    code: Annotated[
        str, Field(description="Permanent name; GET /v1/warnings explains it", examples=["rigid-lid"])
    ]
    severity: Annotated[str, Field(description="note, caution or unsafe-to-use", examples=["caution"])]
    message: Annotated[
        str, Field(description="What an engineer reads; its numbers are in SI and name their units")
    ]
    pointer: Annotated[str, Field(description="What it is about", examples=["#/layout/elements/0"])]
    value: Annotated[OwnUnitValue, Field(description="Number compared, in `unit`")]
    limit: Annotated[OwnUnitValue, Field(description="Number it was compared with, in `unit`")]
    unit: Annotated[
        str | None,
        Field(
            description="UCUM code of `value` and `limit` in the request's unit system; 1 for pure numbers",
            examples=["m"],
        ),
    ]
    source: Annotated[str, Field(description="Where the limit is published")]


class Provenance(Answer):
    """What computed the answer, and of what."""

    service: Annotated[str, Field(examples=["forebay"])]
    version: Annotated[str, Field(examples=["0.1.0"])]
    layout_digest: Annotated[
        str | None,
        Field(description="Digest of the layout in SI; absent where there is none", examples=["sha256:…"]),
    ] = None


class ProblemError(Answer):
    """One thing that is wrong."""

    detail: str
    pointer: Annotated[
        str | None, Field(description="JSON pointer into the body", examples=["#/layout/elements/0/depth"])
    ] = None
    parameter: Annotated[str | None, Field(description="Query parameter", examples=["temperature"])] = None


class ProblemDocument(Answer):
    """A problem (RFC 9457); further members are facts that a client can use, such as `limit` and `asked`."""

    model_config = {"extra": "allow", "title": "Problem"}

    type: Annotated[
        str, Field(description="Address that explains the code", examples=["/problems/invalid-request"])
    ]
    title: str
    status: Annotated[int, Field(examples=[422], json_schema_extra={"unit": "1"})]
    detail: str
    instance: Annotated[str, Field(description="Identifies this occurrence by its request id")]
    errors: Annotated[list[ProblemError], Field(max_length=20)] = []


class ProblemExplanation(Answer):
    """What a problem code means."""

    type: Annotated[str, Field(examples=["/problems/too-large"])]
    title: str
    status: Annotated[int, Field(examples=[422], json_schema_extra={"unit": "1"})]
    cause: Annotated[str, Field(description="Why it arises")]
    cure: Annotated[str, Field(description="What a client can do about it")]

"""Request and answer of assessment."""

from collections.abc import Mapping
from enum import StrEnum
from types import MappingProxyType
from typing import Annotated, ClassVar

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.contour import Contours, ContourValue
from forebay.api.schemas.field import FieldResult
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.places import At
from forebay.api.schemas.quantities import DischargeValue, FluxValue, OwnUnitValue, RatioValue, SpeedValue
from forebay.api.schemas.screen import ScreenQuestions, ScreenResult
from forebay.api.schemas.sheet import SheetRequest
from forebay.api.schemas.spill import SpillQuestions, SpillResult
from forebay.api.schemas.stagnation import StagnationResult
from forebay.api.schemas.stress import StressQuestions, StressResult
from forebay.api.schemas.submergence import SubmergenceQuestions, SubmergenceResult
from forebay.api.schemas.withdrawal import WithdrawalResult
from forebay.workflows.parts import PartStatus
from forebay.workflows.sample import Quantity

CAUTIONS = (
    "Screening level: steady, frictionless flow, uniform over the depth.",
    "Not for the safety of divers, swimmers or craft.",
    "Regulators' criteria and licensed engineers decide.",
)
"""What no number of an assessment can take away."""


class PartName(StrEnum):
    """Parts of an assessment, in the order in which they are told."""

    FLOW = "flow"
    STAGNATION = "stagnation"
    WITHDRAWAL = "withdrawal"
    RECIRCULATION = "recirculation"
    TRANSECTS = "transects"
    FIELD = "field"
    STRESS = "stress"
    SPILL = "spill"
    SCREEN = "screen"
    SUBMERGENCE = "submergence"


class AssessmentRequest(LayoutRequest):
    """The whole job for one layout."""

    transects: Annotated[
        Contours, Field(description="Contours over which circulation and flux are wanted")
    ] = []
    at: Annotated[At | None, Field(description="Where the field and its stress are wanted")] = None
    quantities: Annotated[
        list[Quantity],
        Field(max_length=len(Quantity), fail_fast=True, description="Further columns of the field"),
    ] = []
    stress: Annotated[
        StressQuestions | None,
        Field(description="As in /v1/stress/tensor, without layout, states and `at`, which is the one above"),
    ] = None
    spill: Annotated[
        SpillQuestions | None, Field(description="As in /v1/spill/arrivals, without the layout")
    ] = None
    screen: Annotated[
        ScreenQuestions | None, Field(description="As in /v1/screen/check, without the layout")
    ] = None
    submergence: Annotated[
        SubmergenceQuestions | None, Field(description="As in /v1/submergence/check, without the layout")
    ] = None
    sheet: Annotated[
        SheetRequest, Field(description="Title block of the calculation sheet (`Accept: text/html` or PDF)")
    ] = SheetRequest()


class EndValue(Answer):
    """A far end of the water."""

    name: Annotated[str, Field(examples=["upstream"])]
    inflow: Annotated[FluxValue, Field(description="Into the water, per unit depth; null where unbounded")]
    end_speed: Annotated[SpeedValue, Field(description="Current there")]


class RecirculationValue(Answer):
    """Water of an outfall in an intake."""

    intake: Annotated[str, Field(examples=["town intake"])]
    outfall: Annotated[str, Field(examples=["works outfall"])]
    share: Annotated[RatioValue, Field(description="Part of the intake's water")]
    share_error: Annotated[RatioValue, Field(description="Largest error of the share", examples=[1e-9])]
    discharge: Annotated[DischargeValue, Field(description="The same as a discharge")]


class PartValue(Answer):
    """What became of one part."""

    part: Annotated[
        PartName, Field(description="Member of the result that holds its answer", examples=["withdrawal"])
    ]
    status: Annotated[
        PartStatus, Field(description="`ok`; `failed`, which does not sink the others; `not-asked`")
    ]
    problem: Annotated[
        str | None,
        Field(description="Code of what went wrong, explained at /problems/{code}; null unless failed"),
    ]
    reason: Annotated[str | None, Field(description="Why there is no answer; null if there is one")]
    pointer: Annotated[
        str | None,
        Field(description="Place at fault in the request; null if none", examples=["#/layout/water"]),
    ]


class AssessmentVerdict(Answer):
    """Whether something is as a rule wants it."""

    part: Annotated[PartName, Field(description="Where it belongs", examples=["stagnation"])]
    subject: Annotated[str, Field(description="What is judged", examples=["stagnation points"])]
    criterion: Annotated[str, Field(description="Whose rule it is", examples=["forebay"])]
    rule: Annotated[str, Field(description="What the rule wants", examples=["the independent count is met"])]
    value: OwnUnitValue
    limit: OwnUnitValue
    margin: Annotated[OwnUnitValue, Field(description="Room left, negative where the rule is not met")]
    unit: Annotated[str, Field(description="UCUM code of value, limit and margin", examples=["1"])]
    passed: Annotated[bool | None, Field(alias="pass", description="Null if it could not be judged")]
    note: Annotated[str, Field(description="Why it was not judged, or how well the rule is known")]
    source: Annotated[str, Field(description="Where the rule stands")]


class AssessmentResult(Answer):
    """Everything about one site. A part without an answer is null; `parts` says why.

    `units` names a field of a part as `part.field` where its unit is another there than elsewhere.
    """

    SCOPES: ClassVar[Mapping[str, type[Answer]]] = MappingProxyType(
        {
            "stress": StressResult,
            "spill": SpillResult,
            "screen": ScreenResult,
            "submergence": SubmergenceResult,
        }
    )

    summary: Annotated[
        list[str], Field(max_length=10, description="The whole in ten lines, in the units of the answer")
    ]
    verdicts: Annotated[
        list[AssessmentVerdict], Field(description="Every rule that was applied, with its outcome")
    ]
    parts: Annotated[list[PartValue], Field(description="What became of each part")]
    withdrawal: WithdrawalResult | None
    recirculation: Annotated[
        list[RecirculationValue] | None,
        Field(description="Water of outfalls in intakes; null without intakes"),
    ]
    stagnation: StagnationResult | None
    ends: list[EndValue] | None
    boundary_residual: Annotated[
        RatioValue,
        Field(
            description="Largest velocity through a pier's wall, over the reference speed", examples=[1e-14]
        ),
    ]
    transects: list[ContourValue] | None
    field: FieldResult | None
    stress: StressResult | None
    spill: SpillResult | None
    screen: ScreenResult | None
    submergence: SubmergenceResult | None
    cautions: Annotated[list[str], Field(description="What no number can take away")]

"""Request and answer of assessment."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.contour import Contours, ContourValue
from forebay.api.schemas.field import FieldResult
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.places import At
from forebay.api.schemas.quantities import FluxValue, RatioValue, SpeedValue
from forebay.api.schemas.stagnation import StagnationResult
from forebay.api.schemas.stress import StressResult
from forebay.api.schemas.withdrawal import WithdrawalResult
from forebay.workflows.sample import Quantity

CAUTIONS = (
    "Screening level: steady, frictionless flow, uniform over the depth.",
    "Not for the safety of divers, swimmers or craft.",
    "Regulators' criteria and licensed engineers decide.",
)
"""What no number of an assessment can take away."""


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


class EndValue(Answer):
    """A far end of the water."""

    name: Annotated[str, Field(examples=["upstream"])]
    inflow: Annotated[FluxValue, Field(description="Into the water, per unit depth; null where unbounded")]
    end_speed: Annotated[SpeedValue, Field(description="Current there")]


class AssessmentResult(Answer):
    """Everything about one site."""

    withdrawal: WithdrawalResult
    stagnation: StagnationResult
    ends: list[EndValue]
    boundary_residual: Annotated[
        RatioValue,
        Field(
            description="Largest velocity through a pier's wall, over the reference speed", examples=[1e-14]
        ),
    ]
    transects: list[ContourValue]
    field: FieldResult | None
    stress: StressResult | None
    cautions: Annotated[list[str], Field(description="What no number can take away")]

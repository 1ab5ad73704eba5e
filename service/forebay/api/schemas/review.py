"""Request and answer of layout/review."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import CountValue


class ReviewRequest(LayoutRequest):
    """A layout to be judged before anything is computed."""


class ReviewResult(Answer):
    """How many warnings the envelope holds; they are in its `warnings`."""

    notes: CountValue
    cautions: CountValue
    unsafe_to_use: Annotated[CountValue, Field(description="Warnings that forbid the use of a number")]
    worst: Annotated[str | None, Field(description="Gravest severity, or null", examples=["caution"])]


class WarningKindValue(Answer):
    """Entry of the catalogue of warnings."""

    code: Annotated[str, Field(examples=["rigid-lid"])]
    severity: Annotated[str, Field(examples=["caution"])]
    meaning: Annotated[str, Field(description="What is wrong with the numbers")]
    threshold: Annotated[str, Field(description="When it is raised")]
    formula: Annotated[str, Field(description="What is compared")]
    source: Annotated[str, Field(description="Where the threshold is published")]
    unit: Annotated[
        str | None,
        Field(description="UCUM code of what is compared; null if nothing is", examples=["m"]),
    ]


class WarningsResult(Answer):
    """Every kind of warning."""

    warnings: list[WarningKindValue]

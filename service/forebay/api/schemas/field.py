"""Request and answer of field/sample."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.places import At
from forebay.api.schemas.quantities import (
    AccelerationValue,
    AngleValue,
    CountValue,
    CurvatureValue,
    FluxValue,
    LengthValue,
    PressureGradientValue,
    RateValue,
    RatioValue,
    SpeedValue,
)
from forebay.workflows.sample import PointStatus, Quantity

BOTH_SIDES = "at a point on a line element in the water, the mean of both sides"
"""What a velocity is where it jumps."""

BRANCH = (
    "on the branch of principal logarithms: cuts run from each element with discharge or circulation, and "
    "from its images, so that a difference across a cut is off by that element's flux or circulation; "
    "contour/integrate has no cuts"
)
"""Which of its many values a potential has."""


class SampleRequest(LayoutRequest):
    """Field of a layout at points."""

    at: Annotated[At, Field(description="Where")]
    quantities: Annotated[
        list[Quantity],
        Field(
            max_length=len(Quantity),
            fail_fast=True,
            description="Further columns",
            examples=[["head_change"]],
        ),
    ] = []

    def wanted(self) -> tuple[str, ...]:
        """Names of the further columns, each once."""
        return tuple(dict.fromkeys(str(quantity) for quantity in self.quantities))


class Flagged(Answer):
    """A point without a value, or with one to know more about."""

    index: Annotated[CountValue, Field(description="Index of the point, from 0")]
    status: Annotated[
        PointStatus,
        Field(description="Why there is none; `on-line-element`: the values are means of both sides"),
    ]


class FieldResult(Answer):
    """Columns, all of the same length; null where a point has no value."""

    x: list[LengthValue]
    y: list[LengthValue]
    u: Annotated[list[SpeedValue], Field(description=f"Velocity along x; {BOTH_SIDES}")]
    v: Annotated[list[SpeedValue], Field(description=f"Velocity along y; {BOTH_SIDES}")]
    speed: list[SpeedValue]
    direction_deg: list[AngleValue] = []
    potential: Annotated[list[FluxValue], Field(description=f"Velocity potential; {BRANCH}")] = []
    stream_function: Annotated[list[FluxValue], Field(description=f"Stream function; {BRANCH}")] = []
    pressure_coefficient: list[RatioValue] = []
    head_change: list[LengthValue] = []
    pressure_gradient_along: list[PressureGradientValue] = []
    pressure_gradient_across: list[PressureGradientValue] = []
    streamline_curvature: list[CurvatureValue] = []
    vorticity: list[RateValue] = []
    strain_rate_xx: list[RateValue] = []
    strain_rate_xy: list[RateValue] = []
    strain_rate_yy: list[RateValue] = []
    acceleration_x: list[AccelerationValue] = []
    acceleration_y: list[AccelerationValue] = []
    shape: Annotated[list[CountValue], Field(description="[ny, nx] of a grid, row by row; [n] otherwise")]
    flagged: Annotated[
        list[Flagged], Field(description="Points without a value, and points on a line element")
    ]

"""Request and answer of field/sample."""

from enum import StrEnum
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


class Quantity(StrEnum):
    """Quantities besides x, y, u, v and speed."""

    DIRECTION = "direction_deg"
    POTENTIAL = "potential"
    STREAM_FUNCTION = "stream_function"
    PRESSURE_COEFFICIENT = "pressure_coefficient"
    HEAD_CHANGE = "head_change"
    PRESSURE_GRADIENT_ALONG = "pressure_gradient_along"
    PRESSURE_GRADIENT_ACROSS = "pressure_gradient_across"
    STREAMLINE_CURVATURE = "streamline_curvature"
    VORTICITY = "vorticity"
    STRAIN_RATE_XX = "strain_rate_xx"
    STRAIN_RATE_XY = "strain_rate_xy"
    STRAIN_RATE_YY = "strain_rate_yy"
    ACCELERATION_X = "acceleration_x"
    ACCELERATION_Y = "acceleration_y"


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
    """A point without a value."""

    index: Annotated[CountValue, Field(description="Index of the point, from 0")]
    status: Annotated[str, Field(description="Why", examples=["on-land"])]


class FieldResult(Answer):
    """Columns, all of the same length; null where a point has no value."""

    x: list[LengthValue]
    y: list[LengthValue]
    u: list[SpeedValue]
    v: list[SpeedValue]
    speed: list[SpeedValue]
    direction_deg: list[AngleValue] = []
    potential: list[FluxValue] = []
    stream_function: list[FluxValue] = []
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
    flagged: Annotated[list[Flagged], Field(description="Points without a value")]

"""Request and answer of field/sample."""

from enum import StrEnum
from typing import Annotated, Self

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError
from typing_extensions import override

from forebay.api.schemas.common import Answer
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.places import At, Column, FloatArray
from forebay.api.schemas.quantities import (
    AccelerationValue,
    AngleValue,
    CountValue,
    CurvatureValue,
    FluxValue,
    LengthValue,
    Metres,
    PressureGradientValue,
    RateValue,
    RatioValue,
    SpeedValue,
)
from forebay.api.units import UnitSystem
from forebay.workflows.near_field import PlaceStatus
from forebay.workflows.sample import PointStatus, Quantity

BOTH_SIDES = "at a point on a line element in the water, the mean of both sides"
"""What a velocity is where it jumps."""

BRANCH = (
    "on the branch of principal logarithms: cuts run from each element with discharge or circulation, and "
    "from its images, so that a difference across a cut is off by that element's flux or circulation; "
    "contour/integrate has no cuts"
)
"""Which of its many values a potential has."""


class FieldModel(StrEnum):
    """What the flow is taken for."""

    DEPTH_MEAN = "depth-mean"
    POINT_INTAKE_3D = "point-intake-3d"


Place = Annotated[
    list[Metres],
    Field(min_length=2, max_length=3, fail_fast=True, examples=[[120.0, 6.0], [120.0, 6.0, 1.5]]),
]


class HeightedAt(At):
    """Places in plan, in three dimensions with their heights above the bed."""

    points: Annotated[
        Annotated[list[Place], Field(min_length=1, fail_fast=True)] | None,
        Field(
            description="Points one by one, all of them [x, y] or all [x, y, z]",
            examples=[[[10.0, 5.0], [20.0, 5.0]]],
        ),
    ] = None
    z: Annotated[
        Metres | Column | None,
        Field(description="Height above the bed, one for all or one a point", examples=[1.5]),
    ] = None

    @model_validator(mode="after")
    def _one_height(self) -> Self:
        """Check that heights are given in one way, and for every place."""
        sizes = {len(point) for point in self.points or ()}
        if len(sizes) > 1 or (3 in sizes and self.z is not None):
            raise PydanticCustomError("one_way", "Heights stand in every point, or in `z`, or nowhere")
        if isinstance(self.z, list) and len(self.z) != self.count:
            raise PydanticCustomError("unequal_columns", "`z` differs in length from the points")
        return self

    @override
    def is_at(self, place: tuple[float, float]) -> bool:
        """The same; a column of heights must be held against the points themselves."""
        return not isinstance(self.z, list) and super().is_at(place)

    @property
    def has_heights(self) -> bool:
        """Whether heights are given; counts no points, of which there may be too many."""
        return self.z is not None or any(len(point) == 3 for point in self.points or ())

    def heights(self, units: UnitSystem) -> FloatArray | None:
        """Heights above the bed in SI, shape (n,); None if there are none."""
        if self.points is not None and len(self.points[0]) == 3:
            return units.read_array(np.array([point[2] for point in self.points], dtype=np.float64), "m")
        if self.z is None:
            return None
        column = np.full(self.count, self.z) if isinstance(self.z, float | int) else np.array(self.z)
        return units.read_array(column.astype(np.float64), "m")


class SampleRequest(LayoutRequest):
    """Field of a layout at points."""

    model: Annotated[
        FieldModel,
        Field(
            description=(
                "`point-intake-3d`: sources and sinks with an `elevation` are points between bed and "
                "surface, everything else keeps its depth-mean flow; places need heights"
            ),
            examples=["depth-mean"],
        ),
    ] = FieldModel.DEPTH_MEAN
    at: Annotated[HeightedAt, Field(description="Where")]
    quantities: Annotated[
        list[Quantity],
        Field(
            max_length=len(Quantity),
            fail_fast=True,
            description="Further columns",
            examples=[["head_change"]],
        ),
    ] = []

    @model_validator(mode="after")
    def _heights_with_depth(self) -> Self:
        """Check that heights come with the model that knows them, and with no other."""
        if self.at.has_heights is not (self.model is FieldModel.POINT_INTAKE_3D):
            raise PydanticCustomError(
                "heights", "Heights (`z`, or three entries a point) go with the model point-intake-3d"
            )
        return self

    def wanted(self) -> tuple[str, ...]:
        """Names of the further columns, each once."""
        return tuple(dict.fromkeys(str(quantity) for quantity in self.quantities))


class Flagged(Answer):
    """A point without a value, or with one to know more about."""

    index: Annotated[CountValue, Field(description="Index of the point, from 0")]
    status: Annotated[
        PointStatus | PlaceStatus,
        Field(description="Why there is none; `on-line-element`: the values are means of both sides"),
    ]


class FieldResult(Answer):
    """Columns, all of the same length; null where a point has no value."""

    x: list[LengthValue]
    y: list[LengthValue]
    u: Annotated[list[SpeedValue], Field(description=f"Velocity along x; {BOTH_SIDES}")]
    v: Annotated[list[SpeedValue], Field(description=f"Velocity along y; {BOTH_SIDES}")]
    speed: Annotated[
        list[SpeedValue], Field(description="Of the velocity, its vertical part included if known")
    ]
    z: Annotated[list[LengthValue], Field(description="Height above the bed; point-intake-3d only")] = []
    w: Annotated[list[SpeedValue], Field(description="Velocity upwards; point-intake-3d only")] = []
    wall_leak: Annotated[
        SpeedValue,
        Field(
            description=(
                "Largest velocity through banks and piers that the images of the openings leave, an estimate "
                "of the error; zero to rounding on straight banks, rectangles and corners of 180/n degrees; "
                "point-intake-3d only"
            )
        ),
    ] = None
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
    velocity_bound: Annotated[
        list[SpeedValue],
        Field(
            description=(
                "The velocity is no further off on account of solved walls; null on a wall, and where every "
                "wall is straight or round"
            )
        ),
    ] = []
    shape: Annotated[list[CountValue], Field(description="[ny, nx] of a grid, row by row; [n] otherwise")]
    flagged: Annotated[
        list[Flagged], Field(description="Points without a value, and points on a line element")
    ]

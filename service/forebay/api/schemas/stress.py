"""Request and answer of stress/tensor."""

from typing import Annotated, Any, Self

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Answer, ComputeRequest, Name, Strict
from forebay.api.schemas.fluids import Fluid, FluidValue
from forebay.api.schemas.layout import Layout
from forebay.api.schemas.places import At, Column
from forebay.api.schemas.quantities import (
    CountValue,
    CovarianceValue,
    MetresPerSecond,
    Pascals,
    PerSecond,
    PositionValue,
    PositiveMetres,
    PowerValue,
    PressureValue,
    PureNumber,
    RateValue,
    RatioValue,
    SpeedValue,
    ViscosityValue,
)
from forebay.api.schemas.stress_readings import (
    ExposureValue,
    FlocValue,
    FlocWay,
    Friction,
    FrictionValue,
    OpeningReachValue,
    ThresholdValue,
)
from forebay.api.schemas.water import Water
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.flow.gradient_fit import VelocitySamples
from forebay.trade.fluids import AnyFluid
from forebay.workflows.stress import GradientState, SampledState, StrainRateState
from forebay.workflows.stress_readings import Asked

MAX_STATES = 10_000
"""States that one request may hold."""

MAX_THRESHOLDS = 50
"""Thresholds that one request may name."""

ThresholdId = Annotated[
    str, Field(min_length=1, max_length=60, pattern=r"^[a-z-]+$", examples=["salmonid-juvenile"])
]

Row = Annotated[list[PerSecond], Field(min_length=2, max_length=3, fail_fast=True)]
Tensor = Annotated[
    list[Row],
    Field(min_length=2, max_length=3, fail_fast=True, examples=[[[0.0, 0.2], [0.0, 0.0]]]),
]
Speeds = Annotated[list[MetresPerSecond], Field(min_length=1, fail_fast=True, examples=[[0.3, 0.32, 0.29]])]


class Samples(Strict):
    """Columns of measured velocities, at least three points not in a line."""

    x: Annotated[Column, Field(description="Where")]
    y: Annotated[Column, Field(description="Where")]
    u: Annotated[Speeds, Field(description="Velocity along x")]
    v: Annotated[Speeds, Field(description="Velocity along y")]

    def to_flow(self, units: UnitSystem) -> VelocitySamples:
        """Samples in SI."""
        places = (units.read_array(np.array(column), "m") for column in (self.x, self.y))
        velocities = (units.read_array(np.array(column), "m/s") for column in (self.u, self.v))
        return VelocitySamples(*places, *velocities)


class Plane(Strict):
    """A plane by its normal, of any length but zero."""

    normal: Annotated[
        list[PureNumber], Field(min_length=2, max_length=3, fail_fast=True, examples=[[0.0, 1.0]])
    ]


class State(Strict):
    """Exactly one of `velocity_gradient`, `strain_rate`, `velocity_samples`."""

    model_config = {
        "json_schema_extra": describe_ways(("velocity_gradient",), ("strain_rate",), ("velocity_samples",))
    }

    name: Name
    velocity_gradient: Annotated[Tensor | None, Field(description="[i][j] = d u_i / d x_j")] = None
    strain_rate: Annotated[Tensor | None, Field(description="Symmetric part of the gradient")] = None
    velocity_samples: Annotated[Samples | None, Field(description="Velocities measured at places")] = None
    pressure: Annotated[
        Pascals, Field(description="Pressure; 0 gives the stress relative to it", examples=[0])
    ] = 0.0
    planes: Annotated[list[Plane], Field(max_length=100, description="Planes whose traction is wanted")] = []

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if (
            sum(way is not None for way in (self.velocity_gradient, self.strain_rate, self.velocity_samples))
            != 1
        ):
            raise PydanticCustomError(
                "one_way", "Exactly one of velocity_gradient, strain_rate, velocity_samples"
            )
        return self

    def to_flow(self, units: UnitSystem) -> GradientState | StrainRateState | SampledState:
        """State in SI."""
        rest = (units.read(self.pressure, "Pa"), tuple(tuple(plane.normal) for plane in self.planes))
        if self.velocity_samples is not None:
            return SampledState(self.name, self.velocity_samples.to_flow(units), *rest)
        if self.strain_rate is not None:
            return StrainRateState(self.name, _tensor(self.strain_rate), *rest)
        return GradientState(self.name, _tensor(self.velocity_gradient or []), *rest)


def _tensor(rows: list[list[float]]) -> Any:  # noqa: ANN401
    if len({len(row) for row in rows} | {len(rows)}) != 1:
        return np.empty((0, 0))  # which the computation refuses, as it does every tensor that is not square
    return np.array(rows, dtype=np.float64)


class StressQuestions(Strict):
    """The fluid, and what is to be read from its stress."""

    fluid: Annotated[Fluid | None, Field(description="The fluid; a layout's own water if absent")] = None
    exposure: Annotated[
        list[ThresholdId] | None,
        Field(
            max_length=MAX_THRESHOLDS,
            description="Thresholds of fish, larvae and eggs by id; an empty list stands for all of them",
        ),
    ] = None
    friction: Annotated[Friction | None, Field(description="For the shear on bed and walls")] = None
    height: Annotated[
        PositiveMetres | None,
        Field(description="Height above the bed of `turbulent_gradient`; half the depth if absent"),
    ] = None
    floc: Annotated[FlocWay | None, Field(description="Way along which G is integrated")] = None

    @model_validator(mode="after")
    def _one_law(self) -> Self:
        if self.friction is not None and self.friction.ways != 1:
            raise PydanticCustomError("one_way", "Exactly one law of friction")
        return self


class StressRequest(ComputeRequest, StressQuestions):
    """Stress of given states, or in the flow of a layout."""

    model_config = {
        "json_schema_extra": describe_ways(
            ("states", "fluid"),
            ("layout", "at"),
            shared=frozenset({"fluid"}),
            only={"friction": "layout", "height": "layout", "floc": "layout"},
        )
    }

    states: Annotated[
        list[State] | None, Field(min_length=1, max_length=MAX_STATES, description="States at places")
    ] = None
    layout: Annotated[Layout | None, Field(description="A site, instead of states")] = None
    at: Annotated[At | None, Field(description="Where in the site")] = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if (self.layout is None) != (self.at is None) or (self.states is None) == (self.layout is None):
            raise PydanticCustomError("one_way", "Either `states`, or `layout` with `at`")
        if self.layout is None and self.fluid is None:
            raise PydanticCustomError("one_way", "`states` need a `fluid`")
        if self.layout is None and (self.friction, self.height, self.floc) != (None, None, None):
            raise PydanticCustomError("one_way", "`friction`, `height` and `floc` belong to a `layout`")
        return self

    def asked(self) -> Asked:
        """What is to be read, in SI."""
        units = self.unit_system
        return Asked(
            exposure=None if self.exposure is None else tuple(self.exposure),
            friction=None if self.friction is None else self.friction.to_trade(units),
            height=None if self.height is None else units.read(self.height, "m"),
            way=None if self.floc is None else self.floc.to_flow(units),
            opening_radii={} if self.layout is None else self.layout.converted(units)[1].opening_radii,
        )

    def flow_fluid(self) -> AnyFluid:
        """Fluid in SI: the given one, or the layout's water."""
        if self.fluid is not None:
            return self.fluid.to_flow(self.unit_system)
        if self.layout is None:
            raise TypeError("a request without fluid and layout passed its validation")
        return self.layout.water.to_flow(self.unit_system)

    @property
    def assumed_temperature(self) -> float | None:
        """Temperature [degC] that nobody gave, of a `fluid` that is water; None of any other."""
        return self.fluid.assumed_temperature if isinstance(self.fluid, Water) else None


class CircleValue(Answer):
    """Mohr's circle on the axis of normal stress."""

    centre: PressureValue
    radius: PressureValue


class TractionValue(Answer):
    """Traction on a plane, on the side towards which its normal points."""

    traction: list[PressureValue]
    normal_stress: Annotated[PressureValue, Field(description="Along the normal, tension positive")]
    shear_stress: Annotated[PressureValue, Field(description="Length of the part along the plane")]


class FitValue(Answer):
    """Least-squares gradient of measured velocities."""

    velocity_gradient: list[list[RateValue]]
    covariance: Annotated[list[list[CovarianceValue]], Field(description="Of (u_x, u_y, v_x, v_y)")]
    degrees_of_freedom: CountValue
    residual_rms: SpeedValue
    spread_ratio: RatioValue


class StandardErrorsValue(Answer):
    """One standard error of each quantity."""

    velocity_gradient: list[list[RateValue]]
    strain_rate: list[list[RateValue]]
    plane_vorticity: RateValue
    dilatation: RateValue
    viscous_stress: list[list[PressureValue]]
    dissipation: PowerValue
    mean_velocity_gradient: RateValue


class StateValue(Answer):
    """Stress at one place; tensors are 3x3."""

    name: str
    status: Annotated[str, Field(examples=["computed"])]
    at: Annotated[PositionValue | None, Field(description="Place in the layout")] = None
    strain_rate: list[list[RateValue]]
    vorticity: Annotated[
        list[RateValue], Field(description="Vector; null where only the strain rate is known")
    ]
    plane_vorticity: Annotated[RateValue, Field(description="Component about the vertical, dv/dx - du/dy")]
    dilatation: RateValue
    viscous_stress: list[list[PressureValue]]
    stress: list[list[PressureValue]]
    principal_stresses: Annotated[list[PressureValue], Field(description="Descending")]
    principal_directions: Annotated[
        list[list[RatioValue]], Field(description="A unit vector a row, same order")
    ]
    max_shear: PressureValue
    mohr_circle: Annotated[CircleValue, Field(description="Of the directions in the plan")]
    mohr_circles: Annotated[list[CircleValue], Field(description="Of the principal pairs 1-3, 1-2, 2-3")]
    dissipation: PowerValue
    mean_velocity_gradient: RateValue
    tractions: list[TractionValue]
    fit: FitValue | None = None
    standard_errors: StandardErrorsValue | None = None
    apparent_viscosity: Annotated[
        ViscosityValue, Field(description="At this strain rate; null at rest where it has no limit")
    ]
    shear_rate: Annotated[
        RateValue, Field(description="sqrt(2 D' : D') of the strain rate's deviator; stress/tensor only")
    ] = None
    exposure: Annotated[list[ExposureValue], Field(description="Against each threshold asked for")] = []
    bed_shear: Annotated[PressureValue, Field(description="rho c_f U^2 under the speed here")] = None
    wall_shear: Annotated[PressureValue, Field(description="The same on a wall, null off the walls")] = None
    friction_velocity: Annotated[SpeedValue, Field(description="u* = U sqrt(c_f)")] = None
    turbulent_gradient: Annotated[
        RateValue,
        Field(
            description=(
                "Estimate of the turbulent G at `height`, sqrt(u*^3 / (kappa z nu)): an order of magnitude "
                "that the mean flow's G leaves out"
            )
        ),
    ] = None


class StressResult(Answer):
    """Stress of every state, in order."""

    fluid: Annotated[FluidValue, Field(description="The fluid used")]
    states: list[StateValue]
    thresholds: Annotated[list[ThresholdValue], Field(description="Those asked for, with sources")] = []
    openings: Annotated[
        list[OpeningReachValue], Field(description="Of point sources and sinks, for each threshold")
    ] = []
    friction: Annotated[FrictionValue | None, Field(description="Law of the shear given")] = None
    floc: Annotated[FlocValue | None, Field(description="Along the way asked for")] = None

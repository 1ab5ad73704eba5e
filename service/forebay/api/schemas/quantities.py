"""Numbers with a unit: every one that a request or an answer holds is one of these.

Requests hold bounded, finite, strict numbers: NaN, infinities, strings and booleans are refused. Answers hold
the same kinds without bounds, and `null` where a value does not exist. The unit in the schema is the SI one;
with `"unit_system": "us"` the same field is read and given in its US counterpart.
"""

from typing import Annotated, Any

from pydantic import AfterValidator, BeforeValidator, Field
from pydantic_core import PydanticCustomError


def given(unit: str, example: float, low: float, high: float) -> Any:  # noqa: ANN401  (as the library declares it)
    """Field of a request: a strict finite number in `unit` between `low` and `high`."""
    return Field(
        strict=True,
        allow_inf_nan=False,
        ge=low,
        le=high,
        examples=[example],
        json_schema_extra={"unit": unit},
    )


def measured(unit: str, example: float) -> Any:  # noqa: ANN401
    """Field of an answer: a number in `unit`, or null where there is none."""
    return Field(examples=[example], json_schema_extra={"unit": unit})


def _whole(value: Any) -> Any:  # noqa: ANN401
    """Refuse booleans and strings, accept 19.0 as JSON Schema does."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise PydanticCustomError("int_type", "Input should be a whole number")
    return value


def counted(example: int, low: int, high: int) -> Any:  # noqa: ANN401
    """Field of a request: a whole number between `low` and `high`."""
    return Field(ge=low, le=high, examples=[example], json_schema_extra={"unit": "1"})


# Requests
Metres = Annotated[float, given("m", 12.5, -1e8, 1e8)]
PositiveMetres = Annotated[float, given("m", 4.0, 1e-6, 1e8)]
DepthMetres = Annotated[float, given("m", 4.0, 1e-3, 1e5)]
MetresPerSecond = Annotated[float, given("m/s", 0.35, -1e3, 1e3)]
CubicMetresPerSecond = Annotated[float, given("m3/s", 1.8, 1e-9, 1e7)]
SquareMetresPerSecond = Annotated[float, given("m2/s", -3.0, -1e7, 1e7)]
DoubletMoment = Annotated[float, given("m3/s", -1.2, -1e9, 1e9)]
PerSecond = Annotated[float, given("1/s", 0.002, -1e6, 1e6)]
Degrees = Annotated[float, given("deg", 90.0, -3600.0, 3600.0)]
InteriorDegrees = Annotated[float, given("deg", 90.0, 1.0, 360.0)]
BedFriction = Annotated[float, given("1", 0.003, 1e-6, 1.0)]
PortArea = Annotated[float, given("m2", 1.2, 1e-6, 1e6)]
WindSpeed = Annotated[float, given("m/s", 8.0, 0.0, 300.0)]
DensityDifference = Annotated[float, given("kg/m3", 1.5, 0.0, 500.0)]
Tolerance = Annotated[float, given("1", 1e-4, 1e-6, 1e-2)]
ExcessDensity = Annotated[float, given("kg/m3", -1.8, -500.0, 500.0)]
Elevation = Annotated[float, given("m", 1.2, 0.0, 1e5)]
Latitude = Annotated[float, given("deg", 52.4, -90.0, 90.0)]
TidalPeriod = Annotated[float, given("s", 44714.0, 60.0, 1e7)]
PureNumber = Annotated[float, given("1", 1.0, -1e9, 1e9)]
WaterTemperature = Annotated[float, given("Cel", 12.0, -50.0, 200.0)]
Salinity = Annotated[float, given("g/kg", 0.0, 0.0, 100.0)]
Consistency = Annotated[float, given("Pa", 0.8, 1e-9, 1e9)]
YieldStress = Annotated[float, given("Pa", 2.5, 0.0, 1e9)]
FlowIndex = Annotated[float, given("1", 0.6, 0.05, 5.0)]
Regularisation = Annotated[float, given("s", 100.0, 1e-6, 1e9)]
ManningCoefficient = Annotated[float, given("1", 0.03, 1e-4, 1.0)]
ChezyCoefficient = Annotated[float, given("1", 50.0, 1.0, 1000.0)]
Pascals = Annotated[float, given("Pa", 40000.0, -1e12, 1e12)]
DynamicViscosity = Annotated[float, given("Pa.s", 0.0013, 1e-9, 1e9)]
SecondViscosity = Annotated[float, given("Pa.s", -0.0009, -1e9, 1e9)]
Density = Annotated[float, given("kg/m3", 999.7, 1e-6, 1e6)]
Gravity = Annotated[float, given("m/s2", 9.81, 9.7, 33.0)]
ModelScale = Annotated[float, given("1", 10.0, 1.0, 1000.0)]
NotNegativeMetres = Annotated[float, given("m", 0.5, 0.0, 1e8)]
OpenFraction = Annotated[float, given("1", 0.5, 1e-3, 1.0)]
BlockedFraction = Annotated[float, given("1", 0.1, 0.0, 0.99)]
LimitSpeed = Annotated[float, given("m/s", 0.12192, 1e-6, 1e3)]
SweepingRatio = Annotated[float, given("1", 2.0, 1e-3, 1e3)]
ExposureSeconds = Annotated[float, given("s", 60.0, 1e-3, 1e8)]
ExcessShare = Annotated[float, given("1", 0.1, 0.0, 1e3)]
DurationSeconds = Annotated[float, given("s", 600.0, 0.0, 1e9)]
HorizonSeconds = Annotated[float, given("s", 86400.0, 1e-3, 1e12)]
ShareTolerance = Annotated[float, given("1", 1e-3, 1e-5, 0.1)]
CurvePoints = Annotated[int, counted(101, 11, 1001), BeforeValidator(_whole)]
ProfileCount = Annotated[int, counted(101, 2, 10_001), BeforeValidator(_whole)]
PointCount = Annotated[int, counted(101, 1, 1_000_000_000), BeforeValidator(_whole)]
PixelCount = Annotated[int, counted(1200, 520, 4000), BeforeValidator(_whole)]
Digits = Annotated[int, counted(9, 4, 17), BeforeValidator(_whole)]

Position = Annotated[list[Metres], Field(min_length=2, max_length=2, fail_fast=True, examples=[[120.0, 6.0]])]
"""Coordinates x, y in the local grid."""

Velocity = Annotated[list[MetresPerSecond], Field(min_length=2, max_length=2, fail_fast=True)]
"""Components of a velocity."""

Moment = Annotated[list[DoubletMoment], Field(min_length=2, max_length=2, fail_fast=True)]
"""Components of a doublet's moment, from its sink to its source."""


def _not_null(pair: list[float]) -> list[float]:
    if pair[0] == 0.0 and pair[1] == 0.0:
        raise PydanticCustomError("zero_direction", "A direction needs a length: both components are zero")
    return pair


Direction = Annotated[
    list[PureNumber],
    Field(min_length=2, max_length=2, fail_fast=True, examples=[[1.0, 0.0]]),
    AfterValidator(_not_null),
]
"""Direction in plan, of any length but zero."""


# Answers
LengthValue = Annotated[float | None, measured("m", 5.14)]
AreaValue = Annotated[float | None, measured("m2", 42.0)]
VolumeValue = Annotated[float | None, measured("m3", 85.0)]
SpeedValue = Annotated[float | None, measured("m/s", 0.35)]
FluxValue = Annotated[float | None, measured("m2/s", 0.45)]
DischargeValue = Annotated[float | None, measured("m3/s", 1.8)]
RateValue = Annotated[float | None, measured("1/s", 0.002)]
CurvatureValue = Annotated[float | None, measured("1/m", 0.01)]
AccelerationValue = Annotated[float | None, measured("m/s2", 0.0004)]
AngleValue = Annotated[float | None, measured("deg", 12.0)]
RatioValue = Annotated[float | None, measured("1", 0.62)]
PressureValue = Annotated[float | None, measured("Pa", 0.013)]
ViscosityValue = Annotated[float | None, measured("Pa.s", 0.00124)]
KinematicValue = Annotated[float | None, measured("m2/s", 1.24e-6)]
DensityValue = Annotated[float | None, measured("kg/m3", 999.5)]
TemperatureValue = Annotated[float | None, measured("Cel", 12.0)]
SalinityValue = Annotated[float | None, measured("g/kg", 0.0)]
PressureGradientValue = Annotated[float | None, measured("Pa/m", 0.4)]
SurfaceTensionValue = Annotated[float | None, measured("N/m", 0.074)]
CovarianceValue = Annotated[float | None, measured("1/s2", 1e-6)]
OwnUnitValue = Annotated[float | None, measured("{unit}", 0.12192)]
"""Number whose unit stands beside it in `unit`."""

PowerValue = Annotated[float | None, measured("W/m3", 0.0021)]
TimeValue = Annotated[float | None, measured("s", 30.0)]
CountValue = Annotated[int | None, measured("1", 3)]
BytesValue = Annotated[int | None, measured("By", 33554432)]
PositionValue = Annotated[list[LengthValue], Field(min_length=2, max_length=2, examples=[[120.0, 6.0]])]
PathValue = Annotated[list[PositionValue], Field(examples=[[[0.0, 5.0], [10.0, 5.2]]])]

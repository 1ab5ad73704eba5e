"""What is known of a site beside its flow: it decides which warnings can be raised, and the near field."""

from collections.abc import Iterable
from typing import Annotated, Any, Protocol, Self

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Strict
from forebay.api.schemas.quantities import (
    BedFriction,
    Degrees,
    DensityDifference,
    DepthMetres,
    Elevation,
    Latitude,
    TidalPeriod,
    WindSpeed,
)
from forebay.api.units import UnitSystem
from forebay.flow.errors import LayoutError
from forebay.trade.applicability.site import SiteData


class ElevationOutsideWaterError(LayoutError):
    """An opening or an interface lies above the surface."""

    code = "elevation-outside-water"
    title = "An elevation lies above the surface"


class Named(Protocol):
    """An element of a layout: what it holds beside its name depends on its kind."""

    @property
    def name(self) -> str:
        """Its name."""
        ...


class Wind(Strict):
    """Wind at 10 m above the water."""

    speed: Annotated[WindSpeed, Field(description="Speed at 10 m height")]
    direction_deg: Annotated[
        Degrees | None,
        Field(description="Where it blows to, anticlockwise from +x; absent: any direction", examples=[45.0]),
    ] = None


class Conditions(Strict):
    """Site data for warnings; what is absent is unknown and itself a note."""

    depth: Annotated[DepthMetres, Field(description="Mean depth")]
    bed_friction: Annotated[
        BedFriction | None, Field(description="(friction velocity / speed)^2; for warnings only")
    ] = None
    wind: Annotated[Wind | None, Field(description="Wind; for warnings only")] = None
    wind_speed: Annotated[
        WindSpeed | None, Field(description="Short for `wind.speed`, instead of `wind`; for warnings only")
    ] = None
    density_difference: Annotated[
        DensityDifference | None, Field(description="Between layers; for warnings only")
    ] = None
    interface_elevation: Annotated[
        Elevation | None,
        Field(description="Height above the bed of the interface between layers; for warnings only"),
    ] = None
    depth_range: Annotated[
        Annotated[list[DepthMetres], Field(min_length=2, max_length=2, fail_fast=True)] | None,
        Field(description="Least and largest depth; for warnings only", examples=[[3.2, 4.6]]),
    ] = None
    tidal_period: Annotated[
        TidalPeriod | None, Field(description="Period after which the current reverses; for warnings only")
    ] = None
    latitude_deg: Annotated[
        Latitude | None, Field(description="Latitude, north positive; for warnings only")
    ] = None

    @model_validator(mode="after")
    def _one_wind(self) -> Self:
        if self.wind is not None and self.wind_speed is not None:
            raise PydanticCustomError("one_way", "Either `wind` or `wind_speed`")
        return self

    def data_of(self, elements: Iterable[Named], units: UnitSystem) -> SiteData:
        """What is known of the site and its openings, in SI.

        Raises ElevationOutsideWaterError for an elevation above the surface.
        """
        known, depth = list(elements), units.read(self.depth, "m")
        interface = _read(units, self.interface_elevation, "m")
        if interface is not None and interface > depth:
            raise ElevationOutsideWaterError(
                f"{interface:g} m above a bed {depth:g} m below the surface", ("interface_elevation",)
            )
        depths = sorted(units.read(value, "m") for value in self.depth_range or ())
        wind = self.wind or Wind(speed=self.wind_speed) if self.wind_speed is not None else self.wind
        return SiteData(
            bed_friction=self.bed_friction,
            port_areas=_each(known, "port_area", "m2", units),
            wind_speed=None if wind is None else units.read(wind.speed, "m/s"),
            wind_direction=None if wind is None else wind.direction_deg,
            density_difference=_read(units, self.density_difference, "kg/m3"),
            interface_elevation=interface,
            depth_range=(depths[0], depths[1]) if depths else None,
            tidal_period=self.tidal_period,
            latitude=self.latitude_deg,
            elevations=_elevations(known, depth, units),
            opening_radii=_each(known, "opening_radius", "m", units),
            excess_densities=_each(known, "excess_density", "kg/m3", units),
            port_shapes=_held(known, "port_shape"),
        )


def _held(elements: list[Named], name: str) -> dict[str, Any]:
    """A datum of every element that has it, by the element's name."""
    found = {element.name: getattr(element, name, None) for element in elements}
    return {owner: value for owner, value in found.items() if value is not None}


def _each(elements: list[Named], name: str, unit: str, units: UnitSystem) -> dict[str, float]:
    """The same in SI."""
    return {owner: units.read(value, unit) for owner, value in _held(elements, name).items()}


def _elevations(elements: list[Named], depth: float, units: UnitSystem) -> dict[str, float]:
    found = _each(elements, "elevation", "m", units)
    for index, element in enumerate(elements):
        elevation = found.get(element.name, 0.0)
        if elevation > depth:
            raise ElevationOutsideWaterError(
                f"{elevation:g} m above a bed {depth:g} m below the surface", ("elements", index, "elevation")
            )
    return found


def _read(units: UnitSystem, value: float | None, si_unit: str) -> float | None:
    return None if value is None else units.read(value, si_unit)

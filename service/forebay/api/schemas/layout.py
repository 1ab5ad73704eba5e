"""A layout as a client writes it, and its conversion into the flow's own values."""

from typing import Annotated

from pydantic import Field

from forebay.api.names import refuse_reserved
from forebay.api.schemas.common import ComputeRequest, Strict
from forebay.api.schemas.elements import Element, LineSource, Pier, Source
from forebay.api.schemas.quantities import (
    BedFriction,
    DensityDifference,
    DepthMetres,
    PerSecond,
    Position,
    Salinity,
    Velocity,
    WaterTemperature,
    WindSpeed,
)
from forebay.api.schemas.shores import OpenWater, Shore
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.trade.applicability.site import SiteData

MAX_ELEMENTS = 2000
"""Elements that the schema admits; a service may set a lower limit."""

MAX_STRUCTURES = 500
"""Structures that the schema admits; a service may set a lower limit."""


EFFORT_A_PAIR = 100
"""Work to review one pair of elements or structures, counted in pairs of element and point."""

EFFORT_A_PIER_PAIR = 400_000
"""Work to solve the flow round piers, for each pair of them, counted likewise."""


class Water(Strict):
    """Temperature and salinity of the water."""

    temperature: Annotated[WaterTemperature, Field(description="Temperature of the water")] = 10.0
    salinity: Annotated[Salinity, Field(description="Absolute salinity")] = 0.0

    def to_flow(self, units: UnitSystem) -> flow.Water:
        """Water properties in SI; the defaults are SI values in either unit system."""
        assumed = self.assumed_temperature
        temperature = units.read(self.temperature, "Cel") if assumed is None else assumed
        return flow.Water(temperature, self.salinity)

    @property
    def assumed_temperature(self) -> float | None:
        """The default temperature [degC], where none is given."""
        return None if "temperature" in self.model_fields_set else self.temperature


GradientRow = Annotated[list[PerSecond], Field(min_length=2, max_length=2, fail_fast=True)]


class Ambient(Strict):
    """Current far upstream of every element, with an optional linear part about `at`."""

    velocity: Annotated[Velocity, Field(description="Velocity far upstream", examples=[[0.35, 0.0]])] = [
        0.0,
        0.0,
    ]
    gradient: Annotated[
        list[GradientRow],
        Field(
            min_length=2,
            max_length=2,
            fail_fast=True,
            description="[[du/dx, du/dy], [dv/dx, dv/dy]], zero trace",
            examples=[[[0.0, 0.001], [0.0, 0.0]]],
        ),
    ] = [[0.0, 0.0], [0.0, 0.0]]
    at: Annotated[Position, Field(description="Where the linear part vanishes", examples=[[0.0, 0.0]])] = [
        0.0,
        0.0,
    ]

    def to_flow(self, units: UnitSystem) -> flow.Ambient:
        """Ambient current in SI."""
        (ux, uy), (vx, vy) = self.gradient
        u, v = (units.read(part, "m/s") for part in self.velocity)
        return flow.Ambient(complex(u, v), ((ux, uy), (vx, vy)), units.position(self.at))


class Layout(Strict):
    """A site: water, current, banks, what draws and gives, what stands in the way."""

    depth: Annotated[DepthMetres, Field(description="Mean depth")]
    water: Annotated[Water, Field(description="Water properties")] = Water()
    ambient: Annotated[Ambient, Field(description="Ambient current")] = Ambient()
    shore: Annotated[Shore, Field(description="Banks; open water if absent")] = OpenWater(kind="open-water")
    elements: Annotated[
        list[Element], Field(max_length=MAX_ELEMENTS, description="What draws, gives or turns")
    ] = []
    structures: Annotated[
        list[Pier], Field(max_length=MAX_STRUCTURES, description="What stands in the water")
    ] = []

    bed_friction: Annotated[
        BedFriction | None, Field(description="(friction velocity / speed)^2; for warnings only")
    ] = None
    wind_speed: Annotated[WindSpeed | None, Field(description="At 10 m height; for warnings only")] = None
    density_difference: Annotated[
        DensityDifference | None, Field(description="Between layers; for warnings only")
    ] = None
    depth_range: Annotated[
        Annotated[list[DepthMetres], Field(min_length=2, max_length=2, fail_fast=True)] | None,
        Field(description="Least and largest depth; for warnings only", examples=[[3.2, 4.6]]),
    ] = None

    @property
    def size(self) -> int:
        """Number of elements and structures."""
        return len(self.elements) + len(self.structures)

    @property
    def effort(self) -> int:
        """Work before the first point: checks of each pair of things, and the solution round the piers."""
        return EFFORT_A_PAIR * self.size**2 + EFFORT_A_PIER_PAIR * len(self.structures) ** 2

    def to_flow(self, units: UnitSystem) -> flow.Layout:
        """Layout in SI, with complex positions.

        Raises ReservedNameError if a name means something else in an answer.
        """
        refuse_reserved({"elements": self.elements, "structures": self.structures})
        return flow.Layout(
            depth=units.read(self.depth, "m"),
            water=self.water.to_flow(units),
            ambient=self.ambient.to_flow(units),
            shore=self.shore.to_flow(units),
            elements=tuple(element.to_flow(units) for element in self.elements),
            structures=tuple(pier.to_flow(units) for pier in self.structures),
        )

    def site_data(self, units: UnitSystem) -> SiteData:
        """What is known of the site beside its flow, in SI."""
        areas = {
            element.name: units.read(element.port_area, "m2")
            for element in self.elements
            if isinstance(element, Source | LineSource) and element.port_area is not None
        }
        depths = sorted(units.read(depth, "m") for depth in self.depth_range or ())
        return SiteData(
            bed_friction=self.bed_friction,
            port_areas=areas,
            wind_speed=_read(units, self.wind_speed, "m/s"),
            density_difference=_read(units, self.density_difference, "kg/m3"),
            depth_range=(depths[0], depths[1]) if depths else None,
        )


def _read(units: UnitSystem, value: float | None, si_unit: str) -> float | None:
    return None if value is None else units.read(value, si_unit)


class LayoutRequest(ComputeRequest):
    """What every route about a layout takes."""

    layout: Annotated[Layout, Field(description="The site")]

    def flow_layout(self) -> flow.Layout:
        """Layout in SI."""
        return self.layout.to_flow(self.unit_system)

    def site_data(self) -> SiteData:
        """What is known of the site beside its flow, in SI."""
        return self.layout.site_data(self.unit_system)

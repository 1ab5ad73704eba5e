"""Water as a client describes it."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Strict
from forebay.api.schemas.quantities import Salinity, WaterTemperature
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow


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

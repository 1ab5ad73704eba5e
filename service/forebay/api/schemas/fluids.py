"""Fluids as a client writes them: water, a Newtonian fluid of one's own, a sludge."""

from typing import Annotated, Any, Literal

from pydantic import Discriminator, Field, Tag

from forebay.api.schemas.common import Answer, Strict
from forebay.api.schemas.quantities import (
    Consistency,
    Density,
    DensityValue,
    DynamicViscosity,
    FlowIndex,
    PressureValue,
    RatioValue,
    Regularisation,
    SecondViscosity,
    TimeValue,
    ViscosityValue,
    YieldStress,
)
from forebay.api.schemas.water import Water
from forebay.api.units import UnitSystem
from forebay.flow.rheology import GeneralisedFluid
from forebay.flow.stress import Fluid as FlowFluid

ConsistencyField = Annotated[
    Consistency,
    Field(description="K: viscous stress at a rate of shear of 1 1/s, tau = tau_y + K (g / (1 1/s))^n"),
]
IndexField = Annotated[FlowIndex, Field(description="n; below 1 the fluid thins when sheared")]
YieldField = Annotated[YieldStress, Field(description="tau_y, below which an ideal fluid does not flow")]
RegularisationField = Annotated[
    Regularisation,
    Field(description="m of Papanastasiou's tau_y (1 - exp(-m g)); the larger the sharper the yield"),
]
DensityField = Annotated[Density, Field(description="Density")]


class PowerLaw(Strict):
    """Power-law fluid, tau = K g^n."""

    law: Literal["power-law"]
    consistency: ConsistencyField
    index: IndexField
    density: DensityField

    def to_flow(self, units: UnitSystem) -> GeneralisedFluid:
        """Fluid in SI."""
        return GeneralisedFluid(
            units.read(self.consistency, "Pa"), self.index, 0.0, units.read(self.density, "kg/m3")
        )


class Bingham(Strict):
    """Bingham plastic, tau = tau_y + mu_p g."""

    law: Literal["bingham"]
    plastic_viscosity: Annotated[DynamicViscosity, Field(description="mu_p")]
    yield_stress: YieldField
    regularisation: RegularisationField
    density: DensityField

    def to_flow(self, units: UnitSystem) -> GeneralisedFluid:
        """Fluid in SI."""
        return GeneralisedFluid(
            units.read(self.plastic_viscosity, "Pa.s"),
            1.0,
            units.read(self.yield_stress, "Pa"),
            units.read(self.density, "kg/m3"),
            self.regularisation,
        )


class HerschelBulkley(Strict):
    """Herschel-Bulkley fluid, tau = tau_y + K g^n."""

    law: Literal["herschel-bulkley"]
    consistency: ConsistencyField
    index: IndexField
    yield_stress: YieldField
    regularisation: RegularisationField
    density: DensityField

    def to_flow(self, units: UnitSystem) -> GeneralisedFluid:
        """Fluid in SI."""
        return GeneralisedFluid(
            units.read(self.consistency, "Pa"),
            self.index,
            units.read(self.yield_stress, "Pa"),
            units.read(self.density, "kg/m3"),
            self.regularisation,
        )


class OwnFluid(Strict):
    """A Newtonian fluid by its own properties."""

    dynamic_viscosity: Annotated[DynamicViscosity, Field(description="Dynamic viscosity")]
    density: Annotated[Density, Field(description="Density")]
    second_viscosity: Annotated[
        SecondViscosity | None,
        Field(description="Factor of div u in the stress; -2/3 of the dynamic if absent"),
    ] = None

    def to_flow(self, units: UnitSystem) -> FlowFluid:
        """Fluid in SI."""
        second = None if self.second_viscosity is None else units.read(self.second_viscosity, "Pa.s")
        return FlowFluid(
            units.read(self.dynamic_viscosity, "Pa.s"), units.read(self.density, "kg/m3"), second
        )


def _kind_of_fluid(value: Any) -> str:  # noqa: ANN401
    if isinstance(value, dict):
        law, names = value.get("law"), value.keys()
    else:
        law, names = getattr(value, "law", None), type(value).model_fields.keys()
    if law in {"power-law", "bingham", "herschel-bulkley"}:
        return str(law)
    return "own" if {"dynamic_viscosity", "density", "second_viscosity"} & set(names) else "water"


Fluid = Annotated[
    Annotated[Water, Tag("water")]
    | Annotated[OwnFluid, Tag("own")]
    | Annotated[PowerLaw, Tag("power-law")]
    | Annotated[Bingham, Tag("bingham")]
    | Annotated[HerschelBulkley, Tag("herschel-bulkley")],
    Discriminator(_kind_of_fluid),
    Field(
        description=(
            "Water by temperature and salinity, a fluid by its own viscosity and density, or a sludge by its "
            "`law`: power-law, bingham or herschel-bulkley"
        )
    ),
]


class FluidValue(Answer):
    """The fluid whose stress it is."""

    dynamic_viscosity: ViscosityValue
    density: DensityValue
    second_viscosity: Annotated[
        ViscosityValue,
        Field(
            description="Factor of div u in the stress; null where Stokes' hypothesis sets -2/3 of dynamic"
        ),
    ]
    law: Annotated[str, Field(description="newtonian or herschel-bulkley", examples=["newtonian"])]
    consistency: Annotated[
        PressureValue, Field(description="K: viscous stress at 1 1/s; for index 1 the plastic viscosity")
    ] = None
    index: RatioValue = None
    yield_stress: PressureValue = None
    regularisation: TimeValue = None

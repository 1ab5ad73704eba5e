"""The fluid of a request: water by temperature and salinity, viscosities of one's own, or a sludge."""

from forebay.flow.errors import FlowError
from forebay.flow.layout import Water
from forebay.flow.rheology import GeneralisedFluid
from forebay.flow.stress import Fluid
from forebay.trade.water import water_properties

LEAST_BULK_VISCOSITY = -1e-6
"""Bulk viscosity, as a share of the dynamic viscosity, down to which zero is meant [-]."""


class UnphysicalFluidError(FlowError):
    """A fluid without mass or viscosity, or one that would give off energy when compressed."""

    code = "unphysical-fluid"
    title = "The fluid's properties contradict physics"


def newtonian_fluid(fluid: Water | Fluid) -> Fluid:
    """Viscosities and density; raises WaterRangeError or UnphysicalFluidError, path from the fluid."""
    if isinstance(fluid, Water):
        properties = water_properties(fluid.temperature, fluid.salinity)
        return Fluid(properties.dynamic_viscosity, properties.density)
    for field, value in (("dynamic_viscosity", fluid.dynamic_viscosity), ("density", fluid.density)):
        if not value > 0.0:
            raise UnphysicalFluidError(f"{field} is {value:g}, must be positive", (field,))
    if fluid.bulk_viscosity < LEAST_BULK_VISCOSITY * fluid.dynamic_viscosity:
        raise UnphysicalFluidError(
            f"second_viscosity is {fluid.second_viscosity:g} Pa.s, below -2/3 of dynamic_viscosity",
            ("second_viscosity",),
        )
    return fluid


AnyFluid = Water | Fluid | GeneralisedFluid
"""A fluid as a request gives it."""


def known_fluid(fluid: AnyFluid) -> Fluid | GeneralisedFluid:
    """The same with its properties known; WaterRangeError or UnphysicalFluidError, path ("fluid", ...)."""
    try:
        return _checked(fluid) if isinstance(fluid, GeneralisedFluid) else newtonian_fluid(fluid)
    except FlowError as error:
        error.path = ("fluid", *error.path)
        raise


def _checked(fluid: GeneralisedFluid) -> GeneralisedFluid:
    for field in ("consistency", "index", "density"):
        if not getattr(fluid, field) > 0.0:
            raise UnphysicalFluidError(f"{field} is {getattr(fluid, field):g}, must be positive", (field,))
    if fluid.yield_stress < 0.0:
        raise UnphysicalFluidError(
            f"yield_stress is {fluid.yield_stress:g} Pa, below zero", ("yield_stress",)
        )
    if fluid.yield_stress > 0.0 and not fluid.regularisation > 0.0:
        raise UnphysicalFluidError("a yield stress needs a regularisation above zero", ("regularisation",))
    return fluid

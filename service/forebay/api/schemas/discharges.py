"""A discharge as a client writes it: a number in the request's unit system, or a value with its own unit."""

from enum import StrEnum
from fractions import Fraction
from typing import Annotated, Any, Self

from pydantic import Discriminator, Field, Tag, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Strict
from forebay.api.schemas.quantities import CubicMetresPerSecond, given
from forebay.api.units import UnitSystem

LEAST, LARGEST = 1e-9, 1e7
"""Bounds of a discharge [m3/s], whatever unit it is written in."""

FOOT = Fraction("0.3048")
"""International foot [m], exact."""

GALLON = 231 * Fraction("0.0254") ** 3
"""US gallon, 231 cubic inches [m3], exact."""

DAY = 86400
"""Day [s], exact."""


class DischargeUnit(StrEnum):
    """Units of discharge that the trade writes, none of which depends on the request's unit system."""

    CUBIC_METRE_PER_SECOND = "m3/s"
    CUBIC_METRE_PER_HOUR = "m3/h"
    CUBIC_METRE_PER_DAY = "m3/d"
    LITRE_PER_SECOND = "L/s"
    MEGALITRE_PER_DAY = "ML/d"
    CUBIC_FOOT_PER_SECOND = "ft3/s"
    MILLION_US_GALLONS_PER_DAY = "MGD"
    US_GALLON_PER_MINUTE = "gpm"


FACTORS = {
    DischargeUnit.CUBIC_METRE_PER_SECOND: Fraction(1),
    DischargeUnit.CUBIC_METRE_PER_HOUR: Fraction(1, 3600),
    DischargeUnit.CUBIC_METRE_PER_DAY: Fraction(1, DAY),
    DischargeUnit.LITRE_PER_SECOND: Fraction(1, 1000),
    DischargeUnit.MEGALITRE_PER_DAY: Fraction(1000, DAY),
    DischargeUnit.CUBIC_FOOT_PER_SECOND: FOOT**3,
    DischargeUnit.MILLION_US_GALLONS_PER_DAY: 10**6 * GALLON / DAY,
    DischargeUnit.US_GALLON_PER_MINUTE: GALLON / 60,
}
"""Exact factor of each unit to m3/s: the foot and the inch by the international agreement of 1959, the gallon
by its definition as 231 cubic inches (NIST Special Publication 811, 2008, appendix B)."""


class UnitDischarge(Strict):
    """Discharge with its own unit, the same whatever `unit_system` says."""

    value: Annotated[float, given("{unit}", 12.0, 1e-12, 1e12), Field(description="Number in `unit`")]
    unit: Annotated[
        DischargeUnit, Field(description="MGD and gpm are of US gallons", examples=[DischargeUnit("ML/d")])
    ]

    @property
    def si(self) -> float:
        """Discharge [m3/s], rounded once from the exact product."""
        return float(Fraction(self.value) * FACTORS[self.unit])

    @model_validator(mode="after")
    def _within_bounds(self) -> Self:
        if not LEAST <= self.si <= LARGEST:
            raise PydanticCustomError(
                "discharge_bounds", f"A discharge should be from {LEAST:g} to {LARGEST:g} m3/s"
            )
        return self


def _form(value: Any) -> str:  # noqa: ANN401  (anything that a client may have written)
    return "with-unit" if isinstance(value, dict | UnitDischarge) else "plain"


Discharge = Annotated[
    Annotated[CubicMetresPerSecond, Tag("plain")] | Annotated[UnitDischarge, Tag("with-unit")],
    Discriminator(_form),
]
"""Positive discharge: a number in m3/s (ft3/s with `"unit_system": "us"`), or a value with its own unit."""


def read_discharge(discharge: float | UnitDischarge, units: UnitSystem) -> float:
    """Discharge in m3/s."""
    return discharge.si if isinstance(discharge, UnitDischarge) else units.read(discharge, "m3/s")

"""Unit systems: what a request may be written in, and the UCUM codes an answer names."""

from enum import StrEnum
from typing import NamedTuple, overload

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]


class UsUnit(NamedTuple):
    """US customary counterpart of an SI unit: SI value = factor x (US value - zero)."""

    code: str
    factor: float
    zero: float = 0.0


FOOT = 0.3048
"""International foot [m], exact."""

POUND = 0.45359237
"""Avoirdupois pound [kg], exact."""

POUND_FORCE = POUND * 9.80665
"""Pound-force [N], exact."""

US_UNITS = {
    "m": UsUnit("[ft_i]", FOOT),
    "m2": UsUnit("[ft_i]2", FOOT**2),
    "m3": UsUnit("[ft_i]3", FOOT**3),
    "m/s": UsUnit("[ft_i]/s", FOOT),
    "m/s2": UsUnit("[ft_i]/s2", FOOT),
    "m2/s": UsUnit("[ft_i]2/s", FOOT**2),
    "m3/s": UsUnit("[ft_i]3/s", FOOT**3),
    "1/m": UsUnit("1/[ft_i]", 1.0 / FOOT),
    "Pa": UsUnit("[lbf_av]/[ft_i]2", POUND_FORCE / FOOT**2),
    "Pa.s": UsUnit("[lbf_av].s/[ft_i]2", POUND_FORCE / FOOT**2),
    "Pa/m": UsUnit("[lbf_av]/[ft_i]3", POUND_FORCE / FOOT**3),
    "N/m": UsUnit("[lbf_av]/[ft_i]", POUND_FORCE / FOOT),
    "W/m3": UsUnit("[lbf_av]/[ft_i]2/s", POUND_FORCE / FOOT**2),
    "kg/m3": UsUnit("[lb_av]/[ft_i]3", POUND / FOOT**3),
    "Cel": UsUnit("[degF]", 5.0 / 9.0, 32.0),
}
"""SI unit (UCUM) to its US counterpart."""

SHARED_UNITS = frozenset({"1", "deg", "s", "1/s", "1/s2", "g/kg", "By", "{unit}", "a"})
"""Units that are the same in both systems."""


class UnitSystem(StrEnum):
    """Units that a request is written in and its answer given in."""

    SI = "si"
    US = "us"

    def code(self, si_unit: str) -> str:
        """UCUM code that this system uses for the quantity measured in `si_unit`."""
        if self is UnitSystem.SI or si_unit in SHARED_UNITS:
            return si_unit
        return US_UNITS[si_unit].code

    def read(self, value: float, si_unit: str) -> float:
        """Value in SI of a number written in this system."""
        if self is UnitSystem.SI or si_unit in SHARED_UNITS:
            return value
        unit = US_UNITS[si_unit]
        return unit.factor * (value - unit.zero)

    def read_array(self, values: FloatArray, si_unit: str) -> FloatArray:
        """Array in SI of numbers written in this system."""
        if self is UnitSystem.SI or si_unit in SHARED_UNITS:
            return values
        unit = US_UNITS[si_unit]
        return unit.factor * (values - unit.zero)

    def position(self, pair: list[float]) -> complex:
        """Complex position x + iy [m] of a coordinate pair."""
        return complex(self.read(pair[0], "m"), self.read(pair[1], "m"))

    @overload
    def write(self, value: float, si_unit: str) -> float: ...
    @overload
    def write(self, value: FloatArray, si_unit: str) -> FloatArray: ...
    def write(self, value: float | FloatArray, si_unit: str) -> float | FloatArray:
        """Number or array in this system of an SI value."""
        if self is UnitSystem.SI or si_unit in SHARED_UNITS:
            return value
        unit = US_UNITS[si_unit]
        return value / unit.factor + unit.zero

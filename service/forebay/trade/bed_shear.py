"""Shear on bed and walls by a stated law of friction, tau = rho c_f U^2 = rho u*^2."""

from dataclasses import dataclass
from enum import StrEnum
from math import log

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.errors import FlowError
from forebay.trade.water import STANDARD_GRAVITY

KARMAN = 0.4
"""Von Karman's constant [-]."""


class FrictionLaw(StrEnum):
    """How the roughness is stated."""

    COEFFICIENT = "coefficient"
    MANNING = "manning"
    CHEZY = "chezy"
    KEULEGAN = "keulegan"


SOURCES = {
    FrictionLaw.COEFFICIENT: "c_f = (u*/U)^2 as given",
    FrictionLaw.MANNING: "c_f = g n^2 / h^(1/3): Manning's formula with the depth for the hydraulic radius",
    FrictionLaw.CHEZY: "c_f = g / C^2: Chezy's formula",
    FrictionLaw.KEULEGAN: (
        "U/u* = 5.75 log10(12.2 h / k_s): Keulegan 1938, Laws of turbulent flow in open channels, "
        "J. Res. Nat. Bureau of Standards 21, 707-741 (from memory)"
    ),
}
"""Formula and publication of each law."""


class SmoothBedError(FlowError):
    """A roughness so large against the depth that the logarithmic law has no value."""

    code = "roughness-beyond-depth"
    title = "The roughness is too large for the depth"


@dataclass(frozen=True, slots=True)
class Friction:
    """A law and its number: c_f [-], n [s/m^(1/3)], C [m^(1/2)/s] or k_s [m]."""

    law: FrictionLaw
    value: float


def friction_coefficient(friction: Friction, depth: float) -> float:
    """Friction coefficient c_f = (u*/U)^2 [-] of a depth-mean speed in water of a depth [m].

    Raises SmoothBedError, path ("friction", "roughness_height"), if 12.2 h / k_s is not above e.
    """
    match friction.law:
        case FrictionLaw.COEFFICIENT:
            return friction.value
        case FrictionLaw.MANNING:
            return STANDARD_GRAVITY * friction.value**2 / float(np.cbrt(depth))
        case FrictionLaw.CHEZY:
            return STANDARD_GRAVITY / friction.value**2
        case FrictionLaw.KEULEGAN:
            ratio = 12.2 * depth / friction.value
            if ratio <= np.e:
                raise SmoothBedError(
                    f"{friction.value:g} m in a depth of {depth:g} m", ("friction", "roughness_height")
                )
            return (log(10.0) / (5.75 * log(ratio))) ** 2


def shear_stress(speed: FloatArray, coefficient: float, density: float) -> FloatArray:
    """Shear stress rho c_f U^2 [Pa] under a speed [m/s], any shape."""
    return density * coefficient * speed**2


def turbulent_gradient(
    friction_velocity: FloatArray, height: float, kinematic_viscosity: float
) -> FloatArray:
    """Estimate of the turbulent G = sqrt(u*^3 / (kappa z nu)) [1/s] at a height z above the bed [m].

    Production equals dissipation in the logarithmic layer; an order of magnitude, not part of the mean flow's
    G.

    References
    ----------
    Nezu, Nakagawa, Turbulence in Open-Channel Flows, 1993 (from memory).
    """
    return np.sqrt(friction_velocity**3 / (KARMAN * height * kinematic_viscosity))

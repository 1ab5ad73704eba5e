"""Properties of natural water at atmospheric pressure, by temperature and absolute salinity."""

from dataclasses import dataclass

import gsw
import numpy as np

from forebay.flow.errors import FlowError

STANDARD_GRAVITY = 9.80665
"""Acceleration of free fall, exact by convention (3rd CGPM, 1901) [m/s2]."""

TEMPERATURES = (0.0, 40.0)
"""Liquid natural water, where every formula below holds [degC]."""

SALINITIES = (0.0, 42.0)
"""Absolute salinity for which the TEOS-10 density holds [g/kg]."""

ZERO_CELSIUS = 273.15
"""0 degC [K]."""

LEFT_OUT = "salt is left out of surface tension (about +1 % at 35 g/kg) and vapour pressure (about -2 %)"
"""What the properties do not contain; shown with them."""

SOURCES = {
    "density": "TEOS-10 (IOC, SCOR and IAPSO 2010), 75-term form by the library gsw, at 101325 Pa",
    "dynamic_viscosity": (
        "IAPWS SR6-08(2011), liquid water at 0.1 MPa, times the factor of Sharqawy, Lienhard and Zubair "
        "2010, Desalination and Water Treatment 16, 354-380, equation 22 (1.5 %)"
    ),
    "kinematic_viscosity": "dynamic viscosity over density",
    "surface_tension": "IAPWS R1-76(2014), fresh water against its vapour",
    "vapour_pressure": "IAPWS R7-97(2012), equation 30, fresh water",
    "gravity": "standard acceleration, 3rd CGPM 1901",
}
"""Where each property comes from."""

_VISCOSITY_TERMS = ((280.68, -1.9), (511.45, -7.7), (61.131, -19.6), (0.45903, -40.0))
"""Coefficients a [uPa.s] and exponents b [-] of SR6-08, mu = sum a (T / 300 K)^b."""

_SATURATION = (
    0.11670521452767e4,
    -0.72421316703206e6,
    -0.17073846940092e2,
    0.12020824702470e5,
    -0.32325550322333e7,
    0.14915108613530e2,
    -0.48232657361591e4,
    0.40511340542057e6,
    -0.23855557567849,
    0.65017534844798e3,
)
"""Coefficients n1 to n10 of R7-97, equation 29."""


class WaterRangeError(FlowError):
    """Temperature or salinity outside the range in which the water properties are known."""

    code = "water-out-of-range"
    title = "Water properties are not known there"


@dataclass(frozen=True, slots=True)
class WaterProperties:
    """Properties at one temperature [degC] and absolute salinity [g/kg], 101325 Pa.

    density [kg/m3], dynamic_viscosity [Pa.s], kinematic_viscosity [m2/s], surface_tension [N/m],
    vapour_pressure [Pa], gravity [m/s2]
    """

    temperature: float
    salinity: float
    density: float
    dynamic_viscosity: float
    kinematic_viscosity: float
    surface_tension: float
    vapour_pressure: float
    gravity: float = STANDARD_GRAVITY


def water_properties(temperature: float, salinity: float = 0.0) -> WaterProperties:
    """All properties of water; raises WaterRangeError outside TEMPERATURES and SALINITIES.

    Viscosity agrees with the full formulation R12-08 within 0.004 % from 0 to 40 degC. Tension and vapour
    pressure are those of fresh water (see LEFT_OUT).
    """
    _check("temperature", temperature, TEMPERATURES, "degC")
    _check("salinity", salinity, SALINITIES, "g/kg")
    density = _density(temperature, salinity)
    viscosity = _fresh_viscosity(temperature) * _salinity_factor(temperature, salinity)
    return WaterProperties(
        temperature=temperature,
        salinity=salinity,
        density=density,
        dynamic_viscosity=viscosity,
        kinematic_viscosity=viscosity / density,
        surface_tension=_surface_tension(temperature),
        vapour_pressure=_vapour_pressure(temperature),
    )


def _check(field: str, value: float, limits: tuple[float, float], unit: str) -> None:
    lowest, highest = limits
    if not lowest <= value <= highest:
        raise WaterRangeError(
            f"{field} must be from {lowest:g} to {highest:g} {unit}",
            (field,),
            lowest=lowest,
            highest=highest,
        )


def _density(temperature: float, salinity: float) -> float:
    """TEOS-10 density at sea pressure 0 dbar [kg/m3]."""
    conservative = gsw.CT_from_t(salinity, temperature, 0.0)
    return float(gsw.rho(salinity, conservative, 0.0))


def _fresh_viscosity(temperature: float) -> float:
    """IAPWS SR6-08 [Pa.s]."""
    reduced = (temperature + ZERO_CELSIUS) / 300.0
    return float(1e-6 * sum(factor * reduced**exponent for factor, exponent in _VISCOSITY_TERMS))


def _salinity_factor(temperature: float, salinity: float) -> float:
    """1 + A S + B S^2 with S in kg/kg, Sharqawy, Lienhard and Zubair 2010, equation 22 [-]."""
    share = salinity / 1000.0
    first = 1.541 + 1.998e-2 * temperature - 9.52e-5 * temperature**2
    second = 7.974 - 7.561e-2 * temperature + 4.724e-4 * temperature**2
    return 1.0 + first * share + second * share**2


def _surface_tension(temperature: float) -> float:
    """IAPWS R1-76(2014), sigma = B tau^mu (1 + b tau), tau = 1 - T / Tc [N/m]."""
    tau = 1.0 - (temperature + ZERO_CELSIUS) / 647.096
    return float(235.8e-3 * tau**1.256 * (1.0 - 0.625 * tau))


def _vapour_pressure(temperature: float) -> float:
    """IAPWS R7-97(2012), equations 29b and 30 [Pa]."""
    kelvin = temperature + ZERO_CELSIUS
    n = _SATURATION
    theta = kelvin + n[8] / (kelvin - n[9])
    a = theta**2 + n[0] * theta + n[1]
    b = n[2] * theta**2 + n[3] * theta + n[4]
    c = n[5] * theta**2 + n[6] * theta + n[7]
    return float(1e6 * (2.0 * c / (-b + np.sqrt(b * b - 4.0 * a * c))) ** 4)

"""Water properties against reference libraries, printed tables and second formulae."""

import gsw
import numpy as np
import pytest
from iapws import IAPWS95
from iapws._iapws import _Tension, _Viscosity
from iapws.iapws97 import _PSat_T
from numpy.testing import assert_allclose

from forebay.trade.water import LEFT_OUT, SOURCES, WaterRangeError, water_properties

# degC: kg/m3, uPa.s, 1e-6 m2/s, mN/m, Pa by IAPWS-95, R12-08, R1-76 and IF97; density by Kell 1975
TABLE = {
    4: (999.9749, 1567.29, 1.56733, 75.084, 813.55, 999.97199),
    5: (999.9666, 1518.17, 1.51822, 74.942, 872.57, 999.96382),
    10: (999.7025, 1305.90, 1.30629, 74.221, 1228.2, 999.69963),
    15: (999.1026, 1137.57, 1.13859, 73.486, 1705.7, 999.09961),
    20: (998.2072, 1001.60, 1.00340, 72.736, 2339.2, 998.20413),
    25: (997.0476, 890.02, 0.892658, 71.972, 3169.8, 997.04490),
    30: (995.6495, 797.22, 0.800705, 71.194, 4246.7, 995.64726),
    40: (992.2164, 652.73, 0.657849, 69.596, 7384.4, 992.21577),
}

# TEOS-10 density by absolute salinity, in the order of SEA_TEMPERATURES
SEA_TEMPERATURES = (0, 5, 10, 15, 20, 25, 30, 40)
SEA = {
    0.0: (999.8445, 999.9678, 999.7032, 999.1032, 998.2077, 997.0482, 995.6500, 992.2173),
    10.0: (1007.9178, 1007.8664, 1007.4622, 1006.7484, 1005.7585, 1004.5201, 1003.0572, 999.5450),
    20.0: (1015.9402, 1015.7304, 1015.1956, 1014.3734, 1013.2933, 1011.9796, 1010.4538, 1006.8502),
    35.16504: (1028.1070, 1027.6757, 1026.9541, 1025.9756, 1024.7654, 1023.3431, 1021.7259, 1017.9717),
}

# Sharqawy, Lienhard and Zubair 2010, equations 22 and 23: 1e-3 Pa.s at 0, 10 and 35 g/kg
SHARQAWY = {
    0: (1.791444, 1.820478, 1.905564),
    10: (1.306006, 1.329565, 1.396766),
    20: (1.001762, 1.021487, 1.076629),
    30: (0.7973217, 0.8141933, 0.8606494),
    40: (0.6528239, 0.6674794, 0.7073771),
}


def kell(t, denominator=16.879850e-3):
    """Kell 1975, J. Chem. Eng. Data 20, 97: density of air-free water at 1 atm [kg/m3]."""
    powers = (999.83952, 16.945176, -7.9870401e-3, -46.170461e-6, 105.56302e-9, -280.54253e-12)
    return sum(a * t**n for n, a in enumerate(powers)) / (1.0 + denominator * t)


@pytest.mark.parametrize("temperature", TABLE)
def test_table_of_fresh_water(temperature):
    density, viscosity, kinematic, tension, vapour, _ = TABLE[temperature]
    water = water_properties(temperature)
    assert_allclose(water.density, density, rtol=0, atol=0.0015)  # 75-term polynomial against IAPWS-95
    assert_allclose(water.dynamic_viscosity * 1e6, viscosity, rtol=5e-5)  # SR6-08 against R12-08
    assert_allclose(water.kinematic_viscosity * 1e6, kinematic, rtol=5e-5)
    assert_allclose(water.surface_tension * 1e3, tension, rtol=0, atol=5.1e-4)  # printed digits
    assert_allclose(water.vapour_pressure, vapour, rtol=3e-5)  # printed to five digits


@pytest.mark.parametrize("temperature", TABLE)
def test_density_by_kell(temperature):
    # Kell's table rests on the older reference density of water: 0.003 kg/m3 lower
    assert_allclose(kell(temperature), TABLE[temperature][5], rtol=0, atol=6e-6)
    assert_allclose(water_properties(temperature).density, kell(temperature), rtol=0, atol=0.0045)


def test_swapped_digits_in_kell_would_be_seen():
    # copies of Kell's formula with 16.897850e-3 in the denominator circulate: 997.936 instead of 998.204
    swapped = kell(20.0, denominator=16.897850e-3)
    assert_allclose(swapped, 997.936, atol=5e-4)
    assert abs(water_properties(20.0).density - swapped) > 0.25


@pytest.mark.parametrize("temperature", np.linspace(0.01, 40.0, 9))
def test_fresh_water_by_reference_library(temperature):
    kelvin = temperature + 273.15
    exact = IAPWS95(T=kelvin, P=0.101325)
    water = water_properties(temperature)
    assert_allclose(water.density, exact.rho, rtol=1.5e-6)  # the ocean polynomial's own fit at its fresh end
    assert_allclose(water.dynamic_viscosity, _Viscosity(exact.rho, kelvin), rtol=3e-5)
    assert_allclose(water.surface_tension, _Tension(kelvin), rtol=1e-12)
    assert_allclose(water.vapour_pressure, _PSat_T(kelvin) * 1e6, rtol=1e-12)


@pytest.mark.parametrize("salinity", SEA)
def test_table_of_sea_water(salinity):
    found = [water_properties(t, salinity).density for t in SEA_TEMPERATURES]
    assert_allclose(found, SEA[salinity], rtol=0, atol=5.1e-5)  # printed digits


@pytest.mark.parametrize("salinity", [0.0, 7.0, 35.0, 42.0])
@pytest.mark.parametrize("temperature", [0.0, 12.5, 25.0, 40.0])
def test_sea_water_by_the_exact_function(temperature, salinity):
    exact = gsw.rho_t_exact(salinity, temperature, 0.0)
    # largest misfit of the 75-term form at the corners of the range
    assert_allclose(water_properties(temperature, salinity).density, exact, rtol=0, atol=0.02)


@pytest.mark.parametrize("temperature", SHARQAWY)
@pytest.mark.parametrize(("column", "salinity"), [(0, 0.0), (1, 10.0), (2, 35.0)])
def test_table_of_saline_viscosity(temperature, column, salinity):
    # their fresh-water formula lies within 0.02 % of IAPWS from 0 to 40 degC; the factor is the same
    found = water_properties(temperature, salinity).dynamic_viscosity * 1e3
    assert_allclose(found, SHARQAWY[temperature][column], rtol=2e-4)


def test_salinity_factor_is_exactly_theirs():
    fresh, saline = water_properties(20.0), water_properties(20.0, 35.0)
    assert_allclose(saline.dynamic_viscosity / fresh.dynamic_viscosity, 1.076629 / 1.001762, rtol=1e-6)


def test_density_difference_of_ten_degrees():
    # reduced gravity between fresh water at 10 and 20 degC [m/s2]
    cold, warm = water_properties(10.0), water_properties(20.0)
    assert_allclose(cold.gravity * (cold.density - warm.density) / cold.density, 0.0146682, rtol=1e-3)


@pytest.mark.parametrize(
    ("temperature", "salinity", "field"),
    [
        pytest.param(-0.01, 0.0, "temperature", id="ice"),
        pytest.param(40.01, 0.0, "temperature", id="hot"),
        pytest.param(10.0, -1e-9, "salinity", id="less than fresh"),
        pytest.param(10.0, 42.01, "salinity", id="brine"),
        pytest.param(float("nan"), 0.0, "temperature", id="no number"),
    ],
)
def test_outside_the_range(temperature, salinity, field):
    with pytest.raises(WaterRangeError) as caught:
        water_properties(temperature, salinity)
    assert caught.value.path == (field,)
    assert caught.value.facts["lowest"] == 0.0


@pytest.mark.parametrize(("temperature", "salinity"), [(0.0, 0.0), (40.0, 42.0)])
def test_ends_of_the_range(temperature, salinity):
    water = water_properties(temperature, salinity)
    assert water.density > 990.0
    assert water.kinematic_viscosity == water.dynamic_viscosity / water.density


def test_every_property_has_a_source_and_the_gaps_are_named():
    properties = {"density", "dynamic_viscosity", "kinematic_viscosity", "surface_tension", "vapour_pressure"}
    assert set(SOURCES) == properties | {"gravity"}
    assert "surface tension" in LEFT_OUT
    assert "vapour pressure" in LEFT_OUT

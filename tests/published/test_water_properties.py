"""Water properties through `GET /v1/water`, against IAPWS and TEOS-10 and the published tables.

Fresh water: library iapws (IAPWS-95, R12-08, R1-76, IF97). Saline density: TEOS-10, library gsw. Saline
viscosity: Sharqawy, Lienhard and Zubair 2010, Desalination and Water Treatment 16, 354, equations 22 and 23
(read in several codes). Density of fresh water: G. S. Kell 1975, J. Chem. Eng. Data 20, 97 (read in several
codes).
"""

import gsw
import iapws
import pytest

FRESH = [
    # T, density, viscosity [uPa.s], kinematic [1e-6 m2/s], surface tension [mN/m], vapour pressure [Pa]
    (0.01, 999.8438, 1791.13, 1.79141, 75.646, 611.66),
    (4, 999.9749, 1567.29, 1.56733, 75.084, 813.55),
    (5, 999.9666, 1518.17, 1.51822, 74.942, 872.57),
    (10, 999.7025, 1305.90, 1.30629, 74.221, 1228.2),
    (15, 999.1026, 1137.57, 1.13859, 73.486, 1705.7),
    (20, 998.2072, 1001.60, 1.00340, 72.736, 2339.2),
    (25, 997.0476, 890.02, 0.892658, 71.972, 3169.8),
    (30, 995.6495, 797.22, 0.800705, 71.194, 4246.7),
    (35, 994.0333, 719.13, 0.723442, 70.402, 5628.6),
    (40, 992.2164, 652.73, 0.657849, 69.596, 7384.4),
]

KELL = {
    0: 999.83952,
    4: 999.97199,
    5: 999.96382,
    10: 999.69963,
    15: 999.09961,
    20: 998.20413,
    25: 997.04490,
    30: 995.64726,
    40: 992.21577,
}

SALINE = {
    0: (999.8445, 999.9678, 999.7032, 999.1032, 998.2077, 997.0482, 995.6500, 992.2173),
    10: (1007.9178, 1007.8664, 1007.4622, 1006.7484, 1005.7585, 1004.5201, 1003.0572, 999.5450),
    20: (1015.9402, 1015.7304, 1015.1956, 1014.3734, 1013.2933, 1011.9796, 1010.4538, 1006.8502),
    35.16504: (1028.1070, 1027.6757, 1026.9541, 1025.9756, 1024.7654, 1023.3431, 1021.7259, 1017.9717),
}
TEMPERATURES = (0, 5, 10, 15, 20, 25, 30, 40)

SHARQAWY = [
    (0, 1.791444, 1.820478, 1.905564),
    (5, 1.518096, 1.544126, 1.619304),
    (10, 1.306006, 1.329565, 1.396766),
    (15, 1.137741, 1.159230, 1.219867),
    (20, 1.001762, 1.021487, 1.076629),
    (25, 0.8901536, 0.9083553, 0.9588283),
    (30, 0.7973217, 0.8141933, 0.8606494),
    (40, 0.6528239, 0.6674794, 0.7073771),
]

STANDARDS_AGREE = 4e-5
"""Viscosity by IAPWS SR6-08 differs from R12-08 by at most 0.0034 % between 0 and 40 degC."""

PRINTED = 1e-8
"""The catalogue answers in nine digits."""


def _water(service, temperature: float, salinity: float = 0.0) -> dict[str, float]:
    result: dict[str, float] = service.get("water", temperature=temperature, salinity=salinity)["result"]
    return result


@pytest.mark.parametrize("row", FRESH, ids=lambda row: f"{row[0]} degC")
def test_fresh_water_table(service, row):
    temperature, density, viscosity, kinematic, tension, vapour = row
    water = _water(service, temperature)
    assert water["density"] == pytest.approx(
        density, abs=1.5e-3
    )  # TEOS-10 against IAPWS-95: 1.3e-3 kg/m3 at 5 degC
    assert water["dynamic_viscosity"] == pytest.approx(viscosity * 1e-6, rel=STANDARDS_AGREE)
    assert water["kinematic_viscosity"] == pytest.approx(kinematic * 1e-6, rel=STANDARDS_AGREE)
    assert water["surface_tension"] == pytest.approx(tension * 1e-3, abs=6e-7)
    assert water["vapour_pressure"] == pytest.approx(
        vapour, rel=2e-4
    )  # five digits printed; IF97 against IAPWS-95


@pytest.mark.parametrize("temperature", [0.5, 7.3, 18.9, 33.3, 39.5])
def test_fresh_water_against_iapws(service, temperature):
    water, kelvin = _water(service, temperature), temperature + 273.15
    reference = iapws.IAPWS95(T=kelvin, P=0.101325)
    assert water["density"] == pytest.approx(reference.rho, abs=1.5e-3)
    assert water["dynamic_viscosity"] == pytest.approx(reference.mu, rel=STANDARDS_AGREE)
    assert water["surface_tension"] == pytest.approx(
        iapws._iapws._Tension(kelvin), rel=1e-9
    )  # the same formula
    assert water["vapour_pressure"] == pytest.approx(iapws.iapws97._PSat_T(kelvin) * 1e6, rel=PRINTED)


@pytest.mark.parametrize(("temperature", "density"), KELL.items())
def test_fresh_water_against_kell(service, temperature, density):
    # Kell's reference density is lower: 999.972 against 999.975 at the maximum; 0.005 at 0, 0.0016 at 40 degC
    assert _water(service, temperature)["density"] == pytest.approx(density + 0.003, abs=2.1e-3)


def _kell(t: float) -> float:
    terms = (999.83952, 16.945176, -7.9870401e-3, -46.170461e-6, 105.56302e-9, -280.54253e-12)
    return sum(c * t**k for k, c in enumerate(terms)) / (1 + 16.879850e-3 * t)


@pytest.mark.parametrize(("temperature", "density"), KELL.items())
def test_table_of_kell_is_his_formula(temperature, density):
    assert _kell(temperature) == pytest.approx(density, abs=6e-6)


@pytest.mark.parametrize("salinity", SALINE)
@pytest.mark.parametrize("column", range(len(TEMPERATURES)), ids=TEMPERATURES)
def test_saline_density_table(service, salinity, column):
    density = _water(service, TEMPERATURES[column], salinity)["density"]
    assert density == pytest.approx(SALINE[salinity][column], abs=6e-5)  # four decimals are printed


@pytest.mark.parametrize(("temperature", "salinity"), [(3.3, 12.0), (17.7, 34.0), (29.0, 41.0)])
def test_saline_density_against_teos_10(service, temperature, salinity):
    expected = gsw.rho(salinity, gsw.CT_from_t(salinity, temperature, 0.0), 0.0)
    assert _water(service, temperature, salinity)["density"] == pytest.approx(expected, rel=PRINTED)


@pytest.mark.parametrize(("temperature", "fresh", "brackish", "sea"), SHARQAWY)
def test_saline_viscosity_table(service, temperature, fresh, brackish, sea):
    # his pure water is within 0.02 % of IAPWS; the saline factor is his own
    base = _water(service, temperature)["dynamic_viscosity"]
    assert base == pytest.approx(fresh * 1e-3, rel=2.5e-4)
    for salinity, expected in ((10.0, brackish), (35.0, sea)):
        factor = _water(service, temperature, salinity)["dynamic_viscosity"] / base
        assert factor == pytest.approx(expected / fresh, rel=1e-6)  # seven digits are printed


def test_reduced_gravity_of_ten_degrees(service):
    # g' between fresh water at 10 and 20 degC = 0.0146682 m/s2
    cold, warm = (_water(service, temperature)["density"] for temperature in (10, 20))
    # densities printed to 1e-4 kg/m3 leave 1e-6 m/s2; the standards differ by 6e-4 and 5e-4 kg/m3 there
    assert 9.80665 * (cold - warm) / cold == pytest.approx(0.0146682, abs=1.2e-5)


def test_fluid_of_a_stress_state_is_this_water(service):
    water = _water(service, 15.0, 20.0)
    states = [{"name": "s", "velocity_gradient": [[0, 1], [0, 0]]}]
    (state,) = service.stress({"temperature": 15.0, "salinity": 20.0}, states)
    assert state["viscous_stress"][0][1] == pytest.approx(water["dynamic_viscosity"], rel=PRINTED)

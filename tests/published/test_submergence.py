"""Submergence, similarity and swirl through the route, against published numbers and closed forms.

Worked numbers of the rules with g = 9.81 (S = D (1 + 2.3 F) as three secondary texts give ANSI/HI 9.8;
Gordon's lateral constant 0.72 as a secondary text gives it; symmetrical from memory), recomputed for this
project. The dips of Rankine's and Burgers' vortex were recomputed by quadrature.
"""

from math import atan, degrees, exp, log, pi, sqrt

import pytest
from scipy.integrate import quad

from support.http import assert_problem
from support.layouts import line_sink, open_water_body, sink, vortex

FOUR_DIGITS = 6e-5
"""The table prints four decimals."""

EXACT = 1e-12
"""Closed forms in doubles on both sides."""

WORKED = [
    (0.1, 0.3, 1.4147, 0.8247, 0.8690, 0.4210, 0.5614),
    (0.2, 0.4, 1.5915, 0.8034, 1.1392, 0.5469, 0.7293),
    (0.5, 0.6, 1.7684, 0.7289, 1.6059, 0.7442, 0.9924),
    (1.0, 0.9, 1.5719, 0.5290, 1.9951, 0.8102, 1.0804),
]
"""Q [m3/s], D [m], V [m/s], F, then S [m]: Hydraulic Institute, Gordon symmetrical, Gordon lateral."""


def pipe(**changes):
    return {
        "name": "inlet",
        "kind": "vertical-pipe",
        "diameter": 0.6,
        "discharge": 0.5,
        "submergence": 2.0,
    } | changes


def check(service, *inlets, **extra):
    body = {"inlets": list(inlets), "gravity": 9.81, "water": {"temperature": 20.0}, **extra}
    return service.post("submergence/check", body)["result"]["inlets"]


def by_rule(inlet):
    return {found["rule"]: found for found in inlet["rules"]}


# ---- required submergence


@pytest.mark.parametrize("row", WORKED)
def test_table_of_worked_numbers(service, row):
    q, d, v, froude, institute, symmetrical, lateral = row
    (inlet,) = check(service, pipe(discharge=q, diameter=d), allow_from_memory=True)
    assert inlet["velocity"] == pytest.approx(v, abs=FOUR_DIGITS)
    assert inlet["froude"] == pytest.approx(froude, abs=FOUR_DIGITS)
    rules = by_rule(inlet)
    assert rules["hydraulic-institute"]["required"] == pytest.approx(institute, abs=FOUR_DIGITS)
    # the table has Gordon's constants as 0.5433 and 0.7245, up to 1.7e-4 below 0.3 and 0.4 / sqrt(0.3048)
    for name, printed in (("gordon-symmetrical", symmetrical), ("gordon-lateral", lateral)):
        assert rules[name]["required"] == pytest.approx(printed, abs=FOUR_DIGITS + 1.7e-4 * printed)
    assert rules["prosser-floor"]["required"] == pytest.approx(1.5 * d, rel=EXACT)


@pytest.mark.parametrize(("q", "d"), [(0.1, 0.3), (1.0, 0.9)])
def test_dimensional_form_of_the_standard(service, q, d):
    # SI: S = D + Q / (1.069 D^1.5), which the standard prints; 1/1.069 is 5e-4 above the constant with g
    (inlet,) = check(service, pipe(discharge=q, diameter=d))
    printed = d + q / (1.069 * d**1.5)
    assert by_rule(inlet)["hydraulic-institute"]["required"] == pytest.approx(printed, rel=6e-4)


def test_dimensional_form_in_inches_and_gallons(service):
    # US: S = D + 0.574 Q / D^1.5 in inches and gallons a minute (from memory); 0.57369 with g = 9.81
    gallons, inches = 5000.0, 30.0
    body = {
        "unit_system": "us",
        "inlets": [pipe(diameter=inches / 12, discharge={"value": gallons, "unit": "gpm"}, submergence=9.0)],
        "gravity": 9.81 / 0.3048,
        "water": {"temperature": 68.0},
    }
    (inlet,) = service.post("submergence/check", body)["result"]["inlets"]
    required = by_rule(inlet)["hydraulic-institute"]["required"] * 12
    assert required == pytest.approx(
        inches + 0.57369 * gallons / inches**1.5, rel=1e-5
    )  # five digits printed
    assert required == pytest.approx(inches + 0.574 * gallons / inches**1.5, rel=6e-4)


def test_gordon_in_feet(service):
    # S = 0.4 V sqrt(D) in feet and seconds
    body = {
        "unit_system": "us",
        "inlets": [pipe(kind="horizontal-pipe", diameter=9.0, discharge=600.0, submergence=30.0)],
    }
    (inlet,) = service.post("submergence/check", body)["result"]["inlets"]
    velocity = 600.0 / (pi * 9.0**2 / 4.0)
    assert by_rule(inlet)["gordon-lateral"]["required"] == pytest.approx(0.4 * velocity * 3.0, rel=EXACT)


def test_critical_submergence_solves_its_own_equation(service):
    # Jain, Ranga Raju and Garde (from memory): S / D = 5.6 (Gamma S / Q)^0.42 F^0.5 with the S answered
    (inlet,) = check(service, pipe(circulation=0.2), allow_from_memory=True, rules=["jain-raju-garde"])
    s = by_rule(inlet)["jain-raju-garde"]["required"]
    assert s / 0.6 == pytest.approx(5.6 * (0.2 * s / 0.5) ** 0.42 * inlet["froude"] ** 0.5, rel=1e-11)
    (unknown,) = check(service, pipe(), allow_from_memory=True, rules=["jain-raju-garde"])
    (found,) = unknown["rules"]
    assert (found["required"], found["pass"], found["margin"]) == (None, None, None)
    assert found["reason"]


# ---- available submergence, each rule from its own datum


def test_datum_of_each_rule(service):
    upright, lying, slot = check(
        service,
        pipe(name="a"),
        pipe(name="b", kind="horizontal-pipe"),
        {
            "name": "c",
            "kind": "slot",
            "height": 0.8,
            "width": 2.0,
            "discharge": 1.0,
            "surface_level": 12.0,
            "level": 10.0,
        },
    )
    for inlet, expected in (
        (
            upright,
            {
                "hydraulic-institute": ("lip", 2.0),
                "gordon-lateral": ("lip", 2.0),
                "prosser-floor": ("lip", 2.0),
            },
        ),
        (
            lying,
            {
                "hydraulic-institute": ("crown", 1.7),
                "gordon-lateral": ("crown", 1.7),
                "prosser-floor": ("centreline", 2.0),
            },
        ),
        (
            slot,
            {
                "hydraulic-institute": ("crown", 1.6),
                "gordon-lateral": ("crown", 1.6),
                "prosser-floor": ("centreline", 2.0),
            },
        ),
    ):
        found = {name: (rule["datum"], rule["available"]) for name, rule in by_rule(inlet).items()}
        assert found == {
            name: (datum, pytest.approx(value, rel=EXACT)) for name, (datum, value) in expected.items()
        }
    assert slot["diameter"] == pytest.approx(sqrt(4 * 1.6 / pi), rel=EXACT)
    # Gordon's D is the height of the conduit
    assert by_rule(slot)["gordon-lateral"]["required"] == pytest.approx(
        0.72452 * (1.0 / 1.6) * sqrt(0.8), rel=1e-5
    )


def test_rules_differ_by_a_factor_near_two(service):
    (inlet,) = check(service, pipe(submergence=1.2))
    rules = by_rule(inlet)
    assert 1.5 < rules["hydraulic-institute"]["required"] / rules["gordon-lateral"]["required"] < 2.5
    assert rules["hydraulic-institute"]["pass"] is False
    assert rules["gordon-lateral"]["pass"] is True
    assert inlet["governing_rule"] == "hydraulic-institute"
    (reason,) = inlet["physical_model"]
    assert reason["value"] == 1.2
    assert reason["limit"] == rules["hydraulic-institute"]["required"]


def test_submergence_that_is_met_exactly_is_met(service):
    (inlet,) = check(service, pipe(submergence=0.9), rules=["prosser-floor"])
    assert inlet["rules"][0]["pass"] is True
    assert inlet["rules"][0]["margin"] == pytest.approx(0.0, abs=1e-15)


# ---- similarity


def test_numbers_of_similarity(service):
    # nu 1.0034e-6, sigma 0.072736, rho 998.207 at 20 degC (IAPWS)
    (inlet,) = check(service, pipe())
    v = 0.5 / (pi * 0.09)
    assert inlet["reynolds"] == pytest.approx(v * 0.6 / 1.0034e-6, rel=1e-4)
    assert inlet["radial_reynolds"] == pytest.approx(0.5 / (1.0034e-6 * 2.0), rel=1e-4)
    assert inlet["weber"] == pytest.approx(998.207 * v**2 * 0.6 / 0.072736, rel=1e-4)


def test_model_by_froudes_law(service):
    (inlet,) = check(service, pipe(), model_scale=9.0)
    (model,) = check(service, pipe(diameter=0.6 / 9, discharge=0.5 / 9**2.5, submergence=2.0 / 9))
    assert model["froude"] == pytest.approx(inlet["froude"], rel=EXACT)
    for effect in inlet["scale_effects"]:
        assert effect["model"] == pytest.approx(model[effect["quantity"]], rel=1e-11)
        assert effect["negligible"] == (effect["model"] > effect["threshold"])
    # the largest scale is the one at which the number is the threshold
    for effect in inlet["scale_effects"]:
        (at_limit,) = check(service, pipe(), model_scale=max(effect["largest_scale"], 1.0))
        (same,) = [e for e in at_limit["scale_effects"] if e["threshold"] == effect["threshold"]]
        assert same["model"] == pytest.approx(same["threshold"], rel=1e-11)


# ---- swirl


def test_dips_of_the_two_vortices(service):
    # Gamma = 0.5 m2/s, core 0.05 m: 0.258209 m (Rankine), 0.178977 m (Burgers)
    (inlet,) = check(service, pipe(circulation=0.5, core_radius=0.05))
    found = inlet["vortex"]
    assert found["rankine_dip"] == pytest.approx(0.258209, abs=6e-7)
    assert found["burgers_dip"] == pytest.approx(0.178977, abs=6e-7)
    # maximum of Burgers' at r = 1.120906 r0: 0.638173 Gamma / (2 pi r0)
    assert found["burgers_speed"] == pytest.approx(0.638173 * 0.5 / (2 * pi * 0.05), rel=1e-6)
    assert found["rankine_speed"] == pytest.approx(sqrt(9.81 * 0.258209), rel=3e-6)
    assert found["circulation_number"] == pytest.approx(0.5 * 2.0 / 0.5, rel=EXACT)
    assert found["core_given"] is True


def test_dip_is_the_integral_of_the_centripetal_slope(service):
    # g dz/dr = v^2 / r with v of Burgers' vortex, by quadrature
    (inlet,) = check(service, pipe(circulation=-0.3, core_radius=0.04))
    dip, error = quad(
        lambda r: (0.3 / (2 * pi * r) * (1 - exp(-((r / 0.04) ** 2)))) ** 2 / (9.81 * r), 0.0, 50.0, limit=200
    )
    # beyond 50 m: Gamma^2 / (8 pi^2 g r^2) = 5e-8 m
    assert inlet["vortex"]["burgers_dip"] == pytest.approx(dip, abs=error + 6e-8)


def test_core_of_molecular_viscosity(service):
    # r0^2 = 4 nu / alpha with alpha = V / S
    (inlet,) = check(service, pipe(circulation=0.1))
    alpha = inlet["velocity"] / 2.0
    assert inlet["vortex"]["core_radius"] == pytest.approx(sqrt(4 * 1.0034e-6 / alpha), rel=1e-4)
    # the least possible core is no forecast: nothing is judged by it
    assert inlet["vortex"]["core_given"] is False
    assert inlet["vortex"]["air_could_be_drawn"] is None
    assert inlet["physical_model"] == []


@pytest.mark.parametrize(("factor", "drawn"), [(0.999, True), (1.001, False)])
def test_critical_core_is_the_one_whose_dip_reaches_the_inlet(service, factor, drawn):
    # ln 2 Gamma^2 / (4 pi^2 g a^2) = S
    (inlet,) = check(service, pipe(circulation=0.3, core_radius=1.0))
    critical = inlet["vortex"]["critical_core_radius"]
    assert log(2) * 0.09 / (4 * pi**2 * 9.81 * critical**2) == pytest.approx(2.0, rel=EXACT)
    (narrow,) = check(service, pipe(circulation=0.3, core_radius=factor * critical))
    assert narrow["vortex"]["air_could_be_drawn"] is drawn
    assert any("air could be drawn" in finding["reason"] for finding in narrow["physical_model"]) is drawn


def test_swirl_angle_in_the_pipe(service):
    # the swirl meter's atan(pi d n / u), n = Gamma / (pi d)^2 turns a second of rigid rotation
    (inlet,) = check(service, pipe(circulation=0.1, throat_diameter=0.5))
    axial = 0.5 / (pi * 0.0625)
    turns = 0.1 / (pi * 0.5) ** 2
    assert inlet["vortex"]["swirl_angle_deg"] == pytest.approx(
        degrees(atan(pi * 0.5 * turns / axial)), rel=EXACT
    )


def test_circulation_is_what_the_rings_enclose(service):
    # Stokes: a vortex of Gamma at 3 m is outside rings of 1 and 2 m and inside one of 4 m; a solid rotation
    # of vorticity 2 omega adds 2 omega pi R^2
    layout = open_water_body([sink(0j, 0.5, "pump"), vortex(3 + 0j, 0.7)], ambient={"velocity": [0.2, 0.0]})
    inlet = pipe(element="pump", kind="bell")
    (found,) = check(service, inlet, layout=layout, ring_radii=[1.0, 2.0, 4.0])
    assert [ring["circulation"] for ring in found["rings"]] == [0.0, 0.0, pytest.approx(0.7, rel=EXACT)]
    assert found["circulation"] == pytest.approx(0.7, rel=EXACT)
    spun = layout | {"elements": layout["elements"][:1], "ambient": {"gradient": [[0, -0.01], [0.01, 0]]}}
    (turned,) = check(service, inlet, layout=spun, ring_radii=[1.0, 2.0])
    areas = [0.02 * pi * r**2 for r in (1.0, 2.0)]
    assert [ring["circulation"] for ring in turned["rings"]] == pytest.approx(areas, rel=1e-11)
    still = layout | {"elements": layout["elements"][:1]}
    (calm,) = check(service, inlet, layout=still)
    assert calm["circulation"] == 0.0
    assert calm["vortex"] is None


def test_ring_that_meets_a_bank_has_no_circulation(service):
    bank = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}
    layout = open_water_body([sink(1j, 0.5, "pump")], ambient={"velocity": [0.2, 0.0]}, shore=bank)
    (found,) = check(service, pipe(element="pump"), layout=layout, ring_radii=[0.5, 2.0])
    assert [ring["status"] for ring in found["rings"]] == ["ok", "crosses-land"]
    assert found["rings"][1]["circulation"] is None
    assert found["circulation"] == 0.0


def test_discharge_of_the_layout_is_that_of_the_inlet(service):
    layout = open_water_body([line_sink(0j, 2 + 0j, 0.8, "bay")])
    inlet = pipe(element="bay")
    del inlet["discharge"]
    (found,) = check(service, inlet, layout=layout)
    assert found["discharge"] == 0.8
    assert [ring["radius"] for ring in found["rings"]] == pytest.approx([1.6, 2.2, 3.4], rel=EXACT)


# ---- from memory, and refusals


def test_nothing_from_memory_unless_asked_for(service, client):
    bell = pipe(kind="bell", discharge=3.0, diameter=0.9)
    (plain,) = check(service, bell)
    (all_,) = check(service, bell, allow_from_memory=True)
    assert {effect["standing"] for effect in plain["scale_effects"]} == {"quoted"}
    assert len(all_["scale_effects"]) > len(plain["scale_effects"])
    assert plain["velocity_band"] is None
    # 4.72 m/s at a bell of 3 m3/s: 1.2 to 2.1 m/s; above 2.52 m3/s a physical model (both from memory)
    assert (all_["velocity_band"]["least"], all_["velocity_band"]["largest"]) == (1.2, 2.1)
    assert all_["velocity_band"]["inside"] is False
    assert any(finding["reason"] == "discharge of the inlet" for finding in all_["physical_model"])
    body = {"inlets": [bell], "rules": ["prosser-floor", "gordon-symmetrical"]}
    problem = assert_problem(client.post("/v1/submergence/check", json=body), 422, "criterion-from-memory")
    assert problem["errors"][0]["pointer"] == "#/rules/1"


@pytest.mark.parametrize(
    ("inlet", "extra", "code", "pointer"),
    [
        (pipe(diameter=None), {}, "invalid-request", "#/inlets/0"),
        (pipe(kind="slot"), {}, "invalid-request", "#/inlets/0"),
        (pipe(submergence=None), {}, "invalid-request", "#/inlets/0"),
        (pipe(level=1.0), {}, "invalid-request", "#/inlets/0"),
        (pipe(submergence=None, surface_level=2.0, level=2.0), {}, "invalid-request", "#/inlets/0"),
        (pipe(discharge=None), {}, "invalid-request", "#/inlets/0"),
        (pipe(element="nobody"), {}, "unknown-name", "#/inlets/0/element"),
        (pipe(element="nobody", discharge=None), {}, "unknown-name", "#/inlets/0/element"),
        (pipe(discharge={"value": 1, "unit": "bucket"}), {}, "invalid-request", "#/inlets/0/discharge/unit"),
        (pipe(), {"rules": ["thumb"]}, "unknown-rule", "#/rules/0"),
    ],
)
def test_what_cannot_be_is_refused_with_its_place(client, inlet, extra, code, pointer):
    problem = assert_problem(
        client.post("/v1/submergence/check", json={"inlets": [inlet], **extra}), 422, code
    )
    assert [error["pointer"] for error in problem["errors"]] == [pointer]

"""Capture zones, recirculation and travel times of the trade, through the routes.

Sources: J. Kuo, *Practical Design Calculations for Groundwater and Soil Remediation*, 2nd ed., section
6.2.2.1 (read); I. Javandel and C.-F. Tsang 1986, Ground Water 24(5) 616-625 (memory); J. Bear 1979 (memory).
Formulae of recirculation (compare Lippmann and Tsang 1980, Gringarten and Sauty 1975; D. Banks 2011, Q. J.
Eng. Geol. Hydrogeol. 44) are derived for this project and checked by tracing. An aquifer's u, B, Q stand for
the current, depth and discharge of open water.
"""

from math import atan, atan2, log, pi, sin, sqrt, tan

import numpy as np
import pytest

from support.layouts import open_water_body, sink, source
from support.service import crossing_at_x, crossing_at_y, share_of

EXACT = 1e-9
"""Shares and widths are integrals along traced separatrices; contract: exact arrival angles."""

SIX_DIGITS = 6e-7

# ---- one sink in a current


KUO_TABLE = [(0.1, -13.74), (1, -13.73), (5, -13.14), (10, -11.24), (20, -2.34), (30, 21.01), (40, 168.78)]
"""Kuo p. 226, data of Fig. 6.2 [ft]; b = 13.751 ft returns all but the first within 0.02 (13.7508)."""

KUO_B = 13.751
KUO_LAYOUT = open_water_body([sink(0j, 2 * pi * KUO_B)], ambient={"velocity": [-1.0, 0.0]})


def _dividing_line(x_b: float) -> float:
    """x = -y / tan(2 pi B U y / Q), with y = x_b."""
    return -x_b / tan(x_b / KUO_B)


@pytest.mark.parametrize(("y", "x"), KUO_TABLE)
def test_kuo_table_lies_on_the_dividing_streamline(service, y, x):
    assert _dividing_line(y) == pytest.approx(x, rel=1e-3)
    speed = service.sample(KUO_LAYOUT, [complex(x, y)], unit_system="us")["speed"][0]
    gate = service.flux(KUO_LAYOUT, [-KUO_B + 0j, complex(x, y)], unit_system="us")
    assert gate == pytest.approx(0.0, abs=0.02 * speed)  # the table is good to 0.02 ft


def test_kuo_table_lies_on_the_line_that_is_answered(service):
    lines = service.withdrawal(KUO_LAYOUT, unit_system="us")["intake"]["dividing_streamlines"]
    upper = max(lines, key=lambda line: max(y for _, y in line))
    for y, x in KUO_TABLE[2:6]:
        # 0.1 % for the table, and chords of the polyline, whose steps are a fraction of the distance to the
        # sink
        assert min(abs(found - x) for found in crossing_at_y(upper, y)) < 0.02 * KUO_B


def test_stagnation_and_widths_of_one_sink(service):
    # Q / (2 pi B U) downstream, half-width Q / (4 B U) abeam, width Q / (B U) far upstream
    intake = service.withdrawal(KUO_LAYOUT, unit_system="us")["intake"]
    assert service.stagnation_places(KUO_LAYOUT, unit_system="us") == pytest.approx([-KUO_B], abs=1e-11)
    assert intake["width_far_upstream"] == pytest.approx(2 * pi * KUO_B, rel=EXACT)
    abeam = sorted(y for line in intake["dividing_streamlines"] for y in crossing_at_x(line, 0.0))
    assert [abeam[0], abeam[-1]] == pytest.approx([-pi / 2 * KUO_B, pi / 2 * KUO_B], rel=0.005)


GALLONS_PER_MINUTE = 0.133681 / 60
"""US gallons per minute [ft3/s]."""

KUO_CURRENT = 1.39e-3 / 60
"""K = 1000 gpd/ft2 times i = 0.015 as the book rounds it, 1.39e-3 ft/min [ft/s]."""


def _kuo_wells(*places: float) -> dict:
    wells = [sink(y * 1j, 50 * GALLONS_PER_MINUTE, f"well {y}") for y in places]
    body = open_water_body(wells, ambient={"velocity": [KUO_CURRENT, 0.0]})
    return {**body, "depth": 80.0}


@pytest.mark.parametrize(
    ("places", "abeam", "far"), [((0.0,), 15.0, 30.0), ((-9.6, 9.6), 30.0, 60.0)], ids=["6.6", "6.7"]
)
def test_kuo_examples(service, places, abeam, far):
    # p. 228-231: stagnation 9.6 ft downstream; lines +-15 and +-30 ft abeam, +-30 and +-60 ft far upstream
    layout = _kuo_wells(*places)
    assert pytest.approx(1.39e-3, abs=5e-6) == KUO_CURRENT * 60
    stagnation = service.stagnation_places(layout, unit_system="us")
    assert max(z.real for z in stagnation) == pytest.approx(9.6, abs=0.05)
    intakes = service.withdrawal(layout, unit_system="us").values()
    assert sum(intake["width_far_upstream"] for intake in intakes) == pytest.approx(2 * far, abs=0.5)
    lines = [line for intake in intakes for line in intake["dividing_streamlines"]]
    crossings = [abs(y) for line in lines for y in crossing_at_x(line, 0.0)]
    assert max(crossings) == pytest.approx(abeam, abs=0.5)


# ---- several sinks abreast: the largest spacing that lets nothing pass


def _abreast(count: int, spacing: float) -> dict:
    """Sinks of q = 1 in a current U = 1, so that lengths are in Q / (B U)."""
    places = [(number - (count - 1) / 2) * spacing for number in range(count)]
    wells = [sink(y * 1j, 1.0, f"well {number}") for number, y in enumerate(places)]
    return open_water_body(wells, ambient={"velocity": [1.0, 0.0]})


def _slowest_on_the_axis(service, layout: dict) -> float:
    return float(service.velocity(layout, np.linspace(0.02, 1.0, 981) + 0j).real.min())


@pytest.mark.parametrize(
    ("count", "closed", "passing"),
    [(2, 0.999 / pi, 1.001 / pi), (4, 0.38, 0.39)],
    ids=["two: 1/pi", "four: 0.38"],
)
def test_spacing_that_lets_nothing_pass_on_the_axis(service, count, closed, passing):
    # Kuo table 6.1, after Javandel and Tsang: 0.32 for two (exactly 1/pi), 0.38 for four
    assert _slowest_on_the_axis(service, _abreast(count, closed)) < 0.0
    assert _slowest_on_the_axis(service, _abreast(count, passing)) > 0.0


@pytest.mark.parametrize(("spacing", "passes"), [(0.39, False), (0.40, False), (0.405, True), (0.42, True)])
def test_spacing_of_three_sinks(service, spacing, passes):
    # Kuo table 6.1: 0.40. What passes between is the flux between the saddles behind neighbouring sinks: it
    # changes sign at 0.40255 (a closed form 2^(1/3) / pi = 0.401045 is remembered; it is 0.4 % lower)
    layout = _abreast(3, spacing)
    places = sorted(service.stagnation_places(layout), key=lambda z: z.imag)
    gap = service.flux(layout, [places[1], places[2]])
    assert (gap > 0) is passes


def test_two_sinks_at_the_limit_share_a_double_point(service):
    # spacing Q / (pi B U): one double point at Q / (2 pi B U) on the axis
    result = service.post("stagnation/search", {"layout": _abreast(2, 1 / pi)})["result"]
    assert [point["kind"] for point in result["points"]] == ["degenerate"]
    at = complex(result["points"][0]["x"], result["points"][0]["y"])
    assert at == pytest.approx(1 / (2 * pi), abs=1e-7)  # sqrt(eps) of a double root


@pytest.mark.parametrize("count", [2, 3, 4])
def test_width_of_several_sinks(service, count):
    # together n Q / (B U), whatever the spacing
    intakes = service.withdrawal(_abreast(count, 0.3)).values()
    assert sum(intake["width_far_upstream"] for intake in intakes) == pytest.approx(count, rel=EXACT)


@pytest.mark.parametrize("count", [2, 3, 4])
def test_type_curve(service, count):
    # y - (Q / 2 pi B U) sum theta_k = 0, theta_k from the current's direction: y = n Q / (2 B U) far upstream
    layout = _abreast(count, 0.3)
    places = [(number - (count - 1) / 2) * 0.3 for number in range(count)]
    near, far = (complex(x, _type_curve(x, places)) for x in (-0.5, -2.0))
    assert service.flux(layout, [near, far]) == pytest.approx(0.0, abs=1e-11)
    intakes = service.withdrawal(layout).values()
    lines = [line for intake in intakes for line in intake["dividing_streamlines"]]
    for z in (near, far):
        # chords of the polyline stay within a hundredth of the width of the zone
        assert max(y for line in lines for y in crossing_at_x(line, z.real)) == pytest.approx(
            z.imag, abs=0.01 * count
        )


def _type_curve(x: float, places: list[float]) -> float:
    """Solve y = sum theta_k / 2 pi by bisection, x < 0."""
    low, high = 0.0, float(len(places))
    for _ in range(80):
        y = (low + high) / 2
        value = y - sum(atan2(y - at, x) for at in places) / (2 * pi)
        low, high = (y, high) if value < 0 else (low, y)
    return (low + high) / 2


# ---- travel times, at the level of the flow: integrals of 1 / speed over sampled velocities


def _transit(service, layout: dict, start: complex, end: complex, panels: int = 40) -> float:
    """Time from start to end along a straight streamline: composite Gauss-Legendre, 8 nodes a panel."""
    nodes, weights = np.polynomial.legendre.leggauss(8)
    edges = np.linspace(0, 1, panels + 1)
    fractions = (edges[:-1, None] + (nodes + 1) / 2 / panels).ravel()
    velocity = service.velocity(layout, start + (end - start) * fractions)
    unit = (end - start) / abs(end - start)
    along = (velocity * np.conj(unit)).real
    assert (along > 0).all()
    total = (np.tile(weights, panels) / along).sum() / (2 * panels) * abs(end - start)
    return float(total)


ONE_SINK = open_water_body([sink(0j, 1.0)], ambient={"velocity": [0.5, 0.0]})


@pytest.mark.parametrize(
    ("distance", "time"), [(1, 1.0953121), (5, 8.2073516), (10, 17.7854227), (50, 96.7767311)]
)
def test_time_from_upstream(service, distance, time):
    # t = L/U - (b/U) ln(1 + L/b), b = q / (2 pi U) = 0.318310 (form of Bear and Jacobs 1965, memory)
    b = 1 / pi
    assert distance / 0.5 - b / 0.5 * log(1 + distance / b) == pytest.approx(time, abs=6e-8)
    assert _transit(service, ONE_SINK, -distance + 0j, 0j, 200) == pytest.approx(time, abs=1e-7)


@pytest.mark.parametrize(("fraction", "time"), [(0.25, 0.0239892), (0.5, 0.1229613), (0.9, 0.8929134)])
def test_time_from_downstream(service, fraction, time):
    # t = -(b/U) ln(1 - d/b) - d/U
    assert _transit(service, ONE_SINK, fraction / pi + 0j, 0j) == pytest.approx(time, abs=6e-8)


def test_time_downstream_of_a_source(service):
    # x/U - (q / 2 pi U^2) ln(1 + 2 pi U x / q) (published examination solution, 2014)
    layout = open_water_body([source(0j, 1.0)], ambient={"velocity": [0.5, 0.0]})
    expected = 3 / 0.5 - log(1 + 2 * pi * 0.5 * 3) / (2 * pi * 0.25)
    assert _transit(service, layout, 0j, 3 + 0j, 200) == pytest.approx(expected, abs=1e-8)


@pytest.mark.parametrize(
    ("shore", "time"),
    [
        ({"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}, 82.0735),
        ({"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 100}, 85.1777),
    ],
    ids=["bank", "channel"],
)
def test_time_along_a_bank_to_a_flush_intake(service, shore, time):
    layout = open_water_body([sink(0j, 5.0)], ambient={"velocity": [0.5, 0.0]}, shore=shore)
    assert _transit(service, layout, -50 + 0j, 0j, 200) == pytest.approx(time, abs=6e-5)


# ---- outfall and intake of equal flow, intake upstream

RECIRCULATION = [
    (1.05, 0.004475, 5.343049),
    (1.5, 0.091721, 1.026533),
    (2.0, 0.181690, 0.570796),
    (3.0, 0.308068, 0.305630),
    (4.0, 0.391002, 0.209200),
    (5.0, 0.450185, 0.159119),
    (10.0, 0.604181, 0.072502),
    (20.0, 0.717686, 0.034726),
    (100.0, 0.872889, 0.006720),
]


def _pair(beta: float, current: float = 0.5, half: float = 3.0) -> dict:
    discharge = beta * pi * current * half
    elements = [sink(-half + 0j, discharge), source(half + 0j, discharge)]
    return open_water_body(elements, ambient={"velocity": [current, 0.0]})


@pytest.mark.parametrize(("beta", "share", "time"), RECIRCULATION)
def test_recirculation_share(service, beta, share, time):
    # F = (2 / pi) (atan sqrt(beta - 1) - sqrt(beta - 1) / beta), beta = q / (pi U d), spacing 2 d
    root = sqrt(beta - 1)
    exact = 2 / pi * (atan(root) - root / beta)
    assert exact == pytest.approx(share, abs=SIX_DIGITS)
    intake = service.withdrawal(_pair(beta))["intake"]
    assert share_of(intake, "outfall") == pytest.approx(exact, abs=EXACT)
    assert intake["recirculation_share"] == pytest.approx(exact, abs=EXACT)
    assert intake["share_error"] <= 1e-6
    assert sum(entry["share"] for entry in intake["shares"]) == pytest.approx(1.0, abs=EXACT)


@pytest.mark.parametrize(("beta", "share", "time"), RECIRCULATION)
def test_first_arrival_from_the_outfall(service, beta, share, time):
    # t = (L / U) (beta / sqrt(beta - 1) atan(1 / sqrt(beta - 1)) - 1), along the axis
    half, current = 3.0, 0.5
    found = _transit(service, _pair(beta, current, half), half + 0j, -half + 0j)
    assert found * current / (2 * half) == pytest.approx(time, abs=SIX_DIGITS)


@pytest.mark.parametrize("beta", [0.3, 0.9, 1.0])
def test_no_recirculation_below_the_threshold(service, beta):
    intake = service.withdrawal(_pair(beta))["intake"]
    # at the threshold the two saddles coalesce and shares change like (beta - 1)^(3/2)
    assert share_of(intake, "outfall") == pytest.approx(0.0, abs=EXACT)


@pytest.mark.parametrize("beta", [1.5, 4.0])
def test_saddles_stand_on_the_bisector(service, beta):
    # +- d sqrt(beta - 1)
    offset = 3.0 * sqrt(beta - 1)
    assert service.stagnation_places(_pair(beta)) == pytest.approx([-1j * offset, 1j * offset], abs=1e-11)


def test_outfall_upstream_in_line_is_drawn_whole(service):
    elements = [source(-3 + 0j, 0.6), sink(3 + 0j, 0.6)]
    layout = open_water_body(elements, ambient={"velocity": [0.5, 0.0]})
    assert share_of(service.withdrawal(layout)["intake"], "outfall") == pytest.approx(1.0, abs=EXACT)


@pytest.mark.parametrize("offset", [0.0, 0.3, -0.7, 1.4])
def test_outfall_far_upstream_to_the_side(service, offset):
    # far apart: F -> max(0, 1 - |dy| U / q); here b / L = 4e-5
    elements = [source(-2000 + offset * 1j, 0.5), sink(0j, 0.5)]
    layout = open_water_body(elements, ambient={"velocity": [0.5, 0.0]})
    share = share_of(service.withdrawal(layout)["intake"], "outfall")
    assert share == pytest.approx(max(0.0, 1 - abs(offset)), abs=4e-4)


@pytest.mark.parametrize("ratio", [0.25, 0.8, 2.0])
def test_unequal_flows_in_line(service, ratio):
    # outfall upstream on the axis: share = min(1, q_o / q_i), the upper bound
    elements = [source(-3 + 0j, 0.6 * ratio), sink(3 + 0j, 0.6)]
    layout = open_water_body(elements, ambient={"velocity": [0.5, 0.0]})
    share = share_of(service.withdrawal(layout)["intake"], "outfall")
    assert share == pytest.approx(min(1.0, ratio), abs=EXACT)


def test_type_curve_is_the_line_of_one_sink():
    # Kuo's form against the polar form r = b (pi - theta) / sin(theta): the two books say the same
    theta = 2.0
    y = pi - theta
    x = y / np.tan(theta)
    assert -y / np.tan(y) == pytest.approx(x, abs=1e-14)
    assert y / sin(theta) == pytest.approx(sqrt(x * x + y * y), abs=1e-14)

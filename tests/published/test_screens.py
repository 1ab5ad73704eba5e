"""Screens through the route, against closed forms and published arithmetic.

Uniform-flux slot of width s flush in a straight bank, normal inflow V0, current U (log form of the line
source: Milne-Thomson, Theoretical Hydrodynamics; recomputed by quadrature): on the bank u(x) = U - (V0 / pi)
ln|(x + s/2) / (x - s/2)|, sweeping reverses at (s/2) tanh(pi U / (2 V0)), sweeping is at least approach for x
up to (s/2) tanh(pi (U/V0 - 1) / 2). Marks of limits as in GET /v1/criteria.
"""

from math import atanh, log, pi, tanh

import numpy as np
import pytest
from scipy.integrate import quad

from support.http import assert_problem
from support.layouts import line_sink, open_water_body, sink

BANK = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}
U, V0, S = 0.5, 0.15, 4.0
SLOT = open_water_body([line_sink(-2 + 0j, 2 + 0j, V0 * S)], ambient={"velocity": [U, 0.0]}, shore=BANK)

SIX_DIGITS = 6e-7
"""The table prints six decimals."""

EXACT = 1e-12
"""Closed forms in doubles on both sides."""


MET = 1e-11
"""Shares: a limit counts as met within 1e-12 of it, times the ratio asked for."""


def over(element="screen", **changes):
    return {"element": element, "height": 1.0, "open_fraction": 0.5, **changes}


def check(service, layout, screens, **extra):
    return service.post("screen/check", {"layout": layout, "screens": screens, **extra})["result"]["screens"]


def sweeping(x):
    """Sweeping velocity on the bank in front of the slot."""
    return U - V0 / pi * log(abs((x + S / 2) / (x - S / 2)))


# ---- the table of the flush slot: U 0.5, V0 0.15, s 4: pass fraction 0.999345


def test_share_that_is_swept(service):
    (screen,) = check(service, SLOT, [over()])
    assert screen["share_meeting_sweeping"] == pytest.approx(0.999345, abs=SIX_DIGITS)
    exact = 0.5 * (1.0 + tanh(pi * (U / V0 - 1.0) / 2.0))
    assert screen["share_meeting_sweeping"] == pytest.approx(exact, abs=MET)


@pytest.mark.parametrize("ratio", [0.25, 1.0, 2.0, 3.0, 6.0])
def test_share_that_is_swept_as_much_as_asked(service, ratio):
    # U - ratio V0 = (V0 / pi) 2 artanh(2 x / s): the share is half of 1 + tanh
    (screen,) = check(service, SLOT, [over()], criteria=[{"name": "own", "min_sweeping_ratio": ratio}])
    exact = 0.5 * (1.0 + tanh(pi * (U / V0 - ratio) / 2.0))
    assert screen["share_meeting_sweeping"] == pytest.approx(exact, abs=MET)
    (verdict,) = screen["verdicts"]
    assert verdict["share_meeting"] == screen["share_meeting_sweeping"]
    least = sweeping(2.0 - 0.04) / V0  # 1 % of the length is left out at each end
    assert verdict["value"] == pytest.approx(least, rel=EXACT)
    assert verdict["pass"] == (least >= ratio)


def test_sweeping_reverses_where_the_table_says(service):
    # x_r = 1.999887: below it exposure has an end, beyond it none
    reversal = S / 2 * tanh(pi * U / (2 * V0))
    assert reversal == pytest.approx(1.999887, abs=SIX_DIGITS)
    for distance, status in ((1e-6, "ok"), (-1e-6, "sweeping-reverses")):
        reach = 2.0 - reversal + distance
        (screen,) = check(service, SLOT, [over(end_reach=reach)])
        assert screen["exposure_status"] == status
        assert (screen["exposure_time"] is None) == (status != "ok")


def test_approach_is_the_same_all_along(service):
    (screen,) = check(service, SLOT, [over()])
    assert screen["max_approach"] == pytest.approx(V0, abs=EXACT)
    assert screen["mean_approach"] == pytest.approx(V0, abs=EXACT)
    assert screen["max_over_mean"] == pytest.approx(1.0, abs=EXACT)
    profile = screen["profile"]
    assert profile["approach"] == pytest.approx([V0] * 101, abs=EXACT)
    expected = [sweeping(distance - 2.0) for distance in profile["distance"]]
    assert profile["sweeping"] == pytest.approx(expected, abs=EXACT)
    assert profile["sweeping_pump_off"] == pytest.approx([U] * 101, abs=EXACT)


def test_exposure_is_the_integral_of_slowness(service):
    (screen,) = check(service, SLOT, [over(end_reach=0.1)])
    time, error = quad(lambda x: 1.0 / sweeping(x), -1.9, 1.9, epsabs=1e-12)
    assert screen["exposure_time"] == pytest.approx(time, abs=error + 1e-10)
    assert screen["pump_off"]["exposure_time"] == pytest.approx(3.8 / U, rel=EXACT)


def test_capture_width_of_the_slot(service):
    # V0 s / U = 1.2, by the other route
    assert service.withdrawal(SLOT)["screen"]["width_far_upstream"] == pytest.approx(1.2, rel=1e-9)


# ---- definitions: approach = flow over effective area, through-slot = Q / (A P)


def test_half_open_screen_doubles_the_velocity_between_the_wires(service):
    # Wisconsin NR 111.12, mirroring 40 CFR 125.94(c): V = Q / (A P); at P = 0.5 it is twice the approach
    flow = 0.25 * 0.3048 * S * 1.0
    layout = open_water_body([line_sink(-2 + 0j, 2 + 0j, flow)], ambient={"velocity": [U, 0.0]}, shore=BANK)
    limits = [{"name": "own", "max_through_slot": 0.1524}, "wisconsin-design-through-slot"]
    (screen,) = check(service, layout, [over()], criteria=limits)
    assert screen["mean_approach"] == pytest.approx(0.25 * 0.3048, rel=EXACT)
    assert screen["through_slot"] == pytest.approx(0.5 * 0.3048, rel=EXACT)
    # the limit is met exactly, which is to meet it
    assert [verdict["pass"] for verdict in screen["verdicts"]] == [True, True]


def test_area_of_the_californian_code(service):
    # Calif. code, exhibit D: 1 ft3/s over 0.33 ft/s asks for 3.0 ft2
    layout = open_water_body([line_sink(0j, 3 + 0j, 1.0)], ambient={"velocity": [2.0, 0.0]}, shore=BANK)
    body = {"unit_system": "us", "layout": layout, "screens": [over()], "criteria": ["cdfg-river-approach"]}
    (screen,) = service.post("screen/check", body)["result"]["screens"]
    assert screen["area"] == pytest.approx(3.0, rel=EXACT)
    (verdict,) = screen["verdicts"]
    assert verdict["unit"] == "[ft_i]/s"
    assert verdict["limit"] == pytest.approx(0.33, rel=EXACT)
    assert verdict["value"] == pytest.approx(1.0 / 3.0, rel=EXACT)
    assert verdict["pass"] is False  # 3.03 ft2 are needed: the code rounds


def test_what_frames_block_raises_the_approach_velocity(service):
    plain, blocked = check(service, SLOT, [over(), over(blocked_fraction=0.2, height=0.5)])
    assert blocked["effective_area"] == pytest.approx(0.4 * plain["effective_area"], rel=EXACT)
    for name in ("max_approach", "mean_approach", "through_slot"):
        assert blocked[name] == pytest.approx(plain[name] / 0.4, rel=EXACT)
    assert blocked["min_sweeping"] == plain["min_sweeping"]


def test_length_that_sixty_seconds_allow(service):
    # at 0.8 ft/s (0.2438 m/s) the rule of 60 s allows 14.6 m of screen; a weak draw leaves the sweep as it is
    swept = 0.8 * 0.3048
    layout = open_water_body(
        [line_sink(0j, 60 * swept + 0j, 1e-9)], ambient={"velocity": [swept, 0.0]}, shore=BANK
    )
    screens = [over(end_reach=0.0, sweeping="pump-off"), over(end_reach=0.0, sweeping="pump-off", bypass=7.3)]
    whole, halved = check(service, layout, screens, criteria=[{"name": "own", "max_exposure_time": 60.0}])
    assert whole["length"] == pytest.approx(14.6, abs=0.05)
    assert whole["exposure_time"] == pytest.approx(60.0, rel=1e-9)
    assert whole["verdicts"][0]["pass"] is True
    # a bypass half-way helps those upstream of it; those downstream of it are swept away from it
    assert halved["exposure_time"] is None
    assert halved["exposure_status"] == "sweeping-reverses"
    assert halved["verdicts"][0]["pass"] is False


# ---- a screen at an angle: tan(angle) = normal over tangential velocity of a uniform flow


@pytest.mark.parametrize("degrees", [5.0, 20.0, 45.0, 160.0])
def test_screen_at_an_angle_to_a_uniform_flow(service, degrees):
    angle = np.radians(degrees)
    end = 6.0 * complex(np.cos(angle), np.sin(angle))
    weak = 1e-9  # so weak that both sides see the uniform flow: one meets it, the other leaves it
    layout = open_water_body([line_sink(0j, end, weak)], ambient={"velocity": [1.0, 0.0]})
    (screen,) = check(service, layout, [over(end_reach=0.5)])
    left, right = screen["sides"]
    assert (left["side"], right["side"]) == ("left", "right")
    assert left["max_approach"] == pytest.approx(np.sin(angle), abs=1e-8)
    assert right["min_approach"] == pytest.approx(-np.sin(angle), abs=1e-8)
    along = np.array(left["profile"]["sweeping"])
    assert along == pytest.approx(np.full(101, np.cos(angle)), abs=1e-8)
    assert abs(np.tan(angle)) == pytest.approx(left["max_approach"] / abs(along[50]), rel=1e-7)


def test_screen_in_still_water_draws_half_from_each_side(service):
    layout = open_water_body([line_sink(-1 + 0j, 1 + 0j, 2.0)])
    (screen,) = check(service, layout, [over()])
    # 2e-9 of the length beside the line, 1e-5 of it from an end: the angle seen is off by 2e-4 / pi there
    assert [side["max_approach"] for side in screen["sides"]] == pytest.approx([0.5, 0.5], abs=1e-4)
    assert [side["discharge"] for side in screen["sides"]] == pytest.approx([1.0, 1.0], abs=1e-7)
    assert screen["area"] == 4.0
    assert screen["mean_approach"] == pytest.approx(0.5, rel=EXACT)
    assert screen["through_slot"] == pytest.approx(1.0, rel=EXACT)
    # water parts in the middle
    assert screen["exposure_status"] == "sweeping-reverses"
    at = np.array(screen["profile"]["distance"]) - 1.0
    expected = [
        -log((1.0 + x) / (1.0 - x)) / pi / 2.0 * 2.0 / 2.0 * 1.0 if abs(x) < 1 else np.nan for x in at
    ]
    assert screen["profile"]["sweeping"] == pytest.approx(expected, abs=1e-8)


# ---- in front of the face


def test_velocities_read_in_front_of_the_face(service):
    # log form of the line sink and its image, 3 in (0.0762 m) in front (NMFS practice, from memory)
    offset = 0.0762
    (screen,) = check(service, SLOT, [over(sample_offset=offset)])
    at = np.array(screen["profile"]["distance"]) - 2.0 + 1j * offset
    conjugate = U - V0 / pi * np.log((at + 2.0) / (at - 2.0))
    assert screen["profile"]["approach"] == pytest.approx(conjugate.imag, abs=EXACT)
    assert screen["profile"]["sweeping"] == pytest.approx(conjugate.real, abs=EXACT)
    assert screen["profile"]["y"] == pytest.approx([offset] * 101, abs=EXACT)
    # furthest from both ends the angle that the slot subtends is largest
    assert screen["max_approach"] == pytest.approx(V0 / pi * 2.0 * np.arctan(2.0 / offset), rel=EXACT)
    assert screen["sides"][0]["max_approach_at"] == [pytest.approx([0.0, offset], abs=1e-6)]
    assert screen["max_over_mean"] > 1.0


# ---- faces on walls


def test_face_on_a_bank_is_a_line_sink_there(service):
    bare = open_water_body([], ambient={"velocity": [U, 0.0]}, shore=BANK)
    face = {
        "face": {"from": [2, 0], "to": [-2, 0]},
        "name": "screen",
        "discharge": V0 * S,
        "height": 1.0,
        "open_fraction": 0.5,
    }
    (there,) = check(service, bare, [face])
    (here,) = check(service, SLOT, [over()])
    for name in ("share_meeting_sweeping", "exposure_time", "min_sweeping", "max_approach", "through_slot"):
        assert there[name] == pytest.approx(here[name], rel=1e-11)
    # seen from the other end
    assert there["profile"]["sweeping"][::-1] == pytest.approx([-v for v in here["profile"]["sweeping"]])
    assert there["sides"][0]["side"] == "right"
    assert there["on"] == here["on"] == "bank"


def test_face_in_open_water_is_refused(client):
    layout = open_water_body([sink(0j, 1.0)])
    face = {"face": {"from": [2, 0], "to": [-2, 0]}, "name": "f", "discharge": 1.0}
    body = {"layout": layout, "screens": [face | {"height": 1.0, "open_fraction": 0.5}]}
    problem = assert_problem(client.post("/v1/screen/check", json=body), 422, "face-misplaced")
    assert [error["pointer"] for error in problem["errors"]] == ["#/screens/0/face"]


def test_a_vortex_makes_the_face_uneven(service):
    # vortex and image: nothing through the bank, so that approach stays V0; the wall speed Gamma h / (pi (x^2
    # + h^2)) adds to the sweeping velocity (two lecture pages)
    gamma, h = 1.2, 0.7
    eddy = {"kind": "vortex", "name": "eddy", "at": [0.3, h], "circulation": gamma}
    layout = SLOT | {"elements": [*SLOT["elements"], eddy]}
    (screen,) = check(service, layout, [over()])
    x = np.array(screen["profile"]["distance"]) - 2.0
    wall = gamma * h / (pi * ((x - 0.3) ** 2 + h**2))
    expected = np.array([sweeping(v) for v in x]) + wall
    assert screen["profile"]["sweeping"] == pytest.approx(expected, abs=EXACT)
    assert screen["max_approach"] == pytest.approx(V0, abs=EXACT)
    (opposed,) = check(
        service, layout | {"elements": [*SLOT["elements"], eddy | {"circulation": -gamma}]}, [over()]
    )
    # -0.0457 m/s at x = 0.3: the sweep reverses in the middle, between the roots of the same expression
    grid = np.linspace(-2 + 1e-9, 2 - 1e-9, 2_000_001)
    swept = np.array(
        U - V0 / pi * np.log((2 + grid) / (2 - grid)) - gamma * h / (pi * ((grid - 0.3) ** 2 + h**2))
    )
    assert opposed["share_meeting_sweeping"] == pytest.approx(np.mean(swept >= V0), abs=2e-6)  # counted
    assert opposed["min_sweeping"] == pytest.approx(swept[np.abs(grid) < 1.96].min(), abs=1e-9)


def test_largest_share_of_the_river(service):
    # 40 CFR 125.84(b)(3): at most 5 % of the mean annual flow
    for passing, passed in ((0.6 / 0.05, True), (0.99 * 0.6 / 0.05, False)):
        (screen,) = check(
            service, SLOT, [over()], criteria=["epa-new-river-share"], passing_discharge=passing
        )
        (verdict,) = screen["verdicts"]
        assert verdict["value"] == pytest.approx(0.6 / passing, rel=EXACT)
        assert verdict["pass"] is passed


def test_reversal_against_its_closed_form(service):
    # 2 x_r / s = tanh(pi U / (2 V0)) backwards: the current that puts the reversal at 90 % of the half-slot
    current = 2.0 * V0 / pi * atanh(0.9)
    layout = SLOT | {"ambient": {"velocity": [current, 0.0]}}
    (screen,) = check(service, layout, [over()], criteria=[{"name": "own", "min_sweeping_ratio": 1e-3}])
    exact = 0.5 * (1.0 + tanh(pi * (current / V0 - 1e-3) / 2.0))
    assert screen["share_meeting_sweeping"] == pytest.approx(exact, abs=MET)
    assert exact == pytest.approx(0.95, abs=2e-4)

"""Travel times and breakthrough curves of the trade, through the route.

Sources: transit from a source in a stream, a published examination solution of 2014 (read); isochrones of a
sink in a current, known since Bear and Jacobs 1965 (memory), here in the form t U / b = -X + ln(sin a /
sin(a - Y)), whose numbers were recomputed; flush intake in a channel by quadrature of the closed coth form
(Churchill, strip mapping, read). Breakthrough of a pair (compare Gringarten and Sauty 1975, Banks 2011): own
derivations, checked by tracing; formulas stand beside the numbers.
"""

from math import atan, atan2, log, pi, sin, sqrt, tan

import numpy as np
import pytest
from scipy.integrate import quad

from support.layouts import open_water_body, sink, source

TRACED = 2e-8
"""A single streamline is traced to 1e-9 a step; the answer's own error, a retrace at 1e-8, is checked too."""

U, Q = 0.5, 1.0
B = Q / (2.0 * pi * U)
ONE_SINK = open_water_body([sink(0j, Q)], ambient={"velocity": [U, 0.0]})


def points(*places):
    return [{"name": f"p{k}", "at": [z.real, z.imag]} for k, z in enumerate(places)]


def first_times(answers):
    return [answer["arrivals"][0]["first_time"] for answer in answers]


def assert_within_own_error(answers, expected):
    """The stated error covers the true one; 1e-13 for rounding."""
    for answer, time in zip(answers, expected, strict=True):
        error = abs(answer["arrivals"][0]["median_time"] - time)
        assert error <= answer["time_error"] + 1e-13 * time


# ---- one sink in a current


PRINTED_UPSTREAM = {1: 1.0953121, 5: 8.2073516, 10: 17.7854227, 50: 96.7767311}
PRINTED_DOWNSTREAM = {0.25: 0.0239892, 0.5: 0.1229613, 0.9: 0.8929134}


def test_on_the_axis_upstream(service):
    answers = service.arrivals(ONE_SINK, points(*(-float(x) for x in PRINTED_UPSTREAM)))
    exact = [x / U - B / U * log(1.0 + x / B) for x in PRINTED_UPSTREAM]
    assert exact == pytest.approx(list(PRINTED_UPSTREAM.values()), abs=5.1e-8)  # seven decimals are printed
    assert first_times(answers) == pytest.approx(exact, rel=TRACED)
    assert_within_own_error(answers, exact)


def test_on_the_axis_downstream(service):
    answers = service.arrivals(ONE_SINK, points(*(part * B for part in PRINTED_DOWNSTREAM)))
    exact = [-B / U * log(1.0 - part) - part * B / U for part in PRINTED_DOWNSTREAM]
    assert exact == pytest.approx(list(PRINTED_DOWNSTREAM.values()), abs=5.1e-8)
    assert first_times(answers) == pytest.approx(exact, rel=TRACED)
    assert_within_own_error(answers, exact)


def isochrone_time(z):
    """Time of any captured point, from X, Y = z / b."""
    x, y, angle = z.real / B, abs(z.imag) / B, atan2(abs(z.imag), z.real)
    return B / U * (-x + log(sin(angle) / sin(angle - y)))


def test_off_the_axis(service):
    places = [-10 + 0.9j, -3 - 0.7j, 0.1 + 0.2j, 0.05 - 0.4j, -40 + 0.5j]
    answers = service.arrivals(ONE_SINK, points(*places))
    exact = [isochrone_time(z) for z in places]
    assert first_times(answers) == pytest.approx(exact, rel=TRACED)
    assert_within_own_error(answers, exact)


def test_captured_only_within_the_dividing_streamline(service):
    # captured iff angle > Y: the edge at x = -10 is where y = b angle, found here by bisection on that alone
    low, high = 0.9, 1.1
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if middle < B * atan2(middle, -10.0) else (low, middle)
    inside, outside = service.arrivals(ONE_SINK, points(-10 + 1j * (low - 1e-7), -10 + 1j * (low + 1e-7)))
    assert inside["arrivals"][0]["share"] == 1.0
    assert outside["arrivals"] == []
    assert outside["lost_share"] == 1.0
    assert [row["outcome"] for row in outside["outcomes"]] == ["passes"]
    # the slope of the edge there is 1e-3 to 1, so that the distance across it is that along y to 1e-6
    assert inside["divide_distance"] == pytest.approx(1e-7, rel=2e-3)


@pytest.mark.parametrize("time", [0.05, 0.5, 5.0])
def test_area_inside_an_isochrone_is_discharge_times_time(service, time):
    # a disc that holds the whole isochrone: share by t, times its area, is q t (divergence theorem)
    reach = U * time + 2.0 * sqrt(Q * time / pi)
    patch = {"centre": [-0.5 * reach, 0.0], "radius": 1.2 * reach}
    answer = service.arrivals(ONE_SINK, [{"name": "disc", "patch": patch}], horizon=time, tolerance=1e-4)[0]
    area = pi * patch["radius"] ** 2
    assert answer["arrivals"][0]["share"] * area == pytest.approx(Q * time, abs=answer["share_error"] * area)
    assert answer["share_error"] < 2e-4  # asked for 1e-4 of the disc, of which the isochrone is a tenth


# ---- a flush intake on one bank


def flush(shore, at):
    layout = open_water_body([sink(0j, 5.0)], ambient={"velocity": [U, 0.0]}, shore=shore)
    return layout, points(at)


def test_flush_intake_on_a_straight_bank(service):
    # same formulas with b = q / (pi U): 82.0735 s from 50 m upstream along the bank
    layout, releases = flush({"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}, -50 + 0j)
    b = 5.0 / (pi * U)
    exact = 50.0 / U - b / U * log(1.0 + 50.0 / b)
    assert exact == pytest.approx(82.0735, abs=5e-5)
    assert first_times(service.arrivals(layout, releases)) == pytest.approx([exact], rel=TRACED)


def test_flush_intake_in_a_channel(service):
    # u(x) = Um - (q / 2W) coth(pi x / 2W) on the bank, Um = U + -q/2W: 85.1777 s
    width = 100.0
    layout, releases = flush({"kind": "channel", "point": [0, 0], "along": [1, 0], "width": width}, -50 + 0j)
    mean, half = U - 5.0 / (2 * width), 5.0 / (2 * width)
    exact = quad(lambda x: 1.0 / (mean + half / np.tanh(pi * x / (2 * width))), 0.0, 50.0, epsabs=1e-12)[0]
    assert exact == pytest.approx(85.1777, abs=5e-5)
    assert first_times(service.arrivals(layout, releases)) == pytest.approx([exact], rel=TRACED)


# ---- from an outfall in a stream


@pytest.mark.parametrize("x", [0.5, 5.0, 50.0])
def test_from_a_source_to_a_transect_downstream(service, x):
    layout = open_water_body([source(0j, Q)], ambient={"velocity": [U, 0.0]})
    transect = {"name": "gate", "polyline": [[x, -0.01], [x, 0.01]]}
    answer = service.arrivals(
        layout, [{"name": "o", "outfall": "outfall"}], transects=[transect], tolerance=1e-5
    )[0]
    exact = x / U - Q / (2 * pi * U**2) * log(1.0 + 2 * pi * U * x / Q)
    # the gate spans a little of the axis, where the time is least: it differs by y^2 over a length of order b
    assert answer["transects"][0]["first_time"] == pytest.approx(exact, rel=1e-5)
    assert answer["arrivals"] == []


# ---- outfall and intake of equal flow, the intake upstream: recirculation


PRINTED_PAIR = {
    1.05: (0.004475, 5.343049),
    1.5: (0.091721, 1.026533),
    2: (0.181690, 0.570796),
    3: (0.308068, 0.305630),
    4: (0.391002, 0.209200),
    5: (0.450185, 0.159119),
    10: (0.604181, 0.072502),
    20: (0.717686, 0.034726),
    100: (0.872889, 0.006720),
}


def pair(beta, speed=1.0):
    """Intake at -1, outfall at 1, in a current along +x; beta = q / (pi U d), d = 1."""
    flow = beta * pi * (speed or 1.0)
    return open_water_body([sink(-1 + 0j, flow), source(1 + 0j, flow)], ambient={"velocity": [speed, 0.0]})


@pytest.mark.parametrize("beta", PRINTED_PAIR)
def test_share_and_first_arrival_of_a_pair(service, beta):
    answer = service.arrivals(pair(beta), [{"name": "o", "outfall": "outfall"}])[0]
    root = sqrt(beta - 1.0)
    share = 2.0 / pi * (atan(root) - root / beta)
    first = 2.0 * (beta / root * atan(1.0 / root) - 1.0)
    assert (share, 0.5 * first) == pytest.approx(PRINTED_PAIR[beta], abs=5.1e-7)  # six decimals are printed
    arrival = answer["arrivals"][0]
    assert arrival["share"] == pytest.approx(share, abs=1e-12)  # by the flux between two divides: rounding
    assert arrival["first_time"] == pytest.approx(first, abs=answer["time_error"])
    assert answer["time_error"] < 1e-3 * arrival["last_time"]
    assert answer["lost_share"] == pytest.approx(1.0 - share, abs=1e-12)


def test_no_recirculation_below_the_threshold(service):
    answer = service.arrivals(pair(0.999), [{"name": "o", "outfall": "outfall"}])[0]
    assert answer["arrivals"] == []
    assert answer["lost_share"] == 1.0


PRINTED_CURVE = {0.1: 0.346808, 0.25: 0.429204, 0.5: 1.0, 0.75: 6.712389, 0.9: 101.6001}
"""Part of the water arrived, and time over pi L^2 / q: (1 - phi cot phi) / sin^2 phi at f = phi / pi."""


def test_breakthrough_curve_without_a_current(service):
    layout = open_water_body([sink(-1 + 0j, pi), source(1 + 0j, pi)])
    answer = service.arrivals(
        layout, [{"name": "o", "outfall": "outfall"}], tolerance=1e-5, curve_points=1001
    )[0]
    unit = pi * 4.0 / pi
    curve = answer["curve"]
    assert curve["time"][0] == pytest.approx(
        unit / 3.0, rel=1e-5
    )  # f -> 0; times within 1e-5 are not told apart
    for part, printed in PRINTED_CURVE.items():
        exact = (1.0 - pi * part / tan(pi * part)) / sin(pi * part) ** 2
        assert exact == pytest.approx(printed, rel=5e-5 if part == 0.9 else 2e-6)  # as printed
        arrived = np.interp(unit * exact, curve["time"], curve["share"])
        # between points of the curve the share is linear: a thousandth squared over eight, times its bend
        assert arrived == pytest.approx(part, abs=answer["share_error"] + 1e-5)
    assert answer["arrivals"][0]["median_time"] == pytest.approx(unit, rel=1e-4)
    assert answer["arrivals"][0]["tail"] == "unbounded"


def test_outfall_upstream_of_an_equal_intake_is_drawn_whole(service):
    # Rankine's oval closes: F = 1
    layout = open_water_body([source(-1 + 0j, 2.0), sink(1 + 0j, 2.0)], ambient={"velocity": [0.4, 0.0]})
    answer = service.arrivals(layout, [{"name": "o", "outfall": "outfall"}])[0]
    assert answer["arrivals"][0]["share"] == pytest.approx(1.0, abs=1e-9)  # the divide ends at the intake


# ---- units


def test_us_units(service):
    foot = 0.3048
    in_feet = open_water_body([sink(0j, Q / foot**2)], ambient={"velocity": [U / foot, 0.0]}, depth=1.0)
    in_feet["elements"][0]["discharge"] = Q / foot**3
    in_feet["depth"] = 1.0 / foot
    releases = [
        {"name": "p", "at": [-10 / foot, 0.5 / foot]},
        {"name": "d", "patch": {"centre": [-5 / foot, 0.0], "radius": 1 / foot}, "duration": 30.0},
    ]
    metric = service.arrivals(
        ONE_SINK,
        [points(-10 + 0.5j)[0], {"name": "d", "patch": {"centre": [-5, 0], "radius": 1}, "duration": 30}],
    )
    feet = service.arrivals(in_feet, releases, unit_system="us")
    for one, other in zip(metric, feet, strict=True):
        for name in ("share", "first_time", "median_time", "last_time"):
            # both runs take the same steps up to rounding, which the refinement of times may turn by 1e-7
            assert other["arrivals"][0][name] == pytest.approx(one["arrivals"][0][name], rel=1e-6)
    # the divide is found in chords that depend on the local origin alone, and lengths are in feet
    assert feet[0]["divide_distance"] * foot == pytest.approx(metric[0]["divide_distance"], rel=1e-6)

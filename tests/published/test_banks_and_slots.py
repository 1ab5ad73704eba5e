"""Closed forms of plane potential flow at banks, in channels and at slots, through the routes.

Sources and marks as in test_closed_forms.py: textbook values recomputed for this project by a second route;
what was recalled and not re-read is marked "memory". Depth is 1 m throughout, so that a discharge is a
strength per depth.
"""

from math import cos, pi, radians, sin, sqrt

import numpy as np
import pytest

from support.layouts import line_sink, open_water_body, pier, sink, source, vortex
from support.service import points_of

SIX_DIGITS = 6e-7
"""Tables print six decimals: half of the last one, and the rounding of the arguments."""

EXACT = 1e-12
"""Both sides are closed forms in doubles."""

UPSTREAM = {"velocity": [1.0, 0.0]}


def _polar(r: float, degrees_: float) -> complex:
    return r * complex(cos(radians(degrees_)), sin(radians(degrees_)))


# ---- walls and corners

BANK = {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]}


@pytest.mark.parametrize("x", [0.0, 0.7, -2.0])
def test_wall_speed_under_a_vortex(service, x):
    # Gamma h / (pi (x^2 + h^2)) (two lecture pages)
    layout = open_water_body([vortex(1.5j, 2.0)], shore=BANK)
    (velocity,) = service.velocity(layout, [complex(x, 0)])
    assert velocity == pytest.approx(2.0 * 1.5 / (pi * (x * x + 2.25)), abs=EXACT)


def _drift(service, layout: dict, at: complex) -> complex:
    """Velocity of the rest of the field at a vortex: the mean over a circle, its own part has mean zero."""
    return complex(service.velocity(layout, at + 0.1 * np.exp(2j * pi * np.arange(64) / 64)).mean())


def test_vortex_drifts_along_a_wall(service):
    # Gamma / (4 pi h); stationary in an opposing stream of that speed (two lecture pages)
    layout = open_water_body([vortex(1.5j, 2.0)], shore=BANK)
    assert _drift(service, layout, 1.5j) == pytest.approx(2.0 / (6 * pi), abs=EXACT)
    still = {**layout, "ambient": {"velocity": [-2.0 / (6 * pi), 0]}}
    assert _drift(service, still, 1.5j) == pytest.approx(0.0, abs=EXACT)


def test_vortex_pair_carries_an_oval(service):
    # spacing 2b: speed Gamma / (4 pi b); stagnation at sqrt(3) b ahead and behind; half-extent across
    # 2.087254 b (Batchelor, Lamb: 2.09 b by 1.73 b, memory)
    pair = [vortex(1 + 0j, -4 * pi, "right"), vortex(-1 + 0j, 4 * pi, "left")]
    layout = open_water_body(pair, ambient={"velocity": [0.0, -1.0]})
    assert _drift(service, layout, 1 + 0j) == pytest.approx(0.0, abs=EXACT)
    places = service.stagnation_places(layout)
    assert places == pytest.approx([-sqrt(3) * 1j, sqrt(3) * 1j], abs=EXACT)
    assert service.flux(layout, [sqrt(3) * 1j, 2.087254]) == pytest.approx(0.0, abs=2e-6)


CORNER = {"kind": "corner", "vertex": [0, 0], "along": [1, 0], "interior_angle_deg": 90}


def test_source_in_a_right_angle(service):
    # q = 1 at (3, 2): stagnation at the vertex and at sqrt(A^2 - B^2) = 2.236068; u(5) = 0.117026, u(1) =
    # -0.015915
    layout = open_water_body([source(3 + 2j, 1.0)], shore=CORNER)
    velocity = service.velocity(layout, [5 + 0j, 1 + 0j])
    assert velocity == pytest.approx([0.117026, -0.015915], abs=SIX_DIGITS)
    points = service.stagnation(layout)["points"]
    on_bank = [point for point in points if point["on"] == "first bank"]
    assert [point["x"] for point in on_bank] == pytest.approx([2.236068], abs=SIX_DIGITS)
    assert [point["y"] for point in on_bank] == [0.0]


def test_source_at_the_vertex(service):
    # radial speed 2 q / (pi r); a millionth of a metre off the vertex, since on it no bank holds
    layout = open_water_body([source(1e-6 + 1e-6j, 1.0)], shore=CORNER)
    speeds = service.sample(layout, [_polar(2.0, angle) for angle in (0.0, 20.0, 45.0)])["speed"]
    assert speeds == pytest.approx([1 / pi] * 3, abs=1e-11)  # the square of the offset


# ---- sink near a straight bank with a current along it


def _bank_sink(discharge: float, height: float) -> dict:
    ambient = {"velocity": [0.5, 0.0]}
    return open_water_body([sink(height * 1j, discharge)], ambient=ambient, shore=BANK)


def test_sink_off_a_bank_leaves_a_filament(service):
    # q = 1 < critical q = pi: stagnation (0.318310, 0.947987); strip from y = 0.551102 to 2.551102 far
    # upstream
    layout = _bank_sink(1.0, 1.0)
    (point,) = service.stagnation(layout)["points"]
    at = complex(point["x"], point["y"])
    assert at == pytest.approx(0.318310 + 0.947987j, abs=SIX_DIGITS)
    assert point["on"] == "water"
    assert service.flux(layout, [at.real, at]) == pytest.approx(0.5 * 0.551102, abs=SIX_DIGITS)
    assert service.withdrawal(layout)["intake"]["width_far_upstream"] == pytest.approx(2.0, rel=1e-9)


def test_strong_sink_holds_the_bank(service):
    # q = 5 > critical: two points on the bank, x = 0.353394 and 2.829705
    points = service.stagnation(_bank_sink(5.0, 1.0))["points"]
    assert sorted(point["x"] for point in points) == pytest.approx([0.353394, 2.829705], abs=SIX_DIGITS)
    assert [point["y"] for point in points] == [0.0, 0.0]
    assert {point["on"] for point in points} == {"bank"}


def test_critical_sink_has_a_double_point(service):
    # q = 2 pi U h = 3.141593: the two points meet at x = h
    points = service.post("stagnation/search", {"layout": _bank_sink(pi, 1.0)})["result"]["points"]
    assert [point["kind"] for point in points] == ["degenerate"]
    assert complex(points[0]["x"], points[0]["y"]) == pytest.approx(
        1 + 0j, abs=1e-6
    )  # sqrt(eps) for a double root


def test_flush_sink(service):
    # x_s = q / (pi U) = 3.183099, width q / U = 10, all on one side
    layout = _bank_sink(5.0, 0.0)
    (point,) = service.stagnation(layout)["points"]
    assert point["x"] == pytest.approx(3.183099, abs=SIX_DIGITS)
    assert point["on"] == "bank"
    assert service.withdrawal(layout)["intake"]["width_far_upstream"] == pytest.approx(10.0, rel=1e-9)


# ---- sink in a channel (strip by the sinh map: Churchill, Mathews; closure recomputed against 20 000 images)

CHANNEL = {"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 100}


def _channel_sink(height: float) -> dict:
    ambient = {"velocity": [0.5, 0.0]}
    return open_water_body([sink(height * 1j, 5.0)], ambient=ambient, shore=CHANNEL)


@pytest.mark.parametrize(
    ("height", "x", "on"),
    [(0.0, 3.353729, "right bank"), (50.0, 1.676865, "water"), (100.0, 3.353729, "left bank")],
)
def test_sink_in_a_channel(service, height, x, on):
    (point,) = service.stagnation(_channel_sink(height))["points"]
    assert point["x"] == pytest.approx(x, abs=SIX_DIGITS)
    assert point["y"] == pytest.approx(height, abs=1e-9)
    assert point["on"] == on


def test_sink_off_the_middle_of_a_channel(service):
    # x_s = (W / 2 pi) ln(U_up / U_dn) for every y0; cos(pi y_s / W) = kappa cos(pi y0 / W) / sqrt(kappa^2 -
    # 1)
    (at,) = service.stagnation_places(_channel_sink(20.0))
    kappa = 19.0
    assert at.real == pytest.approx(100 / (2 * pi) * np.log(0.5 / 0.45), abs=1e-11)
    expected = 100 / pi * np.arccos(kappa * cos(0.2 * pi) / sqrt(kappa**2 - 1))
    assert at.imag == pytest.approx(expected, abs=1e-10)


@pytest.mark.parametrize("height", [0.0, 20.0, 50.0])
def test_speeds_and_width_in_a_channel(service, height):
    layout = _channel_sink(height)
    velocity = service.velocity(layout, [-2000 + 30j, 2000 + 30j])
    assert velocity == pytest.approx([0.5, 0.45], abs=EXACT)  # exp(-2000 pi / W) is nothing
    assert service.withdrawal(layout)["intake"]["width_far_upstream"] == pytest.approx(10.0, rel=1e-9)


# ---- line sink and flush slot


@pytest.mark.parametrize(
    ("at", "velocity"),
    [
        (1j, -0.25j),
        (1 + 1j, -0.128075 - 0.176208j),
        (2 + 0j, -0.174850 + 0j),
        (0.5 + 1e-9j, -0.174850 - 0.5j),
    ],
)
def test_line_sink(service, at, velocity):
    layout = open_water_body([line_sink(-1 + 0j, 1 + 0j, 2.0)])
    (found,) = service.velocity(layout, [at])
    assert found == pytest.approx(velocity, abs=SIX_DIGITS)


SLOT = open_water_body([line_sink(-2 + 0j, 2 + 0j, 0.15 * 4)], ambient={"velocity": [0.5, 0.0]}, shore=BANK)


def test_flush_slot_velocities(service):
    # u(x) = U - (V0 / pi) ln |(x + s/2) / (x - s/2)|: sweeping reverses at 1.999887, equals V0 at 0.99869 s/2
    columns = service.sample(SLOT, [1.0 + 0j, 1.999887 + 0j, 2 * np.tanh(pi * (0.5 / 0.15 - 1) / 2) + 0j])
    assert columns["u"][0] == pytest.approx(0.5 - 0.15 / pi * np.log(3.0), abs=EXACT)
    # half the last decimal of x_r against the distance to the end of 1.13e-4
    assert columns["u"][1] == pytest.approx(0.0, abs=0.15 / pi * 6e-7 / 1.13e-4)
    assert columns["u"][2] == pytest.approx(0.15, abs=1e-11)
    assert columns["v"] == pytest.approx([-0.15] * 3, abs=EXACT)


def test_share_of_the_slot_that_is_swept(service):
    # sweeping >= approach on a fraction 0.999345 of the screen: at its edge they are equal
    edge = -2.0 + 0.999345 * 4.0
    columns = service.sample(SLOT, [edge + 0j])
    slope = 0.15 / pi / (2.0 - edge)
    assert columns["u"][0] == pytest.approx(0.15, abs=slope * 4 * SIX_DIGITS)


def test_flush_slot_stagnation_and_width(service):
    # x_s = (s / 2) coth(pi U / (2 V0)) = 2.000113; capture width V0 s / U = 1.2
    window = {"x": [-6.0, 6.0], "y": [0.0, 5.0]}
    points = service.post("stagnation/search", {"layout": SLOT, "window": window})["result"]["points"]
    assert [complex(point["x"], point["y"]) for point in points] == pytest.approx([2.000113], abs=SIX_DIGITS)
    assert service.withdrawal(SLOT)["screen"]["width_far_upstream"] == pytest.approx(1.2, rel=1e-9)


# ---- Karman street (0.281 in two encyclopedia entries; closed form recomputed)


def test_karman_street_moves_with_the_published_speed(service):
    # spacing a = 1, gap b = 0.28054993: speed Gamma / (2 sqrt 2 a) = 0.35355339 Gamma / a for endless rows
    reach, gap = 240, 0.28054993  # 960 vortices: within the service's limit of elements
    upper = [vortex(complex(k, gap), -1.0, f"u{k}") for k in range(-reach, reach + 1) if k != 0]
    lower = [vortex(complex(k + 0.5, 0), 1.0, f"l{k}") for k in range(-reach, reach)]
    (velocity,) = service.velocity(open_water_body([*upper, *lower]), [gap * 1j])
    # the rest of the lower row: 2 (b / 2 pi) integral of 1/x^2 from `reach` to infinity
    missing = gap / (pi * reach)
    assert abs(velocity.real) + missing == pytest.approx(0.35355339, abs=1e-7)
    assert velocity.imag == pytest.approx(0.0, abs=EXACT)


# ---- contours: flux is what is enclosed, whatever the shape


@pytest.mark.parametrize(
    "contour",
    [
        {"circle": {"centre": [0, 0], "radius": 2.5}},
        {"polyline": points_of([3 - 3j, 3 + 2j, -2 + 3j, -3 - 1j]), "closed": True},
    ],
    ids=["circle", "polygon"],
)
def test_contour_round_elements_and_a_pier(service, contour):
    elements = [source(1 + 1j, 2.0), vortex(-1 + 1j, -0.7), sink(0.5 - 1.5j, 0.4), source(7 + 7j, 9.0, "far")]
    layout = open_water_body(elements, ambient=UPSTREAM, structures=[pier(-1 - 1j, 0.4, 0.3)])
    (answer,) = service.contours(layout, [{"name": "ring", **contour}])
    assert answer["flux"] == pytest.approx(1.6, abs=1e-11)
    assert answer["circulation"] == pytest.approx(-0.4, abs=1e-11)
    assert answer["closed"]

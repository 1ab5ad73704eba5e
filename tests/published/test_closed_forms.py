"""Closed forms of plane potential flow, through the routes.

Where no other source is named, the values are textbook knowledge recomputed for this project by a second
route (Milne-Thomson, *Theoretical Hydrodynamics*; Lamb, *Hydrodynamics*; Batchelor; White, *Fluid Mechanics*
ch. 8); values recalled and not re-read are marked "memory". Depth is 1 m throughout, so that a discharge is a
strength per depth.
"""

from math import atan2, cos, degrees, pi, radians, sin, sqrt

import numpy as np
import pytest

from support.layouts import doublet, open_water_body, pier, sink, source, vortex
from support.service import share_of

SIX_DIGITS = 6e-7
"""Tables print six decimals: half of the last one, and the rounding of the arguments."""

FIVE_DIGITS = 6e-6
EXACT = 1e-12
"""Both sides are closed forms in doubles."""

UPSTREAM = {"velocity": [1.0, 0.0]}


def _polar(r: float, degrees_: float) -> complex:
    return r * complex(cos(radians(degrees_)), sin(radians(degrees_)))


# ---- building blocks


@pytest.mark.parametrize("angle", [0.0, 60.0, 200.0])
def test_source_runs_out_evenly(service, angle):
    # u_r = q / (2 pi r)
    (velocity,) = service.velocity(open_water_body([source(0j, 3.0)]), [_polar(2.0, angle)])
    assert velocity == pytest.approx(3.0 / (4 * pi) * _polar(1.0, angle), abs=EXACT)


@pytest.mark.parametrize("angle", [0.0, 60.0, 200.0])
def test_vortex_turns_anticlockwise(service, angle):
    # u_theta = Gamma / (2 pi r)
    (velocity,) = service.velocity(open_water_body([vortex(0j, 3.0)]), [_polar(2.0, angle)])
    assert velocity == pytest.approx(3.0 / (4 * pi) * 1j * _polar(1.0, angle), abs=EXACT)


def test_doublet_makes_a_cylinder(service):
    # M = -2 pi U a^2 in a stream U: no flow through |z| = a
    layout = open_water_body([doublet(0j, -2 * pi * 4.0)], ambient=UPSTREAM)
    rim = [_polar(2.0, angle) for angle in range(0, 360, 30)]
    velocity = service.velocity(layout, rim)
    assert np.abs((velocity * np.conj(rim)).real).max() < EXACT


def test_uniform_current_has_the_stream_function_of_its_angle(service):
    # psi = U (y cos a - x sin a)
    current = 0.7 * complex(cos(0.4), sin(0.4))
    layout = open_water_body([], ambient={"velocity": [current.real, current.imag]})
    psi = service.sample(layout, [0j, 3 + 5j], ["stream_function"])["stream_function"]
    assert psi[1] - psi[0] == pytest.approx(0.7 * (5 * cos(0.4) - 3 * sin(0.4)), abs=EXACT)


@pytest.mark.parametrize("element", [source(0j, 2.0), vortex(0j, 2.0)], ids=["source", "vortex"])
def test_gradient_of_a_point_element(service, element):
    # G = q / (pi r^2), dissipation 4 mu |w''|^2 with |w''| = q / (2 pi r^2)
    body = {
        "layout": open_water_body([element]),
        "at": {"points": [[0.3, 0.4]]},
        "fluid": {"dynamic_viscosity": 1e-3, "density": 1000.0},
    }
    (state,) = service.post("stress/tensor", body)["result"]["states"]
    assert state["mean_velocity_gradient"] == pytest.approx(2.0 / (pi * 0.25), rel=1e-12)
    assert state["dissipation"] == pytest.approx(4e-3 * (2.0 / (2 * pi * 0.25)) ** 2, rel=1e-12)


# ---- half-body: source in a stream (open university course pages; table recomputed)

HALF_BODY = [
    (170, -0.98983, 0.17453, 0.17394, 0.96974),
    (150, -0.90690, 0.52360, 0.50784, 0.74210),
    (135, -0.78540, 0.78540, 0.73303, 0.46267),
    (120, -0.60460, 1.04720, 0.92570, 0.14308),
    (90, 0.0, 1.57080, 1.18545, -0.40528),
    (60, 1.20920, 2.09440, 1.25876, -0.58448),
    (45, 2.35619, 2.35619, 1.23064, -0.51448),
    (30, 4.53450, 2.61799, 1.16930, -0.36727),
]
HALF_BODY_LAYOUT = open_water_body([source(0j, 2 * pi)], ambient=UPSTREAM)


def _half_body(angle: float) -> complex:
    return _polar((pi - radians(angle)) / sin(radians(angle)), angle)


@pytest.mark.parametrize(("angle", "x", "y", "speed", "coefficient"), HALF_BODY)
def test_half_body_surface(service, angle, x, y, speed, coefficient):
    at = _half_body(angle)
    assert at == pytest.approx(complex(x, y), abs=1.5 * FIVE_DIGITS)
    columns = service.sample(HALF_BODY_LAYOUT, [at], ["pressure_coefficient"])
    assert columns["speed"][0] == pytest.approx(speed, abs=FIVE_DIGITS)
    assert columns["pressure_coefficient"][0] == pytest.approx(coefficient, abs=FIVE_DIGITS)


@pytest.mark.parametrize("angle", [170, 120, 60, 30])
def test_half_body_surface_is_the_dividing_streamline(service, angle):
    assert service.flux(HALF_BODY_LAYOUT, [-1 + 0j, _half_body(angle)]) == pytest.approx(0.0, abs=EXACT)


def test_half_body_stagnation_point(service):
    (point,) = service.stagnation(HALF_BODY_LAYOUT)["points"]
    assert complex(point["x"], point["y"]) == pytest.approx(-1 + 0j, abs=EXACT)
    assert point["kind"] == "saddle"
    assert point["on"] == "water"


def test_half_body_greatest_speed(service):
    # V/U = 1.259591 at 62.9569 deg, Cp = -0.586568 (White: about 1.26 at 63 deg, memory)
    angles = [62.9569, 62.0, 64.0]
    columns = service.sample(HALF_BODY_LAYOUT, [_half_body(a) for a in angles], ["pressure_coefficient"])
    assert columns["speed"][0] == pytest.approx(1.259591, abs=SIX_DIGITS)
    assert columns["pressure_coefficient"][0] == pytest.approx(-0.586568, abs=SIX_DIGITS)
    assert columns["speed"].argmax() == 0


def test_half_body_undisturbed_pressure(service):
    # Cp = 0 at 113.2183 deg, exactly x = -b/2, y = 1.165561 b
    assert _half_body(113.2183) == pytest.approx(-0.5 + 1.165561j, abs=2e-6)  # four decimals of a degree
    columns = service.sample(HALF_BODY_LAYOUT, [-0.5 + 1.165561j], ["pressure_coefficient"])
    assert columns["pressure_coefficient"][0] == pytest.approx(0.0, abs=2e-6)


@pytest.mark.parametrize(
    ("current", "discharge", "stagnation", "abeam", "width"),
    [
        (5.0, 2.0, 0.0637, 0.1, 0.4),  # open potential-flow course note, exercise 3
        (10.0, 10 * pi, 0.5, pi / 4, pi),  # after a question of Potter's textbook
    ],
    ids=["course-note", "Potter"],
)
def test_capture_zone_is_the_half_body_reversed(service, current, discharge, stagnation, abeam, width):
    layout = open_water_body([sink(0j, discharge)], ambient={"velocity": [current, 0.0]})
    (at,) = service.stagnation_places(layout)
    assert at.real == pytest.approx(stagnation, abs=5e-5)  # four decimals are printed
    assert service.withdrawal(layout)["intake"]["width_far_upstream"] == pytest.approx(width, rel=1e-9)
    # half the sink's water crosses the line abeam within the half-width
    assert service.flux(layout, [at, abeam * 1j]) == pytest.approx(0.0, abs=1e-4 * discharge)


# ---- Rankine oval (table agrees with White section 8.4, memory)

OVAL = [
    (0.01, 0.030800, 1.009950, 1.019981),
    (0.1, 0.262768, 1.095445, 1.187083),
    (1.0, 1.306542, 1.732051, 1.738811),
    (10.0, 4.435208, 4.582576, 1.967536),
    (100.0, 14.130361, 14.177447, 1.996676),
]


def _oval(discharge: float, half_spacing: float = 1.0, current: float = 1.0) -> dict:
    pair = [source(-half_spacing + 0j, discharge), sink(half_spacing + 0j, discharge)]
    return open_water_body(pair, ambient={"velocity": [current, 0.0]})


@pytest.mark.parametrize(("strength", "height", "length", "speed"), OVAL)
def test_rankine_oval(service, strength, height, length, speed):
    layout = _oval(2 * pi * strength)
    places = service.stagnation_places(layout)
    assert places == pytest.approx([-length, length], abs=SIX_DIGITS)
    columns = service.sample(layout, [height * 1j])
    assert columns["speed"][0] == pytest.approx(speed, abs=2 * SIX_DIGITS)
    # the surface passes through (0, h): no flux between the nose and there
    gate = service.flux(layout, [places[0], height * 1j])
    assert gate == pytest.approx(0.0, abs=2 * SIX_DIGITS)


def test_oval_as_high_as_its_spacing(service):
    # q = 4 U a: h = a, L = a sqrt(1 + 4/pi) = 1.507727 a (published solution to a Houghton and Carpenter
    # problem)
    layout = _oval(120.0, 1.0, 30.0)
    places = service.stagnation_places(layout)
    assert places[1].real == pytest.approx(sqrt(1 + 4 / pi), abs=EXACT)
    assert service.flux(layout, [places[0], 1j]) == pytest.approx(0.0, abs=1e-11)  # discharge 120


def test_oval_in_feet(service):
    # q = 36 ft2/s, spacing 12 ft, U = 10 ft/s: 13.0959 ft by 3.0327 ft (a public answer of 12.80 x 2.29 is
    # wrong)
    layout = _oval(36.0, 6.0, 10.0)
    first, last = service.stagnation_places(layout, unit_system="us")
    assert (last - first).real == pytest.approx(13.0959, abs=5e-5)
    gate = service.flux(layout, [first, 3.0327 / 2 * 1j], unit_system="us")
    assert gate == pytest.approx(0.0, abs=1e-3)  # half the last decimal of the thickness at 13 ft/s


def test_intake_below_an_equal_outfall_draws_nothing_else(service):
    intake = service.withdrawal(_oval(0.8))["intake"]
    assert share_of(intake, "outfall") == pytest.approx(1.0, abs=1e-9)
    assert intake["recirculation_share"] == pytest.approx(1.0, abs=1e-9)


# ---- cylinder


def _cylinder(current: float, radius: float, circulation: float = 0.0) -> dict:
    structures = [pier(0j, radius, circulation)]
    return open_water_body([], ambient={"velocity": [current, 0.0]}, structures=structures)


@pytest.mark.parametrize("angle", [0, 30, 90, 150, 200, 210, 330])
def test_cylinder_surface(service, angle):
    # speed 2 U |sin|, Cp = 1 - 4 sin^2; Cp = 0 at 30, 150, 210, 330 deg (course note, exercise 2)
    columns = service.sample(
        _cylinder(1.5, 2.0), [_polar(2.0 * (1 + 1e-12), angle)], ["pressure_coefficient"]
    )
    assert columns["speed"][0] == pytest.approx(3.0 * abs(sin(radians(angle))), abs=1e-11)
    assert columns["pressure_coefficient"][0] == pytest.approx(1 - 4 * sin(radians(angle)) ** 2, abs=1e-10)


def test_cylinder_front_strain(service):
    # |du/dx| = 2 U / a, so G = 4 U / a = 4 1/s for U = 0.5, a = 0.5
    body = {
        "layout": _cylinder(0.5, 0.5),
        "at": {"points": [[-0.5, 0.0]]},
        "fluid": {"dynamic_viscosity": 1e-3, "density": 1000.0},
    }
    (state,) = service.post("stress/tensor", body)["result"]["states"]
    assert state["mean_velocity_gradient"] == pytest.approx(4.0, rel=1e-11)
    assert abs(state["strain_rate"][0][0]) == pytest.approx(2.0, rel=1e-11)


@pytest.mark.parametrize(
    ("current", "radius", "circulation", "angles"),
    [
        (10.0, 0.5, 20.0, (18.5607, 161.4393)),  # course note, exercise 4
        (40.0, 0.2, -71.0861, (-135.0, -45.0)),  # question of a textbook: leading point depressed to 315 deg
        (1.0, 1.0, 0.0, (0.0, 180.0)),
    ],
    ids=["anticlockwise", "clockwise", "none"],
)
def test_cylinder_with_circulation_stagnates_where_published(service, current, radius, circulation, angles):
    # sin(theta) = Gamma / (4 pi U a), anticlockwise positive
    points = service.stagnation(_cylinder(current, radius, circulation))["points"]
    # from -90 to 270, so that rounding about 0 does not become 360
    found = sorted((degrees(atan2(point["y"], point["x"])) + 90) % 360 - 90 for point in points)
    assert found == pytest.approx(
        sorted((angle + 90) % 360 - 90 for angle in angles), abs=6e-5
    )  # four decimals
    assert {point["on"] for point in points} == {"P1"}
    assert {point["kind"] for point in points} == {"wall"}


def test_fast_side_of_a_turning_cylinder(service):
    layout = _cylinder(40.0, 0.2, -4 * pi * 40.0 * 0.2 * sin(radians(45)))
    columns = service.sample(layout, [_polar(0.2, 45), _polar(0.2, 90)], ["pressure_coefficient"])
    assert columns["speed"] == pytest.approx([113.1371, 136.5685], abs=6e-5)
    assert columns["pressure_coefficient"][1] == pytest.approx(-10.65685, abs=6e-6)


@pytest.mark.parametrize(("ratio", "distance"), [(1.25, 2.0), (1.5, 2.618034), (2.0, 3.732051)])
def test_stagnation_point_leaves_a_fast_turning_cylinder(service, ratio, distance):
    points = service.stagnation(_cylinder(1.0, 1.0, 4 * pi * ratio))["points"]
    places = [complex(point["x"], point["y"]) for point in points]
    assert places == pytest.approx([distance * 1j], abs=SIX_DIGITS)
    assert points[0]["on"] == "water"


def _force(service, layout: dict, centre: complex, radius: float, density: float) -> complex:
    """Blasius: Fx - iFy = (i rho / 2) integral of W^2 dz; the trapezoid over a circle is spectrally exact."""
    turns = np.exp(2j * pi * np.arange(128) / 128)
    w = np.conj(service.velocity(layout, centre + radius * turns))
    integral = (w**2 * 2j * pi * radius * turns).mean()
    return complex(np.conj(0.5j * density * integral))


def test_lift_of_a_turning_cylinder(service):
    # |F| = rho U Gamma = 245 N/m towards -y (course note, exercise 4; Kutta-Joukowski)
    force = _force(service, _cylinder(10.0, 0.5, 20.0), 0j, 0.6, 1.225)
    assert force == pytest.approx(-245j, abs=1e-9)


# ---- circle theorem: element beside a pier (encyclopedia text and two lecture notes)


def _beside(element: dict) -> dict:
    return open_water_body([element], structures=[pier(0j, 1.0)])


@pytest.mark.parametrize("angle", [30.0, 53.13010235, 90.0, 170.0])
def test_speed_on_a_pier_beside_a_source(service, angle):
    # u_theta = (q / pi) f sin / (a^2 + f^2 - 2 a f cos), q = 2, a = 1, f = 3
    (velocity,) = service.velocity(_beside(source(3 + 0j, 2.0)), [_polar(1.0, angle)])
    turned = velocity / _polar(1.0, angle)
    theta = radians(angle)
    assert turned.real == pytest.approx(0.0, abs=EXACT)
    assert turned.imag == pytest.approx(2 / pi * 3 * sin(theta) / (10 - 6 * cos(theta)), abs=EXACT)


def test_printed_speeds_beside_a_source(service):
    speeds = service.sample(_beside(source(3 + 0j, 2.0)), [1j, _polar(1.0, 53.13010235)])["speed"]
    assert speeds == pytest.approx([0.190986, 0.238732], abs=SIX_DIGITS)


@pytest.mark.parametrize("element", [source(3 + 0j, 2.0), vortex(3 + 0j, 2.0)], ids=["source", "vortex"])
def test_pier_is_drawn_to_source_and_vortex_alike(service, element):
    # F = rho q^2 a^2 / (2 pi f (f^2 - a^2)) = 26.525824 N/m, towards the singularity
    force = _force(service, _beside(element), 0j, 1.5, 1000.0)
    assert force == pytest.approx(26.525824, abs=SIX_DIGITS)


def test_force_on_a_source_by_the_theorem_of_lagally(service):
    # -rho q V, V the velocity of the rest of the field there: the opposite of the force on the pier
    layout = _beside(source(3 + 0j, 2.0))
    rest = service.velocity(layout, 3 + 0.1 * np.exp(2j * pi * np.arange(64) / 64)).mean()
    assert -1000.0 * 2.0 * rest == pytest.approx(-26.525824, abs=SIX_DIGITS)

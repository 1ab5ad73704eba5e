"""Line elements: closed forms, high-precision integrals of point sources, walls, jumps and chords."""

import unittest.mock
from dataclasses import replace

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad

from forebay.flow.core_images import core_images
from forebay.flow.layout import Basin, Channel, Corner, DeadEnd, OpenWater, Shore, StraightBank
from forebay.flow.lines import line_term
from forebay.flow.shores import frame_of

Q = -1.7
"""Strength of the lines in these tests [m2/s]."""

ALONG = complex(np.exp(0.3j))

SHORES: dict[str, Shore] = {
    "open-water": OpenWater(),
    "straight-bank": StraightBank(0j, ALONG),
    "channel": Channel(0j, ALONG, 6.0),
    "dead-end": DeadEnd(0j, ALONG, 6.0),
    "basin": Basin(0j, ALONG, 9.0, 6.0),
    "corner-60": Corner(0j, ALONG, np.pi / 3),
    "corner-135": Corner(0j, ALONG, 0.75 * np.pi),
    "corner-270": Corner(0j, ALONG, 1.5 * np.pi),
}
LINE = (ALONG * (1.5 + 0.8j), ALONG * (2.9 + 1.7j))
"""In the water of every shore."""

PLACES = ALONG * np.array([0.7 + 0.5j, 2.3 + 1.2j, 2.5 + 2.9j, 1.4 + 0.1j])


def line_on(name: str, ends: tuple[complex, complex] = LINE, offset: float = 0.0):
    frame = frame_of(SHORES[name], 2 + 1j, 3.0)
    start, end = ends
    return line_term(start, end, Q, owner=1, frame=frame, offset=0.5 if name.startswith("corner") else offset)


def balanced(name, ends=LINE):
    """Velocity of a line; in a closed basin that of another line taken off, since discharges must balance."""
    line, other = line_on(name, ends), line_on(name, (ALONG * (5.0 + 4.0j), ALONG * (6.0 + 3.0j)))
    if name != "basin":
        return line.velocity
    return lambda z: line.velocity(z) - other.velocity(z)


def line_frame(name):
    return frame_of(SHORES[name], 2 + 1j, 3.0)


def point_source(name, z, s):
    """Field of a source of strength 2 pi in mpmath, on a shore whose first bank is the real axis."""
    conj, coth = mpmath.conj, mpmath.coth
    rate = mpmath.pi / 6
    match name:
        case "open-water":
            return 1 / (z - s)
        case "straight-bank":
            return 1 / (z - s) + 1 / (z - conj(s))
        case "channel":
            return rate / 2 * sum(coth(rate / 2 * (z - p)) for p in (s, conj(s)))
        case "dead-end":
            return rate / 2 * sum(coth(rate / 2 * (z - p)) for p in (s, conj(s), -s, -conj(s)))
        case "basin":
            rows = [18 * k for k in (0, 1, -1, 2, -2, 3, -3, 4, -4)]
            places = [p + row for row in rows for p in (s, conj(s), -s, -conj(s))]
            return rate / 2 * sum(coth(rate / 2 * (z - p)) for p in places)
        case _:
            angle = mpmath.mpf(np.radians(float(name.removeprefix("corner-"))))
            n, half = mpmath.pi / angle, mpmath.expj(-angle / 2)
            log_z, log_s = (mpmath.log(p * half) + 1j * angle / 2 for p in (z, s))
            images = (1 / (1 - mpmath.exp(-n * (log_z - p))) for p in (log_s, conj(log_s)))
            return n / z * sum(images)


@pytest.mark.parametrize("name", SHORES)
def test_velocity_is_the_integral_of_point_sources(name):
    line = line_on(name)
    found = line.jet(PLACES).velocity
    start, end = (mpmath.mpc(complex(p / ALONG)) for p in LINE)
    with mpmath.workdps(25):
        for z, velocity in zip(PLACES, found, strict=True):
            local = mpmath.mpc(complex(z / ALONG))
            nearest = ((local - start) * mpmath.conj(end - start)).real / abs(end - start) ** 2
            breaks = [0, *([nearest] if 0 < nearest < 1 else []), 1]
            mean = mpmath.quad(
                lambda x, at=local: point_source(name, at, start + (end - start) * x), breaks, maxdegree=9
            )
            exact = complex(mean) * Q / (2 * np.pi) / ALONG
            # rounding of a few dozen terms; the basin's rows beyond the fourth are below 1e-16
            assert abs(velocity - exact) <= 1e-13 * float(line.magnitude(np.array([z]))[0])


@pytest.mark.parametrize("name", SHORES)
def test_slope_is_the_derivative(name):
    line = line_on(name)
    ring = 0.05 * np.exp(2j * np.pi * np.arange(32) / 32)
    z = PLACES[[0, 2]]
    # Cauchy's formula on 32 nodes: (0.05 / 0.3)^32 = 1e-25, so rounding over the radius remains
    around = line.velocity(z[:, None] + ring)
    assert_allclose(line.jet(z).slope, (around / ring).mean(axis=1), rtol=1e-12)
    assert_allclose(line.jet(z).velocity, line.velocity(z), rtol=1e-14)


@pytest.mark.parametrize("name", [name for name in SHORES if name != "open-water"])
def test_no_flow_through_walls(name):
    line = line_on(name)
    for wall in line_frame(name).walls:
        distances = np.linspace(-min(wall.before, 20.0), min(wall.after, 20.0), 42)[1:-1]
        z = wall.point + wall.direction * distances
        normal = (balanced(name)(z) * wall.direction).imag
        assert np.abs(normal).max() <= 1e-13 * line.magnitude(z).max()  # the target is 1e-12


@pytest.mark.parametrize(
    ("name", "index"),
    [
        ("straight-bank", 0),
        ("channel", 0),
        ("channel", 1),
        ("dead-end", 2),
        ("basin", 1),
        ("basin", 3),
        ("corner-60", 1),
        ("corner-270", 0),
        ("corner-270", 1),
    ],
)
def test_line_in_a_wall_draws_all_its_water_from_the_water_side(name, index):
    wall = line_frame(name).walls[index]
    low = -3.0 if wall.before > 3.0 else 1.0
    start, end = (wall.point + wall.direction * t for t in (low, low + 2.0))
    line = line_on(name, (start, end))
    inside = start + (end - start) * np.array([0.2, 0.5, 0.9])
    velocity = balanced(name, (start, end))
    normal = (velocity(inside) * 1j * wall.direction).real
    assert_allclose(normal, Q / 2.0, rtol=1e-12)  # strength over length, exact up to rounding
    # the same within the tolerance of the shore, on either side of the wall
    outside = inside - 1e-10j * wall.direction
    assert_allclose((velocity(outside) * 1j * wall.direction).real, Q / 2.0, rtol=1e-8)
    # along the wall all discharge passes to the right of travel: out of the water
    if name != "basin":
        flux = line.chords(np.array([start]), np.array([end])).imag
        assert_allclose(flux, -Q, rtol=1e-12)


@pytest.mark.parametrize("name", SHORES)
def test_chord_is_the_integral_of_the_velocity(name):
    line = line_on(name)
    start, end = (complex(p) for p in LINE)
    for a, b in ((PLACES[0], PLACES[3]), (PLACES[0], PLACES[2]), (start, PLACES[2])):
        crossing = (
            ((a - start) * (end - start).conjugate()).imag,
            ((b - start) * (end - start).conjugate()).imag,
        )
        breaks = [crossing[0] / (crossing[0] - crossing[1])] if crossing[0] * crossing[1] < 0 else None
        values = [
            quad(lambda x, a=a, b=b, part=part: part(line.velocity(a + x * (b - a)) * (b - a)), 0, 1,
                 points=breaks, epsabs=1e-12, epsrel=1e-12, limit=200)[0]
            for part in (np.real, np.imag)
        ]  # fmt: skip
        found = line.chords(np.array([a]), np.array([b]))[0]
        assert abs(found - complex(*values)) <= 1e-11  # the tolerance asked of the quadrature, with margin


def test_closed_square_takes_the_whole_discharge():
    line = line_on("open-water")
    middle = 0.5 * sum(LINE)
    square = middle + 2.0 * np.array([1 + 1j, -1 + 1j, -1 - 1j, 1 - 1j])
    total = line.chords(square, np.roll(square, -1)).sum()
    assert_allclose([total.real, total.imag], [0.0, Q], rtol=0, atol=1e-14)  # residues: exact


@pytest.mark.parametrize("share", [0.0, 0.25, 0.5, 1.0])
def test_square_that_cuts_the_line_takes_its_share(share):
    start, end = LINE
    run = end - start
    line = line_on("open-water")
    # encloses the line's start and all up to `share`
    corners = start + run * (np.array([share - 1j, share + 1j, -1 + 1j, -1 - 1j]))
    total = line.chords(corners, np.roll(corners, -1)).sum()
    assert_allclose([total.real, total.imag], [0.0, share * Q], rtol=0, atol=1e-14)


def test_on_the_line_the_mean_of_both_sides():
    start, end = LINE
    line = line_on("open-water")
    on = start + 0.3 * (end - start)
    beside = 1e-9j * (end - start)
    left, right = line.velocity(np.array([on + beside, on - beside]))
    # W turns by 1e-9 / 0.3 over the distance
    assert_allclose(line.velocity(np.array([on]))[0], 0.5 * (left + right), rtol=1e-8)
    jump = (left - right) / (-1j * np.conj((end - start) / abs(end - start)))
    assert_allclose(jump, Q / abs(end - start), rtol=1e-7)
    along = line.chords(np.array([start]), np.array([end]))[0]
    assert abs(along) <= 1e-14  # by symmetry


def test_ends_have_no_velocity_but_a_potential():
    line = line_on("channel")
    assert np.isnan(line.jet(np.array(LINE)).velocity).all()
    assert np.isnan(line.velocity(np.array(LINE))).all()
    assert np.isfinite(line.potential(np.array(LINE))).all()


@pytest.mark.parametrize("name", ["channel", "corner-60", "corner-270"])
def test_nothing_happens_where_panels_join(name):
    start, end = ALONG * (0.2 + 0.3j), ALONG * (5.4 + 4.4j)
    line = line_on(name, (start, end))
    joints = line.frame.inverse(np.array([panel.start for panel in line.panels[1:]]))
    assert joints.size > 0
    tangent = (end - start) / abs(end - start)
    across = 1j * tangent * np.array([0.0, 1e-6, -1e-6])[:, None]
    on, left, right = (line.jet(joints + step) for step in across)
    assert_allclose(
        on.velocity, 0.5 * (left.velocity + right.velocity), rtol=1e-10
    )  # 1e-6 squared, and rounding
    assert_allclose(on.slope, 0.5 * (left.slope + right.slope), rtol=1e-10)


@pytest.mark.parametrize("name", SHORES)
def test_potential_differs_by_the_chord_where_no_cut_lies_between(name):
    line = line_on(name)
    a, b = PLACES[[1]], PLACES[[3]]
    # a basin sums some fifty images, each to rounding
    assert_allclose(line.potential(b) - line.potential(a), line.chords(a, b), rtol=0, atol=1e-13)


def test_short_line_far_away_keeps_its_digits():
    # as a point source with the first correction (length/2)^2 / 3 / z^3
    line = line_on("straight-bank", (1e-3j - 5e-4, 1e-3j + 5e-4))
    z = np.array([700 + 300j])
    local = z / ALONG
    at, half = 1e-3j / ALONG, 5e-4 / ALONG
    exact = sum(
        1 / (local - s) + h * h / 3 / (local - s) ** 3 for s, h in ((at, half), (np.conj(at), np.conj(half)))
    )
    assert_allclose(line.velocity(z), exact * Q / (2 * np.pi) / ALONG, rtol=1e-14)


def test_offset_sends_the_flux_to_one_end_of_a_channel():
    line = line_on("channel", offset=0.5)
    far = ALONG * np.array([-200 + 3j, 200 + 3j])
    # all of Q passes downstream, exp(-100) reaches upstream
    assert_allclose(line.velocity(far) * ALONG, [0.0, Q / 6.0], rtol=1e-14, atol=1e-15)


def test_published_values_of_a_slot():
    # checks 1.9: sigma = -1, from -1 to 1; six digits printed
    line = line_term(-1 + 0j, 1 + 0j, -2.0, owner=1, frame=frame_of(OpenWater(), 0j, 1.0), offset=0.0)
    w = line.velocity(np.array([1j, 1 + 1j, 2 + 0j, 0.5 + 1e-13j]))
    expected = [[0.0, -0.25], [-0.128075, -0.176208], [-0.174850, 0.0], [-0.174850, -0.5]]
    assert_allclose(np.stack([w.real, -w.imag], axis=1), expected, atol=5e-7)


def test_flush_slot_reverses_the_sweep_where_the_closed_form_says():
    # checks 1.9: U = 0.5, V0 = 0.15, s = 4: x_r = (s/2) tanh(pi U / 2 V0), x_s = (s/2) coth(pi U / 2 V0)
    bank = frame_of(StraightBank(0j, 1 + 0j), 0j, 1.0)
    line = line_term(-2 + 0j, 2 + 0j, -0.15 * 4.0, owner=1, frame=bank, offset=0.0)
    reach = np.pi * 0.5 / 0.3
    for place in (2.0 * np.tanh(reach), 2.0 / np.tanh(reach)):
        # beside a logarithmic end at 1e-4: the position's rounding is magnified 1e4 times
        assert abs(0.5 + line.velocity(np.array([place + 0j]))[0].real) <= 1e-11


def test_a_map_without_mirrors_is_an_error():
    frame = replace(frame_of(OpenWater(), 0j, 1.0), map=unittest.mock.Mock())
    with pytest.raises(TypeError):
        line_term(0j, 1 + 0j, 1.0, owner=1, frame=frame, offset=0.0)
    with pytest.raises(TypeError):
        core_images(0j, 1.0, frame)

"""Flow in three dimensions about openings: walls, axis, images, and the depth mean it must keep."""

import math

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Layout,
    Outline,
    Pier,
    Sink,
    Source,
    StraightBank,
)
from forebay.flow.model import compile_layout
from forebay.flow.point_intake.field import ElevationMissingError, near_field
from forebay.flow.point_intake.plan_images import plan_images

DEPTH = 3.0


def field_of(shore, sink_at, *, elevation=0.9, structures=(), others=(), current=0j):
    elements = (Sink("intake", sink_at, 1.5), *others)
    layout = Layout(DEPTH, ambient=Ambient(current), shore=shore, elements=elements, structures=structures)
    return near_field(compile_layout(layout), {"intake": elevation})


BALANCE = (Source("works", 25 + 4j, 1.5),)
SHORES = {
    "bank": (StraightBank(0j, 1 + 0j), 2 + 1.5j, (), 0.3),
    "channel": (Channel(0j, 1 + 0j, 5.0), 2 + 1.5j, (), 0.3),
    "dead end": (DeadEnd(0j, 1 + 0j, 5.0), 2 + 1.5j, (), 0.0),
    "basin": (Basin(0j, 1 + 0j, 30.0, 8.0), 2 + 1.5j, BALANCE, 0.0),
    "right corner": (Corner(0j, 1 + 0j, math.pi / 2), 2 + 1.5j, (), 0.0),
    "corner of 60 degrees": (Corner(0j, 1 + 0j, math.pi / 3), 4 + 1.5j, (), 0.0),
    "straight corner": (Corner(0j, 1 + 0j, math.pi), 4 + 1.5j, (), 0.0),
}


@pytest.mark.parametrize("name", SHORES)
def test_no_flow_through_straight_walls(name):
    shore, at, others, current = SHORES[name]
    field = field_of(shore, at, others=others, current=current)
    for wall in field.model.walls:
        along = np.linspace(-min(wall.before, 6.0), min(wall.after, 6.0), 41)[1:-1]
        places = wall.point + along * wall.direction
        for height in (0.0, 0.9, DEPTH):
            horizontal, _ = field.velocity(places, np.full(along.size, height))
            through = (horizontal * wall.direction).imag
            # images beyond twelve depths are left out: exp(-12 pi) = 4e-17 of speeds about 0.1 m/s
            assert np.max(np.abs(through)) < 1e-13
    assert field.leak < 1e-13


def test_skew_corner_says_what_its_images_leave():
    field = field_of(Corner(0j, 1 + 0j, math.radians(70.0)), 3 + 1.5j)
    places = field.model.walls[1].point - np.linspace(0.5, 8.0, 40) * field.model.walls[1].direction
    horizontal, _ = field.velocity(places, np.full(40, 0.9))
    through = np.max(np.abs((horizontal * field.model.walls[1].direction).imag))
    assert 1e-6 < through <= 1.1 * field.leak  # sampled at other places, a tenth of a depth apart


def test_pier_in_the_near_field_is_reported():
    near = field_of(StraightBank(0j, 1 + 0j), 2 + 3j, structures=(Pier("P", 5 + 3j, 0.5),))
    far = field_of(StraightBank(0j, 1 + 0j), 2 + 3j, structures=(Pier("P", 32 + 3j, 0.5),))
    assert near.leak > 1e-4
    assert far.leak < 1e-12  # exp(-pi 29 / 3) = 6e-14 of a speed about 0.1 m/s


GROYNE = Outline("groyne", (4 + 0j, 6 + 0j, 6 + 9j, 4 + 9j))


def test_outline_in_the_near_field_is_reported():
    near = field_of(StraightBank(0j, 1 + 0j), 2 + 3j, structures=(GROYNE,))
    far = field_of(StraightBank(0j, 1 + 0j), -40 + 3j, structures=(GROYNE,))
    assert near.leak > 1e-4
    assert far.leak == 0.0  # beyond the reach of twelve depths


def test_opening_on_an_outline_draws_from_one_side():
    # half of the sphere: Q / (2 pi R^2) near it, to R / h and what is solved along the outline
    field = field_of(StraightBank(0j, 1 + 0j), 4 + 4j, structures=(GROYNE,))
    speed = field.speed(np.array([3.97 + 4j]), np.array([0.9]))[0]
    assert speed == pytest.approx(1.5 / (2 * np.pi * 0.03**2), rel=5e-3)


def test_mean_over_the_depth_is_the_plane_flow():
    field = field_of(Channel(0j, 1 + 0j, 7.0), 2 + 2j, current=0.2)
    nodes, weights = np.polynomial.legendre.leggauss(40)
    z = DEPTH * (nodes + 1) / 2
    for place in (3.5 + 2j, 2 + 5.5j, -4 + 1j):
        horizontal, _ = field.velocity(np.full(40, place), z)
        plane = field.model.velocity(np.array([place]))[0]
        assert 0.5 * weights @ horizontal == pytest.approx(plane, abs=1e-10)  # 40 nodes, peak 1.5 m wide


def test_divergence_and_curl_vanish():
    field = field_of(StraightBank(0j, 1 + 0j), 2 + 1.5j, current=0.2)
    place, height, step = 3.1 + 2.2j, 1.3, 1e-4

    def vector(dx=0.0, dy=0.0, dz=0.0):
        horizontal, upward = field.velocity(np.array([place + complex(dx, dy)]), np.array([height + dz]))
        return np.array([horizontal[0].real, -horizontal[0].imag, upward[0]])

    moves = [{"dx": step}, {"dy": step}, {"dz": step}]
    columns = [
        (vector(**move) - vector(**{key: -value for key, value in move.items()})) / (2 * step)
        for move in moves
    ]
    gradient = np.array(columns).T
    # central differences: step^2 times third derivatives, of order one
    assert np.trace(gradient) == pytest.approx(0.0, abs=1e-7)
    assert gradient - gradient.T == pytest.approx(np.zeros((3, 3)), abs=1e-7)
    assert np.max(np.abs(gradient)) > 1e-2


def test_above_an_opening_in_still_water():
    # images at e + 2kh and -e + 2kh on one line: w = -Q / (4 pi) sum sign / d^2; 4000 rows leave 1e-8
    field = field_of(compile_layout(Layout(DEPTH)).layout.shore, 1 + 1j)
    height, rows = 2.2, np.arange(-4000, 4001)
    gaps = np.concatenate([height - 0.9 - 2 * DEPTH * rows, height + 0.9 - 2 * DEPTH * rows])
    expected = -1.5 / (4 * np.pi) * np.sum(np.sign(gaps) / gaps**2)
    horizontal, upward = field.velocity(np.array([1 + 1j]), np.array([height]))
    assert upward[0] == pytest.approx(expected, abs=1e-8)
    assert abs(horizontal[0]) < 1e-9  # the difference of two poles of 1e5 m/s each side


def test_above_an_opening_the_rest_of_the_flow_is_kept():
    field = field_of(StraightBank(0j, 1 + 0j), 2 + 1.5j, current=0.4)
    on, beside = (field.velocity(np.array([2 + 1.5j + d]), np.array([2.0])) for d in (0.0, 3e-3))
    # over 3 mm the flow changes by some 3e-3 / 3 of itself
    assert on[0][0] == pytest.approx(beside[0][0], abs=2e-3)
    assert on[1][0] == pytest.approx(beside[1][0], rel=2e-3)


def test_opening_on_a_bank_draws_from_one_side():
    on_bank = field_of(StraightBank(0j, 1 + 0j), 2 + 0j)
    beside = field_of(StraightBank(0j, 1 + 0j), 2 + 1e-7j)
    place = np.array([2.5 + 0.3j]), np.array([1.0])
    assert on_bank.speed(*place)[0] == pytest.approx(beside.speed(*place)[0], rel=1e-6)  # 1e-7 m of 0.6 m
    # half of the sphere: Q / (2 pi R^2) near it, to R / h
    near = on_bank.speed(np.array([2 + 0.03j]), np.array([0.9]))[0]
    assert near == pytest.approx(1.5 / (2 * np.pi * 0.03**2), rel=2e-3)


def test_opening_itself_has_no_velocity():
    field = field_of(StraightBank(0j, 1 + 0j), 2 + 1.5j)
    horizontal, upward = field.velocity(np.array([2 + 1.5j]), np.array([0.9]))
    assert np.isnan(horizontal[0])
    assert np.isnan(upward[0])


def test_without_an_elevation_there_is_no_near_field():
    model = compile_layout(Layout(DEPTH, elements=(Sink("intake", 0j, 1.0),)))
    with pytest.raises(ElevationMissingError):
        near_field(model, {})


@pytest.mark.parametrize(("parts", "count"), [(1, 2), (2, 4), (3, 6), (6, 12)])
def test_corner_has_twice_as_many_images_as_parts(parts, count):
    shore = Corner(0j, 1 + 0j, math.pi / parts)
    at = complex(5 * np.exp(0.3j * math.pi / parts))
    walls = compile_layout(Layout(DEPTH, shore=shore, elements=(Sink("a", at, 1.0),))).walls
    images = plan_images(shore, walls, at, 100.0)
    assert images.size == count
    assert np.abs(images) == pytest.approx(np.full(count, 5.0), rel=1e-12)

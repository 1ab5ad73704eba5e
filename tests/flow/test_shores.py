"""Frames of the shores: walls, images, what is wet."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.poles import PERIODIC
from forebay.flow.shores import frame_of
from support.sites import SHORES, place

BANKED = [name for name in SHORES if name != "open-water"]


def a_frame(name):
    shore = SHORES[name]
    return frame_of(shore, place(shore, 0.4, 0.4), 30.0)


def wall_points(wall, count=7):
    """Points on a wall, at most 40 m from its point."""
    return wall.point + np.linspace(-min(wall.before, 40.0), min(wall.after, 40.0), count) * wall.direction


@pytest.mark.parametrize("name", BANKED)
def test_water_lies_left_of_every_wall(name):
    frame = a_frame(name)
    for wall in frame.walls:
        inside = wall_points(wall)[1:-1]
        left, right = inside + 1e-3j * wall.direction, inside - 1e-3j * wall.direction
        assert np.all(frame.wet(frame.map.forward(left), np.zeros(5)))
        assert not np.any(frame.wet(frame.map.forward(right), np.zeros(5)))


@pytest.mark.parametrize("name", BANKED)
def test_walls_are_mirrors_of_the_mapped_plane(name):
    """Images of a point on a wall include the point itself once more (up to the period)."""
    frame = a_frame(name)
    for wall in frame.walls:
        tau = complex(frame.map.forward(np.asarray(wall_points(wall)[3])))
        images = frame.images(tau)
        away = images.positions[1:] - tau
        if frame.kappa == PERIODIC:
            away = away.real + 1j * (away.imag - 2 * np.pi * np.round(away.imag / (2 * np.pi)))
        assert np.min(np.abs(away)) < 1e-13  # position rounding near the origin of the map


@pytest.mark.parametrize("name", BANKED)
def test_image_system_is_closed_under_reflection_in_every_wall(name):
    """Reflecting all images in a wall gives the same set, up to the rows too far to be felt."""
    frame = a_frame(name)
    tau = complex(frame.map.forward(np.asarray(place(SHORES[name], 0.3, 0.6))))
    positions = frame.images(tau).positions
    mirrors = [np.conj(positions)]
    if frame.kappa == PERIODIC:
        mirrors.append(np.conj(positions) + 2j * np.pi)
    if frame.closed:
        mirrors.append(-np.conj(positions))
    if frame.length != np.inf:
        mirrors.append(2 * frame.length - np.conj(positions))
    for mirrored in mirrors:
        near = mirrored[np.abs(mirrored.real) < (10.0 if frame.length == np.inf else 1.5 * frame.length)]
        gap = near[:, None] - positions
        turns = np.round(gap.imag / (2 * np.pi)) if frame.kappa == PERIODIC else 0.0
        assert_allclose(np.min(np.abs(gap - 2j * np.pi * turns), axis=1), 0.0, atol=1e-13)


@pytest.mark.parametrize("name", SHORES)
def test_the_pole_itself_comes_first_and_unchanged(name):
    frame = a_frame(name)
    images = frame.images(0.3 + 0.7j)
    assert images.positions[0] == 0.3 + 0.7j
    assert not images.conjugated[0]
    assert not images.reversed[0]


def test_points_near_a_wall_are_snapped_on_to_it():
    frame = a_frame("basin")
    assert frame.snapped(0.5 + 1e-12j, 1e-10) == 0.5 + 0j
    assert frame.snapped(complex(1e-12, np.pi + 1e-12), 1e-10) == complex(0.0, np.pi)
    assert frame.snapped(complex(frame.length - 1e-12, 1.0), 1e-10) == complex(frame.length, 1.0)
    assert frame.snapped(0.5 + 1e-8j, 1e-10) == 0.5 + 1e-8j


@pytest.mark.parametrize("name", BANKED)
def test_distance_to_a_wall(name):
    frame = a_frame(name)
    for wall in frame.walls:
        off = wall_points(wall)[2:5] + 0.25j * wall.direction
        assert_allclose(wall.distance(off), 0.25, atol=1e-12)  # rounding of positions up to 420 m
        assert_allclose(wall.nearest(off), wall_points(wall)[2:5], rtol=1e-13)


def test_beyond_the_end_of_a_wall_the_end_is_nearest():
    wall = a_frame("corner-right").walls[0]
    behind = wall.point - 3.0 * wall.direction + 4.0j * wall.direction
    assert wall.distance(np.array([behind]))[0] == pytest.approx(5.0, rel=1e-14)  # the 3-4-5 triangle

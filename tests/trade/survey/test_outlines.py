"""Outlines of solids, and walls from their middle lines."""

import numpy as np
import pytest
import shapely

from forebay.trade.survey.errors import RingError
from forebay.trade.survey.outlines import outline_points, wall_points
from forebay.trade.survey.rings import signed_area

PATH = ("structures", 0, "points")
SQUARE = np.array([0, 1, 1 + 1j, 1j], dtype=np.complex128)


@pytest.mark.parametrize("points", [SQUARE, SQUARE[::-1], np.append(SQUARE, SQUARE[0])])
def test_outline_runs_anticlockwise_whatever_it_came_as(points):
    found, _ = outline_points(points, PATH)
    assert found.size == 4
    assert signed_area(found) == pytest.approx(1.0)


def test_crossed_outline_is_refused_at_a_vertex():
    with pytest.raises(RingError) as error:
        outline_points(SQUARE[[0, 2, 1, 3]], PATH)
    assert error.value.path[:3] == PATH


def test_wall_is_as_long_and_thick_as_asked():
    found = wall_points(np.array([0, 10, 10 + 8j]), 1.0, PATH)
    # mitred L: two arms of 10.5 x 1 and 8.5 x 1 that share a square of 1
    assert signed_area(found) == pytest.approx(10.5 + 8.5 - 1.0)
    assert found.size == 6


def test_sharp_corner_of_a_wall_is_cut_off():
    found = wall_points(np.array([0, 10, 0.2j]), 0.1, PATH)
    # mitre limit times half the thickness along the bisector; the cut is square to it and a little wider
    assert max(z.real for z in found) < 10 + 1.01 * 5 * 0.05


@pytest.mark.parametrize("line", [[0, 0], [0, 10, 10 + 10j, 10j, 0], [0, 10, 5 + 5j, 5 - 5j]])
def test_wall_without_length_or_round_water_is_refused(line):
    with pytest.raises(RingError):
        wall_points(np.array(line, dtype=np.complex128), 1.0, PATH)


def test_wall_area_is_its_buffer():
    rng = np.random.default_rng(4)
    line = np.cumsum(rng.uniform(2, 6, 6) * np.exp(1j * rng.uniform(-0.8, 0.8, 6)))
    found = wall_points(line, 0.5, PATH)
    solid = shapely.Polygon([(z.real, z.imag) for z in found])
    along = shapely.LineString([(z.real, z.imag) for z in line])
    assert solid.contains(along.interpolate(0.5, normalized=True))
    # mitres add at the outside of a bend what they leave out at its inside: length times thickness
    assert solid.area == pytest.approx(0.5 * along.length, rel=1e-9)

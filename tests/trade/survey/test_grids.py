"""Map grids: published coordinates, arcs by quadrature, and grids that are no plan."""

import mpmath
import numpy as np
import pytest

from forebay.trade.survey.errors import OutsideSystemError, UnknownSystemError, UnsuitableGridError
from forebay.trade.survey.grids import (
    known_system,
    projected_grid,
    require_one_side,
    scale_error,
    serves_as_grid,
    tangent_grid,
    to_system,
)

PATH = ("grid",)


def degrees(whole, minutes, seconds):
    return whole + minutes / 60 + seconds / 3600


def test_published_point_of_the_british_grid():
    # Ordnance Survey, A guide to coordinate systems in Great Britain, annex C: worked example of projection,
    # printed to a millimetre and to 1e-4 of a second (3 mm)
    place = np.array([[degrees(1, 43, 4.5177), degrees(52, 39, 27.2531)]])
    east, north = to_system(place, "EPSG:4277", "EPSG:27700", PATH)[0]
    assert east == pytest.approx(651409.903, abs=4e-3)
    assert north == pytest.approx(313177.270, abs=4e-3)


def test_central_meridian_of_a_tangent_grid_has_true_length():
    first, last = 50.0, 50.05
    grid = tangent_grid(8.0, first)
    a, flattening = mpmath.mpf(6378137), 1 / mpmath.mpf("298.257223563")  # WGS 84, defining constants
    e2 = flattening * (2 - flattening)
    arc = mpmath.quad(
        lambda angle: a * (1 - e2) / (1 - e2 * mpmath.sin(angle) ** 2) ** mpmath.mpf("1.5"),
        [mpmath.radians(first), mpmath.radians(last)],
    )
    x, y = to_system(np.array([[8.0, last]]), "EPSG:4326", grid.definition, PATH)[0]
    # the library's series keeps some nanometres near its meridian
    assert x == pytest.approx(0.0, abs=1e-6)
    assert y == pytest.approx(float(arc), abs=1e-6)


def test_there_and_back_is_the_same_place():
    grid = tangent_grid(8.0, 50.0)
    plan = np.array([1000 + 500j, -3000 + 20j])
    there = grid.to_wgs84(plan)
    back = to_system(there, "EPSG:4326", grid.definition, PATH)
    assert np.allclose(back[:, 0] + 1j * back[:, 1], plan, rtol=0, atol=1e-6)  # a micrometre of the series


def test_north_of_a_tangent_grid_is_up_at_its_centre_and_turns_away_from_it():
    grid = tangent_grid(8.0, 50.0)
    assert grid.north(0j) == pytest.approx(np.pi / 2, abs=1e-6)
    x = 10_000.0
    # meridian convergence is sin(latitude) times the difference of longitude, to its cube
    convergence = np.sin(np.radians(50.0)) * np.radians(grid.to_wgs84(np.array([x + 0j]))[0, 0] - 8.0)
    assert grid.north(x + 0j) == pytest.approx(np.pi / 2 + convergence, abs=1e-6)


@pytest.mark.parametrize(
    ("code", "longitude", "latitude", "error"),
    [
        # central meridian of a zone: 0.9996 by definition of UTM
        ("EPSG:32632", 9.0, 50.0, 1 / (1 - 0.0004) - 1),
        # British grid: 0.9996012717 on its central meridian, 2 W (Ordnance Survey, as above)
        ("EPSG:27700", -2.0, 52.0, 1 / 0.9996012717 - 1),
    ],
)
def test_scale_is_the_published_one(code, longitude, latitude, error):
    grid = projected_grid(code, PATH)
    place = to_system(np.array([[longitude, latitude]]), "EPSG:4326", code, PATH)
    # the error is of lengths in the grid; geodesics of 100 m are good to 1e-6; WGS 84 and Airy differ by 1e-4
    # in size, which the scale of the British grid shows
    allowed = 2e-6 if code == "EPSG:32632" else 2e-4
    found = scale_error(grid, place[:, 0] + 1j * place[:, 1], PATH)
    assert found == pytest.approx(abs(1 / (1 + error) - 1), abs=allowed)


@pytest.mark.parametrize(
    ("code", "reason"),
    [
        ("EPSG:3857", "not conformal"),  # spherical formulae on the ellipsoid
        ("EPSG:3035", "not conformal"),  # equal-area
        ("EPSG:3395", "lengths"),  # true Mercator: conformal, 1 / cos(50 deg) times too long
    ],
)
def test_grid_that_distorts_is_refused(code, reason):
    place = to_system(np.array([[0.0, 50.0]]), "EPSG:4326", code, PATH)
    with pytest.raises(UnsuitableGridError, match=reason):
        scale_error(projected_grid(code, PATH), place[:, 0] + 1j * place[:, 1], PATH)


@pytest.mark.parametrize("code", ["EPSG:4326", "EPSG:2263"])
def test_degrees_and_feet_are_no_grid(code):
    assert not serves_as_grid(code)
    with pytest.raises(UnsuitableGridError):
        projected_grid(code, PATH)


@pytest.mark.parametrize("code", ["EPSG:99999", "EPSG:5773", "EPSG:4978"])  # unknown, heights, geocentric
def test_what_gives_no_position_on_the_ground_is_refused(code):
    with pytest.raises(UnknownSystemError):
        known_system(code, PATH)


def test_place_without_an_image_is_refused_by_its_index():
    with pytest.raises(OutsideSystemError) as error:
        to_system(np.array([[9.0, 50.0], [9.0, 95.0]]), "EPSG:4326", "EPSG:32632", PATH)
    assert error.value.path == ("grid", 1)


def test_antimeridian_is_refused():
    require_one_side(np.array([170.0, 179.0]), PATH)
    with pytest.raises(OutsideSystemError):
        require_one_side(np.array([179.9, -179.9]), PATH)

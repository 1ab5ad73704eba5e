"""Answers on the map: GeoJSON by RFC 7946, in the places where the plan lies."""

import numpy as np
import pytest
import shapely
from pyproj import Geod

from support.http import a_layout, assert_problem, example, pointers

GEOJSON = {"Accept": "application/geo+json"}
GRID = "EPSG:25832"
EAST, NORTH = 480000.0, 5540000.0
"""A place near 8.72 E, 50.01 N in that grid."""

ROUTES = {
    "/v1/stagnation/search": {},
    "/v1/withdrawal/trace": {},
    "/v1/contour/integrate": {
        "contours": [{"name": "ring", "circle": {"centre": [EAST, NORTH + 40], "radius": 30}}]
    },
}


def placed(**changes):
    elements = [
        {"kind": "sink", "name": "intake", "at": [EAST, NORTH + 5], "discharge": 1.8},
        {"kind": "source", "name": "outfall", "at": [EAST + 80, NORTH], "discharge": 1.0},
    ]
    shore = {"kind": "straight-bank", "point": [EAST, NORTH], "along": [1, 0]}
    return a_layout(elements=elements, shore=shore, grid=GRID) | changes


def collection(client, path, **request):
    answer = client.post(path, json={"layout": placed()} | ROUTES[path] | request, headers=GEOJSON)
    assert answer.status_code == 200, answer.text
    assert answer.headers["content-type"] == "application/geo+json"
    return answer.json()


@pytest.mark.parametrize("path", ROUTES)
def test_answer_is_a_feature_collection_with_what_a_reader_needs(ready_client, path):
    found = collection(ready_client, path)
    assert found["type"] == "FeatureCollection"
    assert found["features"]
    assert {"units", "warnings", "provenance"} <= set(found)
    for feature in found["features"]:
        assert set(feature) == {"type", "geometry", "properties"}
        shape = shapely.geometry.shape(feature["geometry"])
        assert shape.is_valid
        longitude, latitude = np.array(shapely.get_coordinates(shape)).T
        # EPSG:25832 has its central meridian, x = 500 km, at 9 E; 20 km west of it at 50 N are 0.28 degrees
        assert np.all(np.abs(longitude - 8.72) < 0.02)
        assert np.all(np.abs(latitude - 50.01) < 0.02)


def test_stagnation_points_lie_where_the_plan_says(ready_client):
    plain = ready_client.post("/v1/stagnation/search", json={"layout": placed(), "digits": 15}).json()
    features = collection(ready_client, "/v1/stagnation/search")["features"]
    ground = [feature["geometry"]["coordinates"] for feature in features]
    plan = [complex(point["x"], point["y"]) for point in plain["result"]["points"]]
    assert len(plan) == len(ground) > 1
    (lon0, lat0), (lon1, lat1) = ground[0], ground[-1]
    distance = Geod(ellps="GRS80").inv(lon0, lat0, lon1, lat1)[2]
    # scale 0.9996 on the central meridian, 5e-6 more at 20 km from it; 8 decimals are a millimetre
    assert distance == pytest.approx(abs(plan[-1] - plan[0]) / 0.999605, abs=3e-3)


def test_areas_are_anticlockwise_and_closed(ready_client):
    zones = [
        feature["geometry"]
        for feature in collection(ready_client, "/v1/withdrawal/trace")["features"]
        if feature["properties"]["feature"] == "zone"
    ]
    assert zones
    for zone in zones:
        polygons = [zone["coordinates"]] if zone["type"] == "Polygon" else zone["coordinates"]
        for outer, *holes in polygons:
            assert outer[0] == outer[-1]
            assert shapely.LinearRing(outer).is_ccw  # RFC 7946, 3.1.6
            assert not any(shapely.LinearRing(hole).is_ccw for hole in holes)


def test_arcs_are_drawn_as_fine_as_promised(ready_client):
    (ring,) = collection(ready_client, "/v1/contour/integrate")["features"]
    line = np.array(ring["geometry"]["coordinates"])
    middles = 0.5 * (line[:-1] + line[1:])
    centre = line[:-1].mean(axis=0)
    geod = Geod(ellps="GRS80")
    radii = [geod.inv(*centre, *at)[2] for at in middles]
    # chords stay within 1e-3 of the radius of 30 m inside the circle; the grid's scale is 4e-4 off
    assert min(radii) > 30 * (1 - 1.1e-3)
    assert max(radii) < 30 * (1 + 5e-4)
    assert ring["properties"]["name"] == "ring"
    assert ring["properties"]["flux"] is not None


def test_layout_without_a_place_is_refused(ready_client):
    request = example("searchStagnation")
    problem = assert_problem(
        ready_client.post("/v1/stagnation/search", json=request, headers=GEOJSON), 422, "not-georeferenced"
    )
    assert pointers(problem) == {"#/layout/grid"}


@pytest.mark.parametrize(
    ("grid", "code"),
    [
        ("EPSG:99999", "unknown-coordinate-system"),
        ("EPSG:4326", "unsuitable-grid"),  # degrees
        ("EPSG:2263", "unsuitable-grid"),  # feet
        ("EPSG:3857", "unsuitable-grid"),  # not conformal on the ellipsoid, and 1.56 times too long at 50 N
        ("EPSG:3035", "unsuitable-grid"),  # equal-area: distorts angles away from its centre
    ],
)
def test_grid_that_is_no_plan_is_refused(ready_client, grid, code):
    request = {"layout": placed(grid=grid)}
    problem = assert_problem(
        ready_client.post("/v1/stagnation/search", json=request, headers=GEOJSON), 422, code
    )
    assert pointers(problem) == {"#/layout/grid"}

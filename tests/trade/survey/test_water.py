"""Surveyed water: what is mended, what is refused and where, and what simplification keeps."""

from dataclasses import replace

import numpy as np
import pytest
import shapely
from hypothesis import given
from hypothesis import strategies as st

from forebay.flow.errors import TooLargeError
from forebay.trade.survey.errors import (
    IslandError,
    OpenEdgeError,
    OutsideSystemError,
    RingError,
    UnknownIslandError,
    UnknownSystemError,
)
from forebay.trade.survey.islands import IslandSurvey
from forebay.trade.survey.open_edges import EdgeSurvey
from forebay.trade.survey.rings import ChangeKind, inscribed_circle, polygon_of, signed_area
from forebay.trade.survey.water import MOST_GIVEN, MOST_SOLVED, Survey, surveyed_water

REACH = (0j, 900 + 0j, 900 + 80j, 0 + 90j)
ISLAND = (300 + 30j, 300 + 50j, 400 + 50j, 400 + 30j)  # clockwise
EDGES = (EdgeSurvey("upstream", 0j, 90j, 45.0), EdgeSurvey("downstream", 900 + 0j, 900 + 80j))


def survey(outer=REACH, *islands, **changes):
    return Survey(rings=(tuple(outer), *islands), edges=EDGES, **changes)


def numbers(shore):
    return {edge.name: (edge.first, edge.count) for edge in shore.edges}


def test_plain_polygon_passes_unchanged():
    found = surveyed_water(survey(REACH, ISLAND))
    assert found.shore.outer == REACH
    assert found.shore.islands[0].points == ISLAND
    assert found.shore.islands[0].name == "island 1"
    assert found.changes == ()
    assert found.area == pytest.approx(900 * 85 - 100 * 20)  # trapezium less rectangle
    assert numbers(found.shore) == {"upstream": (3, 1), "downstream": (1, 1)}


@pytest.mark.parametrize(
    "outer",
    [
        (*REACH, REACH[0]),
        REACH[::-1],
        (*REACH[:2], REACH[1], *REACH[2:]),
        (*REACH[:2], REACH[1] + 1e-5, *REACH[2:]),  # 1e-8 of the size
        REACH[2:] + REACH[:2],
    ],
    ids=["closing point", "clockwise", "repeated", "nearly repeated", "another first vertex"],
)
def test_same_water_in_another_dress(outer):
    found = surveyed_water(survey(outer, ISLAND[::-1]))
    plain = polygon_of(np.array(REACH), [np.array(ISLAND)])
    mended = polygon_of(
        np.array(found.shore.outer), [np.array(island.points) for island in found.shore.islands]
    )
    assert len(found.shore.outer) == 4
    assert signed_area(np.array(found.shore.outer)) > 0 > signed_area(np.array(found.shore.islands[0].points))
    assert plain.symmetric_difference(mended).area < 1e-2  # 1e-5 m along the length of 900 m
    for edge, (start, end) in zip(found.shore.edges, ((0j, 90j), (900, 900 + 80j)), strict=True):
        ring = found.shore.outer
        ends = {ring[edge.first], ring[(edge.first + edge.count) % 4]}
        assert {round(z.real) + 1j * round(z.imag) for z in ends} == {start, end}


def test_collinear_vertices_and_short_edges_stay():
    outer = (0j, 450 + 0j, 450.006 + 0j, 900 + 0j, 900 + 80j, 90j)
    assert surveyed_water(survey(outer)).shore.outer == outer


def test_far_from_the_origin_nothing_changes():
    shift = 1e6 + 5e6j
    moved = replace(
        survey([z + shift for z in REACH], tuple(z + shift for z in ISLAND)),
        edges=tuple(replace(edge, start=edge.start + shift, end=edge.end + shift) for edge in EDGES),
    )
    found = surveyed_water(moved)
    assert found.changes == ()
    assert found.area == pytest.approx(900 * 85 - 100 * 20, rel=1e-9)  # rounding of 5e6 m is 1e-9 m


def test_spike_of_no_width_is_cut():
    outer = (0j, 450 + 0j, 450 - 200j, 450 + 0j, 900 + 0j, 900 + 80j, 90j)
    found = surveyed_water(survey(outer))
    (change,) = found.changes
    assert change.kind is ChangeKind.LOOP_CUT
    assert change.distance == pytest.approx(200.0)
    assert change.at == 450 - 200j
    assert found.area == pytest.approx(900 * 85)
    assert numbers(found.shore).keys() == {"upstream", "downstream"}


def test_small_loop_of_a_digitiser_is_cut():
    outer = (0j, 450 + 0j, 449 + 1j, 449 - 1j, 451 + 0j, 900 + 0j, 900 + 80j, 90j)
    found = surveyed_water(survey(outer))
    assert any(change.kind is ChangeKind.LOOP_CUT for change in found.changes)
    assert polygon_of(np.array(found.shore.outer)).is_valid
    assert found.area == pytest.approx(900 * 85, abs=2.0)  # the loop's own size


def test_bow_tie_is_refused_at_the_crossing():
    with pytest.raises(RingError) as error:
        surveyed_water(survey((0j, 900 + 80j, 900 + 0j, 90j)))
    assert error.value.path[:4] == ("shore", "water", "coordinates", 0)


@pytest.mark.parametrize("outer", [(0j, 1j, 0j), (0j, 450 + 0j, 900 + 0j), (1j, 1j, 1j, 1j)])
def test_ring_without_area_is_refused(outer):
    with pytest.raises(RingError, match="no area"):
        surveyed_water(Survey(rings=(outer,)))


@pytest.mark.parametrize(
    ("island", "ring"),
    [
        ((300 + 0j, 300 + 20j, 320 + 20j), 1),  # a vertex on the bank
        ((300 - 5j, 300 + 20j, 320 + 20j), 1),  # across it
        ((300 - 50j, 300 - 20j, 320 - 20j), 1),  # outside
    ],
)
def test_island_that_is_not_free_of_the_bank_is_refused(island, ring):
    with pytest.raises(IslandError) as error:
        surveyed_water(survey(REACH, island))
    assert error.value.path[:4] == ("shore", "water", "coordinates", ring)


@pytest.mark.parametrize(
    "other",
    [
        (400 + 40j, 450 + 50j, 450 + 30j),  # a vertex on the edge of the first
        (350 + 35j, 350 + 45j, 450 + 40j),  # across
        (340 + 35j, 340 + 45j, 360 + 40j),  # inside
    ],
)
def test_island_that_touches_another_is_refused(other):
    with pytest.raises(IslandError) as error:
        surveyed_water(survey(REACH, ISLAND, other))
    assert error.value.path[:4] == ("shore", "water", "coordinates", 2)
    assert "island 1" in error.value.detail


def test_island_without_size_is_dropped_and_said():
    found = surveyed_water(survey(REACH, ISLAND, (500 + 40j, 500.0001 + 40j, 500 + 40.0001j)))
    assert len(found.shore.islands) == 1
    assert [change.kind for change in found.changes] == [ChangeKind.ISLAND_DROPPED]


def test_islands_are_named_by_a_place_on_them():
    named = survey(REACH, ISLAND, islands=(IslandSurvey("eyot", 350 + 40j, 2.5),))
    (island,) = surveyed_water(named).shore.islands
    assert (island.name, island.circulation) == ("eyot", 2.5)


@pytest.mark.parametrize(
    ("surveys", "index"),
    [
        ((IslandSurvey("eyot", 10 + 10j),), 0),
        ((IslandSurvey("eyot", 350 + 40j), IslandSurvey("holm", 360 + 40j)), 1),
    ],
)
def test_name_without_an_island_of_its_own_is_refused(surveys, index):
    with pytest.raises(UnknownIslandError) as error:
        surveyed_water(survey(REACH, ISLAND, islands=surveys))
    assert error.value.path == ("shore", "islands", index, "at")


@pytest.mark.parametrize(
    ("edge", "path"),
    [
        (EdgeSurvey("e", 450 + 40j, 90j), ("start",)),  # 90 m from every vertex, for 450 m
        (EdgeSurvey("e", 0j, 0j), ("start",)),
        (EdgeSurvey("e", 0j, 900 + 80j), ()),  # across the water: neither way round is a line
    ],
)
def test_edge_that_is_no_part_of_the_ring_is_refused(edge, path):
    with pytest.raises(OpenEdgeError) as error:
        surveyed_water(Survey(rings=(REACH,), edges=(edge,)))
    assert error.value.path == ("shore", "open_edges", 0, *path)


def test_edges_that_overlap_are_refused():
    outer = (0j, 900 + 0j, 900 + 40j, 900 + 80j, 90j)
    edges = (
        EdgeSurvey("whole", 900 + 0j, 900 + 80j, -1.0),
        EdgeSurvey("half", 900 + 40j, 900 + 80j, 1.0),
    )
    with pytest.raises(OpenEdgeError, match="overlaps") as error:
        surveyed_water(Survey(rings=(outer,), edges=edges))
    assert error.value.path == ("shore", "open_edges", 1)
    found = surveyed_water(Survey(rings=(outer,), edges=edges[:1]))
    assert numbers(found.shore) == {"whole": (1, 2)}


def test_two_edges_left_to_continuity_are_refused():
    edges = tuple(replace(edge, discharge=None) for edge in EDGES)
    with pytest.raises(OpenEdgeError, match="continuity"):
        surveyed_water(Survey(rings=(REACH,), edges=edges))


def test_end_of_an_edge_is_moved_on_to_the_vertex_and_said():
    edge = EdgeSurvey("upstream", 1 + 1j, 90j)
    found = surveyed_water(Survey(rings=(REACH,), edges=(edge,)))
    (change,) = found.changes
    assert change.kind is ChangeKind.EDGE_END_MOVED
    assert change.distance == pytest.approx(np.sqrt(2))
    assert change.path == ("shore", "open_edges", 0, "start")


def test_limits_hold():
    with pytest.raises(TooLargeError):
        surveyed_water(Survey(rings=(tuple(complex(k) for k in range(MOST_GIVEN + 1)),)))
    circle = 100 * np.exp(2j * np.pi * np.arange(MOST_SOLVED + 1) / (MOST_SOLVED + 1))
    many = Survey(rings=(tuple(circle.tolist()),))
    with pytest.raises(TooLargeError):
        surveyed_water(many)
    assert surveyed_water(replace(many, tolerance=0.05)).vertices < MOST_SOLVED


def wiggly(seed, amplitude):
    """A reach whose banks wander by up to `amplitude`, with an island likewise."""
    rng = np.random.default_rng(seed)
    along = np.linspace(0, 900, 60)[1:-1]
    right = along + 1j * rng.uniform(-amplitude, 0, along.size)
    left = along[::-1] + 1j * (80 + rng.uniform(0, amplitude, along.size))
    outer = [0j, *right.tolist(), 900 + 0j, 900 + 80j, *left.tolist(), 80j]
    turn = np.exp(-2j * np.pi * np.arange(40) / 40)
    island = 450 + 40j + turn * (10 + rng.uniform(0, amplitude, 40))
    return Survey(
        rings=(tuple(outer), tuple(island.tolist())),
        edges=(EdgeSurvey("upstream", 0j, 80j, 45.0), EdgeSurvey("downstream", 900 + 0j, 900 + 80j)),
    )


@given(st.integers(0, 2**32 - 1), st.floats(0.1, 8.0), st.floats(0.01, 30.0))
def test_simplification_keeps_what_it_promises(seed, amplitude, tolerance):
    plain = surveyed_water(wiggly(seed, amplitude))
    fewer = surveyed_water(replace(wiggly(seed, amplitude), tolerance=tolerance))
    water = polygon_of(
        np.array(fewer.shore.outer), [np.array(island.points) for island in fewer.shore.islands]
    )
    assert water.is_valid
    assert len(fewer.shore.islands) == 1
    assert fewer.vertices <= plain.vertices
    # every vertex is one of the survey's, and those of open edges are all there, in their order
    assert set(fewer.shore.outer) <= set(plain.shore.outer)
    for edge, before in zip(fewer.shore.edges, plain.shore.edges, strict=True):
        for step in (0, before.count):
            now = fewer.shore.outer[(edge.first + step) % len(fewer.shore.outer)]
            assert now == plain.shore.outer[(before.first + step) % len(plain.shore.outer)]
    # the distance said is the largest of what was left out, and within the tolerance
    gone = [z for z in plain.shore.outer if z not in set(fewer.shore.outer)]
    ring = shapely.LinearRing([(z.real, z.imag) for z in fewer.shore.outer])
    off = max((ring.distance(shapely.Point(z.real, z.imag)) for z in gone), default=0.0)
    said = max((c.distance for c in fewer.changes if c.path[-1] == 0), default=0.0)
    assert said == pytest.approx(off, abs=1e-9)
    assert said <= tolerance * (1 + 1e-9)


def test_simplification_gives_way_where_rings_would_touch():
    # the island lies in a bay that a tolerance of 60 m would cut off
    outer = (0j, 400 + 0j, 450 - 50j, 500 + 0j, 900 + 0j, 900 + 80j, 90j)
    island = (440 - 30j, 450 - 20j, 460 - 30j)
    found = surveyed_water(survey(outer, island, tolerance=60.0))
    water = polygon_of(np.array(found.shore.outer), [np.array(found.shore.islands[0].points)])
    assert water.is_valid
    assert 450 - 50j in found.shore.outer


def test_degrees_become_metres_of_a_grid_about_the_middle():
    ring = (8.0 + 50.0j, 8.01 + 50.0j, 8.01 + 50.002j, 8.0 + 50.002j)
    found = surveyed_water(Survey(rings=(ring,), system="EPSG:4326"))
    assert found.grid is not None
    assert found.grid.code is None
    assert "lon_0=8.005" in found.grid.definition
    assert (
        abs(np.mean(found.shore.outer)) < 1.0
    )  # the middle of the corners and the centroid are a metre apart
    # area on the ellipsoid by the geodesic polygon of an independent algorithm (Karney 2013)
    from pyproj import Geod

    area, _ = Geod(ellps="WGS84").polygon_area_perimeter([z.real for z in ring], [z.imag for z in ring])
    # scale 1 within (700 m / 6378 km)^2 / 2 = 6e-9; geodesic and straight edges part by millimetres
    assert found.area == pytest.approx(area, rel=1e-6)
    assert found.scale_error is not None
    assert found.scale_error < 1e-6


def test_plane_system_is_its_own_grid():
    ring = tuple(z + 480_000 + 5_540_000j for z in REACH)
    found = surveyed_water(Survey(rings=(ring,), system="EPSG:25832"))
    assert found.grid is not None
    assert found.grid.code == "EPSG:25832"
    assert found.shore.outer == ring
    # 20 km from the central meridian: 0.9996 (1 + (20 / 6380)^2 / 2)
    assert found.scale_error == pytest.approx(1 - 0.9996 * (1 + (20 / 6380) ** 2 / 2), abs=1e-6)


def test_feet_of_a_survey_become_metres():
    feet = tuple(1_000_000 + 200_000j + z for z in REACH)
    found = surveyed_water(Survey(rings=(feet,), system="EPSG:2263"))
    assert found.grid is not None
    assert found.grid.code is None
    # US survey foot, 1200/3937 m; the state grid's scale is within 1e-4 of 1 there
    assert found.area == pytest.approx(900 * 85 * (1200 / 3937) ** 2, rel=3e-4)


def test_what_cannot_lie_anywhere_is_refused():
    with pytest.raises(UnknownSystemError):
        surveyed_water(Survey(rings=(REACH,), system="EPSG:99999"))
    with pytest.raises(OutsideSystemError):
        surveyed_water(
            Survey(rings=((179.9 + 0j, -179.9 + 0j, -179.9 + 1j, 179.9 + 1j),), system="EPSG:4326")
        )
    with pytest.raises(OutsideSystemError):
        surveyed_water(Survey(rings=((8 + 95j, 9 + 95j, 9 + 96j),), system="EPSG:4326", grid="EPSG:25832"))


def test_inscribed_circle_of_a_rectangle():
    centre, radius = inscribed_circle(np.array([0, 10, 10 + 4j, 4j], dtype=np.complex128))
    assert radius == pytest.approx(2.0, abs=0.11)  # 1 % of the size of 10.8 m
    assert 1.8 < centre.imag < 2.2

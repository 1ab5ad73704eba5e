"""Stagnation points against closed forms of the books."""

from math import log, pi, radians, sqrt

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Doublet,
    Layout,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationKind, StagnationSearch
from forebay.flow.stagnation.search import search_model

BANK = StraightBank(0j, 1 + 0j)
ROUNDING = 1e-12  # places of order 1 from sums of a few terms: rounding, with two digits to spare


def found(*elements, depth=1.0, **site) -> StagnationSearch:
    search = search_model(compile_layout(Layout(depth, elements=elements, **site)))
    assert search.complete
    assert search.expected_count == search.found_count == len(search.points)
    return search


def places(search: StagnationSearch) -> list[complex]:
    return [point.at for point in search.points]


def test_half_body():
    """Source in a stream: stagnation at -q/(2 pi U) (Houghton and Carpenter, Aerodynamics, half-body)."""
    search = found(Source("s", 0j, 10 * pi), ambient=Ambient(10 + 0j))
    (point,) = search.points
    assert_allclose(point.at, -0.5, atol=ROUNDING)
    assert point.kind is StagnationKind.SADDLE
    assert point.on == "water"
    assert_allclose(point.strain_rate, 20.0, rtol=ROUNDING)  # |W'| = U / b
    assert_allclose(point.outflow_deg, 90.0, atol=1e-9)  # water parts sideways


@pytest.mark.parametrize("strength", [0.01, 0.1, 1.0, 10.0, 100.0])
def test_rankine_oval(strength):
    """Half-length sqrt(a^2 + q a / (pi U)), a = U = 1 (White, Fluid Mechanics, 8.4)."""
    q = 2 * pi * strength
    search = found(Source("s", -1 + 0j, q), Sink("t", 1 + 0j, q), ambient=Ambient(1 + 0j))
    half = sqrt(1 + 2 * strength)
    assert_allclose(places(search), [-half, half], atol=ROUNDING)


@pytest.mark.parametrize("circulation", [0.0, 20.0, -20.0])
def test_cylinder_with_circulation_below_the_limit(circulation):
    """sin(theta) = Gamma / (4 pi U a), both points on the wall (Milne-Thomson, Theoretical Hydrodynamics)."""
    search = found(ambient=Ambient(10 + 0j), structures=(Pier("p", 0j, 0.5, circulation),))
    height = circulation / (4 * pi * 10)
    assert {point.on for point in search.points} == {"p"}
    assert all(point.kind is StagnationKind.WALL for point in search.points)
    across = sqrt(0.25 - height**2)
    assert_allclose(places(search), [complex(-across, height), complex(across, height)], atol=ROUNDING)


@pytest.mark.parametrize(
    ("ratio", "radius"), [(1.25, 2.0), (1.5, 2.618033988749895), (2.0, 3.732050807568877)]
)
def test_cylinder_with_circulation_beyond_the_limit(ratio, radius):
    """One point detaches to r = a (k + sqrt(k^2 - 1)), k = Gamma / (4 pi U a)."""
    search = found(ambient=Ambient(1 + 0j), structures=(Pier("p", 0j, 1.0, 4 * pi * ratio),))
    (point,) = search.points
    assert point.kind is StagnationKind.SADDLE
    assert_allclose(point.at, 1j * radius, atol=ROUNDING)


def test_front_of_a_pier_strains_with_twice_the_speed_over_the_radius():
    search = found(ambient=Ambient(0.5 + 0j), structures=(Pier("p", 0j, 0.5),))
    assert_allclose([point.strain_rate for point in search.points], 2.0, rtol=1e-11)  # |W'| = 2 U / a
    assert_allclose([point.outflow_deg for point in search.points], [90.0, 0.0], atol=1e-9)


def test_sink_near_a_bank_with_an_uncaptured_filament():
    """q < 2 pi U h: one point in the water at b + i sqrt(h^2 - b^2), b = q / (2 pi U)."""
    (point,) = found(Sink("t", 1j, 1.0), shore=BANK, ambient=Ambient(0.5 + 0j)).points
    b = 1 / pi
    assert_allclose(point.at, complex(b, sqrt(1 - b * b)), atol=ROUNDING)
    assert point.kind is StagnationKind.SADDLE


def test_strong_sink_near_a_bank():
    """q > 2 pi U h: two points on the bank at b -+ sqrt(b^2 - h^2)."""
    search = found(Sink("t", 1j, 5.0), shore=BANK, ambient=Ambient(0.5 + 0j))
    b = 5 / pi
    root = sqrt(b * b - 1)
    assert_allclose(places(search), [b - root, b + root], atol=ROUNDING)
    assert all(point.at.imag == 0.0 for point in search.points)  # snapped, not nearly
    assert {(point.on, point.kind) for point in search.points} == {("bank", StagnationKind.WALL)}
    assert_allclose([point.outflow_deg for point in search.points], [90.0, 0.0], atol=1e-9)


def test_flush_sink_on_a_bank():
    (point,) = found(Sink("t", 0j, 5.0), shore=BANK, ambient=Ambient(0.5 + 0j)).points
    assert_allclose(point.at, 5 / (0.5 * pi), atol=ROUNDING)


@pytest.mark.parametrize(("y0", "factor"), [(0.0, 2.0), (50.0, 1.0)])
def test_sink_in_a_channel(y0, factor):
    """x = (W / 2 pi) ln(U_up / U_down) off the bank, twice that on it."""
    channel = Channel(0j, 1 + 0j, 100.0)
    (point,) = found(Sink("t", complex(0, y0), 5.0), shore=channel, ambient=Ambient(0.5 + 0j)).points
    x = factor * 100 / (2 * pi) * log(0.5 / 0.45)
    assert_allclose(point.at, complex(x, y0), atol=1e-11)  # widths of 100 m


def test_sink_off_the_middle_of_a_channel():
    """cos(pi y / W) = k cos(pi y0 / W) / sqrt(k^2 - 1), k = 2 W U_m / q."""
    channel = Channel(0j, 1 + 0j, 100.0)
    (point,) = found(Sink("t", 30j, 5.0), shore=channel, ambient=Ambient(0.5 + 0j)).points
    k = 2 * 100 * 0.475 / 5
    assert_allclose(np.cos(pi * point.at.imag / 100), k * np.cos(0.3 * pi) / sqrt(k * k - 1), atol=ROUNDING)
    assert_allclose(point.at.real, 100 / (2 * pi) * log(0.5 / 0.45), atol=1e-11)


def test_source_in_a_right_angled_corner():
    """Stagnation in the vertex and on the nearer wall at sqrt(A^2 - B^2)."""
    vertex, wall = found(Source("s", 3 + 2j, 1.0), shore=Corner(0j, 1 + 0j, radians(90))).points
    assert (vertex.at, vertex.on, vertex.residual_speed) == (0j, "vertex", 0.0)
    assert np.isfinite(vertex.strain_rate)
    assert_allclose(wall.at, sqrt(5), atol=ROUNDING)
    assert wall.on == "first bank"


def test_vertex_of_an_acute_corner_has_no_strain_and_of_an_obtuse_one_no_finite_strain():
    for degrees, strain in ((60, 0.0), (120, np.nan)):
        search = found(Source("s", 3 + 1j, 1.0), shore=Corner(0j, 1 + 0j, radians(degrees)))
        (vertex,) = [point for point in search.points if point.on == "vertex"]
        assert_allclose(vertex.strain_rate, strain)
        assert 0.0 <= vertex.outflow_deg <= degrees


def test_reentrant_vertex_is_no_stagnation_point():
    search = found(Source("s", 3 + 1j, 1.0), Sink("t", 1 + 3j, 2.0), shore=Corner(0j, 1 + 0j, radians(270)))
    assert "vertex" not in {point.on for point in search.points}


def test_vortex_pair_carries_water_between_points_at_root_three():
    """In the pair's own frame the points lie at +-sqrt(3) b along its travel (Lamb, Hydrodynamics, 155)."""
    pair = (Vortex("l", 1j, -1.0), Vortex("r", -1j, 1.0))
    search = found(*pair, ambient=Ambient(1 / (4 * pi) + 0j))
    assert_allclose(places(search), [-sqrt(3), sqrt(3)], atol=1e-11)


def test_doublet_in_a_stream_is_a_cylinder():
    search = found(Doublet("d", 0j, -2 * pi * 0.25 * 2 + 0j), ambient=Ambient(2 + 0j))
    assert_allclose(places(search), [-0.5, 0.5], atol=ROUNDING)


def test_two_sinks_in_still_water_part_halfway():
    (point,) = found(Sink("a", -1 + 0j, 1.0), Sink("b", 1 + 0j, 1.0)).points
    assert_allclose(point.at, 0.0, atol=ROUNDING)


def test_equal_source_and_sink_in_still_water_have_no_stagnation_point():
    assert found(Source("a", -1 + 0j, 1.0), Sink("b", 1 + 0j, 1.0)).found_count == 0


def test_source_in_a_dead_end():
    """Both corners and the wall opposite the source."""
    search = found(Source("s", 3 + 5j, 1.0), shore=DeadEnd(0j, 1 + 0j, 10.0))
    names = {point.on: point.at for point in search.points}
    assert set(names) == {"right bank/closed end", "left bank/closed end", "closed end"}
    assert_allclose(names["closed end"], 5j, atol=ROUNDING)


def test_vortex_in_a_basin_has_the_corners_alone():
    search = found(Vortex("v", 5 + 3j, 1.0), shore=Basin(0j, 1 + 0j, 10.0, 6.0))
    assert search.degree == 0
    assert {point.on for point in search.points} == {
        "right bank/near end",
        "right bank/far end",
        "far end/left bank",
        "left bank/near end",
    }


def test_source_and_sink_in_a_basin_mirror_each_other():
    search = found(Source("a", 3 + 2j, 1.0), Sink("b", 7 + 4j, 1.0), shore=Basin(0j, 1 + 0j, 10.0, 6.0))
    walls = [point.at for point in search.points if "/" not in point.on]
    assert_allclose(sum(walls), 10 + 6j, atol=1e-11)  # the half turn about the middle swaps the two


@pytest.mark.parametrize(
    ("layout", "at", "on"),
    [
        (  # two sinks at the limit spacing q / (pi U), Javandel and Tsang 1986
            Layout(
                4.0, ambient=Ambient(0.5), elements=(Sink("a", 0.5j / pi, 2.0), Sink("b", -0.5j / pi, 2.0))
            ),
            1 / (2 * pi),
            "water",
        ),
        (  # sink near a bank at q = 2 pi U h
            Layout(1.0, ambient=Ambient(0.5), shore=BANK, elements=(Sink("a", 1j, pi),)),
            1.0,
            "bank",
        ),
        (  # intake upstream of an equal outfall at q = pi U d
            Layout(
                1.0, ambient=Ambient(0.5), elements=(Sink("a", -1 + 0j, pi / 2), Source("b", 1 + 0j, pi / 2))
            ),
            0.0,
            "water",
        ),
        (  # cylinder at Gamma = 4 pi U a
            Layout(1.0, ambient=Ambient(10), structures=(Pier("p", 0j, 0.5, 20 * pi),)),
            0.5j,
            "p",
        ),
    ],
    ids=["two-sinks", "bank", "outfall-and-intake", "cylinder"],
)
def test_double_points_are_degenerate(layout, at, on):
    search = search_model(compile_layout(layout))
    (point,) = search.points
    assert search.complete
    assert (point.kind, point.multiplicity, point.on) == (StagnationKind.DEGENERATE, 2, on)
    assert abs(point.at - at) <= point.inclusion_radius
    assert point.inclusion_radius < 1e-6  # the square root of rounding, with a factor of ten
    assert np.isnan(point.outflow_deg)


def test_double_sinks_near_the_limit_are_two_points():
    """At a spacing 1e-10 from the limit the zeros lie 1e-5 apart and are told from each other."""
    half = 0.5 / pi * (1 + 1e-10)
    search = found(
        Sink("a", 1j * half, 2.0), Sink("b", -1j * half, 2.0), depth=4.0, ambient=Ambient(0.5 + 0j)
    )
    assert [point.kind for point in search.points] == [StagnationKind.SADDLE] * 2


def test_map_grid_coordinates_cost_no_more_than_their_own_digits():
    origin = 5e5 + 4.6e6j
    bank = StraightBank(origin, 1 + 0j)
    (point,) = found(Sink("t", origin + 1j, 1.0), shore=bank, ambient=Ambient(0.5 + 0j)).points
    b = 1 / pi
    error = abs(point.at - origin - complex(b, sqrt(1 - b * b)))
    assert error <= point.inclusion_radius < 1e-8  # eps of 5e6 m is 1e-9 m


def test_five_hundred_widths_of_channel():
    """Sinks so far apart that each has a stagnation point of its own, by the formula of a single one."""
    width, step = 10.0, 1000.0
    sinks = [Sink(f"t{k}", complex(step * k, 5.0), 0.5) for k in range(6)]
    search = found(*sinks, shore=Channel(0j, 1 + 0j, width), ambient=Ambient(1 + 0j))
    speeds = [1 - 0.05 * k for k in range(7)]
    expected = [step * k + width / (2 * pi) * log(speeds[k] / speeds[k + 1]) for k in range(6)]
    assert_allclose([point.at.real for point in search.points], expected, atol=1e-9)  # 5000 m at 1e-13


def test_still_channel_far_from_its_source():
    """A source and a sink that balance leave still water at both ends; no zero is invented there."""
    search = found(Source("a", 3j, 1.0), Sink("b", 400 + 7j, 1.0), shore=Channel(0j, 1 + 0j, 10.0))
    assert search.degree == search.weight == 2
    assert all(-10 < point.at.real < 410 for point in search.points)

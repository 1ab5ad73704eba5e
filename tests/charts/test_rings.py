"""Pictures of surveyed water: islands filled, the net inside the rings, names legible, bytes the same."""

import itertools

import numpy as np
import pytest
import shapely
from matplotlib.colors import to_rgb
from matplotlib.image import imread

from forebay.charts import lettering
from forebay.charts.flow_net import draw_map, draw_scene, plan_sheet
from forebay.charts.mapframe import open_map
from forebay.charts.net import compute_net
from forebay.charts.options import FlowNetOptions, MediaType, Scene
from forebay.charts.palette import LAND
from forebay.charts.rings import bank_lines, led_up, middle_of, opening_line, ring_lines
from forebay.charts.sheet import Box, blank_sheet
from forebay.charts.window import choose_window
from forebay.flow.layout import EdgeProfile, Island, Layout, OpenEdge, Outline, Sink, Surveyed
from forebay.flow.model import compile_layout

OUTER = (0j, 120 - 10j, 240 + 0j, 240 + 60j, 130 + 75j, 60j)
EYOT = (80 + 20j, 90 + 40j, 140 + 42j, 150 + 22j)
"""Clockwise."""
ROCK = (190 + 30j, 190 + 36j, 198 + 36j, 198 + 30j)
WHARF = Outline("wharf", (30 + 20j, 44 + 20j, 44 + 30j, 30 + 30j))
SQUARE = EdgeProfile.EQUIPOTENTIAL
SHORE = Surveyed(
    OUTER,
    (Island("eyot", EYOT), Island("rock", ROCK)),
    (OpenEdge("upper reach", 5, 1, 40.0, SQUARE), OpenEdge("lower reach", 2, 1, None, SQUARE)),
)
SITE = Layout(2.0, shore=SHORE, elements=(Sink("town intake", 165 + 12j, 3.0),), structures=(WHARF,))


def polygon(points):
    return shapely.Polygon([(z.real, z.imag) for z in points])


WATER = polygon(OUTER) - polygon(EYOT) - polygon(ROCK) - polygon(WHARF.points)


@pytest.fixture(scope="module")
def scene() -> Scene:
    model = compile_layout(SITE)
    return Scene(model, choose_window(model))


@pytest.fixture(scope="module")
def net(scene):
    options = FlowNetOptions()
    plan = plan_sheet(options, scene)
    return compute_net(scene, options, plan.map.right - plan.map.left), plan


@pytest.mark.parametrize("kind", ["streamlines", "equipotentials"])
def test_no_line_of_the_net_crosses_a_ring(scene, net, kind):
    found, plan = net
    window = scene.window
    pixel = (window.x[1] - window.x[0]) / (plan.map.right - plan.map.left)
    lines = getattr(found, kind).lines
    assert len(lines) > 5
    for line in lines:
        drawn = shapely.LineString([(z.real, z.imag) for z in line])
        # a line may reach the middle of the stroke that a bank is drawn with, which is wider than a pixel
        outside = drawn.difference(WATER.buffer(pixel))
        assert outside.length == 0.0


def test_islands_and_banks_are_filled_and_water_is_not(scene, tmp_path):
    options = FlowNetOptions(media_type=MediaType.PNG, layers=frozenset())
    plan = plan_sheet(options, scene)
    path = tmp_path / "net.png"
    path.write_bytes(draw_scene(scene, options).data)
    image = imread(path)[..., :3]
    height, width = image.shape[:2]

    def colour(z):
        window, box = scene.window, plan.map
        x = box.left + (z.real - window.x[0]) / (window.x[1] - window.x[0]) * (box.right - box.left)
        y = box.top + (window.y[1] - z.imag) / (window.y[1] - window.y[0]) * (box.bottom - box.top)
        row, column = round(y * height / plan.height), round(x * width / plan.width)
        patch = image[row - 6 : row + 7, column - 6 : column + 7].reshape(-1, 3)
        return np.median(patch, axis=0)  # land is hatched thinly

    # a colour of eight bits is off by half a step
    for dry in (np.mean(EYOT), np.mean(ROCK), -3 - 3j):
        assert colour(complex(dry)) == pytest.approx(to_rgb(LAND), abs=1 / 255)
    for wet in (60 + 30j, 110 + 10j, 220 + 30j):
        assert np.abs(colour(wet) - to_rgb(LAND)).max() > 0.05


def test_names_are_legible(scene, net, monkeypatch):
    boxes: list[Box] = []
    monkeypatch.setattr(lettering, "draw_paper", lambda _, box: boxes.append(box))
    options, (found, plan) = FlowNetOptions(), net
    with blank_sheet(plan.width, plan.height, plan.scale) as sheet:
        frame = open_map(sheet, plan.map, scene.window, options.units)
        drawn = draw_map(frame, scene, found, layers=options.layers)
        left_out = lettering.draw_labels(frame, scene, drawn)
        texts = {text.get_text() for text in sheet.paper.texts}
    assert left_out == 0
    assert {"eyot", "wharf", "rock", "upper reach\n40 m³/s in", "lower reach\n37 m³/s out"} <= texts
    assert all(box.within(plan.map) for box in boxes)
    assert not any(one.overlaps(other) for one, other in itertools.combinations(boxes, 2))


@pytest.mark.parametrize("media_type", list(MediaType))
def test_same_scene_same_bytes(scene, media_type):
    options = FlowNetOptions(media_type=media_type)
    assert draw_scene(scene, options).data == draw_scene(scene, options).data


class TestLines:
    def test_banks_are_the_outer_ring_without_its_open_edges_and_the_islands(self):
        lower, upper, eyot, rock = sorted(bank_lines(SITE), key=lambda line: -abs(line[-1] - line[0]))
        assert {tuple(lower), tuple(upper)} == {OUTER[:3], OUTER[3:]}
        assert tuple(eyot) == (*EYOT, EYOT[0])
        assert tuple(rock) == (*ROCK, ROCK[0])

    def test_lake_has_one_bank_all_round(self):
        lake = Layout(2.0, shore=Surveyed(OUTER, (), ()))
        (bank,) = bank_lines(lake)
        assert tuple(bank) == (*OUTER, OUTER[0])

    def test_open_edge_may_run_over_the_end_of_the_list(self):
        assert tuple(opening_line(SHORE, SHORE.edges[0])) == (60j, 0j)

    def test_rings_are_the_outlines_the_outer_ring_and_the_islands(self):
        assert [line.size for line in ring_lines(SITE)] == [5, 7, 5, 5]

    def test_middle_is_half_way_along(self):
        assert middle_of(np.array([0j, 3 + 0j, 3 + 1j])) == 2 + 0j

    def test_ends_are_led_on_to_walls_within_reach_only(self):
        wall = np.array([10 - 5j, 10 + 5j])
        line = np.array([0j, 8 + 0j, 9 + 0.5j])
        (near,) = led_up([line], [wall], 2.0)
        assert near[-1] == pytest.approx(10 + 1j)
        assert near.size == 4
        (far,) = led_up([line], [wall], 1.0)
        assert np.array_equal(far, line)
        assert np.array_equal(led_up([line], [], 2.0)[0], line)

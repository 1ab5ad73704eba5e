"""The picture as a whole: its layers, its size, its labels, its bytes."""

import itertools
import re
import threading
import xml.etree.ElementTree as ET
from dataclasses import replace
from io import BytesIO

import numpy as np
import pytest
from matplotlib.image import imread

from forebay.charts import lettering
from forebay.charts.elements import Drawn
from forebay.charts.flow_net import draw_map, draw_scene, plan_sheet
from forebay.charts.key import draw_speed_scale
from forebay.charts.mapframe import open_map
from forebay.charts.net import compute_net
from forebay.charts.options import LARGEST_SIZE, SMALLEST_SIZE, FlowNetOptions, Layer, MediaType, Scene
from forebay.charts.sheet import Box, Sheet, blank_sheet
from forebay.charts.units import US
from forebay.charts.window import choose_window
from forebay.flow.layout import (
    Ambient,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationKind, StagnationPoint, Window
from support.layouts import ALL_KINDS, CORED_KINDS, random_layout
from support.sites import SHORES

SITE = Layout(
    4.0,
    ambient=Ambient(0.05 + 0j),
    shore=StraightBank(0j, 1 + 0j),
    elements=(
        Sink("town intake", 120 + 6j, 1.8),
        Source("works outfall", 160 + 12j, 1.5),
        LineSink("screen bay", 90 + 0j, 102 + 0j, 1.2),
        LineSource("diffuser", 170 + 30j, 185 + 35j, 0.9),
        Vortex("gyre", 135 + 40j, -1.0),
    ),
    structures=(Pier("P1", 140 + 15j, 2.0),),
)
SADDLE = StagnationPoint(124 + 8j, StagnationKind.SADDLE, "water", 0.0, 0.01, 90.0, 0.0, 1e-9)
DIVIDE = np.array([60 + 20j, 100 + 14j, 124 + 8j, 125 + 0j])


def a_scene(layout: Layout = SITE) -> Scene:
    model = compile_layout(layout)
    return Scene(model, choose_window(model), (SADDLE,), (DIVIDE,))


def svg_ids(data: bytes) -> set[str]:
    return {element.get("id", "") for element in ET.fromstring(data).iter()}  # noqa: S314 - our own document


def texts_of(data: bytes) -> str:
    """Comments that carry the text of drawn glyphs."""
    return " ".join(re.findall(r"<!-- (.*?) -->", data.decode()))


@pytest.fixture(scope="module")
def svg() -> bytes:
    return draw_scene(a_scene(), FlowNetOptions()).data


class TestContents:
    @pytest.mark.parametrize(
        "layer",
        [
            *("speed", "streamlines", "equipotentials", "dividing-streamlines", "flow-directions"),
            *("land", "walls", "element-1", "element-5", "pier-1", "stagnation-point-1"),
            *("label-1", "label-6", "wall-label-1", "title", "note-1", "caution"),
            *("scale-bar", "speed-band-1", "current-arrow", "x-arrow", "y-arrow", "key-streamline"),
        ],
    )
    def test_every_part_is_there(self, svg, layer):
        assert layer in svg_ids(svg)

    def test_says_what_it_must(self, svg):
        text = texts_of(svg)
        for words in (
            "Screening level",
            "Not for the safety of divers, swimmers or craft",
            "licensed engineers decide",
            "flows between neighbours",
            "speed [m/s]",
            "x [m]",
            "town intake",
            "intake 1.8 m³/s",
            "pier, radius 2 m",
            "0.05 m/s",
        ):
            assert words in text, words

    @pytest.mark.parametrize("layer", list(Layer))
    def test_layers_can_be_left_out(self, layer):
        options = FlowNetOptions(layers=frozenset(Layer) - {layer})
        ids = svg_ids(draw_scene(a_scene(), options).data)
        gone = {
            Layer.SPEED: "speed-band-1",
            Layer.STAGNATION_POINTS: "stagnation-point-1",
            Layer.LABELS: "label-1",
        }.get(layer, layer.value)
        assert gone not in ids
        assert {"element-1", "walls", "caution"} <= ids

    def test_us_units(self):
        text = texts_of(draw_scene(a_scene(), FlowNetOptions(units=US)).data)
        for words in ("speed [ft/s]", "x [ft]", "intake 63.6 ft³/s", "mean depth 13.1 ft"):
            assert words in text, words

    def test_north_replaces_the_axis_arrows(self):
        ids = svg_ids(draw_scene(a_scene(), FlowNetOptions(north=1.0)).data)
        assert "north-arrow" in ids
        assert "x-arrow" not in ids

    def test_rotational_flow_says_why_it_has_no_equipotentials(self):
        layout = replace(SITE, ambient=Ambient(0.05 + 0j, ((0.0, 0.001), (0.0, 0.0))))
        data = draw_scene(a_scene(layout), FlowNetOptions()).data
        assert "equipotentials" not in svg_ids(data)
        assert "No equipotentials: the flow has vorticity" in texts_of(data)

    def test_elements_outside_the_window_are_counted(self):
        scene = replace(a_scene(), window=Window((110.0, 150.0), (-5.0, 20.0)))
        assert "Outside this window: 4 of" in texts_of(draw_scene(scene, FlowNetOptions()).data)

    def test_still_water_without_elements_is_drawn(self):
        scene = Scene(compile_layout(Layout(1.0)), Window((0.0, 10.0), (0.0, 5.0)))
        ids = svg_ids(draw_scene(scene, FlowNetOptions()).data)
        assert "streamlines" not in ids
        assert "caution" in ids

    def test_artefacts_of_line_ends_are_not_marked(self):
        scene = replace(a_scene(), stagnation_points=(replace(SADDLE, is_artefact=True),))
        assert "stagnation-point-1" not in svg_ids(draw_scene(scene, FlowNetOptions()).data)


class TestLabels:
    def drawn(
        self, scene: Scene, options: FlowNetOptions, monkeypatch
    ) -> tuple[Drawn, Sheet, list[Box], Box]:
        """The map drawn once more with its parts kept."""
        boxes: list[Box] = []
        monkeypatch.setattr(lettering, "draw_paper", lambda _, box: boxes.append(box))
        plan = plan_sheet(options, scene)
        net = compute_net(scene, options, plan.map.right - plan.map.left)
        with blank_sheet(plan.width, plan.height, plan.scale) as sheet:
            frame = open_map(sheet, plan.map, scene.window, options.units)
            drawn = draw_map(frame, scene, net, layers=options.layers)
            lettering.draw_labels(frame, scene, drawn)
        return drawn, sheet, boxes, plan.map

    @pytest.mark.parametrize("shore", ["open-water", "channel", "basin"])
    @pytest.mark.parametrize("size", [(700, 560), (2000, 1100)])
    def test_boxes_hold_their_text_inside_the_map_and_off_each_other(self, shore, size, monkeypatch):
        only = frozenset({Layer.LABELS})
        layout = random_layout(shore, 4, kinds=("source", "sink", "vortex", "doublet"), count=8, piers=2)
        model = compile_layout(layout)
        scene = Scene(model, choose_window(model))
        drawn, sheet, boxes, frame = self.drawn(scene, FlowNetOptions(size=size, layers=only), monkeypatch)
        assert len(boxes) >= 8
        assert all(box.within(frame) for box in boxes)
        assert not any(one.overlaps(other) for one, other in itertools.combinations(boxes, 2))
        assert not any(box.overlaps(symbol) for box in boxes for symbol in drawn.taken)
        for text in sheet.paper.texts:
            extent = text.get_window_extent(sheet.renderer)
            written = Box(extent.x0, sheet.height - extent.y1, extent.x1, sheet.height - extent.y0)
            # glyphs may reach a pixel over what the layout of the text measures
            assert any(written.within(box.grown(1.0)) for box in boxes), text.get_text()

    def test_names_cannot_break_the_picture(self):
        names = ("a $b", "\\alpha$x$", "<b>&amp;", "取水口", "x" * 300, "two\nlines\x07")
        elements = tuple(Sink(name, complex(10 * k, 3.0), 1.0) for k, name in enumerate(names))
        data = draw_scene(
            a_scene(Layout(2.0, elements=elements)), FlowNetOptions(title="$\\frac{1}{2 取")
        ).data
        assert len(ET.fromstring(data)) > 0  # noqa: S314 - our own document

    def test_foot_and_key_do_not_run_off_the_sheet(self):
        for size in (SMALLEST_SIZE, (1200, 800)):
            options = FlowNetOptions(size=size)
            scene = a_scene()
            plan = plan_sheet(options, scene)
            with blank_sheet(plan.width, plan.height, plan.scale) as sheet:
                draw_speed_scale(sheet, Box(0, 0, 300, 100), np.linspace(0.0, 0.2, 9), US)
                widest = max(text.get_window_extent(sheet.renderer).x1 for text in sheet.paper.texts)
            assert widest <= size[0]


class TestBytes:
    @pytest.mark.parametrize("media_type", list(MediaType))
    def test_same_input_gives_the_same_bytes(self, media_type):
        options = FlowNetOptions(media_type=media_type, size=SMALLEST_SIZE)
        assert draw_scene(a_scene(), options).data == draw_scene(a_scene(), options).data

    def test_threads_do_not_disturb_each_other(self):
        options = [FlowNetOptions(size=SMALLEST_SIZE, title=f"Site {k}") for k in range(3)]
        alone = [draw_scene(a_scene(), option).data for option in options]
        together: dict[int, bytes] = {}

        def draw(index: int) -> None:
            together[index] = draw_scene(a_scene(), options[index]).data

        threads = [threading.Thread(target=draw, args=(index,)) for index in range(3)]
        for thread in threads:
            thread.start()
        for thread in threads:
            thread.join()
        assert [together[index] for index in range(3)] == alone

    def test_no_date_in_the_picture(self, svg):
        assert b"<dc:date>" not in svg

    @pytest.mark.parametrize("size", [SMALLEST_SIZE, (1000, 900), LARGEST_SIZE])
    def test_png_has_the_size_that_was_asked_for(self, size):
        picture = draw_scene(a_scene(), FlowNetOptions(media_type=MediaType.PNG, size=size))
        assert imread(BytesIO(picture.data)).shape[:2] == (size[1], size[0])

    def test_media_type_is_the_one_asked_for(self):
        picture = draw_scene(a_scene(), FlowNetOptions(media_type=MediaType.PNG, size=SMALLEST_SIZE))
        assert picture.media_type is MediaType.PNG
        assert picture.data.startswith(b"\x89PNG")


@pytest.mark.parametrize("shore", SHORES)
def test_every_shore_and_kind_is_drawn_without_a_warning(shore):
    # warnings are errors in this suite
    layout = random_layout(shore, 8, kinds=ALL_KINDS, count=len(ALL_KINDS), piers=1)
    model = compile_layout(layout)
    data = draw_scene(Scene(model, choose_window(model)), FlowNetOptions(size=SMALLEST_SIZE)).data
    ids = svg_ids(data)
    assert "streamlines" in ids
    assert ("equipotentials" in ids) == model.has_potential
    assert not model.has_potential or not set(ALL_KINDS) & set(CORED_KINDS)

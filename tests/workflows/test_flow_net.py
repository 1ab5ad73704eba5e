"""Wiring of the flow net: what is asked of whom, and what reaches the picture."""

from dataclasses import dataclass, replace

import numpy as np
import pytest

from forebay.charts.options import ALL_LAYERS, FlowNetOptions, Layer, MediaType, Picture, Scene
from forebay.flow.errors import DuplicateNameError
from forebay.flow.layout import Ambient, Layout, Sink, Source
from forebay.flow.stagnation.result import Window
from forebay.flow.withdrawal.result import WithdrawalStatus
from forebay.workflows import flow_net
from forebay.workflows.flow_net import draw_flow_net

SITE = Layout(4.0, ambient=Ambient(0.05 + 0j), elements=(Sink("K", 10 + 6j, 1.8), Source("S", 40 + 2j, 1.5)))
PICTURE = Picture(MediaType.PNG, b"drawn")


@dataclass
class Search:
    points: tuple[str, ...] = ("saddle",)
    complete: bool = True


@dataclass
class Intake:
    name: str
    dividing_streamlines: tuple[np.ndarray, ...]
    status: WithdrawalStatus = WithdrawalStatus.OK


@dataclass
class Withdrawal:
    intakes: tuple[Intake, ...]


@pytest.fixture
def calls(monkeypatch) -> dict[str, list]:
    """Calls of the neighbours, which answer with stand-ins."""
    seen: dict[str, list] = {"search": [], "trace": [], "draw": []}
    lines = (np.array([0j, 1 + 1j]), np.array([2j]))

    def search(layout: Layout, window: Window) -> Search:
        seen["search"].append((layout, window))
        return Search()

    def trace(layout: Layout, intakes: object) -> Withdrawal:
        seen["trace"].append((layout, intakes))
        return Withdrawal((Intake("K", lines), Intake("L", lines[:1])))

    def draw(scene: Scene, options: FlowNetOptions) -> Picture:
        seen["draw"].append((scene, options))
        return PICTURE

    monkeypatch.setattr(flow_net, "search_stagnation", search)
    monkeypatch.setattr(flow_net, "trace_withdrawal", trace)
    monkeypatch.setattr(flow_net, "draw_scene", draw)
    return seen


class TestWiring:
    def test_everything_found_reaches_the_picture(self, calls):
        assert draw_flow_net(SITE) is PICTURE
        ((scene, options),) = calls["draw"]
        assert options == FlowNetOptions()
        assert scene.stagnation_points == ("saddle",)
        # a divide of one point is no line
        assert [line.size for line in scene.dividing_streamlines] == [2, 2]
        assert scene.notes == ()
        assert scene.model.layout is SITE

    def test_search_is_kept_to_the_window_shown(self, calls):
        window = Window((0.0, 50.0), (-10.0, 20.0))
        draw_flow_net(SITE, FlowNetOptions(window=window))
        assert calls["search"] == [(SITE, window)]
        assert calls["draw"][0][0].window == window

    def test_window_fits_the_size_that_is_asked_for(self, calls):
        draw_flow_net(SITE, FlowNetOptions(size=(1000, 1000)))
        draw_flow_net(SITE, FlowNetOptions(size=(2000, 1000)))
        shapes = [
            (scene.window.y[1] - scene.window.y[0]) / (scene.window.x[1] - scene.window.x[0])
            for scene, _ in calls["draw"]
        ]
        assert shapes[0] > 1.5 * shapes[1]

    def test_incomplete_search_is_said(self, calls, monkeypatch):
        monkeypatch.setattr(flow_net, "search_stagnation", lambda *_: Search(complete=False))
        draw_flow_net(SITE)
        assert "may be more stagnation points" in calls["draw"][0][0].notes[0]

    @pytest.mark.parametrize(
        ("status", "said"),
        [
            (WithdrawalStatus.INCOMPLETE, True),
            (WithdrawalStatus.UNRESOLVED, True),
            (WithdrawalStatus.BISECTED, False),
            (WithdrawalStatus.PASSED_THROUGH, False),
        ],
    )
    def test_missing_divides_are_said(self, calls, monkeypatch, status, said):
        answer = Withdrawal((Intake("town intake", (), status), Intake("L", ())))
        monkeypatch.setattr(flow_net, "trace_withdrawal", lambda *_: answer)
        draw_flow_net(SITE)
        notes = calls["draw"][0][0].notes
        assert notes == (("Dividing streamlines may be missing for: town intake.",) if said else ())

    def test_layers_that_are_not_shown_are_not_computed(self, calls):
        hidden = {Layer.STAGNATION_POINTS, Layer.DIVIDING_STREAMLINES}
        draw_flow_net(SITE, FlowNetOptions(layers=ALL_LAYERS - hidden))
        assert calls["search"] == calls["trace"] == []

    def test_nothing_is_traced_without_an_intake(self, calls):
        draw_flow_net(replace(SITE, elements=SITE.elements[1:]))
        assert calls["trace"] == []

    def test_wrong_layout_is_refused(self, calls):
        twice = (SITE.elements[0], replace(SITE.elements[1], name="K"))
        with pytest.raises(DuplicateNameError):
            draw_flow_net(replace(SITE, elements=twice))
        assert calls["draw"] == []


@pytest.mark.parametrize(("media_type", "start"), [(MediaType.SVG, b"<?xml"), (MediaType.PNG, b"\x89PNG")])
def test_the_real_thing(media_type, start):
    picture = draw_flow_net(SITE, FlowNetOptions(media_type, size=(700, 560)))
    assert picture.data.startswith(start)

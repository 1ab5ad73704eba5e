"""Land is where the water is not."""

import numpy as np
import pytest
from matplotlib.path import Path

from forebay.charts.land import land_rings, visible_part
from forebay.charts.window import choose_window
from forebay.flow.layout import Corner, Layout, OpenWater
from forebay.flow.model import compile_layout
from forebay.flow.shores import Wall
from forebay.flow.stagnation.result import Window
from support.layouts import random_layout
from support.sites import SHORES


@pytest.mark.parametrize("shore", SHORES)
def test_land_is_the_complement_of_the_water(shore):
    model = compile_layout(random_layout(shore, 3, kinds=("source", "sink")))
    window = choose_window(model)
    generator = np.random.default_rng(1)
    places = generator.uniform(*window.x, 3000) + 1j * generator.uniform(*window.y, 3000)
    points = np.stack([places.real, places.imag], axis=1)
    # even-odd rule: a ring within another is its hole
    on_land = np.zeros(places.size, dtype=bool)
    for ring in land_rings(model.layout.shore, window):
        on_land ^= Path(np.stack([ring.real, ring.imag], axis=1)).contains_points(points)
    np.testing.assert_array_equal(on_land, ~model.wet(places))


def test_open_water_and_a_thin_wall_have_no_land():
    window = Window((-1.0, 1.0), (-1.0, 1.0))
    assert land_rings(OpenWater(), window) == []
    assert land_rings(Corner(0j, 1 + 0j, 2 * np.pi), window) == []


class TestVisiblePart:
    WINDOW = Window((0.0, 10.0), (0.0, 6.0))

    def test_endless_wall_is_cut_at_the_window(self):
        part = visible_part(Wall("bank", -3 + 2j, 1 + 0j, np.inf, np.inf), self.WINDOW)
        assert part is not None
        np.testing.assert_allclose(part, (2j, 10 + 2j), atol=1e-9)  # rounding of a quotient

    def test_oblique_wall(self):
        part = visible_part(Wall("bank", 0j, complex(np.exp(0.25j * np.pi)), np.inf, np.inf), self.WINDOW)
        assert part is not None
        np.testing.assert_allclose(part, (0j, 6 + 6j), atol=1e-9)  # rounding of a quotient

    def test_short_wall_inside_is_whole(self):
        assert visible_part(Wall("end", 2 + 1j, 1j, 0.0, 3.0), self.WINDOW) == (2 + 1j, 2 + 4j)

    @pytest.mark.parametrize("point", [2 - 1j, 2 + 7j])
    def test_wall_outside_is_not_seen(self, point):
        assert visible_part(Wall("bank", point, 1 + 0j, np.inf, np.inf), self.WINDOW) is None

    def test_wall_that_ends_before_the_window_is_not_seen(self):
        assert visible_part(Wall("bank", -5 + 1j, 1 + 0j, 0.0, 3.0), self.WINDOW) is None


@pytest.mark.parametrize("shore", SHORES)
def test_window_holds_the_site_in_a_sensible_shape(shore):
    model = compile_layout(random_layout(shore, 3, kinds=("source", "sink", "vortex"), piers=1))
    window = choose_window(model)
    assert all(window.contains(singularity.at) for singularity in model.singularities)
    assert all(window.contains(pier.at) for pier in model.piers)
    aspect = (window.y[1] - window.y[0]) / (window.x[1] - window.x[0])
    # the land left out makes it flatter than 0.3, or narrower, where the water is
    assert 0.15 <= aspect <= 1.3


def test_window_takes_the_aspect_that_is_asked_for():
    model = compile_layout(random_layout("channel", 3, kinds=("source", "sink")))
    window = choose_window(model, 0.5)
    assert (window.y[1] - window.y[0]) / (window.x[1] - window.x[0]) == pytest.approx(0.5)


def test_window_of_an_empty_layout_is_not_empty():
    window = choose_window(compile_layout(Layout(1.0)))
    assert window.x[1] > window.x[0]
    assert window.y[1] > window.y[0]

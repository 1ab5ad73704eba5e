"""The flow model as a whole: derivatives, integrals, ends, what counts as wet or singular."""

from dataclasses import replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Core,
    CoreModel,
    Corner,
    DeadEnd,
    Layout,
    LineSink,
    Pier,
    Sink,
    Source,
    Vortex,
)
from forebay.flow.model import compile_layout
from support.layouts import random_layout
from support.sites import SHORES, place

POINTS = [0.37 + 0.41j, 0.62 + 0.13j, 0.81 + 0.77j, 0.11 + 0.52j]
"""Fractions across and along the water at which the flow is looked at."""


def in_water(model, shore):
    z = np.array([place(shore, f.real, f.imag) for f in POINTS])
    return z[model.singular(z, 1e-2 * model.scale) < 0]


@pytest.fixture(params=list(SHORES))
def site(request):
    layout = random_layout(request.param, 11, count=6, piers=1)
    model = compile_layout(layout)
    return model, in_water(model, layout.shore)


class TestDerivatives:
    def test_cauchy_average_gives_velocity_and_slope(self, site):
        """Mean over a ring: W itself and, divided by the ring, dW/dz; the part with zbar averages out."""
        model, z = site
        z = z[model.distance_to_wall(z) > 0.02 * model.scale]
        clear = min(0.01 * model.scale, 0.2 * np.min(np.abs(z[:, None] - nearest_features(model))))
        ring = clear * np.exp(2j * np.pi * np.arange(64) / 64)
        around = model.velocity(z[:, None] + ring)
        jet = model.jet(z)
        # the ring's radius is at most a fifth of the distance to any singularity: terms die like 0.2^64
        assert_allclose(around.mean(axis=1), jet.velocity, rtol=0, atol=1e-13 * np.max(model.magnitude(z)))
        slope = (around / ring).mean(axis=1)
        assert_allclose(slope, jet.slope, rtol=0, atol=1e-13 * np.max(model.magnitude(z)) / clear)

    def test_velocity_is_the_same_with_and_without_derivatives(self, site):
        model, z = site
        assert_allclose(
            model.velocity(z), model.jet(z).velocity, rtol=0, atol=1e-14 * np.max(model.magnitude(z))
        )

    def test_shapes_are_kept(self, site):
        model, z = site
        grid = np.tile(z, (2, 3, 1))
        assert model.velocity(grid).shape == grid.shape
        assert model.jet(grid).skew.shape == grid.shape
        assert model.potential(grid).shape == grid.shape
        assert model.wet(grid).shape == grid.shape


def nearest_features(model):
    features = [s.at for s in model.singularities] + [
        end for line in model.lines for end in (line.start, line.end)
    ]
    return np.array(features + [0.5 * (line.start + line.end) for line in model.lines])


class TestChords:
    def test_sum_over_the_way_is_the_way(self, site):
        """Two chords on a straight line add to one."""
        model, z = site
        a, b = z[:-1], z[1:]
        whole = model.chords(a, b)
        middle = a + 0.37 * (b - a)
        parts = model.chords(a, middle) + model.chords(middle, b)
        assert_allclose(parts, whole, rtol=0, atol=1e-12)  # some hundred logarithms of order 1

    def test_reversed_chords_change_sign(self, site):
        model, z = site
        assert_allclose(model.chord(z[:-1], z[1:]), -model.chord(z[1:], z[:-1]), rtol=0, atol=1e-12)

    def test_round_an_element_the_flux_is_its_own(self, site):
        """A small octagon round each point element: 2 pi i g for it and nothing for anyone else."""
        model, _ = site
        for index, s in enumerate(model.singularities):
            if s.on != "water" or s.owner in {core.owner for core in model.cores}:
                continue
            radius = 1e-3 * model.scale
            ring = s.at + radius * np.exp(2j * np.pi * np.arange(8) / 8)
            shares = model.chords(ring, np.roll(ring, -1)).sum(axis=0)
            expected = np.zeros(len(model.owners), dtype=np.complex128)
            expected[model.owners.index(s.owner)] = 2j * np.pi * s.strength
            assert_allclose(
                shares, expected, rtol=0, atol=1e-11, err_msg=f"element {index}"
            )  # 8 chords x 100 poles


class TestEnds:
    CHANNEL = Layout(
        2.0, shore=Channel(1 + 1j, 1j, 10.0), elements=(Sink("a", -3 + 2j, 3.0), Source("b", -1 + 9j, 1.0))
    )

    @pytest.mark.parametrize("current", [0.4j, -0.4j, 0j], ids=["along", "against", "still"])
    def test_far_speeds_of_a_channel_follow_from_continuity(self, current):
        model = compile_layout(replace(self.CHANNEL, ambient=Ambient(current)))
        inflow = {end.name: end.inflow for end in model.ends}
        assert sum(inflow.values()) == pytest.approx(1.0)  # (3 - 1) m3/s over 2 m: what the elements keep
        for end in model.ends:
            far = -1 + 5j + 400.0 * end.direction
            velocity = np.conj(model.velocity(np.array([far]))[0])
            towards = (velocity * np.conj(end.direction)).real
            assert -towards * 10.0 == pytest.approx(end.inflow, abs=1e-13)  # coth(40 pi) = 1
            assert abs(velocity) == pytest.approx(end.speed, abs=1e-14)
        if current:
            assert inflow["upstream"] == pytest.approx(4.0)

    def test_dead_end_feeds_what_is_taken(self):
        layout = replace(self.CHANNEL, shore=DeadEnd(1 + 1j, 1j, 10.0))
        model = compile_layout(layout)
        assert [end.name for end in model.ends] == ["open-end"]
        far = np.conj(model.velocity(np.array([-4 + 500j]))[0])
        assert far == pytest.approx(-0.1j, abs=1e-14)  # 1 m2/s over 10 m, into the dead end

    def test_basin_has_no_ends(self):
        layout = Layout(
            2.0,
            shore=Basin(0j, 1 + 0j, 9.0, 7.0),
            elements=(Sink("a", 3 + 2j, 1.0), Source("b", 5 + 5j, 1.0)),
        )
        assert compile_layout(layout).ends == ()

    def test_open_water_has_the_ambient(self):
        end = compile_layout(Layout(2.0, ambient=Ambient(3 + 4j))).ends[0]
        assert (end.name, end.speed) == ("ambient", 5.0)
        assert end.direction == pytest.approx(-0.6 - 0.8j)


class TestWetAndSingular:
    LAYOUT = Layout(
        2.0,
        shore=Channel(0j, 1 + 0j, 10.0),
        elements=(
            Sink("a", 3 + 2j, 1.0),
            LineSink("screen", 8 + 0j, 10 + 0j, 1.0),
            Vortex("gyre", 20 + 5j, 2.0, Core(CoreModel.RANKINE, 1.0)),
        ),
        structures=(Pier("p", 14 + 5j, 1.0),),
    )

    def test_walls_count_as_water_and_piers_do_not(self):
        model = compile_layout(self.LAYOUT)
        z = np.array([5 + 5j, 5 + 0j, 5 - 1e-3j, 5 + 10j, 5 + 10.1j, 14 + 5j, 15 + 5j])
        assert model.wet(z).tolist() == [True, True, False, True, False, False, True]

    def test_places_without_a_velocity(self):
        model = compile_layout(self.LAYOUT)
        z = np.array([3 + 2j, 8 + 0j, 10 + 0j, 9 + 0j, 20 + 5j, 1 + 1j])
        assert model.singular(z).tolist() == [0, 2, 3, -1, -1, -1]
        velocity = model.velocity(z)
        assert not np.isfinite(velocity[0])
        assert np.all(np.isfinite(velocity[3:]))

    def test_middle_of_a_core_turns_with_the_rest_of_the_flow(self):
        """At the centre of a core its own velocity is zero; what is left is finite and continuous."""
        model = compile_layout(self.LAYOUT)
        centre, beside = model.velocity(np.array([20 + 5j, 20 + 1e-6 + 5j]))
        assert abs(centre - beside) < 1e-6  # the rotation rate is Gamma / (2 pi a^2) = 0.3 1/s

    def test_what_stands_on_a_wall_says_so(self):
        model = compile_layout(self.LAYOUT)
        assert [line.on for line in model.lines] == ["right bank"]
        assert [s.on for s in model.singularities] == ["water", "water"]

    def test_nearest_wall(self):
        model = compile_layout(self.LAYOUT)
        assert model.nearest_wall(np.array([5 + 1j, 5 + 9j, 14 + 6.5j])).tolist() == [0, 1, 2]
        assert_allclose(model.distance_to_wall(np.array([5 + 1j, 14 + 6.5j])), [1.0, 0.5])
        assert compile_layout(Layout(2.0)).nearest_wall(np.array([1j])).tolist() == [-1]

    def test_owners(self):
        model = compile_layout(self.LAYOUT)
        assert model.owners == ("ambient", "a", "screen", "gyre", "p")
        assert not model.is_rational
        assert not model.has_potential


class TestVertex:
    @pytest.mark.parametrize("degrees", [40, 90, 150])
    def test_water_stands_still_in_a_corner(self, degrees):
        layout = Layout(
            1.0, shore=Corner(1 + 1j, 1 + 0j, np.radians(degrees)), elements=(Sink("a", 4 + 2j, 1.0),)
        )
        model = compile_layout(layout)
        assert model.velocity(np.array([1 + 1j]))[0] == 0.0
        assert np.isfinite(model.jet(np.array([1 + 1j])).slope[0])
        assert model.wet(np.array([1 + 1j]))[0]

    def test_a_salient_vertex_has_no_velocity(self):
        layout = Layout(
            1.0, shore=Corner(1 + 1j, 1 + 0j, np.radians(270)), elements=(Sink("a", 4 + 2j, 1.0),)
        )
        assert compile_layout(layout).singular(np.array([1 + 1j]))[0] == 1

    def test_right_corner_with_four_equal_images(self):
        """Source in a right-angle corner, q = 1 at (3, 2): u(5, 0) = 0.117026, u(1, 0) = -0.015915.

        Formula (q/pi) [(x-A)/((x-A)^2 + B^2) + (x+A)/((x+A)^2 + B^2)], by the method of images (Lamb).
        """
        layout = Layout(1.0, shore=Corner(0j, 1 + 0j, np.pi / 2), elements=(Source("a", 3 + 2j, 1.0),))
        velocity = compile_layout(layout).velocity(np.array([5 + 0j, 1 + 0j]))
        expected = [(2 / 8 + 8 / 68) / np.pi, (-2 / 8 + 4 / 20) / np.pi]
        assert_allclose(velocity, expected, rtol=0, atol=1e-15)  # four terms
        assert_allclose(np.round(velocity.real, 6), [0.117026, -0.015915])

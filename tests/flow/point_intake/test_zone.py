"""Zones about an intake against circles, spheres and the strip between a sink and its image."""

import numpy as np
import pytest

from forebay.flow.layout import Ambient, Layout, Sink, StraightBank
from forebay.flow.model import compile_layout
from forebay.flow.point_intake.field import near_field
from forebay.flow.point_intake.speeds import near_field_speeds, plane_speeds
from forebay.flow.point_intake.zone import enclose_zone

DEPTH, DISCHARGE = 4.0, 2.0


def model_of(at=0j, shore=None, current=0j):
    extra = {} if shore is None else {"shore": shore}
    return compile_layout(
        Layout(DEPTH, ambient=Ambient(current), elements=(Sink("a", at, DISCHARGE),), **extra)
    )


def zone_in(look, half, limit, tolerance, *, about=0j):
    middle = np.array([about.real, about.imag])
    return enclose_zone(look, middle - half, middle + half, limit, tolerance)


def test_plane_zone_is_a_circle():
    # |u| = Q / (2 pi r h) > v within r = Q / (2 pi h v)
    limit = 0.08
    radius = DISCHARGE / DEPTH / (2 * np.pi * limit)
    zone = zone_in(plane_speeds(model_of()), 1.5 * radius, limit, 0.01)
    area = np.pi * radius**2
    assert zone.least < area < zone.largest
    assert zone.largest - zone.least < 0.01 * area * 1.01
    assert zone.size == pytest.approx(area, rel=1e-3)  # a tenth of the bracket
    least, largest = zone.reach(0j)
    assert least <= radius <= largest
    assert largest - least < 0.02 * radius


def test_bank_cuts_the_zone_in_half():
    # on the bank all of it comes from one side: r = Q / (pi h v), half a circle
    limit = 0.1
    radius = DISCHARGE / DEPTH / (np.pi * limit)
    model = model_of(shore=StraightBank(0j, 1 + 0j))
    zone = zone_in(plane_speeds(model), 1.3 * radius, limit, 0.02)
    area = 0.5 * np.pi * radius**2
    assert zone.least <= area <= zone.largest
    assert zone.size == pytest.approx(area, rel=0.01)


def test_induced_speed_does_not_see_the_current():
    limit = 0.08
    radius = DISCHARGE / DEPTH / (2 * np.pi * limit)
    with_, without = model_of(current=0.3 + 0.1j), compile_layout(Layout(DEPTH, ambient=Ambient(0.3 + 0.1j)))
    zone = zone_in(plane_speeds(with_, without), 1.5 * radius, limit, 0.05)
    assert zone.least < np.pi * radius**2 < zone.largest


def test_zone_against_counted_points():
    # random points of the window inside and outside: 4000 of them, three standard errors
    limit, half = 0.25, 4.0
    model = model_of(1j, StraightBank(0j, 1 + 0j), 0.2 + 0j)
    zone = zone_in(plane_speeds(model), half, limit, 0.02, about=1j)
    generator = np.random.default_rng(3)
    z = 1j + generator.uniform(-half, half, 4000) + 1j * generator.uniform(-half, half, 4000)
    share = np.mean(model.wet(z) & (np.abs(model.velocity(z)) > limit))
    error = 3 * np.sqrt(share * (1 - share) / 4000)
    assert zone.size / (2 * half) ** 2 == pytest.approx(share, abs=error)


def test_nothing_exceeds_a_limit_that_is_never_met():
    zone = enclose_zone(plane_speeds(model_of()), np.array([5.0, 5.0]), np.array([6.0, 6.0]), 5.0, 0.01)
    assert (zone.size, zone.largest, zone.reach(0j)) == (0.0, 0.0, (0.0, 0.0))


def test_small_zone_in_depth_is_a_sphere():
    # Q / (4 pi R^2) > v within R; the nearest images, 4 m away, add 0.6 % of the speed at R = 0.3 m
    radius = 0.3
    limit = DISCHARGE / (4 * np.pi * radius**2)
    field = near_field(model_of(), {"a": DEPTH / 2})
    low, high = np.array([-0.6, -0.6, 1.4]), np.array([0.6, 0.6, 2.6])
    zone = enclose_zone(near_field_speeds(field), low, high, limit, 0.3)
    volume = 4 / 3 * np.pi * radius**3
    assert zone.least < volume < zone.largest
    assert zone.size == pytest.approx(volume, rel=0.03)  # a tenth of the bracket
    sure, maybe = zone.plan_area()
    assert sure < np.pi * radius**2 < maybe
    least, largest = zone.reach(0j)
    assert least <= radius * 1.01
    assert largest >= radius

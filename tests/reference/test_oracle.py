"""The oracle against image sums and textbook closed forms, so that it is not trusted on its own word."""

import mpmath
import pytest

from forebay.flow.layout import Basin, Channel, DeadEnd, Doublet, Layout, LineSource, Sink, Source, Vortex
from reference.oracle import CONTEXT, HalfPlaneMap, Oracle, exact
from support.sites import SHORES, place, wall_samples

DIGITS = 1e-35
"""Working precision is 45 digits; ten are left for cancellation."""

BOUNDED = [name for name in SHORES if name != "open-water"]


@pytest.mark.parametrize("name", BOUNDED)
def test_walls_are_mapped_to_the_real_axis(name):
    mapping = HalfPlaneMap(SHORES[name])
    for wall in wall_samples(
        SHORES[name], 8
    ):  # even: the middle of a basin's left bank is mapped to infinity
        for point in wall.points:
            t, _ = mapping(exact(complex(point)))
            # the wall points are doubles: off the wall by 1e-16 of the coordinates, here at most 500
            assert abs(CONTEXT.im(t)) < 1e-12 * (1 + abs(t) ** 2)


@pytest.mark.parametrize("name", BOUNDED)
def test_water_is_mapped_to_the_upper_half_plane_with_the_stated_slope(name):
    mapping = HalfPlaneMap(SHORES[name])
    z = exact(place(SHORES[name], 0.3, 0.7))
    t, slope = mapping(z)
    assert CONTEXT.im(t) > 0
    numerical = CONTEXT.diff(lambda at: mapping(at)[0], z)
    assert abs(slope - numerical) < 1e-15 * abs(slope)  # numerical differentiation halves the digits


def _image_rows(z, at, strength, width, shifts):
    """Poles at `at` and its conjugate repeated every 2 W across, each with its own shift along."""
    total = CONTEXT.mpc(0)
    rate = CONTEXT.pi / (2 * width)
    for shift in shifts:
        for s, g in ((at + shift, strength), (CONTEXT.conj(at) + shift, CONTEXT.conj(strength))):
            total += g * rate * CONTEXT.coth(rate * (z - s))
    return total


@pytest.mark.parametrize("strength", [1.0, 1j, 0.3 - 2j], ids=["source", "vortex", "both"])
def test_channel_equals_rows_of_images(strength):
    width = CONTEXT.mpf(20)
    shore = Channel(point=0j, along=1 + 0j, width=20.0)
    g = exact(complex(strength)) / (2 * CONTEXT.pi)
    at, z = 4 + 7j, 9 + 15j
    both = (Source("s", at, 2 * complex(strength).real), Vortex("v", at, -2 * complex(strength).imag))
    elements = tuple(e for e in both if e != Source("s", at, 0.0))
    layout = Layout(1.0, shore=shore, elements=elements)
    expected = _image_rows(exact(z), exact(at), 2 * g, width, [0])
    assert abs(Oracle(layout).velocity(z).value - expected) < DIGITS


def test_dead_end_equals_rows_of_images():
    shore = DeadEnd(point=0j, along=1 + 0j, width=20.0)
    at, z = 4 + 7j, 9 + 15j
    layout = Layout(2.0, shore=shore, elements=(Source("s", at, 3.0),))
    g = CONTEXT.mpf(3) / 2 / (2 * CONTEXT.pi)
    rows = _image_rows(exact(z), exact(at), g, CONTEXT.mpf(20), [0])
    rows += _image_rows(exact(z), -CONTEXT.conj(exact(at)), g, CONTEXT.mpf(20), [0])
    # far inside the closed end nothing flows: the two rows cancel there, and no constant is left over
    assert abs(Oracle(layout).velocity(z).value - rows) < DIGITS


def test_basin_equals_rows_of_images():
    length, width = 30.0, 20.0
    shore = Basin(corner=0j, along=1 + 0j, length=length, width=width)
    at, away, z = 4 + 7j, 25 + 3j, 9 + 15j
    layout = Layout(1.0, shore=shore, elements=(Source("s", at, 3.0), Sink("k", away, 3.0)))
    g = CONTEXT.mpf(3) / (2 * CONTEXT.pi)
    shifts = [2 * k * CONTEXT.mpf(length) for k in range(-40, 41)]
    expected = CONTEXT.mpc(0)
    for place_of, sign in ((at, 1), (away, -1)):
        for start in (exact(place_of), -CONTEXT.conj(exact(place_of))):
            expected += _image_rows(exact(z), start, sign * g, CONTEXT.mpf(width), shifts)
    assert abs(Oracle(layout).velocity(z).value - expected) < DIGITS


@pytest.mark.parametrize("z", [1j, 1 + 1j, 2 + 0j, 0.5 - 3j])
def test_line_source_equals_the_logarithm(z):
    layout = Layout(1.0, elements=(LineSource("l", -1 + 0j, 1 + 0j, 2.0),))
    expected = CONTEXT.log((exact(z) + 1) / (exact(z) - 1)) / (2 * CONTEXT.pi)
    assert abs(Oracle(layout).velocity(z).value - expected) < 1e-20  # the quadrature works in 25 digits


@pytest.mark.parametrize("name", ["channel", "dead-end", "corner-reflex", "straight-bank"])
def test_doublet_is_the_limit_of_a_pair(name):
    at, moment, step = place(SHORES[name], 0.4, 0.6), 2 - 1j, 1e-6
    z = place(SHORES[name], 0.7, 0.2)
    doublet = Oracle(Layout(1.0, shore=SHORES[name], elements=(Doublet("d", at, moment),)))
    unit = moment / abs(moment)
    strength = abs(moment) / (2 * step)
    pair = (Source("a", at + step * unit, strength), Sink("b", at - step * unit, strength))
    limit = Oracle(Layout(1.0, shore=SHORES[name], elements=pair)).velocity(z).value
    # the difference is of order step^2, the rounding of the places costs 1e-14 / step
    assert abs(doublet.velocity(z).value - limit) < 1e-7 * abs(limit)


def test_context_is_private():
    assert CONTEXT is not mpmath.mp
    assert CONTEXT.dps == 45

"""One opening between bed and surface: against the modes at 20 digits, and against what must hold."""

import mpmath
import numpy as np
import pytest

from forebay.flow.point_intake.column import REACH, SWITCH, column_excess, mean_ratio

DEPTH = 3.0
PLACES = [
    (0.25, 0.0, 0.0),
    (0.4, 1.0, 0.2),
    (0.999, 0.9, 0.1),
    (1.0, 0.4, 1.0),
    (1.7, 0.25, 0.6),
    (5.0, 1.0, 1.0),
]
"""Distance, height and elevation over the depth, on both sides of the change of method."""


def by_modes(r, z, e):
    """Outward and upward velocity of a unit discharge by its cosine series at 20 digits."""
    with mpmath.workdps(20):
        r, z, e, h = (mpmath.mpf(value) * DEPTH for value in (r, z, e, 1))
        outward, upward, n = 1 / (2 * mpmath.pi * r * h), mpmath.mpf(0), 1
        while n * mpmath.pi * r / h < 37:  # exp(-37) = 1e-16
            wave = n * mpmath.pi / h
            share = mpmath.cos(wave * e) * wave / (mpmath.pi * h)
            outward += share * mpmath.cos(wave * z) * mpmath.besselk(1, wave * r)
            upward += share * mpmath.sin(wave * z) * mpmath.besselk(0, wave * r)
            n += 1
        return float(outward), float(upward)


@pytest.mark.parametrize(("r", "z", "e"), PLACES)
def test_against_the_modes_at_twenty_digits(r, z, e):
    outward, upward = by_modes(r, z, e)
    excess, rise = column_excess(np.array([r * DEPTH]), np.array([z * DEPTH]), e * DEPTH, DEPTH)
    mean = 1.0 / (2.0 * np.pi * r * DEPTH**2)
    # the tails are left off where the next term is 1e-13 of the speed; the excess is told from the mean
    tolerance = 1e-12 * np.hypot(outward, upward) + 4e-16 * mean
    assert excess[0] + mean == pytest.approx(outward, abs=tolerance)
    assert rise[0] == pytest.approx(upward, abs=tolerance)


TABLE = {
    # ratio to the depth mean: opening and probe at mid-depth, probe at the surface, bed and bed, bed and
    # surface; by two hundred thousand images
    0.25: (2.06948, 0.38285, 4.01841, 0.12056),
    0.5: (1.22617, 0.79870, 2.06948, 0.38285),
    1.0: (1.01243, 0.98763, 1.22617, 0.79870),
    1.5: (1.00065, 0.99936, 1.05320, 0.94809),
    2.0: (1.00003, 0.99997, 1.01243, 0.98763),
    3.0: (1.0, 1.0, 1.00065, 0.99936),
}
CASES = [(0.5, 0.5), (0.5, 1.0), (0.0, 0.0), (0.0, 1.0)]


@pytest.mark.parametrize("r", TABLE)
def test_ratio_to_the_depth_mean(r):
    found = [mean_ratio(np.array([r]), np.array([z]), e, 1.0)[0] for e, z in CASES]
    assert found == pytest.approx(TABLE[r], abs=6e-6)  # five decimals are given


def test_methods_meet():
    z = np.linspace(0.0, DEPTH, 9)
    sides = [column_excess(np.full(9, DEPTH * SWITCH * k), z, 0.8, DEPTH) for k in (1 - 1e-12, 1.0)]
    # 1e-12 of the speed 1 / (2 pi h^2) = 0.018
    assert sides[0][0] == pytest.approx(sides[1][0], abs=3e-14)
    assert sides[0][1] == pytest.approx(sides[1][1], abs=3e-14)


@pytest.mark.parametrize("r", [0.05, 0.7, 1.3])
def test_flux_through_a_cylinder_is_the_discharge(r):
    nodes, weights = np.polynomial.legendre.leggauss(60)
    halves = [(0.0, 0.9), (0.9, DEPTH)]  # split at the elevation, where the profile is steep
    total = 0.0
    for low, high in halves:
        z = low + (high - low) * (nodes + 1) / 2
        excess, _ = column_excess(np.full(60, r * DEPTH), z, 0.9, DEPTH)
        total += float((high - low) / 2 * weights @ excess)
    # the mean flow already carries all of it; 60 nodes resolve a peak of width r to 1e-9 of its height
    assert 2 * np.pi * r * DEPTH * total == pytest.approx(0.0, abs=1e-7)


def test_bed_and_surface_let_nothing_through():
    r = DEPTH * np.geomspace(0.01, 8.0, 30)
    for z in (0.0, DEPTH):
        excess, upward = column_excess(r, np.full(30, z), 0.35 * DEPTH, DEPTH)
        speed = np.abs(excess) + 1.0 / (2 * np.pi * r * DEPTH)
        assert np.max(np.abs(upward) / speed) < 1e-12  # the accuracy of the tails


def test_close_to_the_opening_it_is_a_point_in_open_water():
    # 1 / (4 pi R^2) less what the images, none nearer than 2.1 m, can do: some 1 / (4 pi 2.1^2)
    excess, upward = column_excess(np.array([3e-3]), np.array([1.054]), 1.05, DEPTH)
    outward = excess + 1.0 / (2 * np.pi * 3e-3 * DEPTH)
    speed = 1.0 / (4.0 * np.pi * (5e-3) ** 2)
    assert outward[0] == pytest.approx(0.6 * speed, abs=0.05)
    assert upward[0] == pytest.approx(0.8 * speed, abs=0.05)


def test_nothing_is_left_far_away():
    excess, upward = column_excess(np.array([REACH * DEPTH * 1.01]), np.array([1.0]), 1.0, DEPTH)
    assert excess[0] == upward[0] == 0.0

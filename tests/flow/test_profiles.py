"""Functions along a line: zeros, shares, extremes and integrals against closed forms."""

from math import log, pi, tanh

import numpy as np
import pytest

from forebay.flow.profiles import (
    extremes_of,
    graded,
    integral,
    places_of_largest,
    share_not_negative,
    zeros,
)

PLACES = graded(1e-12)

BISECTED = 2e-16
"""Sixty halvings of a gap reach neighbouring doubles in (0, 1)."""


def test_places_reach_both_ends_and_ascend():
    places = graded(1e-9, [(0.3, 0.01)])
    # 1 - 2e-9 through artanh and tanh loses 1e-16 of 1
    assert places[[0, -1]] == pytest.approx([1e-9, 1.0 - 1e-9], abs=1e-15)
    assert (np.diff(places) > 0.0).all()
    assert np.count_nonzero(np.abs(places - 0.3) <= 0.04) > 11


def test_zeros_of_a_cosine():
    assert zeros(lambda p: np.cos(3 * pi * p), PLACES) == pytest.approx([1 / 6, 0.5, 5 / 6], abs=BISECTED)


@pytest.mark.parametrize("level", [-3.0, 0.0, 0.4, 8.0])
def test_share_above_a_level_of_a_logarithm(level):
    # ln(p / (1 - p)) >= c where p >= (1 + tanh(c/2)) / 2
    share = share_not_negative(lambda p: np.log(p / (1.0 - p)) - level, PLACES)
    assert share == pytest.approx(0.5 * (1.0 - tanh(level / 2.0)), abs=2 * BISECTED)


def test_share_sees_what_falls_between_the_places():
    # a dip of width 4e-4 between places 5e-3 apart: only the turning point shows it
    def dip(parts):
        return (parts - 0.4321) ** 2 - 4e-8

    at = graded(1e-3)
    assert np.count_nonzero(dip(at) < 0.0) == 0
    assert share_not_negative(dip, at) == pytest.approx(1.0 - 4e-4, abs=1e-12)  # (p - c)^2 cancels to 1e-20


def test_function_of_one_sign_has_no_zeros():
    assert zeros(lambda p: 1.0 + p, PLACES).size == 0
    assert share_not_negative(lambda p: 1.0 + p, PLACES) == 1.0
    assert share_not_negative(lambda p: -1.0 - p, PLACES) == 0.0


def test_extremes_lie_between_the_places():
    # sin(7 p) on (0, 1): turning points at pi/14, 3 pi/14
    low, high = extremes_of(lambda p: np.sin(7.0 * p), PLACES)
    assert (low, high) == pytest.approx((-1.0, 1.0), abs=1e-15)
    (at,) = places_of_largest(lambda p: np.sin(7.0 * p), PLACES)
    assert at == pytest.approx(pi / 14, abs=1e-6)  # flat: the square root of rounding


def test_largest_everywhere_gives_both_ends():
    assert places_of_largest(np.ones_like, PLACES) == pytest.approx([1e-12, 1.0], abs=2e-12)


def test_integral_of_a_logarithm_to_its_end():
    found = integral(np.log, 0.0, 1.0)
    assert found.value == pytest.approx(-1.0, abs=1e-11)  # halved towards 0 until the rest is 1e-12
    assert found.error < 1e-10
    assert found.converged


def test_integral_of_a_near_pole():
    found = integral(lambda p: 1.0 / (p + 1e-3), 0.0, 1.0)
    assert found.value == pytest.approx(log(1001.0), rel=1e-12)
    assert abs(found.value - log(1001.0)) <= found.error + 1e-14

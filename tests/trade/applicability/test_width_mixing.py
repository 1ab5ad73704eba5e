"""Mixing over the width of a channel: published lengths, and the series against images."""

import numpy as np
import pytest

from forebay.flow.arrivals.release import AlongLine, AtPoint, FromOutfall, OverDisc, OverPolygon, Release
from forebay.flow.layout import Channel, Layout, LineSource, Source
from forebay.trade.applicability.width_mixing import (
    EVEN,
    middle_of,
    mixing_length,
    mixing_share,
    unevenness,
)

CHANNEL = Channel(100 + 5j, 1 + 0j, 50.0)
LAYOUT = Layout(
    2.0, shore=CHANNEL, elements=(Source("pipe", 3 + 5j, 1.0), LineSource("bar", 0 + 20j, 0 + 40j, 1.0))
)


# U = 0.5 m/s, W = 50 m, h = 2 m, u* = 0.035 m/s, so that eps = 0.6 h u* = 0.042 m2/s: printed to a metre
@pytest.mark.parametrize(("at", "length"), [(30j, 2976.0), (5j, 11905.0), (55j, 11905.0)])
def test_published_lengths_from_the_middle_and_from_either_bank(at, length):
    found = mixing_length(Release("r", AtPoint(at)), LAYOUT, CHANNEL, 0.6 * 2.0 * 0.035, 0.5)
    assert found == pytest.approx(length, abs=0.5)


def test_the_width_counts_twice_from_a_bank():
    # a bank is the middle of a channel twice as wide: exactly four times the length
    assert mixing_share(0.0) / mixing_share(0.5) == pytest.approx(4.0, rel=1e-9)  # xtol of the root, 1e-12


def test_length_grows_from_the_middle_to_the_bank():
    shares = [mixing_share(across) for across in np.linspace(0.5, 0.0, 26)]
    assert np.all(np.diff(shares) > 0.0)
    assert mixing_share(0.3) == pytest.approx(mixing_share(0.7), rel=1e-9)


def by_images(distance, across):
    """Concentration over its mean over the width: Gaussians of every image, sigma^2 = 2 x, second route."""
    y = np.linspace(0.0, 1.0, 2001)
    images = [2.0 * k + sign * across for k in range(-6, 7) for sign in (1, -1)]
    parts = [np.exp(-((y - at) ** 2) / (4.0 * distance)) for at in images]
    return np.sum(parts, axis=0) / np.sqrt(4.0 * np.pi * distance)


@pytest.mark.parametrize("across", [0.0, 0.1, 0.25, 0.4, 0.5])
@pytest.mark.parametrize("distance", [0.09, 0.2, 0.38])
def test_series_is_the_sum_of_images(across, distance):
    # images beyond 11 widths are left out, exp(-121 / 1.52) = 1e-35
    largest = np.max(np.abs(by_images(distance, across) - 1.0))
    assert unevenness(distance, across) == pytest.approx(largest, rel=1e-6)  # places are 5e-4 apart


def test_a_mixed_discharge_is_even_to_a_twentieth():
    # from a bank: 2 exp(-pi^2 x) = 0.05 at x = 0.374, published rounded to 0.4
    x = np.log(40.0) / np.pi**2
    assert unevenness(x, 0.0) == pytest.approx(EVEN, rel=1e-4)  # the second mode adds 1.6e-5
    assert round(x, 1) == pytest.approx(mixing_share(0.0), rel=1e-9)


@pytest.mark.parametrize(
    ("place", "middle"),
    [
        (AtPoint(1 + 2j), 1 + 2j),
        (OverDisc(3 + 4j, 2.0), 3 + 4j),
        (AlongLine((0j, 10 + 4j)), 5 + 2j),
        (OverPolygon((0j, 4 + 0j, 4 + 4j, 4j)), 2 + 2j),
        (FromOutfall("pipe"), 3 + 5j),
        (FromOutfall("bar"), 30j),
    ],
    ids=lambda value: type(value).__name__,
)
def test_middle_of_a_release(place, middle):
    assert middle_of(Release("r", place), LAYOUT) == pytest.approx(middle)

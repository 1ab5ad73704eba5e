"""Colours: told apart in grey."""

import itertools

import pytest

from forebay.charts.palette import (
    EQUIPOTENTIAL,
    FASTER,
    INK,
    LAND,
    PAPER,
    RAMP,
    WALL,
    lightness,
    ramp_colours,
)


def contrast(one: str, other: str) -> float:
    """Contrast ratio of WCAG 2.1: (lighter + 0.05) / (darker + 0.05)."""
    lighter, darker = sorted((lightness(one), lightness(other)), reverse=True)
    return (lighter + 0.05) / (darker + 0.05)


@pytest.mark.parametrize(("colour", "value"), [("#000000", 0.0), ("#ffffff", 1.0), ("#808080", 0.2158605)])
def test_lightness_of_known_colours(colour, value):
    # mid grey: ((128/255 + 0.055)/1.055)^2.4 by hand
    assert lightness(colour) == pytest.approx(value, abs=1e-7)


@pytest.mark.parametrize("count", range(1, 9))
def test_ramp_darkens_in_every_band(count):
    values = [lightness(colour) for colour in [*ramp_colours(count), FASTER]]
    assert all(slow > fast for slow, fast in itertools.pairwise(values))


def test_neighbouring_bands_differ_in_grey():
    factors = [contrast(one, other) for one, other in itertools.pairwise([*RAMP, FASTER])]
    # eight equal steps of 1.19 span a contrast of 4; colours are rounded to 1/255
    assert min(factors) > 1.17
    assert max(factors) < 1.21


@pytest.mark.parametrize("line", [INK, EQUIPOTENTIAL])
@pytest.mark.parametrize("band", [*RAMP, FASTER])
def test_lines_are_seen_on_every_band(line, band):
    # 3 is what WCAG 2.1 asks of graphical objects
    assert contrast(line, band) >= 3.0


def test_text_and_walls_are_readable():
    # 4.5 is what WCAG 2.1 asks of text, 3 of graphical objects
    assert contrast(INK, PAPER) > 4.5
    assert contrast(WALL, LAND) > 4.5

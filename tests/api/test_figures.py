"""Figures: numbers and units as an engineer reads them."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forebay.api.figures import counted, duration, figure, percent, quantity, share_with_error, unit_name
from forebay.api.units import SHARED_UNITS, US_UNITS

LOWERED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻−", "0123456789--")


def read(text):
    """Number that a figure says."""
    mantissa, _, power = text.partition("·10")
    return float(mantissa.translate(LOWERED)) * 10.0 ** int(power.translate(LOWERED) or 0)


@given(st.floats(allow_nan=False, allow_infinity=False, min_value=-1e300, max_value=1e300))
def test_a_figure_says_its_number_to_four_digits(value):
    # half a unit of the fourth digit is 5e-4 of the number at most; the power of ten rounds a little more
    assert read(figure(value)) == pytest.approx(value, rel=5.01e-4, abs=1e-300)


@pytest.mark.parametrize(
    ("value", "text"),
    [(None, "–"), (float("nan"), "–"), (-0.0, "0"), (9999.9, "10000"), (1e-7, "1·10⁻⁷"), (-0.07, "−0.07")],
)
def test_figures_are_readable(value, text):
    assert figure(value) == text


@pytest.mark.parametrize(
    ("code", "name"),
    [
        ("m3/s", "m³/s"),
        ("[ft_i]3/s", "ft³/s"),
        ("1/s2", "1/s²"),
        ("Pa.s", "Pa·s"),
        ("[lbf_av].s/[ft_i]2", "lbf·s/ft²"),
        ("Cel", "°C"),
        ("{crs}", "of the crs"),
        ("1", ""),
    ],
)
def test_units_are_printed_as_they_are_read(code, name):
    assert unit_name(code) == name


@pytest.mark.parametrize(
    "code", sorted({*US_UNITS, *SHARED_UNITS, *(unit.code for unit in US_UNITS.values())})
)
def test_no_printed_unit_shows_its_code(code):
    assert not set(unit_name(code)) & set("[]_{}")


def test_quantities_and_shares():
    assert quantity(4.0, "m") == "4 m"
    assert quantity(0.5, "1") == "0.5"
    assert percent(0.36210) == "36.21"
    assert percent(None) == "–"
    assert share_with_error(0.0752, 1e-7) == "7.52 ± 1·10⁻⁵"
    assert share_with_error(0.0752, None) == "7.52"


@pytest.mark.parametrize(
    ("seconds", "text"),
    [(None, "–"), (42.0, "42 s"), (299.0, "299 s"), (300.0, "5 min"), (10800.0, "3 h"), (259200.0, "3 d")],
)
def test_durations_choose_their_unit(seconds, text):
    assert duration(seconds) == text


def test_counts():
    assert [counted(1, "sink"), counted(2, "sink"), counted(2, "foot", "feet")] == [
        "1 sink",
        "2 sinks",
        "2 feet",
    ]

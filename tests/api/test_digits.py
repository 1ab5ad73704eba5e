"""Significant digits: nine by default, 4 to 17 on request, every digit with 17."""

import math

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from forebay.api.numbers import round_array, round_number
from support.http import SAMPLE, a_sample, assert_problem

round_array(np.array([1.5]), 9)  # compiled before hypothesis looks at the time


@example([6.2277373177940056e16], 15)  # a hundredth of it rounds to a tie, which it is not
@given(st.lists(st.floats(), min_size=1, max_size=70), st.integers(4, 15))
def test_arrays_round_as_well_as_text_does(values, digits):
    for value, got in zip(values, round_array(np.array(values), digits).tolist(), strict=True):
        want = round_number(value, digits)
        if want is None:
            assert math.isnan(got)
            continue
        assert round_number(got, digits) == got
        # a tie may go either way; 1e-9 of the distance is for the rounding of the difference itself
        assert abs(got - value) <= abs(want - value) * (1 + 1e-9)


@given(st.floats(allow_nan=False, allow_infinity=False), st.integers(4, 16))
def test_numbers_round_as_text_does(value, digits):
    text = float(f"{value:.{digits}g}")
    assert round_number(value, digits) == (text if math.isfinite(text) else value)


@example([999.9999999999999, 9.999999999999999e22, 1e-5, 123456789012345680.0], 16)  # next to powers of ten
@given(st.lists(st.floats(), min_size=1, max_size=50), st.integers(16, 17))
def test_arrays_of_nearly_all_digits_round_as_numbers_do(values, digits):
    rounded = round_array(np.array(values), digits).tolist()
    expected = [math.nan if (number := round_number(value, digits)) is None else number for value in values]
    np.testing.assert_array_equal(rounded, expected)


def test_arrays_print_short():
    values = np.random.default_rng(2).normal(size=10_000) * 10.0 ** np.arange(-5, 5).repeat(1000)
    assert all(len(repr(abs(value)).replace(".", "").strip("0")) <= 9 or "e" in repr(value)
               for value in round_array(values, 9).tolist())  # fmt: skip


def test_rounding_leaves_the_argument_alone():
    values = np.array([1.23456789, np.inf])
    round_array(values, 4)
    assert values.tolist() == [1.23456789, math.inf]


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_what_is_not_finite_is_null(value):
    assert round_number(value, 9) is None
    assert np.isnan(round_array(np.array([value]), 9)[0])


@pytest.mark.parametrize("digits", [4, 9, 15])
def test_answers_have_the_digits_asked_for(ready_client, digits):
    exact = ready_client.post(SAMPLE, json=a_sample(digits=17)).json()["result"]["u"]
    rounded = ready_client.post(SAMPLE, json=a_sample(digits=digits)).json()["result"]["u"]
    assert rounded == [float(f"{value:.{digits}g}") for value in exact]
    assert rounded != exact


def test_nine_is_the_default(ready_client):
    assert (
        ready_client.post(SAMPLE, json=a_sample()).json()["result"]
        == ready_client.post(SAMPLE, json=a_sample(digits=9)).json()["result"]
    )


@pytest.mark.parametrize("digits", [3, 18, 4.5, "9", True, None])
def test_other_digits_are_refused(client, digits):
    assert_problem(client.post(SAMPLE, json=a_sample(digits=digits)), 422, "invalid-request")

"""Courses of arrivals: what a duration does to them, and ramps against sums over single parcels."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.arrivals.spread import Course, Ramps, course_of

STEP = Course(np.array([3.0, 3.0]), np.array([0.0, 0.25]))
RAMP = Course(np.array([1.0, 2.0, 5.0]), np.array([0.0, 0.6, 0.9]))


def test_a_step_is_there_at_once():
    assert_allclose(STEP.at(np.array([2.999, 3.0, 9.0])), [0.0, 0.25, 0.25])
    assert_allclose(STEP.when(np.array([0.0, 0.1, 0.25])), 3.0)


def test_a_duration_turns_a_step_into_a_ramp():
    lasting = STEP.lasting(4.0)
    assert_allclose(
        lasting.at(np.array([3.0, 4.0, 5.0, 7.0, 8.0])), [0.0, 0.0625, 0.125, 0.25, 0.25], atol=1e-15
    )
    assert lasting.total == 0.25


def test_a_duration_averages_the_course_over_it():
    # G(t) = mean of F over the last D: against a sum over 20,000 parcels let go one after the other
    duration, t = 2.5, np.linspace(0.5, 8.0, 31)
    begin = (np.arange(20000) + 0.5) / 20000 * duration
    summed = np.array([RAMP.at(time - begin).mean() for time in t])
    # linear between the points of the course and their middles: (0.5 s)^2 / 8 times its bend, 0.24 / s2
    assert_allclose(RAMP.lasting(duration).at(t), summed, atol=8e-3)
    assert RAMP.lasting(duration).when(np.array([0.9]))[0] == pytest.approx(7.5)


def test_when_and_at_are_inverse():
    levels = np.linspace(0.0, 0.9, 19)
    assert_allclose(RAMP.at(RAMP.when(levels)), levels, atol=1e-15)


def test_when_waits_through_a_pause_no_longer_than_it_must():
    pause = Course(np.array([0.0, 1.0, 4.0, 5.0]), np.array([0.0, 0.5, 0.5, 1.0]))
    assert pause.when(np.array([0.5]))[0] == 1.0
    assert pause.when(np.array([0.5 + 1e-9]))[0] == pytest.approx(4.0)


@pytest.mark.parametrize("by_area", [False, True])
def test_ramps_against_single_parcels(by_area):
    rng = np.random.default_rng(3)
    low = rng.uniform(1.0, 5.0, 40)
    ramps = Ramps(low, low + rng.uniform(0.0, 2.0, 40), rng.uniform(0.1, 1.0, 40))
    parts = (np.arange(4000) + 0.5) / 4000
    tau = ramps.low[:, None] + parts * (ramps.high - ramps.low)[:, None]
    t = np.linspace(0.5, 8.0, 16)
    kernel = (lambda s: np.minimum(tau, s)) if by_area else (lambda s: tau <= s)
    summed = np.array([ramps.weight @ kernel(s).mean(axis=1) for s in t])
    # 4000 parcels a ramp: a half in 4000 of the weight of each
    assert_allclose(ramps.amounts(t, by_area=by_area, first=0.0 if by_area else None), summed, atol=5e-3)


def test_course_of_ramps_ends_at_their_weight_and_rises():
    rng = np.random.default_rng(4)
    low = rng.uniform(1.0, 5.0, 40)
    course, moved = course_of(Ramps(low, low + 0.1, np.full(40, 0.5)), by_area=False)
    assert course.total == pytest.approx(20.0, abs=1e-12)
    assert moved < 1e-12
    assert np.all(np.diff(course.amount) >= 0.0)
    assert course.time[0] == low.min()

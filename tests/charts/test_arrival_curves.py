"""Arrival curves: each is on the plot and in the key, from start to end, and told apart without colour."""

import numpy as np
import pytest

from forebay.charts.arrival_curves import (
    DASHES,
    MOST_CURVES,
    WIDTHS,
    Course,
    clock_for,
    draw_arrivals,
    drawn_line,
    last_shown,
    look,
    plot_notes,
)
from forebay.charts.options import FlowNetOptions, MediaType
from forebay.charts.sheet import blank_sheet

RISING = Course("tank at town", np.array([600.0, 900.0, 5000.0]), np.array([0.0, 0.4, 0.5]), 1000.0)
AT_ONCE = Course("pipe at town", np.array([300.0, 300.0]), np.array([0.0, 1.0]), 300.0)


@pytest.fixture(scope="module")
def drawing():
    first, second = (draw_arrivals((RISING, AT_ONCE), FlowNetOptions(title="Reach")).data for _ in range(2))
    assert first == second
    return first.decode()


@pytest.mark.parametrize("name", ["curve-1", "curve-2", "key-curve-1", "key-curve-2", "title", "caution"])
def test_every_curve_is_on_the_plot_and_in_the_key(drawing, name):
    assert f'id="{name}"' in drawing


def test_picture_may_be_a_png():
    picture = draw_arrivals((RISING,), FlowNetOptions(media_type=MediaType.PNG, size=(640, 520)))
    assert picture.data.startswith(b"\x89PNG")


@pytest.mark.parametrize("course", [RISING, AT_ONCE])
def test_curve_runs_from_the_start_to_the_end(course):
    end = last_shown((RISING, AT_ONCE))
    time, share = drawn_line(course, end)
    assert (time[0], share[0]) == (0.0, 0.0)
    assert np.all(np.diff(time) >= 0.0)
    assert np.all(np.diff(share) >= 0.0)
    assert time[-1] >= end
    assert share[-1] == course.share[-1]
    # nothing between the points of the curve is moved
    inner = 0.5 * (course.time[1:] + course.time[:-1])
    inner = inner[(inner > course.time[0]) & (inner < course.time[-1])]
    assert np.interp(inner, time, share) == pytest.approx(np.interp(inner, course.time, course.share))


def test_picture_ends_a_little_after_nearly_all():
    assert 1000.0 < last_shown((RISING, AT_ONCE)) < 1200.0


@pytest.mark.parametrize(
    ("end", "size", "name"),
    [(240.0, 1, "s"), (241.0, 60, "min"), (14_401.0, 3600, "h"), (4e5, 86_400, "d"), (1e9, 86_400, "d")],
)
def test_time_has_a_unit_that_suits(end, size, name):
    assert clock_for(end) == (size, name)


def test_curves_differ_without_colour():
    with blank_sheet(640, 520, 0.75) as sheet:
        looks = [look(sheet, index) for index in range(MOST_CURVES)]
    assert len({(str(one["linestyle"]), one["linewidth"]) for one in looks}) == MOST_CURVES
    assert {one["color"] for one in looks} == {looks[0]["color"]}
    assert len(DASHES) * len(WIDTHS) == MOST_CURVES


def test_what_is_not_shown_is_said():
    assert "more comes later" in " ".join(plot_notes((RISING,), last_shown((RISING,))))
    assert "more comes later" not in " ".join(plot_notes((AT_ONCE,), last_shown((AT_ONCE,))))
    notes = " ".join(plot_notes((RISING,) * (MOST_CURVES + 2), 1e4))
    assert "left out: 2" in notes
    assert "no dilution" in notes
    many = draw_arrivals((RISING,) * (MOST_CURVES + 2), FlowNetOptions()).data.decode()
    assert f'id="curve-{MOST_CURVES}"' in many
    assert f'id="curve-{MOST_CURVES + 1}"' not in many

"""Travel time and the integral of G along a streamline, against closed forms on the axis of an intake."""

from math import log

import numpy as np
import pytest

from forebay.flow.layout import Ambient, Layout, Pier, Sink, StraightBank
from forebay.flow.model import compile_layout
from forebay.flow.passage import PassageStatus, follow_passage

SPEED, DISCHARGE = 0.5, 2.0
MODEL = compile_layout(Layout(2.0, ambient=Ambient(SPEED + 0j), elements=(Sink("intake", 0j, DISCHARGE),)))
B = DISCHARGE / 2.0 / (2 * np.pi * SPEED)


def test_on_the_axis_of_an_intake():
    # u = U (1 + b/r), G = 2 b U / r^2: time (L - l)/U - b/U ln((L+b)/(l+b)), dose 2 ln[(l+b) L / (l (L+b))]
    far, near = 10.0, 0.5
    found = follow_passage(MODEL, -far + 0j, -near + 0j, 0.01)
    assert found.status is PassageStatus.ARRIVES
    assert found.time == pytest.approx((far - near - B * log((far + B) / (near + B))) / SPEED, rel=1e-5)
    dose = 2 * log((near + B) * far / (near * (far + B)))
    # steps of 0.45 of the distance: 6 nodes leave 1e-6 of the weighting by 1/|W|
    assert found.dose == pytest.approx(dose, rel=1e-5)
    assert abs(found.dose - dose) < found.dose_error
    assert found.mean_gradient == pytest.approx(found.dose / found.time, rel=1e-12)
    assert found.largest_gradient == pytest.approx(2 * B * SPEED / near**2, rel=1e-3)


def test_uniform_current_has_no_gradient():
    model = compile_layout(Layout(2.0, ambient=Ambient(SPEED + 0j), shore=StraightBank(0j, 1 + 0j)))
    found = follow_passage(model, 1 + 2j, 6 + 2j, 1e-6)
    assert (found.dose, found.largest_gradient) == (0.0, 0.0)
    assert found.time == pytest.approx(10.0, rel=1e-9)


def test_water_that_passes_elsewhere_misses():
    found = follow_passage(MODEL, -10 + 8j, -1 + 0j, 0.1)
    assert found.status is PassageStatus.MISSES
    assert found.miss > 1.0
    assert np.isnan(found.dose)


def test_still_water_gets_nowhere():
    found = follow_passage(compile_layout(Layout(2.0)), 0j, 3 + 4j, 10.0)
    assert (found.status, found.miss) == (PassageStatus.MISSES, 5.0)
    assert np.isnan(found.time)


def test_water_does_not_flow_back():
    found = follow_passage(MODEL, 5 + 6j, -5 + 6j, 0.1)
    assert found.status is PassageStatus.MISSES
    assert found.miss == pytest.approx(10.0, rel=0.02)  # the nearest point is where it started


@pytest.mark.parametrize(
    ("start", "status"), [(0j, PassageStatus.ON_SINGULARITY), (20 + 0.2j, PassageStatus.ON_LAND)]
)
def test_places_without_a_streamline(start, status):
    layout = Layout(2.0, elements=(Sink("intake", 0j, 1.0),), structures=(Pier("P", 20 + 0j, 1.0),))
    assert follow_passage(compile_layout(layout), start, 5 + 5j, 1.0).status is status

"""Line sinks and line sources: screens, diffusers, and currents that cross them."""

from collections import Counter

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenWater,
    Shore,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.surroundings import survey
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.faces import turning_places
from forebay.flow.withdrawal.mouths import mouth_of
from forebay.flow.withdrawal.result import IntakeWithdrawal, WithdrawalStatus
from forebay.flow.withdrawal.sectors import Source as Tracer

BANK = StraightBank(0j, 1 + 0j)


def site(*elements: Element, velocity: complex = 0j, shore: Shore | None = None) -> Layout:
    return Layout(depth=1.0, ambient=Ambient(velocity), shore=shore or OpenWater(), elements=elements)


def withdrawals(layout: Layout) -> tuple[IntakeWithdrawal, ...]:
    model = compile_layout(layout)
    names = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    return withdraw(model, search_model(model), names)


def shares_of(withdrawal: IntakeWithdrawal) -> dict[str, float]:
    return {share.origin: share.share for share in withdrawal.shares}


def counted(layout: Layout, name: str, count: int) -> dict[str, float]:
    """Parts by origin, averaged over `count` streamlines of equal flux into an intake."""
    model = compile_layout(layout)
    nodes = np.array([point.at for point in search_model(model).points], dtype=np.complex128)
    surroundings = survey(model, nodes)
    mouth = mouth_of(model, name, surroundings)
    tracer = Tracer(model, surroundings, 1e-5)
    traces = tracer.trace(mouth, (np.arange(count) + 0.5) / count * mouth.total)
    parts: Counter[str] = Counter()
    for i in range(count):
        for (origin, _), part in tracer.parts(traces, i).items():
            parts[origin] += part / count  # type: ignore[assignment]
    return dict(parts)


# --- screens ---


def test_flush_slot_in_a_bank():
    """Uniform inflow V0 over s in a current U: width V0 s / U (here 0.15 x 4 / 0.5)."""
    (answer,) = withdrawals(site(LineSink("screen", -2 + 0j, 2 + 0j, 0.6), velocity=0.5, shore=BANK))
    assert answer.status is WithdrawalStatus.OK
    assert_allclose(answer.width_far_upstream, 1.2, rtol=1e-13)
    assert shares_of(answer) == {"ambient": 1.0}
    # the zone's edge arrives at the stagnation point x_s = (s/2) coth(pi U / 2 V0)
    ends = [line[-1] for line in answer.dividing_streamlines if line[0].real < -5.0]
    assert min(abs(end - 2.0 / np.tanh(np.pi * 0.5 / 0.3)) for end in ends) < 1e-9


@pytest.mark.parametrize("turn", [0.0, 0.4, np.pi / 2, 2.5])
def test_screen_in_the_water_in_a_weak_current(turn):
    half = 2.0 * np.exp(1j * turn)
    (answer,) = withdrawals(site(LineSink("screen", complex(-half), complex(half), 0.6), velocity=0.02))
    assert answer.status is WithdrawalStatus.OK
    assert_allclose(answer.arriving, 0.6, rtol=1e-12)  # closed contour about the line
    assert_allclose(answer.width_far_upstream, 30.0, rtol=1e-12)


def test_screen_crossed_by_the_current():
    (answer,) = withdrawals(site(LineSink("screen", -2j, 2j, 0.6), velocity=0.5))
    assert answer.status is WithdrawalStatus.PASSED_THROUGH
    # (U + sigma/2) l; the ends of the line are left out, 1e-8 of it
    assert_allclose(answer.arriving, 2.3, rtol=1e-8)
    assert_allclose(answer.width_far_upstream, 4.6, rtol=1e-8)
    assert shares_of(answer) == {"ambient": 1.0}
    assert 1e-9 < answer.share_error < 1e-7


def test_screen_crossed_by_the_water_of_an_outfall():
    """An outfall upstream fills part of the strip that meets the screen."""
    layout = site(LineSink("screen", -2j, 2j, 0.4), Source("o", -30 + 0j, 0.6), velocity=0.5)
    (answer,) = withdrawals(layout)
    assert answer.status is WithdrawalStatus.PASSED_THROUGH
    # all of the plume, 0.6 / 0.5 = 1.2 m wide, lies within the screen
    assert_allclose(answer.recirculation_share * answer.arriving, 0.6, rtol=1e-7)


def test_short_screen_is_a_point():
    discharge = np.pi
    layout = site(
        LineSink("screen", -0.5 - 5e-4j, -0.5 + 5e-4j, discharge),
        Source("o", 0.5 + 0j, discharge),
        velocity=1.0,
    )
    (answer,) = withdrawals(layout)
    # beta = 2: F = 1/2 - 1/pi; a line of length l differs by order l2
    assert_allclose(answer.recirculation_share, 0.5 - 1.0 / np.pi, atol=1e-6)


@pytest.mark.parametrize(
    "shore", [OpenWater(), BANK, Channel(-10j, 1 + 0j, 60.0)], ids=["open", "bank", "channel"]
)
def test_screen_beside_outfalls_equals_a_count(shore):
    layout = site(
        LineSink("screen", 3 + 4j, 9 + 7j, 2.0),
        Source("o1", 12 + 3j, 1.0),
        Source("o2", -6 + 9j, 0.7),
        velocity=0.02,
        shore=shore,
    )
    (answer,) = withdrawals(layout)
    assert answer.status is WithdrawalStatus.OK
    numbers = counted(layout, "screen", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        # every edge of a sector is off by at most half a streamline
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300


# --- diffusers ---


def test_diffuser_crossed_by_the_captured_strip():
    """Outfall water in the strip is sigma times the part of the line between the dividing streamlines."""
    layout = site(Sink("s", 0j, 1.0), LineSource("d", -8 - 2j, -8 + 2j, 0.6), velocity=0.5)
    (answer,) = withdrawals(layout)
    assert answer.status is WithdrawalStatus.OK
    lines = [line for line in answer.dividing_streamlines if line[0].real < -9.0]
    # the traced lines have a point just off the diffuser, a thousand-millionth of its length away
    crossings = [line.imag[np.argmin(np.abs(line.real + 8.0))] for line in lines]
    inner = sorted(crossings, key=abs)[:2]
    assert_allclose(answer.recirculation_share, 0.15 * np.ptp(inner) / 1.0, rtol=1e-7)


@pytest.mark.parametrize("velocity", [0.05, 0.1])
def test_diffuser_wholly_captured(velocity):
    layout = site(Sink("s", 0j, 3.0), LineSource("d", -8 - 2j, -8 + 2j, 0.6), velocity=velocity)
    (answer,) = withdrawals(layout)
    assert_allclose(answer.recirculation_share, 0.2, atol=1e-9)  # quadrature and the ends of the line


@pytest.mark.parametrize("discharge", [0.06, 0.6])
def test_flush_diffuser(discharge):
    """Upstream on the bank of a flush screen that takes more: all of it is drawn in."""
    layout = site(
        LineSink("s", 0j, 2 + 0j, 1.0), LineSource("d", -8 + 0j, -6 + 0j, discharge), velocity=0.2, shore=BANK
    )
    (answer,) = withdrawals(layout)
    assert_allclose(answer.recirculation_share, discharge, atol=1e-9)


@pytest.mark.parametrize(
    "ends", [(-8 - 0.2j, -7 + 4j), (-8 - 3j, -5 + 2j), (-3 + 0.4j, -2.5 + 0.9j), (2 - 1j, 3 + 2j)]
)
@pytest.mark.parametrize("velocity", [0.5, 0.1])
def test_oblique_diffuser_equals_a_count(ends, velocity):
    layout = site(Sink("s", 0j, 1.0), LineSource("d", ends[0], ends[1], 0.6), velocity=velocity)
    (answer,) = withdrawals(layout)
    numbers = counted(layout, "s", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300
    assert answer.share_error < 1e-6
    assert shares_of(answer).get("d", 0.0) <= 0.6 + answer.share_error


@pytest.mark.parametrize("ends", [(-8 - 2j, -8 + 14j), (-4 - 3j, -6 + 12j), (3 - 2j, 4 + 14j)])
@pytest.mark.parametrize("velocity", [0.02, 0.03 + 0.01j])
def test_diffuser_crossed_in_part_equals_a_count(ends, velocity):
    """Where the current exceeds sigma/2 it crosses, elsewhere both sides give water."""
    layout = site(Sink("s", 0j, 3.0), LineSource("d", ends[0], ends[1], 1.5), velocity=velocity)
    model = compile_layout(layout)
    faces = survey(model, np.empty(0, dtype=np.complex128)).lines
    (answer,) = withdrawals(layout)
    assert sum(turning_places(model, faces, 0, side).size for side in (1.0, -1.0)) >= 1
    numbers = counted(layout, "s", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300
    assert answer.share_error < 1e-6


def test_screen_crossed_in_part():
    layout = site(LineSink("screen", -8 - 2j, -8 + 14j, 1.5), Source("o", 0j, 3.0), velocity=-0.02)
    (answer,) = withdrawals(layout)
    assert answer.status is WithdrawalStatus.PASSED_THROUGH
    assert 1.5 < answer.arriving < 3.0
    numbers = counted(layout, "screen", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300


def test_two_intakes_share_a_diffuser():
    layout = site(
        Sink("n", 1j, 0.8), Sink("s", -1j, 0.5), LineSource("d", -8 - 2j, -8 + 2.5j, 0.9), velocity=0.3
    )
    answers = withdrawals(layout)
    assert 0.1 < sum(a.recirculation_share * a.discharge for a in answers) <= 0.9


# --- rotational fields ---


@pytest.mark.parametrize("core", list(CoreModel))
def test_water_that_turns_through_a_core_equals_a_count(core):
    layout = site(
        Sink("s", 0j, 1.0),
        Source("o", 3 + 0.5j, 1.0),
        Vortex("v", 1.5 + 1.2j, 0.8, Core(core, 0.5)),
        velocity=0.2,
    )
    (answer,) = withdrawals(layout)
    numbers = counted(layout, "s", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300


def test_shear_equals_a_count():
    layout = Layout(
        depth=1.0,
        ambient=Ambient(0.2 + 0j, ((0.0, 0.01), (0.0, 0.0))),
        shore=BANK,
        elements=(Sink("s", 2j, 1.0), Source("o", -4 + 1j, 0.4)),
    )
    (answer,) = withdrawals(layout)
    numbers = counted(layout, "s", 300)
    for origin in numbers.keys() | shares_of(answer).keys():
        assert abs(shares_of(answer).get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / 300

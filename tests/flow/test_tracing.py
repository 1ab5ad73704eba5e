"""Streamlines: travel times with closed forms, the hold on psi, walls, lines, and a name for every end."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Doublet,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Shore,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.surroundings import Surroundings, survey
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines

NOWHERE = np.empty(0, dtype=np.complex128)
FINE = 1e-9
FINE_RULES = TraceRules(tolerance=FINE)


def followed(model: FlowModel, seeds, rules: TraceRules = FINE_RULES, stagnation=NOWHERE) -> Traces:
    surroundings: Surroundings = survey(model, np.asarray(stagnation, dtype=np.complex128))
    seeds = np.atleast_1d(np.asarray(seeds, dtype=np.complex128))
    return trace_streamlines(model, seeds, surroundings=surroundings, rules=rules)


def flow_of(*elements, velocity: complex = 0j, **parts) -> FlowModel:
    return compile_layout(Layout(depth=1.0, ambient=Ambient(velocity), elements=elements, **parts))


# --- travel times ---


def axis_time(x: float, *, b: float, speed: float) -> float:
    """Time to a sink at 0 in a current along +x, t = -x/U - (b/U) ln(1 - x/b), b = q/(2 pi U)."""
    return float(-x / speed - b / speed * np.log(1.0 - x / b))


@pytest.mark.parametrize("x", [-1.0, -5.0, -10.0, -50.0, 0.25 / np.pi, 0.5 / np.pi, 0.9 / np.pi])
def test_time_to_a_sink_along_the_axis(x):
    # U = 0.5, q = 1: b = 1/pi
    trace = followed(flow_of(Sink("s", 0j, 1.0), velocity=0.5), x)
    assert trace.names == ("s",)
    # tolerance of the steps times their number and the slowness near the stagnation point
    assert_allclose(trace.times, axis_time(x, b=1 / np.pi, speed=0.5), rtol=1e-7)


def test_time_to_a_sink_off_the_axis():
    """Bear and Jacobs 1965: t U/b = -X + ln(sin theta / sin(theta - Y)), captured where theta > Y > 0."""
    b, speed = 1 / np.pi, 0.5
    z = np.array([-3 + 0.5j, -10 + 0.9j, -1 + 0.01j, 0.05 + 0.1j])
    theta, X, Y = np.angle(z), z.real / b, z.imag / b
    trace = followed(flow_of(Sink("s", 0j, 1.0), velocity=speed), z)
    assert set(trace.names) == {"s"}
    expected = b / speed * (-X + np.log(np.sin(theta) / np.sin(theta - Y)))
    assert_allclose(trace.times, expected, rtol=1e-8)  # ten times the tolerance of a step


def test_coarse_tolerance_is_what_it_says():
    model = flow_of(Sink("s", 0j, 1.0), velocity=0.5)
    times = [followed(model, -5 + 0.3j, TraceRules(tolerance=t)).times[0] for t in (1e-4, 1e-6, 1e-11)]
    assert abs(times[0] - times[2]) < 1e-3 * times[2]  # some ten steps of 1e-4
    assert abs(times[1] - times[2]) < 1e-5 * times[2]


@pytest.mark.parametrize("beta", [1.05, 1.5, 2.0, 3.0, 10.0, 100.0])
def test_first_arrival_from_an_outfall_downstream(beta):
    """t = (L/U) [beta / sqrt(beta - 1) atan(1 / sqrt(beta - 1)) - 1], intake upstream of an equal outfall."""
    discharge = beta * np.pi / 2  # L = 1, U = 1: beta = 2 q / (pi U L)
    model = flow_of(Sink("s", 0j, discharge), Source("o", 1 + 0j, discharge), velocity=1.0)
    radius = 1e-5
    trace = followed(model, 1 - radius)
    root = np.sqrt(beta - 1)
    start = np.pi * radius**2 / discharge
    assert_allclose(trace.times + start, beta / root * np.arctan(1 / root) - 1, rtol=1e-7)


@pytest.mark.parametrize(
    ("part", "factor"), [(0.1, 0.346808), (0.25, 0.429204), (0.5, 1.0), (0.75, 6.712389)]
)
def test_breakthrough_without_a_current(part, factor):
    """Water leaving within an angle pi f of the axis takes (pi L2 / q) (1 - phi cot phi) / sin2 phi."""
    model = flow_of(Sink("s", 1 + 0j, 2.0), Source("o", 0j, 2.0))
    radius = 1e-8
    trace = followed(model, radius * np.exp(1j * np.pi * part))
    assert trace.names == ("s",)
    # six digits are printed
    assert_allclose(trace.times, np.pi / 2 * factor, rtol=2e-6)


def test_time_backward_is_the_time_forward():
    model = flow_of(Sink("s", 1 + 0j, 2.0), Source("o", 0j, 2.0), velocity=0.3 - 0.2j)
    seed = 0.4 + 0.3j
    there = followed(model, seed)
    back = followed(model, seed, TraceRules(forward=False, tolerance=FINE))
    assert (there.names, back.names) == (("s",), ("o",))
    whole = followed(model, seed, TraceRules(forward=False, tolerance=1e-11))
    assert_allclose(back.times, whole.times, rtol=1e-7)


def test_time_along_the_bank_of_a_channel():
    """50 m upstream of a flush intake in a channel of 100 m, U = 0.5 m/s: 85.1777 s by quadrature."""
    model = flow_of(Sink("s", 0j, 5.0), velocity=0.5, shore=Channel(0j, 1 + 0j, 100.0))
    trace = followed(model, -50.0)
    assert_allclose(trace.times, 85.1777, atol=5e-5)  # printed digits
    x = np.polynomial.legendre.leggauss(60)
    at = -25.0 * (x[0] + 1.0)
    quadrature = 25.0 * np.sum(x[1] / model.velocity(at.astype(np.complex128)).real)
    assert_allclose(trace.times, quadrature, rtol=1e-7)


# --- psi ---


def test_psi_is_held_at_a_coarse_tolerance():
    rng = np.random.default_rng(3)
    places = rng.uniform(0, 1000, 40) + 1j * rng.uniform(0, 1000, 40)
    elements = [(Sink if k % 2 else Source)(f"e{k}", complex(z), 20.0) for k, z in enumerate(places)]
    trace = followed(
        flow_of(*elements, velocity=0.2), -20 + 1j * np.linspace(5, 995, 100), TraceRules(tolerance=1e-4)
    )
    assert set(trace.stops) <= {Stop.CAPTURED, Stop.FAR_END}
    # 50 chords, each rounded to a few 1e-16 of the strengths (40 x 20)
    assert np.abs(trace.drift).max() < 50 * 800 * 5e-16


@pytest.mark.parametrize("core", [CoreModel.RANKINE, CoreModel.LAMB_OSEEN])
def test_psi_is_held_through_a_core(core):
    vortex = Vortex("v", 0j, 2.0, Core(core, 1.0))
    model = flow_of(vortex, velocity=1.0)
    trace = followed(model, np.array([-10 - 0.3j, -10 + 0.5j]), TraceRules(tolerance=1e-6, keep_paths=True))
    assert trace.names == ("ambient", "ambient")
    assert min(np.abs(path).min() for path in trace.paths) < 1.0
    assert np.abs(trace.drift).max() < 1e-12  # rounding of the chords


def test_psi_is_held_in_a_shear():
    layout = Layout(
        depth=1.0, ambient=Ambient(0.5 + 0j, ((0.0, 0.02), (0.0, 0.0))), elements=(Sink("s", 2j, 3.0),)
    )
    trace = followed(compile_layout(layout), np.array([-30 + 1j, -30 + 20j]))
    assert trace.names == ("s", "ambient")
    # psi itself, y/2 + y2/100, reaches 1e6 at the far end, 2000 layouts away
    assert np.abs(trace.drift).max() < 1e-9


# --- walls ---


def test_a_line_stays_on_the_bank():
    model = flow_of(Sink("s", 1j, 1.0), velocity=0.5, shore=StraightBank(0j, 1 + 0j))
    trace = followed(model, -10.0, TraceRules(tolerance=1e-5, keep_paths=True))
    assert trace.names == ("ambient",)
    # W is real on the bank to the last digit; psi, to whose level the line is put back, is rounded at 1e-17
    assert np.abs(trace.paths[0].imag).max() < 1e-15


def test_a_line_stays_on_a_pier():
    model = flow_of(velocity=1.0, structures=(Pier("p", 0j, 2.0),))
    rules = TraceRules(tolerance=1e-7, keep_paths=True)
    trace = followed(model, 2.0 * np.exp(1j * np.array([3.0, 2.0, -1.0])), rules, stagnation=[-2.0, 2.0])
    assert set(trace.stops) == {Stop.STAGNATES}
    for path in trace.paths:
        # psi is held to rounding, 1e-15 U a; near the stagnation point that is a distance of its square root
        assert_allclose(np.abs(path), 2.0, atol=1e-7)
    assert_allclose(trace.ends, 2.0, atol=1e-5)  # the rest radius, 1e-6 of the spacing


# --- lines ---


def test_a_current_crosses_a_line_sink():
    model = flow_of(LineSink("screen", -2j, 2j, 0.6), velocity=0.5)
    trace = followed(model, -10 + 0.3j)
    assert trace.names == ("ambient",)
    (crossing,) = trace.crossings[0]
    # sigma = 0.15: its own normal speed is 0.075 on both sides
    assert_allclose(
        [crossing.arriving, crossing.leaving], [0.575, 0.425], atol=1e-8
    )  # sampled 1e-9 off the line


def test_a_line_sink_takes_in_a_weak_current():
    model = flow_of(LineSink("screen", -2j, 2j, 0.6), velocity=0.05)
    trace = followed(model, np.array([-10 + 0.3j, 1 + 0.1j]))
    assert trace.names == ("screen", "screen")
    assert trace.crossings == ((), ())
    assert_allclose(trace.ends.real, 0.0, atol=4e-9)  # a thousand-millionth of the length


def test_backward_through_a_diffuser():
    model = flow_of(LineSource("diffuser", -2j, 2j, 0.6), velocity=0.5)
    backward = TraceRules(forward=False, tolerance=1e-6)
    trace = followed(model, np.array([10 + 0.3j]), backward)
    assert trace.names == ("ambient",)
    assert_allclose(trace.crossings[0][0].leaving / trace.crossings[0][0].arriving, 0.425 / 0.575, atol=1e-7)
    strong = flow_of(LineSource("diffuser", -2j, 2j, 6.0), velocity=0.5)
    assert followed(strong, np.array([10 + 0.3j]), backward).names == ("diffuser",)


def test_a_flush_line_is_never_passed():
    model = flow_of(LineSink("screen", 0j, 4 + 0j, 0.6), velocity=0.5, shore=StraightBank(0j, 1 + 0j))
    trace = followed(model, np.array([-5 + 0.3j, -5 + 3j]))
    assert trace.names == ("screen", "ambient")


# --- ends ---


def test_far_ends_have_names():
    channel = Channel(0j, 1 + 0j, 10.0)
    model = flow_of(Source("o", 5j, 4.0), shore=channel)
    trace = followed(model, np.array([-3 + 5.5j, 3 + 5.5j]))
    assert trace.names == ("upstream", "downstream")
    assert set(trace.stops) == {Stop.FAR_END}
    reversed_model = flow_of(Source("o", 5j, 1.0), velocity=-1.0, shore=channel)
    assert followed(reversed_model, -3 + 5.5j).names == ("downstream",)
    assert followed(reversed_model, 9 + 5.5j, TraceRules(forward=False)).names == ("upstream",)


def test_a_line_leaves_the_region():
    trace = followed(flow_of(Sink("s", 0j, 1.0), velocity=0.5), -3 + 2j, TraceRules(region=8.0))
    assert trace.stops == (Stop.LEFT_REGION,)
    assert trace.names == ("",)


def test_a_line_comes_to_rest_at_a_stagnation_point():
    b = 1 / np.pi
    model = flow_of(Sink("s", 0j, 1.0), velocity=0.5)
    trace = followed(model, 3 * b, TraceRules(forward=False), stagnation=[b])
    assert trace.stops == (Stop.STAGNATES,)
    assert abs(trace.ends[0] - b) < 1e-6


def test_a_line_closes():
    around = followed(
        flow_of(Vortex("v", 0j, 1.0), velocity=0.01), np.array([1.0, 0.5j]), TraceRules(tolerance=1e-6)
    )
    assert around.stops == (Stop.CLOSED, Stop.CLOSED)


def test_a_line_is_given_up():
    trace = followed(flow_of(Sink("s", 0j, 1.0), velocity=0.5), -50.0, TraceRules(most_steps=3))
    assert trace.stops == (Stop.STEP_LIMIT,)


def test_a_line_on_land_cannot_move():
    model = flow_of(Sink("s", 1j, 1.0), velocity=0.5, shore=StraightBank(0j, 1 + 0j))
    assert followed(model, -5.0 - 1j).stops == (Stop.WALL,)


def test_a_doublet_takes_in_both_ways():
    model = flow_of(Doublet("d", 0j, -3 + 0j), velocity=1.0)
    seed = 0.01 * np.exp(0.5j)
    assert followed(model, seed).names == ("d",)
    assert followed(model, seed, TraceRules(forward=False)).names == ("d",)


@pytest.mark.parametrize(
    "shore", [StraightBank(0j, 1 + 0j), Channel(0j, 1 + 0j, 20.0)], ids=["bank", "channel"]
)
def test_many_lines_equal_single_ones(shore: Shore):
    model = flow_of(Sink("s", 4j, 2.0), Source("o", 9 + 3j, 1.0), velocity=0.2, shore=shore)
    seeds = -15 + 1j * np.linspace(0.5, 15.0, 9)
    together = followed(model, seeds, TraceRules(tolerance=1e-6, keep_paths=True))
    for i, seed in enumerate(seeds):
        alone = followed(model, seed, TraceRules(tolerance=1e-6, keep_paths=True))
        assert alone.names[0] == together.names[i]
        assert_allclose(alone.times[0], together.times[i], rtol=1e-10)  # rounding of other blocks
        assert alone.paths[0].size == together.paths[i].size
        assert_allclose(together.path_times[i][-1], together.times[i], rtol=1e-2)  # without the last piece

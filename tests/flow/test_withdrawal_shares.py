"""Shares of an intake's water: closed forms, limits, conservation, symmetry, and counted streamlines."""

from collections import Counter, defaultdict

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenWater,
    Pier,
    Shore,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.surroundings import survey
from forebay.flow.traces import TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.mouths import mouth_of
from forebay.flow.withdrawal.result import IntakeWithdrawal, OriginKind, WithdrawalStatus

BETAS = [1.0001, 1.05, 1.5, 2.0, 3.0, 4.0, 5.0, 10.0, 20.0, 100.0]
PRINTED = [None, 0.004475, 0.091721, 0.181690, 0.308068, 0.391002, 0.450185, 0.604181, 0.717686, 0.872889]
ROUNDING = 2e-14
"""Some 50 chords of a few 1e-16 of the discharges; the width of a sector is a difference of two such sums."""


def withdrawals(layout: Layout) -> tuple[IntakeWithdrawal, ...]:
    model = compile_layout(layout)
    names = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    return withdraw(model, search_model(model), names)


def shares_of(withdrawal: IntakeWithdrawal) -> dict[str, float]:
    return {share.origin: share.share for share in withdrawal.shares}


def site(
    *elements: Element, velocity: complex = 0j, shore: Shore | None = None, piers: tuple[Pier, ...] = ()
) -> Layout:
    return Layout(
        depth=1.0,
        ambient=Ambient(velocity),
        shore=shore or OpenWater(),
        elements=elements,
        structures=piers,
    )


def pair(discharge: float, *, velocity: complex = 1.0, piers: tuple[Pier, ...] = ()) -> Layout:
    """Equal intake and outfall one metre apart, the outfall at the larger x."""
    sink, source = Sink("s", -0.5 + 0j, discharge), Source("o", 0.5 + 0j, discharge)
    return site(sink, source, velocity=velocity, piers=piers)


# --- one intake and one outfall ---


def recirculation(beta: float) -> float:
    """F = (2/pi) [atan sqrt(beta - 1) - sqrt(beta - 1) / beta], 0 for beta <= 1; beta = 2 q / (pi U L)."""
    root = np.sqrt(max(beta - 1.0, 0.0))
    return float(2.0 / np.pi * (np.arctan(root) - root / beta))


@pytest.mark.parametrize(("beta", "printed"), list(zip(BETAS, PRINTED, strict=True)))
def test_outfall_downstream_of_an_equal_intake(beta, printed):
    # U = 1, L = 1
    discharge = beta * np.pi / 2
    (answer,) = withdrawals(
        site(Sink("s", -0.5 + 0j, discharge), Source("o", 0.5 + 0j, discharge), velocity=1.0)
    )
    assert_allclose(answer.recirculation_share, recirculation(beta), atol=ROUNDING)
    assert printed is None or abs(answer.recirculation_share - printed) <= 5.1e-7  # printed digits
    assert answer.status is WithdrawalStatus.OK
    assert abs(answer.recirculation_share - recirculation(beta)) <= answer.share_error < 1e-12


@pytest.mark.parametrize("beta", [0.2, 0.9, 0.999999, 1.0])
def test_no_recirculation_below_the_threshold(beta):
    discharge = beta * np.pi / 2
    (answer,) = withdrawals(
        site(Sink("s", -0.5 + 0j, discharge), Source("o", 0.5 + 0j, discharge), velocity=1.0)
    )
    assert answer.recirculation_share == 0.0
    assert shares_of(answer) == {"ambient": 1.0}


@pytest.mark.parametrize("discharge", [0.01, 1.0, 30.0])
def test_outfall_upstream_of_an_equal_intake_closes_the_oval(discharge):
    """Rankine oval: both stagnation points lie on one streamline, yet nothing is lost."""
    (answer,) = withdrawals(
        site(Sink("s", 0.5 + 0j, discharge), Source("o", -0.5 + 0j, discharge), velocity=1.0)
    )
    assert_allclose(answer.recirculation_share, 1.0, atol=ROUNDING)


def test_source_to_sink_without_a_current():
    (answer,) = withdrawals(site(Sink("s", 1 + 0j, 2.0), Source("o", 0j, 2.0)))
    assert shares_of(answer) == {"o": 1.0}


def test_a_single_sink_in_still_water_draws_on_the_far_field():
    (answer,) = withdrawals(site(Sink("s", 1 + 0j, 2.0)))
    assert shares_of(answer) == {"ambient": 1.0}
    assert np.isnan(answer.width_far_upstream)


@pytest.mark.parametrize(("given", "taken"), [(1.0, 2.0), (0.3, 5.0), (2.0, 1.0)])
def test_unequal_discharges_without_a_current(given, taken):
    """All that the source gives goes to a stronger sink; a weaker one takes nothing else."""
    (answer,) = withdrawals(site(Sink("s", 0.5 + 0j, taken), Source("o", -0.5 + 0j, given)))
    assert_allclose(answer.recirculation_share, min(1.0, given / taken), atol=ROUNDING)


@pytest.mark.parametrize("offset", [0.3, 0.7, 1.3])
def test_outfall_far_upstream_and_to_the_side(offset):
    """F -> max(0, 1 - |dy| U / q): the plume of width q/U and the zone of the same width overlap."""
    distance = 4000.0
    layout = site(Sink("s", 0j, 1.0), Source("o", -distance + 1j * offset, 1.0), velocity=1.0)
    (answer,) = withdrawals(layout)
    # each bends the other by about b / distance, b = q / (2 pi U); logarithms make it a few times that
    assert_allclose(answer.recirculation_share, max(0.0, 1.0 - offset), atol=5e-4)


# --- rules that any layout obeys ---

ELEMENTS = (
    Sink("s1", 30 + 20j, 2.0),
    Source("o1", 50 + 12j, 1.5),
    Sink("s2", 70 + 33j, 1.0),
    Source("o2", 22 + 41j, 1.5),
    Vortex("v", 60 + 50j, 1.0),
)
PIERS = (Pier("p1", 40 + 25j, 4.0), Pier("p2", 58 + 30j, 3.0))
SHORES: dict[str, tuple[Shore, complex]] = {
    "open": (OpenWater(), 0.02 + 0.01j),
    "bank": (StraightBank(0j, 1 + 0j), 0.02),
    "channel": (Channel(0j, 1 + 0j, 60.0), -0.02),
    "still-channel": (Channel(0j, 1 + 0j, 60.0), 0.0),
    "corner": (Corner(0j, 1 + 0j, np.pi / 2), 0.0),
    "headland": (Corner(0j, 1 + 0j, 4.5), 0.0),
    "dead-end": (DeadEnd(0j, 1 + 0j, 60.0), 0.0),
    "basin": (Basin(0j, 1 + 0j, 100.0, 60.0), 0.0),
}


@pytest.mark.parametrize("piers", [(), PIERS[:1]], ids=["free", "pier"])
@pytest.mark.parametrize("name", SHORES)
def test_conservation(name, piers):
    shore, velocity = SHORES[name]
    answers = withdrawals(site(*ELEMENTS, velocity=velocity, shore=shore, piers=piers))
    taken: defaultdict[str, float] = defaultdict(float)
    for answer in answers:
        assert_allclose(sum(share.share for share in answer.shares), 1.0, atol=4e-16)
        assert answer.status is WithdrawalStatus.OK
        assert answer.share_error < 1e-11  # rounding of the chords and the residual on the piers
        outfalls = sum(share.share for share in answer.shares if share.kind is OriginKind.OUTFALL)
        assert answer.recirculation_share == outfalls
        for share in answer.shares:
            taken[share.origin] += share.share * answer.discharge
    slack = sum(answer.share_error * answer.discharge for answer in answers)
    for outfall in ("o1", "o2"):
        assert taken[outfall] <= 1.5 + slack
    if name == "basin":
        assert taken.keys() <= {"o1", "o2"}
        assert_allclose([taken["o1"], taken["o2"]], 1.5, atol=slack)


@pytest.mark.parametrize("turn", [0.7, 2.0, -1.1])
@pytest.mark.parametrize("name", ["open", "bank", "channel", "headland", "basin"])
def test_shares_do_not_depend_on_the_grid(name, turn):
    shore, velocity = SHORES[name]
    spin, shift = np.exp(1j * turn), 300.0 - 120j

    def moved(z: complex) -> complex:
        return complex(z * spin + shift)

    match shore:
        case StraightBank():
            shore = StraightBank(moved(0j), complex(spin))
        case Channel():
            shore = Channel(moved(0j), complex(spin), 60.0)
        case Corner():
            shore = Corner(moved(0j), complex(spin), 4.5)
        case Basin():
            shore = Basin(moved(0j), complex(spin), 100.0, 60.0)
        case _:
            pass
    elements: tuple[Element, ...] = (
        Sink("s1", moved(30 + 20j), 2.0),
        Source("o1", moved(50 + 12j), 1.5),
        Sink("s2", moved(70 + 33j), 1.0),
        Source("o2", moved(22 + 41j), 1.5),
        Vortex("v", moved(60 + 50j), 1.0),
    )
    there = withdrawals(site(*ELEMENTS, velocity=velocity, shore=SHORES[name][0]))
    here = withdrawals(site(*elements, velocity=velocity * spin, shore=shore))
    for a, b in zip(there, here, strict=True):
        one, other = shares_of(a), shares_of(b)
        assert one.keys() == other.keys()
        for origin in one:
            assert_allclose(one[origin], other[origin], atol=1e-12)  # coordinates of 300 m keep 3e-14 m


def test_mirror_symmetry():
    plain = (Sink("a", 30 + 20j, 2.0), Source("b", 50 + 12j, 1.5), Sink("c", 70 + 33j, 1.0))
    mirrored = (Sink("a", 30 - 20j, 2.0), Source("b", 50 - 12j, 1.5), Sink("c", 70 - 33j, 1.0))
    above = withdrawals(site(*plain, velocity=0.02 + 0.01j))
    below = withdrawals(site(*mirrored, velocity=0.02 - 0.01j))
    for one, other in zip(map(shares_of, above), map(shares_of, below), strict=True):
        assert one.keys() == other.keys()
        assert_allclose([one[k] for k in sorted(one)], [other[k] for k in sorted(other)], atol=10 * ROUNDING)


def test_symmetric_layout_shares_evenly():
    """The divide above the sinks comes from a stagnation point at infinity and is found by bisection."""
    layout = site(
        Sink("n", 1j, 1.0), Sink("s", -1j, 1.0), Source("w", -1 + 0j, 1.0), Source("e", 1 + 0j, 1.0)
    )
    for answer in withdrawals(layout):
        assert answer.status is WithdrawalStatus.BISECTED
        assert_allclose([answer.shares[0].share, answer.shares[1].share], 0.5, atol=answer.share_error)
        assert answer.share_error < 1e-8


def test_a_bank_halves_a_symmetric_flow():
    """An intake on the bank draws its whole discharge from the water side: half of one twice as strong."""
    discharge = 4.0
    bank = site(
        Sink("s", -0.5 + 0j, discharge),
        Source("o", 0.5 + 0j, discharge),
        velocity=1.0,
        shore=StraightBank(0j, 1 + 0j),
    )
    expected = recirculation(2.0 * 2 * discharge / np.pi)
    assert_allclose(withdrawals(pair(2 * discharge))[0].recirculation_share, expected, atol=ROUNDING)
    assert_allclose(withdrawals(bank)[0].recirculation_share, expected, atol=ROUNDING)


def test_a_pier_far_away_changes_little():
    near = site(Sink("s", -0.5 + 0j, 4.0), Source("o", 0.5 + 0j, 4.0), velocity=1.0)
    far = site(
        Sink("s", -0.5 + 0j, 4.0), Source("o", 0.5 + 0j, 4.0), velocity=1.0, piers=(Pier("p", 300j, 0.5),)
    )
    change = withdrawals(far)[0].recirculation_share - withdrawals(near)[0].recirculation_share
    # the pier changes the velocity by U (a / r)2 = 3e-6
    assert 0.0 < abs(change) < 1e-5


def test_incomplete_search_states_no_error():
    layout = pair(4.0)
    model = compile_layout(layout)
    search = search_model(model)
    short = type(search)(**{name: getattr(search, name) for name in search.__slots__} | {"complete": False})
    (answer,) = withdraw(model, short, ("s",))
    assert answer.status is WithdrawalStatus.INCOMPLETE
    assert np.isnan(answer.share_error)


def test_a_divide_that_was_not_found_is_bisected():
    layout = pair(np.pi)
    model = compile_layout(layout)
    search = search_model(model)
    without = type(search)(**{name: getattr(search, name) for name in search.__slots__} | {"points": ()})
    (answer,) = withdraw(model, without, ("s",))
    assert answer.status is WithdrawalStatus.BISECTED
    assert abs(answer.recirculation_share - recirculation(2.0)) < answer.share_error < 1e-8


# --- counted streamlines ---


def counted(layout: Layout, name: str, count: int) -> dict[str, float]:
    """Origins of `count` streamlines of equal flux into an intake."""
    model = compile_layout(layout)
    surroundings = survey(
        model, np.array([point.at for point in search_model(model).points], dtype=np.complex128)
    )
    mouth = mouth_of(model, name, surroundings)
    seeds = mouth.release((np.arange(count) + 0.5) / count * mouth.total)
    traces = trace_streamlines(
        model, seeds, surroundings=surroundings, rules=TraceRules(forward=False, tolerance=1e-5)
    )
    return {origin: number / count for origin, number in Counter(traces.names).items()}


def random_site(seed: int) -> Layout:
    """Two to five sources and sinks, some on the bank, perhaps a vortex and piers, on a shore of any kind."""
    rng = np.random.default_rng(seed)
    shore, velocity = list(SHORES.values())[seed % len(SHORES)]
    elements: list[Element] = []
    for k in range(rng.integers(2, 6)):
        at = complex(rng.uniform(3, 97), rng.uniform(3, 57))
        if rng.random() < 0.25 and not isinstance(shore, OpenWater):
            at = complex(at.real, 0.0)
        kind = Sink if k % 2 == 0 else Source
        elements.append(kind(f"{kind.__name__}{k}", at, float(rng.uniform(0.3, 3.0))))
    if isinstance(shore, Basin):
        taken = sum(e.discharge for e in elements if isinstance(e, Sink))
        given = sum(e.discharge for e in elements if isinstance(e, Source))
        elements = [
            Source(e.name, e.at, e.discharge * taken / given) if isinstance(e, Source) else e
            for e in elements
        ]
    if rng.random() < 0.4:
        elements.append(
            Vortex("v", complex(rng.uniform(3, 97), rng.uniform(3, 57)), float(rng.uniform(-3, 3)))
        )
    pier = Pier("p", 45 + 28j, 2.5)
    free = all(
        abs(e.at - pier.at) > pier.radius + 0.5 for e in elements if not isinstance(e, LineSink | LineSource)
    )
    piers = (pier,) if free and rng.random() < 0.4 else ()
    return site(*elements, velocity=velocity, shore=shore, piers=piers)


def compare_with_count(seed: int, count: int) -> None:
    layout = random_site(seed)
    for answer in withdrawals(layout):
        shares, numbers = shares_of(answer), counted(layout, answer.name, count)
        for origin in shares.keys() | numbers.keys():
            # every edge of a sector is off by at most half a streamline; a share has few edges
            assert abs(shares.get(origin, 0.0) - numbers.get(origin, 0.0)) < 4.0 / count


@pytest.mark.parametrize("seed", range(8))
def test_shares_equal_a_count(seed):
    compare_with_count(seed, 400)


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(8, 22))
def test_shares_equal_a_count_of_twenty_thousand(seed):
    compare_with_count(seed, 20_000)

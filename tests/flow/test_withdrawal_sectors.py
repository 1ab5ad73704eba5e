"""Sectors between divides, and what happens when something cannot be told."""

from dataclasses import dataclass, replace

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Doublet,
    Layout,
    LineSink,
    OpenWater,
    Pier,
    Sink,
    Source,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.surroundings import survey
from forebay.flow.traces import Stop, TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal import analysis
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.mouths import mouth_of
from forebay.flow.withdrawal.result import OriginKind, WithdrawalStatus
from forebay.flow.withdrawal.sectors import MERGED, Sector, Signature, _absorbed, sectors_between
from forebay.flow.withdrawal.zones import _whole_water, canvas_of

AMBIENT: Signature = ("ambient", OriginKind.FAR_FIELD, ())
WORKS: Signature = ("works", OriginKind.OUTFALL, ())
LOST: Signature = ("unresolved", OriginKind.UNRESOLVED, ())
NOWHERE = np.empty(0, dtype=np.complex128)


@dataclass(frozen=True)
class Ring:
    """A mouth that knows only its total and its breaks."""

    total: float = 10.0
    breaks: tuple[float, ...] = ()
    passed_through: bool = False

    def coordinate(self, z):
        raise NotImplementedError

    def release(self, coordinate):
        raise NotImplementedError


def pairs(sectors: list[Sector]) -> list[tuple[float, float]]:
    return [(sector.low, sector.high) for sector in sectors]


@pytest.mark.parametrize(
    ("dividers", "expected"),
    [
        ([], [(0.0, 10.0)]),
        ([4.0], [(4.0, 14.0)]),
        ([7.0, 2.0], [(2.0, 7.0), (7.0, 12.0)]),
        ([12.0, 7.0], [(2.0, 7.0), (7.0, 12.0)]),
        ([2.0, 2.0 + 5e-12, 7.0], [(2.0, 7.0), (7.0, 12.0)]),
        ([1e-13, 3.0, 10.0 - 1e-13], [(1e-13, 3.0), (3.0, 10.0 + 1e-13)]),
    ],
)
def test_sectors_of_a_ring(dividers, expected):
    assert pairs(sectors_between(Ring(), np.array(dividers, dtype=float))) == expected


@pytest.mark.parametrize(
    ("dividers", "expected"),
    [
        ([], [(0.0, 10.0)]),
        ([4.0], [(0.0, 4.0), (4.0, 10.0)]),
        ([-1e-14, 10.0 + 1e-14], [(0.0, 10.0)]),
        ([1e-13, 10.0 - 1e-13], [(0.0, 10.0)]),
    ],
)
def test_sectors_of_a_half_circle(dividers, expected):
    assert pairs(sectors_between(Ring(breaks=(0.0, 10.0)), np.array(dividers, dtype=float))) == expected


def test_interrupted_mouths_keep_their_gaps():
    mouth = Ring(breaks=(0.0, 6.0, 10.0))
    found = sectors_between(mouth, np.array([3.0, 6.0 - MERGED]))
    assert pairs(found) == [(0.0, 3.0), (3.0, 6.0), (6.0, 10.0)]


def test_slivers_go_to_a_neighbour():
    pieces = [(Sector(0.0, 1e-9), LOST), (Sector(1e-9, 4.0), AMBIENT), (Sector(4.0, 4.0 + 1e-9), LOST)]
    pieces.append((Sector(4.0 + 1e-9, 10.0), WORKS))
    kept, lost = _absorbed(pieces, 1e-6)
    assert [(sector.low, sector.high, signature[0]) for sector, signature in kept] == [
        (0.0, 4.0 + 1e-9, "ambient"),
        (4.0 + 1e-9, 10.0, "works"),
    ]
    assert_allclose(lost, 2e-9, rtol=1e-6)  # differences of numbers near 4 round by 1e-15


def test_lost_water_stays_lost_where_there_is_much_of_it():
    pieces = [(Sector(0.0, 4.0), LOST), (Sector(4.0, 10.0), AMBIENT)]
    assert _absorbed(pieces, 1e-6) == (pieces, 0.0)
    only = [(Sector(0.0, 1e-9), LOST)]
    assert _absorbed(only, 1e-6) == (only, 0.0)


def test_water_that_cannot_be_followed_is_said_to_be(monkeypatch):
    layout = Layout(depth=1.0, ambient=Ambient(0.5 + 0j), elements=(Sink("s", 0j, 1.0),))
    model = compile_layout(layout)
    monkeypatch.setattr(analysis, "DRAWN", replace(analysis.DRAWN, most_steps=2))
    (answer,) = withdraw(model, search_model(model), ("s",))
    assert answer.status is WithdrawalStatus.UNRESOLVED
    assert [(share.origin, share.kind, share.share) for share in answer.shares] == [
        ("unresolved", OriginKind.UNRESOLVED, 1.0)
    ]
    assert answer.share_error == 1.0


def test_water_out_of_a_doublet():
    """A sink inside the closed streamlines of a doublet draws on it, and on nothing else."""
    layout = Layout(
        depth=1.0,
        ambient=Ambient(1.0 + 0j),
        elements=(Doublet("d", 0j, -30 + 0j), Sink("s", 0.5 + 0.2j, 0.01)),
    )
    model = compile_layout(layout)
    (answer,) = withdraw(model, search_model(model), ("s",))
    assert [(share.origin, share.kind) for share in answer.shares] == [("d", OriginKind.DOUBLET)]
    assert answer.recirculation_share == 0.0


@pytest.mark.parametrize("at", [0.3 + 0.4j, -2j, 5 + 0j])
@pytest.mark.parametrize("shore", [OpenWater(), Channel(-3j, 1 + 0j, 9.0)])
def test_release_inverts_the_coordinate(at, shore):
    layout = Layout(
        depth=1.0,
        ambient=Ambient(0.3 + 0j),
        shore=shore,
        elements=(Sink("s", at, 1.0), Source("o", 1 + 1j, 0.4)),
        structures=(Pier("p", 2 - 1.5j, 0.5),),
    )
    model = compile_layout(layout)
    mouth = mouth_of(model, "s", survey(model, NOWHERE))
    wanted = np.linspace(0.01, 0.99, 23) * mouth.total
    # fixed-point steps shrink by 200 each; then rounding
    assert_allclose(mouth.coordinate(mouth.release(wanted)), wanted, atol=1e-14)


@pytest.mark.parametrize("velocity", [0.01, 0.03 - 0.02j])
def test_release_inverts_the_coordinate_of_a_line(velocity):
    layout = Layout(
        depth=1.0,
        ambient=Ambient(velocity),
        elements=(LineSink("s", 3 + 4j, 9 + 7j, 2.0), Source("o", 12 + 3j, 1.0)),
    )
    model = compile_layout(layout)
    mouth = mouth_of(model, "s", survey(model, NOWHERE))
    wanted = np.linspace(0.01, 0.99, 23) * mouth.total
    assert_allclose(mouth.coordinate(mouth.release(wanted)), wanted, atol=1e-13)  # bisection to rounding
    assert_allclose(mouth.total, 2.0, rtol=1e-13)


def test_whole_water_of_a_basin_is_its_walls():
    shore = Basin(0j, 1 + 0j, 8.0, 5.0)
    layout = Layout(depth=1.0, shore=shore, elements=(Sink("s", 2 + 2j, 1.0), Source("o", 5 + 3j, 1.0)))
    model = compile_layout(layout)
    canvas = canvas_of(model, survey(model, NOWHERE), ("s",))
    assert _whole_water(canvas).tolist() == [0j, 8 + 0j, 8 + 5j, 5j]


def test_whole_water_of_a_channel_lies_between_its_banks():
    layout = Layout(
        depth=1.0, shore=Channel(0j, 1 + 0j, 10.0), elements=(Sink("s", 5j, 1.0), Source("o", 20 + 5j, 1.0))
    )
    model = compile_layout(layout)
    (answer,) = withdraw(model, search_model(model), ("s",))
    assert answer.recirculation_share == 1.0
    assert (answer.zone.imag.min(), answer.zone.imag.max()) == (0.0, 10.0)


def test_a_plain_current_has_nothing_to_meet():
    model = compile_layout(Layout(depth=1.0, ambient=Ambient(0.5 + 0j)))
    seeds = np.array([1 + 1j])
    trace = trace_streamlines(model, seeds, surroundings=survey(model, NOWHERE), rules=TraceRules())
    assert trace.stops == (Stop.FAR_END,)

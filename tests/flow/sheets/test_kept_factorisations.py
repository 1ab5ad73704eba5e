"""Factorisations that are kept: counted, bounded in bytes, the oldest dropped first, and never wrong."""

import numpy as np
import pytest

from forebay.flow.layout import Ambient, Layout, Outline, Sink
from forebay.flow.model import compile_layout
from forebay.flow.sheets.memo import Memo
from forebay.flow.sheets.system import System


def system(sides: int) -> System:
    """Factorised equations of a polygon."""
    turn = np.exp(2j * np.pi * np.arange(sides) / sides)
    layout = Layout(1.0, ambient=Ambient(1 + 0j), structures=(Outline("o", tuple(turn.tolist())),))
    boundary = compile_layout(layout).boundary
    assert boundary is not None
    return boundary.solution.system


@pytest.fixture(scope="module")
def systems() -> list[System]:
    return [system(sides) for sides in (3, 4, 5)]


def keep(memo: Memo, key: bytes, one: System) -> None:
    """Ask for a factorisation that is there to be built."""
    assert memo.system(key, lambda: one) is one


def refuse() -> System:
    raise AssertionError("built although it is kept")


def test_bytes_are_those_of_the_matrix(systems):
    for one in systems:
        assert one.bytes >= 8 * one.size**2
        assert one.bytes == one.factors.nbytes + one.panels.poles.nbytes


def test_hits_and_misses_are_counted(systems):
    memo = Memo()
    keep(memo, b"a", systems[0])
    assert memo.system(b"a", refuse) is systems[0]
    assert (memo.hits, memo.misses, memo.size) == (1, 1, systems[0].bytes)


def test_oldest_goes_when_the_limit_is_reached(systems):
    memo = Memo(limit=systems[0].bytes + systems[1].bytes)
    for key, one in zip((b"a", b"b"), systems[:2], strict=True):
        keep(memo, key, one)
    memo.system(b"a", refuse)  # used again, so that b is the older
    keep(memo, b"c", systems[2])
    assert memo.size <= memo.limit
    with pytest.raises(AssertionError, match="built"):
        memo.system(b"b", refuse)


def test_too_large_is_answered_but_not_kept(systems):
    memo = Memo(limit=systems[0].bytes - 1)
    keep(memo, b"a", systems[0])
    assert memo.size == 0


def test_smaller_limit_drops_at_once(systems):
    memo = Memo()
    for key, one in zip((b"a", b"b", b"c"), systems, strict=True):
        keep(memo, key, one)
    memo.resize(systems[2].bytes)
    assert memo.size <= systems[2].bytes
    memo.clear()
    assert memo.size == 0
    assert memo.misses == 3


def test_kept_walls_answer_as_new_ones():
    """The same flow whether its walls were factorised for it or for another."""
    square = Outline("o", (1 + 1j, 3 + 1j, 3 + 3j, 1 + 3j))
    sink = Layout(1.0, structures=(square,), elements=(Sink("s", -2 + 0.5j, 1.0),))
    z = np.array([0.5 + 0.5j, 4 + 2j, 2 + 4j])
    first = compile_layout(sink).velocity(z)
    compile_layout.cache_clear()
    compile_layout(Layout(1.0, structures=(square,), elements=(Sink("s", 5 + 5j, 2.0),)))
    assert np.array_equal(compile_layout(sink).velocity(z), first)

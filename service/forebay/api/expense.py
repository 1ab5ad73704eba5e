"""What answers have cost: pairs of element and point, and what memos saved, here and in workers."""

import os
from collections import Counter
from collections.abc import Mapping
from typing import NamedTuple

from forebay.api.reading import remembered_requests
from forebay.flow.sheets.memo import MEMO
from forebay.trade.applicability.review import remembered_reviews


class MemoState(NamedTuple):
    """Counters of one memo since its process began; size: memory in use, where it is counted [bytes]."""

    hits: int
    misses: int
    size: int = 0


class Expense(NamedTuple):
    """What one answer has cost.

    operation : id of its operation
    pairs : evaluations of one element at one point, other work counted as the pairs that take as long
    process : id of the process that computed it;  memos : their state there, by what they hold
    """

    operation: str
    pairs: int
    process: int
    memos: Mapping[str, MemoState]

    @classmethod
    def of(cls, operation: str, pairs: int) -> "Expense":
        """Expense of an answer that this process has just computed."""
        return cls(operation, pairs, os.getpid(), memo_states())


def memo_states() -> dict[str, MemoState]:
    """State of this process's memos: solved walls, reviews of a layout, requests read before."""
    return {
        "walls": MemoState(MEMO.hits, MEMO.misses, MEMO.size),
        "reviews": MemoState(*remembered_reviews()),
        "requests": MemoState(*remembered_requests()),
    }


class Ledger:
    """Expenses of one service: what its workers report, with what this process knows of itself.

    pairs : by operation
    """

    def __init__(self) -> None:
        self.pairs: Counter[str] = Counter()
        self._ended: dict[str, MemoState] = {}
        self._workers: dict[int, Mapping[str, MemoState]] = {}

    def note(self, expense: Expense) -> None:
        """Add the expense of one answer."""
        self.pairs[expense.operation] += expense.pairs
        if expense.process == os.getpid():
            return
        before = self._workers.get(expense.process)
        if before is not None and _has_begun_anew(before, expense.memos):
            self._bury(expense.process)
        self._workers[expense.process] = expense.memos

    def memos(self) -> dict[str, MemoState]:
        """State of the memos of this process and of its workers together; the size is that of living ones."""
        for process in [known for known in self._workers if not _is_alive(known)]:
            self._bury(process)
        total = _sum(self._ended, memo_states())
        for states in self._workers.values():
            total = _sum(total, states)
        return total

    def _bury(self, process: int) -> None:
        """Keep what an ended worker has counted; its memory is free."""
        gone = {name: state._replace(size=0) for name, state in self._workers.pop(process).items()}
        self._ended = _sum(self._ended, gone)


def _has_begun_anew(before: Mapping[str, MemoState], now: Mapping[str, MemoState]) -> bool:
    """Whether counters have fallen: another process has the id of one that ended."""
    return any(now[name][:2] < state[:2] for name, state in before.items())


def _sum(some: Mapping[str, MemoState], others: Mapping[str, MemoState]) -> dict[str, MemoState]:
    nothing = MemoState(0, 0)
    return {
        name: MemoState(*map(sum, zip(some.get(name, nothing), others.get(name, nothing), strict=True)))
        for name in {**some, **others}
    }


def _is_alive(process: int) -> bool:
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    return True

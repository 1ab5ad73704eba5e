"""Times of short pieces of work, and rows of the table."""

import time
from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True)
class Measure:
    """One row: what was measured, the value, the target and whether less or more is better."""

    what: str
    value: float
    unit: str
    target: float
    more_is_better: bool = False
    remark: str = ""

    @property
    def is_met(self) -> bool:
        """Whether the value is on the right side of the target."""
        return self.value >= self.target if self.more_is_better else self.value <= self.target

    def line(self) -> str:
        """The row as text."""
        sign = ">=" if self.more_is_better else "<="
        mark = "ok" if self.is_met else "MISSED"
        return (
            f"{self.what:64} {self.value:10.4g} {self.unit:6} {sign} {self.target:g}  {mark}  {self.remark}"
        )


def best_of(work: Callable[[], object], *, repeats: int = 7) -> float:
    """Shortest time of several runs after one that is not counted [s]: noise only ever adds."""
    work()
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return min(times)


def interleaved(
    first: Callable[[], object], second: Callable[[], object], *, repeats: int = 15
) -> tuple[float, float]:
    """Shortest times of two pieces of work run in turn [s], so that both see the same machine."""
    first()
    second()
    times: tuple[list[float], list[float]] = ([], [])
    for _ in range(repeats):
        for work, taken in zip((first, second), times, strict=True):
            start = time.perf_counter()
            work()
            taken.append(time.perf_counter() - start)
    return min(times[0]), min(times[1])

"""What one request may ask for, what it costs, and the check before any work."""

from enum import Enum
from typing import NamedTuple, Self

from forebay.flow.errors import Path, TooLargeError
from forebay.settings import Settings
from forebay.trade.survey.water import MOST_GIVEN, MOST_SOLVED

PAIRS_A_SECOND = 1e8
"""Pairs of element and point worked through in a second; a slow processor does half, a fast one thrice."""

BYTES_A_VALUE = 12
"""Bytes of a number in an answer with nine digits."""


class Tier(Enum):
    """Where work is done, by the bytes of the body and the work in pairs of element and point.

    In the event loop what takes about a millisecond. In a thread, which nothing can stop and which holds up
    the event loop as long as it computes without a pause, some twenty. In a worker process everything else.
    """

    INLINE = (16 * 1024, 100_000)
    THREAD = (512 * 1024, 2_000_000)

    @property
    def body(self) -> int:
        """Bytes of the largest body."""
        return self.value[0]

    @property
    def work(self) -> int:
        """Largest work, in pairs."""
        return self.value[1]


class Price(NamedTuple):
    """What a request asks for.

    points : points at which the field is wanted
    elements : elements and structures of the layout
    values : numbers in the answer
    effort : further work, counted as the pairs of element and point that take as long
    lengthy : whether the work may last seconds whatever its size
    path : where the request says how many points it wants
    """

    points: int = 0
    elements: int = 1
    values: int = 0
    effort: int = 0
    lengthy: bool = False
    path: Path = ()

    @property
    def pairs(self) -> int:
        """Evaluations of one element at one point."""
        return self.points * max(self.elements, 1)

    @property
    def work(self) -> int:
        """All work in pairs; a number in the answer takes as long as ten of them."""
        return self.pairs + 10 * self.values + self.effort

    @property
    def seconds(self) -> float | None:
        """Rough time of the work [s]; None where it depends on what the flow turns out to be."""
        return None if self.lengthy else self.work / PAIRS_A_SECOND

    @property
    def size(self) -> int:
        """Rough size of the answer in JSON [bytes]."""
        return BYTES_A_VALUE * self.values


class Limits(NamedTuple):
    """Limits of one service, as GET /v1/limits publishes them."""

    max_body: int
    max_points: int
    max_elements: int
    max_pairs: int
    max_values: int
    deadline: float
    workers: int
    queue: int
    worker_memory: int
    token_concurrency: int
    max_vertices: int
    max_solved_vertices: int

    @classmethod
    def of(cls, settings: Settings) -> Self:
        """Limits that the settings set; an answer holds at most ten numbers a point."""
        return cls(
            max_body=settings.max_body,
            max_points=settings.max_points,
            max_elements=settings.max_elements,
            max_pairs=settings.max_pairs,
            max_values=10 * settings.max_points,
            deadline=settings.deadline,
            workers=settings.workers,
            queue=settings.queue,
            worker_memory=settings.worker_memory,
            token_concurrency=settings.token_concurrency,
            max_vertices=MOST_GIVEN,
            max_solved_vertices=MOST_SOLVED,
        )

    def check(self, price: Price) -> None:
        """Refuse a request over a limit.

        Raises TooLargeError with the limit and what was asked for.
        """
        _check("elements and structures", price.elements, self.max_elements, ("layout", "elements"))
        _check("points", price.points, self.max_points, price.path)
        _check("pairs of element and point", price.pairs, self.max_pairs, price.path)
        _check("numbers in the answer", price.values, self.max_values, price.path)


def _check(what: str, asked: int, limit: int, path: Path) -> None:
    if asked > limit:
        raise TooLargeError(f"{asked} {what}; the limit is {limit}", path, asked=asked, limit=limit)

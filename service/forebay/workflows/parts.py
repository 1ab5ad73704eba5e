"""A part of an assessment: its answer, or why it has none."""

import logging
from collections.abc import Callable
from dataclasses import dataclass
from enum import StrEnum
from typing import Generic, TypeVar

from forebay.flow.errors import FlowError, Path

T = TypeVar("T")

LOG = logging.getLogger(__name__)

INTERNAL_ERROR = "internal-error"
"""Code of a failure whose cause does not lie in the request."""


class PartStatus(StrEnum):
    """What became of a part.

    ok : it was computed;  failed : it could not be, for the reason given;  not-asked : nobody asked for it
    """

    OK = "ok"
    FAILED = "failed"
    NOT_ASKED = "not-asked"


@dataclass(frozen=True, slots=True)
class Part(Generic[T]):
    """One part of an assessment.

    status : what became of it;  answer : its answer, None unless the status is ok
    problem : permanent code of what went wrong, None unless it failed;  reason : why there is no answer
    path : steps to the value at fault, from the layout if the first is "layout", else from the part's request
    """

    status: PartStatus
    answer: T | None = None
    problem: str | None = None
    reason: str | None = None
    path: Path = ()

    @classmethod
    def of(cls, answer: T) -> "Part[T]":
        """A part that was computed."""
        return cls(PartStatus.OK, answer)

    @classmethod
    def not_asked(cls, reason: str) -> "Part[T]":
        """A part that nobody asked for, with the reason why that is so."""
        return cls(PartStatus.NOT_ASKED, reason=reason)


def attempt(compute: Callable[[], T]) -> Part[T]:
    """Run the computation of one part, so that its failure does not sink the others.

    Returns
    -------
    Part with the answer; failed with the code and the detail of a FlowError; failed as an internal error,
    which is logged, for anything else that goes wrong.
    """
    try:
        return Part.of(compute())
    except FlowError as error:
        path = ("layout", *error.path) if error.in_layout else error.path
        return Part(PartStatus.FAILED, None, error.code, error.detail, path)
    except Exception:
        LOG.exception("a part of an assessment failed")
        return Part(
            PartStatus.FAILED, None, INTERNAL_ERROR, "The service failed in this part; its log says why"
        )

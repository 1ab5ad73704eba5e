"""From the bytes of a body to a validated request."""

from functools import lru_cache
from typing import TypeVar

from pydantic import ValidationError

from forebay.api.media import COLUMNS, JSON
from forebay.api.number_arrays import STAND_IN, Excerpt, excerpt
from forebay.api.number_columns import excerpt_columns
from forebay.api.problems import Problem
from forebay.api.schemas.common import ComputeRequest

R = TypeVar("R", bound=ComputeRequest)

REMEMBERED = 64
"""Requests, less their arrays of coordinates, that are remembered: clients ask much of one layout."""

LARGEST_REMEMBERED = 64 * 1024
"""Bytes of a request that is remembered."""


def read_request(model: type[R], body: bytes, content_type: str = JSON) -> R:
    """The request in a body; long arrays of coordinates are read on a shorter way.

    Raises
    ------
    ValidationError : of the whole body
    Problem : malformed-columns, or of a column that does not go with the request
    """
    if content_type == COLUMNS:
        return _read_columns(model, body)
    part = excerpt(body) if "at" in model.model_fields else None
    if part is not None:
        try:
            request = _validated(model, part.rest)
        except ValidationError:
            return model.model_validate_json(body)  # with the errors of the body as it came
        if (replaced := _with_columns(request, part)) is not None:
            return replaced
    return _validated(model, body)


def _read_columns(model: type[R], body: bytes) -> R:
    part = excerpt_columns(body)
    replaced = _with_columns(_validated(model, part.rest), part)
    if replaced is None:
        errors = ({"pointer": "#/at/z", "detail": "With columns after the line of JSON, one for all"},)
        raise Problem("invalid-request", "1 error in the request", errors=errors)
    return replaced


def _with_columns(request: R, part: Excerpt) -> R | None:
    """The request with its columns in place of the stand-in; None if that is not where it stands."""
    at = getattr(request, "at", None)
    if at is None or not at.is_at(STAND_IN):
        return None
    return request.model_copy(update={"at": at.with_columns(part.x, part.y)})


def remembered_requests() -> tuple[int, int]:
    """How often a request was remembered, and how often read, since the start."""
    known = _remembered.cache_info()
    return known.hits, known.misses


def _validated(model: type[R], body: bytes) -> R:
    return _remembered(model, body) if len(body) <= LARGEST_REMEMBERED else model.model_validate_json(body)


@lru_cache(maxsize=REMEMBERED)
def _remembered(model: type[R], body: bytes) -> R:
    """A request that was read before; requests are frozen."""
    return model.model_validate_json(body)

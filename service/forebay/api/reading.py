"""From the bytes of a body to a validated request."""

from functools import lru_cache
from typing import TypeVar

from pydantic import ValidationError

from forebay.api.number_arrays import STAND_IN, excerpt
from forebay.api.schemas.common import ComputeRequest

R = TypeVar("R", bound=ComputeRequest)

REMEMBERED = 64
"""Requests, less their arrays of coordinates, that are remembered: clients ask much of one layout."""

LARGEST_REMEMBERED = 64 * 1024
"""Bytes of a request that is remembered."""


def read_request(model: type[R], body: bytes) -> R:
    """The request in a body; long arrays of coordinates are read on a shorter way.

    Raises
    ------
    ValidationError : of the whole body
    """
    part = excerpt(body) if "at" in model.model_fields else None
    if part is not None:
        try:
            request = _validated(model, part.rest)
        except ValidationError:
            return model.model_validate_json(body)  # with the errors of the body as it came
        at = getattr(request, "at", None)
        if at is not None and at.is_at(STAND_IN):
            return request.model_copy(update={"at": at.with_columns(part.x, part.y)})
    return _validated(model, body)


def _validated(model: type[R], body: bytes) -> R:
    return _remembered(model, body) if len(body) <= LARGEST_REMEMBERED else model.model_validate_json(body)


@lru_cache(maxsize=REMEMBERED)
def _remembered(model: type[R], body: bytes) -> R:
    """A request that was read before; requests are frozen."""
    return model.model_validate_json(body)

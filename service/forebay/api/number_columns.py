"""Bodies whose coordinates are raw numbers: a line of JSON, then the columns as they lie in memory.

The line is the usual request, whose `at` may be left out, and ends with a line feed. All x follow, then all
y: each a float64 of eight bytes, the lowest first (IEEE 754, little-endian).
"""

from typing import Any, NamedTuple

import numpy as np
import orjson

from forebay.api.number_arrays import LARGEST, STAND_IN, Excerpt
from forebay.api.problems import Problem
from forebay.flow.arrays import FloatArray

PLACE = 16
"""Bytes of one place: its x and its y."""

CODE = "malformed-columns"


class Columns(NamedTuple):
    """The columns of a body, shapes (n,)."""

    x: FloatArray
    y: FloatArray


def excerpt_columns(body: bytes) -> Excerpt:
    """The columns of a body apart from the request, in which a stand-in takes their place.

    Raises
    ------
    Problem : malformed-columns if the body is not of this form; invalid-request if a number is out of bounds
    """
    end = body.find(b"\n")
    if end < 0:
        raise Problem(CODE, "No line feed ends the line of JSON")
    columns = _columns(body, end + 1)
    request = _request(body[:end])
    at = request.get("at", {})
    if not isinstance(at, dict) or at.keys() & {"x", "y"}:
        raise _refused("#/at", "x and y come after the line of JSON; `at` holds at most `z`")
    for name, column in columns._asdict().items():
        if not np.all(np.abs(column) <= LARGEST):  # NaN is not
            raise _refused(
                f"#/at/{name}", f"Numbers should be finite and between -{LARGEST:g} and {LARGEST:g}"
            )
    stand_in = {"x": [STAND_IN[0]], "y": [STAND_IN[1]]}
    return Excerpt(orjson.dumps(request | {"at": at | stand_in}), *columns)


def _columns(body: bytes, start: int) -> Columns:
    count, rest = divmod(len(body) - start, PLACE)
    if rest or count == 0:
        detail = f"{len(body) - start} bytes follow the line of JSON; a place takes {PLACE}"
        raise Problem(CODE, detail, facts={"size": len(body) - start})
    numbers = np.frombuffer(body, dtype="<f8", offset=start).astype(np.float64)
    return Columns(numbers[:count], numbers[count:])


def _request(line: bytes) -> dict[str, Any]:
    try:
        request = orjson.loads(line)
    except orjson.JSONDecodeError:
        raise Problem(CODE, "The first line is not JSON") from None
    if not isinstance(request, dict):
        raise Problem(CODE, "The first line is not a JSON object")
    return request


def _refused(pointer: str, detail: str) -> Problem:
    return Problem(
        "invalid-request", "1 error in the request", errors=({"pointer": pointer, "detail": detail},)
    )

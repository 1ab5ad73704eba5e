"""Long arrays of coordinates in a body, read without a Python object for each pair.

The arrays of `at` (`points`, or `x` and `y`) are most of a large body. They are cut out and read as one flat
list; the rest, with a stand-in for each, goes the usual way. Whatever is not exactly as expected (a null, a
string, a pair of three, a member somewhere else) is left in place, so that the usual way judges it.
"""

import re
from typing import NamedTuple

import numpy as np
import orjson

from forebay.flow.arrays import FloatArray

LARGEST = 1e8
"""Largest coordinate that the schema admits, in either unit system; beyond it the usual way says so."""

STAND_IN = (71234567.0625, -76543210.9375)
"""Coordinates in the place of an array, by which the usual way shows that it stood where it seemed to."""

PAIRS = re.compile(rb'"at"\s*:\s*\{\s*"points"\s*:\s*(?=\[)')
FIRST_COLUMN = re.compile(rb'"at"\s*:\s*\{\s*"x"\s*:\s*(?=\[)')
SECOND_COLUMN = re.compile(rb'\s*,\s*"y"\s*:\s*(?=\[)')

OF_NUMBERS = b"0123456789+-.eE \t\r\n"
"""What numbers are written with; the rest of a list is its skeleton."""


class Excerpt(NamedTuple):
    """A body in two parts.

    rest : the body with stand-ins for the arrays
    x, y : what the arrays held, shape (n,)
    """

    rest: bytes
    x: FloatArray
    y: FloatArray


def excerpt(body: bytes) -> Excerpt | None:
    """The coordinates of a body apart from the rest of it; None if the usual way has to read them."""
    if found := PAIRS.search(body):
        return _pairs(body, found.end())
    if found := FIRST_COLUMN.search(body):
        return _two_columns(body, found.end())
    return None


def _pairs(body: bytes, start: int) -> Excerpt | None:
    end = body.find(b"]]", start) + 2
    text = body[start:end]
    skeleton = text.translate(None, OF_NUMBERS)
    count = len(skeleton) // 4
    if count == 0 or skeleton != b"[" + b",".join([b"[,]"] * count) + b"]":
        return None
    numbers = _numbers(b"[" + text.translate(None, b"[]") + b"]")
    stand_in = b"[[%a,%a]]" % STAND_IN
    return (
        None
        if numbers is None
        else Excerpt(body[:start] + stand_in + body[end:], numbers[::2], numbers[1::2])
    )


def _two_columns(body: bytes, start: int) -> Excerpt | None:
    end = body.find(b"]", start) + 1
    second = SECOND_COLUMN.match(body, end)
    if second is None:
        return None
    last = body.find(b"]", second.end()) + 1
    x, y = _numbers(body[start:end]), _numbers(body[second.end() : last])
    if x is None or y is None or len(x) != len(y):
        return None
    rest = b"".join(
        (body[:start], b"[%a]" % STAND_IN[0], body[end : second.end()], b"[%a]" % STAND_IN[1], body[last:])
    )
    return Excerpt(rest, x, y)


def _numbers(text: bytes) -> FloatArray | None:
    """Numbers of a flat list within the bounds of coordinates; None if it holds anything else."""
    if text.translate(None, OF_NUMBERS + b",") != b"[]":
        return None
    try:
        numbers = np.array(orjson.loads(text), dtype=np.float64)
    except orjson.JSONDecodeError:
        return None
    inside = numbers.size > 0 and numbers.max() <= LARGEST and numbers.min() >= -LARGEST
    return numbers if inside else None

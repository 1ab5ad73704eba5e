"""Bodies mutated byte by byte: each is answered, refused or put off, and nothing is raised.

Set BODIES for a longer run; each mutation follows from its number.
"""

import os
import random

import orjson
import pytest

from forebay.api.examples import request_example
from forebay.api.limits import Limits
from forebay.api.operation import perform
from forebay.api.problems import Problem
from forebay.api.routers.registry import OPERATIONS
from forebay.settings import Settings

COUNT = int(os.environ.get("BODIES", "200"))

LIMITS = Limits.of(Settings(workers=1))

PIECES = (
    *(b"null", b"NaN", b"1e999", b"-0", b"true", b"19.0", b"0.1e", b"-1e-999", b"1" * 400),
    *(b"[", b"]", b"{", b"}", b",", b":", b'"', b"[" * 300, b'"kind"'),
    *(b"\\u0000", b'"\\ud800"', b"\xff", b"\xef\xbb\xbf", b"\x00"),
)
"""What parsers stumble over."""


def mutated(body, chance):
    """A body with one to eight insertions, deletions, changes or repetitions."""
    parts = bytearray(body)
    for _ in range(chance.choice((1, 1, 2, 4, 8))):
        place = chance.randrange(len(parts))
        other = chance.randrange(len(parts))
        match chance.randrange(4):
            case 0:
                parts[place:place] = chance.choice(PIECES)
            case 1 if len(parts) > 40:
                del parts[place : place + chance.randrange(1, 20)]
            case 2:
                parts[place] = chance.randrange(256)
            case _:
                parts[place:place] = parts[other : other + chance.randrange(1, 60)]
        parts = parts or bytearray(b" ")
    return bytes(parts)


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_nothing_is_raised(operation):
    body, chance = orjson.dumps(request_example(operation.operation_id)), random.Random(1)  # noqa: S311
    for _ in range(COUNT):
        reply = perform(
            operation, mutated(body, chance), operation.media_types[0], limits=LIMITS, allowance=0
        )
        if isinstance(reply, Problem):
            assert 400 <= reply.status < 500
            assert len(orjson.dumps(reply.body("x"))) < 16 * 1024


def test_estimate_takes_whole_numbers_of_any_size():
    grid = b'{"grid": {"x": [0, 1], "nx": %s, "y": [0, 1], "ny": 2}}' % (b"1" * 400)
    body = b'{"route": "/v1/field/sample", "request": {"layout": {"depth": 4}, "at": %s}}' % grid
    reply = perform(OPERATIONS["estimateCost"], body, "application/json", limits=LIMITS)
    assert isinstance(reply, Problem)
    assert reply.code == "invalid-request"
    assert [error["pointer"] for error in reply.errors] == ["#/request/at/grid/nx"]

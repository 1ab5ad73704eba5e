"""Small validated requests against an empty one of the same application, requests per second."""

import copy
from collections.abc import Iterator
from typing import Any

import orjson
from starlette.requests import Request
from starlette.responses import Response

from forebay.app import create_app
from forebay.settings import Settings

from .client import InProcess
from .timing import Measure, interleaved

COUNT = 300

KINDS = ("sink", "source", "vortex", "doublet")


def _element(number: int) -> dict[str, object]:
    at: dict[str, object] = {"name": f"e{number}", "at": [10.0 * number, 3.0 * number]}
    kind = KINDS[number % 4]
    strengths: dict[str, dict[str, object]] = {
        "sink": {"discharge": 1.5},
        "source": {"discharge": 0.9},
        "vortex": {"circulation": -0.4},
        "doublet": {"moment": [1.0, 0.5]},
    }
    return {"kind": kind, **at, **strengths[kind]}


BODY: dict[str, Any] = {
    "layout": {
        "depth": 4.0,
        "ambient": {"velocity": [0.3, 0.0]},
        "elements": [_element(number) for number in range(10)],
    },
    "at": {"points": [[1.5 * k, 40.0 - 0.25 * k] for k in range(100)]},
}
"""Ten elements of four kinds and a hundred points, some two kilobytes."""

STATE: dict[str, Any] = {"name": "shear", "velocity_gradient": [[0.0, 10.0], [0.0, 0.0]]}

REQUESTS: dict[str, dict[str, Any]] = {
    "/v1/stress/tensor": {"fluid": {"temperature": 12.0}, "states": [STATE]},
    "/v1/field/sample": BODY,
}
"""The smallest request with an answer of its own, and a usual one with its layout checked and reviewed."""


async def _empty(request: Request) -> Response:
    await request.body()
    return Response(b"", media_type="application/json")


def _varied(body: dict[str, Any]) -> list[bytes]:
    """Requests that differ from one another in their numbers, as those of a tool that moves a point do."""
    varied = []
    for number in range(COUNT):
        changed = copy.deepcopy(body)
        if "at" in changed:
            changed["at"]["points"][0][0] = 0.125 * number
        else:
            changed["states"][0]["velocity_gradient"][0][1] = 0.125 * number + 1.0
        varied.append(orjson.dumps(changed))
    return varied


def measure() -> Iterator[Measure]:
    """Rates of small requests and of empty answers to the same bodies, without sockets."""
    app = create_app(Settings())
    app.add_route("/bench/empty", _empty, methods=["POST"])
    client = InProcess(app)
    try:
        for path, body in REQUESTS.items():
            yield _ratio(client, path, _varied(body))
    finally:
        client.close()


def _ratio(client: InProcess, path: str, bodies: list[bytes]) -> Measure:
    status, answer = client.post(path, bodies[0])
    assert status == 200, answer
    small, empty = interleaved(
        lambda: client.many(path, bodies), lambda: client.many("/bench/empty", bodies), repeats=7
    )
    remark = f"{COUNT / small:.0f} against {COUNT / empty:.0f} requests/s, no sockets, {len(bodies[0])} bytes"
    what = f"{path} over an empty POST, requests/s"
    return Measure(what, empty / small, "-", 0.6, more_is_better=True, remark=remark)

"""An example request of every compute route, about one invented site."""

import json
from functools import cache
from importlib.resources import files
from typing import Any

PACKAGE = files("forebay")


def example_layout() -> dict[str, Any]:
    """The invented site."""
    layout: dict[str, Any] = json.loads((PACKAGE / "demo" / "layout.json").read_text(encoding="utf-8"))
    return layout


@cache
def request_example(operation_id: str) -> dict[str, Any]:
    """Example request of an operation; where its file says `"layout": "site"`, the invented site stands."""
    path = PACKAGE / "examples" / f"{operation_id}.json"
    request: dict[str, Any] = json.loads(path.read_text(encoding="utf-8"))
    return request | {"layout": example_layout()} if request.get("layout") == "site" else request


OPEN_WATER: dict[str, Any] = {
    "depth": 3.0,
    "ambient": {"velocity": [0.4, 0.1]},
    "elements": [
        {"kind": "sink", "name": "intake", "at": [0, 0], "discharge": 1.0},
        {"kind": "source", "name": "outfall", "at": [40, 10], "discharge": 0.6},
        {"kind": "vortex", "name": "eddy", "at": [-20, 30], "circulation": 0.8},
        {"kind": "doublet", "name": "pair", "at": [25, -30], "moment": [-1.2, 0.3]},
    ],
}
"""A site without banks."""

CHANNEL: dict[str, Any] = {
    "depth": 3.0,
    "ambient": {"velocity": [0.4, 0.0]},
    "shore": {"kind": "channel", "point": [0, 0], "along": [1, 0], "width": 60},
    "elements": [
        {"kind": "sink", "name": "intake", "at": [0, 5], "discharge": 1.0},
        {"kind": "source", "name": "outfall", "at": [40, 60], "discharge": 0.6},
    ],
    "structures": [{"kind": "pier", "name": "pier", "at": [20, 30], "radius": 1.5}],
}
"""A small site between banks."""


OF_NAMED_ELEMENTS = frozenset({"findInfluenceZone", "checkScreen", "checkSubmergence", "computeArrivals"})
"""Operations whose example names elements of its own site, so that no other can stand in for it."""


def rehearsals(operation_id: str) -> list[dict[str, Any]]:
    """Requests, each answered quickly, that between them take the kernels an operation needs."""
    example = request_example(operation_id)
    if "layout" not in example or operation_id in OF_NAMED_ELEMENTS:
        return [example]
    return [example | {"layout": layout} for layout in (OPEN_WATER, CHANNEL)]


def file_name(path: str) -> str:
    """Name of the file that holds the example of a route: `/v1/field/sample` is in `field-sample.json`."""
    return "-".join(path.split("/")[2:]) + ".json"

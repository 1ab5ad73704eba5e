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


RINGED: dict[str, Any] = {
    "depth": 3.0,
    "tolerance": 1e-3,
    "shore": {
        "kind": "surveyed",
        "water": {"type": "Polygon", "coordinates": [[[0, 0], [120, 0], [120, 60], [0, 60]]]},
        "open_edges": [
            {"name": "upstream", "from": [0, 0], "to": [0, 60], "discharge": 60.0},
            {"name": "downstream", "from": [120, 0], "to": [120, 60]},
        ],
    },
    "elements": [
        {"kind": "sink", "name": "intake", "at": [40, 15], "discharge": 1.0},
        {"kind": "source", "name": "outfall", "at": [70, 40], "discharge": 0.6},
    ],
    "structures": [{"kind": "outline", "name": "jetty", "points": [[90, 20], [100, 20], [95, 30]]}],
}
"""A small site within rings."""

LINED: tuple[dict[str, Any], ...] = tuple(
    {
        "depth": 3.0,
        **shore,
        "elements": [
            {"kind": "sink", "name": "intake", "at": [20, 8], "discharge": 1.0},
            {"kind": "source", "name": "outfall", "at": [5, 30], "discharge": 0.6},
            {"kind": "line-sink", "name": "screen bay", "from": [30, 0], "to": [36, 0], "discharge": 0.4},
        ],
    }
    for shore in (
        {"shore": {"kind": "corner", "vertex": [0, 0], "along": [1, 0], "interior_angle_deg": 110}},
        {
            "tolerance": 1e-3,
            "ambient": {"velocity": [0.4, 0.0]},
            "shore": {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]},
            "structures": [
                {"kind": "outline", "name": "groyne", "points": [[10, 0], [12, 0], [12, 8], [10, 8]]}
            ],
        },
    )
)
"""Small sites with a line element in the corner of two banks, and on a bank beside a groyne."""

MORE_SITES: dict[str, tuple[dict[str, Any], ...]] = {
    "sampleField": (RINGED,),
    "integrateContour": (RINGED, *LINED),
    "searchStagnation": LINED,
}
"""Sites on which an operation is rehearsed too, for kernels that no other takes."""

OF_NAMED_ELEMENTS = frozenset({"findInfluenceZone", "checkScreen", "checkSubmergence", "computeArrivals"})
"""Operations whose example names elements of its own site, so that no other can stand in for it."""


def rehearsals(operation_id: str) -> list[dict[str, Any]]:
    """Requests, each answered quickly, that between them take the kernels an operation needs."""
    example = request_example(operation_id)
    if "layout" not in example or operation_id in OF_NAMED_ELEMENTS:
        return [example]
    layouts = (OPEN_WATER, CHANNEL, *MORE_SITES.get(operation_id, ()))
    return [example | {"layout": layout} for layout in layouts]


def file_name(path: str) -> str:
    """Name of the file that holds the example of a route: `/v1/field/sample` is in `field-sample.json`."""
    return "-".join(path.split("/")[2:]) + ".json"

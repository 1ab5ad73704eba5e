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


def file_name(path: str) -> str:
    """Name of the file that holds the example of a route: `/v1/field/sample` is in `field-sample.json`."""
    return "-".join(path.split("/")[2:]) + ".json"

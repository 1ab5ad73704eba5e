"""Where things of a converted layout stand in the request: conversion renumbers structures and islands."""

import re

from forebay.api.schemas.layout import Layout
from forebay.api.units import UnitSystem
from forebay.flow.errors import FlowError, Path

NUMBERED = re.compile(r"structures/(\d+)")
"""How the detail of an error names another structure."""


def at_origin(error: FlowError, site: object, units: UnitSystem) -> FlowError:
    """The error with path and detail as of the request; one that conversion itself raised is that already."""
    if isinstance(site, Layout) and error.in_layout and site.is_converted(units):
        error.path = original_path(error.path, site, units)
        error.detail = NUMBERED.sub(lambda found: _renumbered(int(found[1]), site, units), error.detail)
    return error


def _renumbered(index: int, site: Layout, units: UnitSystem) -> str:
    return "/".join(map(str, original_path(("structures", index), site, units)))


def original_path(path: Path, site: Layout, units: UnitSystem) -> Path:
    """Path in a layout as written, of one in the layout that the flow was given.

    Outlines that became part of surveyed land are missing among the flow's structures, and its islands are
    rings of the polygon.
    """
    match path:
        case ("structures", int(index), *rest):
            merged = site.merged(units)
            left = [number for number in range(len(site.structures)) if number not in merged]
            return ("structures", left[index], *rest)
        case ("shore", "edges", *rest):
            return ("shore", "open_edges", *rest)
        case ("shore", "islands", int(index), *_):
            water = site.surveyed(units)
            return path if water is None else water.island_paths[index]
        case _:
            return path

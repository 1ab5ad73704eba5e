"""Layouts for tests: random ones of every kind of element on every shore, and their JSON bodies."""

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from forebay.flow.layout import (
    Ambient,
    Core,
    CoreModel,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Shore,
    Sink,
    Source,
    Vortex,
    outflow,
)
from support.sites import BASINS, SHORES, SPAN, STRAIGHT_THROUGH, bank_place, place

POINT_KINDS = ("source", "sink", "vortex", "doublet")
LINE_KINDS = ("line-source", "line-sink")
CORED_KINDS = ("rankine", "lamb-oseen")
BANK_KINDS = ("bank-source", "bank-sink")
ALL_KINDS = (*POINT_KINDS, *LINE_KINDS, *CORED_KINDS, *BANK_KINDS)

CELLS = 8
"""The water is divided into CELLS x CELLS cells; each holds at most one thing, so that none overlap."""

CORE_RADIUS = 0.2
"""Small, so that the vorticity of a lamb-oseen core has died out (exp(-30)) at every wall of `place` [m]."""


def element_of(  # noqa: PLR0911 - one return a kind
    kind: str, name: str, at: complex, strength: float, end: complex | None = None
) -> Element:
    """One element of a kind; `end` is where a line element ends."""
    discharge = abs(strength)
    tip = at + 0.05 * SPAN if end is None else end
    match kind:
        case "source" | "bank-source":
            return Source(name, at, discharge)
        case "sink" | "bank-sink":
            return Sink(name, at, discharge)
        case "vortex":
            return Vortex(name, at, strength)
        case "doublet":
            return Doublet(name, at, strength * (3 - 4j))
        case "line-source":
            return LineSource(name, at, tip, discharge)
        case "line-sink":
            return LineSink(name, at, tip, discharge)
        case "rankine" | "lamb-oseen":
            return Vortex(name, at, strength, Core(CoreModel(kind), CORE_RADIUS))
        case _:
            raise ValueError(kind)


def _at(shore: Shore, cell: int, jitter: tuple[float, float] = (0.5, 0.5), *, cells: int = CELLS) -> complex:
    row, column = divmod(cell, cells)
    return place(shore, (row + jitter[0]) / cells, (column + jitter[1]) / cells)


def balanced(elements: Sequence[Element], at: complex, name: str = "balance") -> tuple[Element, ...]:
    """Elements with one more source or sink at `at` so that their discharges add to zero."""
    net = sum(outflow(element) for element in elements)
    if net == 0.0:
        return tuple(elements)
    # the sum in the order the code may use differs in the last digits: whatever it is, it is far below 1e-9
    last = Sink(name, at, net) if net > 0 else Source(name, at, -net)
    return (*elements, last)


def assemble(
    shore_name: str,
    things: Sequence[tuple[str, int, float]],
    *,
    speed: float = 0.0,
    piers: Sequence[int] = (),
    cells: int = CELLS,
) -> Layout:
    """Build a layout from (kind, cell, strength) triples; no two share a cell.

    Bank elements stand along the first wall in the order of their cells; a basin is balanced in cell 0.
    """
    shore = SHORES[shore_name]
    elements = [
        _thing(shore, kind, cell, strength, name=f"{kind} {number}", cells=cells)
        for number, (kind, cell, strength) in enumerate(things)
    ]
    if shore_name in BASINS:
        elements = list(balanced(elements, _at(shore, 0, cells=cells)))
    along = getattr(shore, "along", 1 + 0j)
    current = speed * along if shore_name in STRAIGHT_THROUGH else 0j
    structures = tuple(
        Pier(f"pier {number}", _at(shore, cell, cells=cells), 0.02 * SPAN, circulation=0.3 * (number - 1))
        for number, cell in enumerate(piers)
    )
    return Layout(4.0, ambient=Ambient(current), shore=shore, elements=tuple(elements), structures=structures)


def _thing(shore: Shore, kind: str, cell: int, strength: float, *, name: str, cells: int) -> Element:
    if kind in BANK_KINDS:
        return element_of(kind, name, bank_place(shore, cell / cells**2), strength)
    at = _at(shore, cell, cells=cells)
    return element_of(kind, name, at, strength, _at(shore, cell, (0.7, 0.8), cells=cells))


def random_layout(
    shore_name: str,
    seed: int,
    *,
    kinds: Sequence[str] = ALL_KINDS,
    count: int = 6,
    piers: int = 0,
    cells: int = CELLS,
) -> Layout:
    """Random layout of `count` elements of the given kinds, strengths between 0.3 and 3, and a current."""
    generator = np.random.default_rng(seed)
    chosen = 1 + generator.permutation(cells**2 - 1)[: count + piers]
    things = [
        (
            kinds[(number + seed) % len(kinds)],
            int(cell),
            float(generator.uniform(0.3, 3.0) * generator.choice((-1.0, 1.0))),
        )
        for number, cell in enumerate(chosen[:count])
    ]
    speed = float(generator.uniform(0.1, 0.6) * generator.choice((-1.0, 1.0)))
    return assemble(
        shore_name, things, speed=speed, piers=[int(cell) for cell in chosen[count:]], cells=cells
    )


def without_current(layout: Layout) -> Layout:
    """The same layout in still water."""
    return replace(layout, ambient=Ambient())


def _pair(value: complex) -> list[float]:
    return [value.real, value.imag]


def open_water_body(elements: list[dict[str, Any]], **extra: Any) -> dict[str, Any]:
    """Layout of a request: depth 1 m unless given, so that a discharge is a strength per depth."""
    return {"depth": 1.0, "elements": elements, **extra}


def sink(at: complex, discharge: float, name: str = "intake") -> dict[str, Any]:
    """A sink as it stands in a request."""
    return {"kind": "sink", "name": name, "at": _pair(at), "discharge": discharge}


def source(at: complex, discharge: float, name: str = "outfall") -> dict[str, Any]:
    """A source as it stands in a request."""
    return {"kind": "source", "name": name, "at": _pair(at), "discharge": discharge}


def vortex(at: complex, circulation: float, name: str = "gyre", **extra: Any) -> dict[str, Any]:
    """A vortex as it stands in a request."""
    return {"kind": "vortex", "name": name, "at": _pair(at), "circulation": circulation, **extra}


def doublet(at: complex, moment: complex, name: str = "doublet") -> dict[str, Any]:
    """A doublet as it stands in a request."""
    return {"kind": "doublet", "name": name, "at": _pair(at), "moment": _pair(moment)}


def line_sink(start: complex, end: complex, discharge: float, name: str = "screen") -> dict[str, Any]:
    """A line sink as it stands in a request."""
    ends = {"from": _pair(start), "to": _pair(end)}
    return {"kind": "line-sink", "name": name, **ends, "discharge": discharge}


def pier(at: complex, radius: float, circulation: float = 0.0, name: str = "P1") -> dict[str, Any]:
    """A pier as it stands in a request."""
    return {"kind": "pier", "name": name, "at": _pair(at), "radius": radius, "circulation": circulation}

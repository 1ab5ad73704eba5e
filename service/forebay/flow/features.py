"""What stands in the water, seen from the flow: per unit depth, and with the wall it stands on."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.assembly import strength
from forebay.flow.layout import Core, Layout, LineSink, LineSource, PointElement, Vortex, outflow
from forebay.flow.shores import Wall

WATER = "water"
"""Name of the place of what stands on no wall."""


@dataclass(frozen=True, slots=True)
class Singularity:
    """A point element in the water.

    at : position, x + iy [m];  owner : its name;  kind : the element
    strength : g = (q - i Gamma)/(2 pi) [m2/s];  on : name of the wall it stands on, or "water"
    """

    at: complex
    owner: str
    kind: PointElement
    strength: complex
    on: str


@dataclass(frozen=True, slots=True)
class Line:
    """A line element: flux [m/s] out of it per length, negative for a sink; `on` as for Singularity."""

    start: complex
    end: complex
    owner: str
    flux: float
    on: str


@dataclass(frozen=True, slots=True)
class CoredVortex:
    """A vortex with a core of `core.radius` [m]."""

    at: complex
    core: Core
    owner: str
    circulation: float


def wall_at(at: complex, walls: tuple[Wall, ...], reach: float) -> str:
    """Name of the wall within `reach` [m] of a point, else "water"."""
    z = np.asarray(at)
    return next((wall.name for wall in walls if float(wall.distance(z)) <= reach), WATER)


def singularities_of(layout: Layout, walls: tuple[Wall, ...], reach: float) -> tuple[Singularity, ...]:
    """The point elements of a layout, in its order."""
    return tuple(
        Singularity(e.at, e.name, e, strength(e, layout.depth), wall_at(e.at, walls, reach))
        for e in layout.elements
        if not isinstance(e, LineSource | LineSink)
    )


def lines_of(layout: Layout, walls: tuple[Wall, ...], reach: float) -> tuple[Line, ...]:
    """The line elements of a layout, in its order."""
    return tuple(
        Line(
            e.start,
            e.end,
            e.name,
            outflow(e) / layout.depth / abs(e.end - e.start),
            _wall_along(e.start, e.end, walls, reach),
        )
        for e in layout.elements
        if isinstance(e, LineSource | LineSink)
    )


def cores_of(layout: Layout) -> tuple[CoredVortex, ...]:
    """The vortices with a core, in the layout's order."""
    return tuple(
        CoredVortex(e.at, e.core, e.name, e.circulation)
        for e in layout.elements
        if isinstance(e, Vortex) and e.core
    )


def _wall_along(start: complex, end: complex, walls: tuple[Wall, ...], reach: float) -> str:
    names = {wall_at(at, walls, reach) for at in (start, 0.5 * (start + end), end)}
    return names.pop() if len(names) == 1 else WATER

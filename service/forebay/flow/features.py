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
    strength : g = (q - i Gamma)/(2 pi) [m2/s];  wall : on which it stands, None in the water
    """

    at: complex
    owner: str
    kind: PointElement
    strength: complex
    wall: Wall | None

    @property
    def on(self) -> str:
        """Name of the wall, or "water"."""
        return WATER if self.wall is None else self.wall.name


@dataclass(frozen=True, slots=True)
class Line:
    """A line element: flux [m/s] out of it per length, negative for a sink; `wall` in which it lies."""

    start: complex
    end: complex
    owner: str
    flux: float
    wall: Wall | None

    @property
    def on(self) -> str:
        """Name of the wall, or "water"."""
        return WATER if self.wall is None else self.wall.name


@dataclass(frozen=True, slots=True)
class CoredVortex:
    """A vortex with a core of `core.radius` [m]."""

    at: complex
    core: Core
    owner: str
    circulation: float


def wall_at(places: tuple[complex, ...], walls: tuple[Wall, ...], reach: float) -> Wall | None:
    """The first wall with all places within `reach` [m] of it, None without one."""
    z = np.array(places)
    return next((wall for wall in walls if bool(np.all(wall.distance(z) <= reach))), None)


def singularities_of(layout: Layout, walls: tuple[Wall, ...], reach: float) -> tuple[Singularity, ...]:
    """The point elements of a layout, in its order."""
    return tuple(
        Singularity(e.at, e.name, e, strength(e, layout.depth), wall_at((e.at,), walls, reach))
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
            wall_at((e.start, 0.5 * (e.start + e.end), e.end), walls, reach),
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

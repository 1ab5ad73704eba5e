"""Dividing streamlines and the outline of the water that reaches an intake.

The water of a sector is a strip bounded by the two streamlines at its edges. Traced a hair's breadth inside,
they follow the divide to its stagnation point and on along the branch, or the wall, that bounds the strip;
laid end to end round the mouth they are the outline of the whole zone.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Basin, Channel, DeadEnd
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import Surroundings
from forebay.flow.traces import Stop, Traces
from forebay.flow.withdrawal.divides import Arrivals, Divides, bounding
from forebay.flow.withdrawal.mouths import Mouth
from forebay.flow.withdrawal.sectors import Sector

_SIZES = 4.0
"""Extent of what is drawn, over the size of the layout [-]."""
_WIDTHS = 3.0
"""Extent of what is drawn in a channel, at least, over its width [-]."""
_TURN = 0.1
"""Change of direction between neighbouring points of a drawn line [rad]."""
_HAIR = 1e-9
"""Distance from the edge of a sector, over its flux, at which its edge is traced [-]."""
_CORNERS = 48


@dataclass(frozen=True, slots=True)
class Canvas:
    """How lines are drawn.

    model, surroundings : the flow
    extent : radius about the far field's centre beyond which lines that do not return are cut [m]
    """

    model: FlowModel
    surroundings: Surroundings
    extent: float

    @property
    def centre(self) -> complex:
        """Middle of the layout [m]."""
        return self.surroundings.far.centre

    def trimmed(self, path: ComplexArray) -> ComplexArray:
        """A path cut where it leaves the extent for good."""
        inside = np.nonzero(np.abs(path - self.centre) <= self.extent)[0]
        if inside.size == 0 or inside[-1] == path.size - 1:
            return path
        last = int(inside[-1])
        a = path[last] - self.centre
        span = path[last + 1] - path[last]
        half = (a.conjugate() * span).real
        square = abs(span) ** 2
        part = (np.sqrt(half**2 + square * (self.extent**2 - abs(a) ** 2)) - half) / square
        return np.append(path[: last + 1], path[last] + part * span)


def canvas_of(model: FlowModel, surroundings: Surroundings, intakes: tuple[str, ...]) -> Canvas:
    """Canvas wide enough for the layout and for the widest zone."""
    far, shore = surroundings.far, model.layout.shore
    extent = _SIZES * far.radius
    if isinstance(shore, Channel | DeadEnd):
        extent = max(extent, _WIDTHS * shore.width)
    speed = max((end.speed for end in far.ends), default=0.0)
    if speed > 0.0 and not isinstance(shore, Channel | DeadEnd):
        taken = [e.discharge for e in model.layout.elements if e.name in intakes]  # type: ignore[union-attr]
        extent = max(extent, 2.0 * max(taken, default=0.0) / model.layout.depth / speed)
    if isinstance(shore, Basin):
        extent = inf
    return Canvas(model, surroundings, extent)


def dividing_streamlines(
    canvas: Canvas, divides: Divides, arriving: Traces, choice: tuple[Arrivals, str]
) -> tuple[ComplexArray, ...]:
    """Streamlines that bound or divide the water of an intake, in the direction of flow.

    arriving : traces of the arriving branches against the flow, with their paths
    choice : the intake's arrivals and its name

    First those that arrive at the stagnation points on the edge of the zone, then those that leave them.
    """
    branches = divides.branches
    edge = divides.arriving[bounding(divides, choice[1])]
    nodes = np.unique(np.concatenate([branches.node[edge], choice[0].nodes]))
    drawn = []
    for i, branch in enumerate(divides.arriving):
        if branches.node[branch] in nodes:
            drawn.append(canvas.trimmed(np.append(branches.centres[branch], arriving.paths[i]))[::-1])
    for i, branch in enumerate(divides.leaving):
        if branches.node[branch] in nodes:
            drawn.append(canvas.trimmed(np.append(branches.centres[branch], divides.forward.paths[i])))
    return tuple(drawn)


def edges(sectors: list[Sector]) -> FloatArray:
    """Coordinates just inside both edges of every sector [m2/s]."""
    return np.concatenate([sector.at(np.array([_HAIR, 1.0 - _HAIR])) for sector in sectors])


def zone_outline(
    canvas: Canvas, divides: Divides, water: tuple[Mouth, Arrivals, list[Sector]], traces: Traces
) -> ComplexArray:
    """Outline of the water that reaches a mouth, anticlockwise [m].

    water : the mouth, the branches that arrive there and its sectors
    traces : of the sectors' `edges` against the flow, with their paths
    """
    mouth, arrivals, sectors = water
    if not mouth.breaks and len(sectors) == 1 and arrivals.coordinates.size == 0:
        return _whole_water(canvas)
    parts: list[ComplexArray] = []
    for k, sector in enumerate(sectors):
        left = _beyond_node(divides, (mouth, arrivals), sector.low, canvas.trimmed(traces.paths[2 * k]))
        right = _beyond_node(divides, (mouth, arrivals), sector.high, canvas.trimmed(traces.paths[2 * k + 1]))
        far = all(traces.stops[i] is Stop.FAR_END for i in (2 * k, 2 * k + 1))
        closure = _arc(canvas, left[-1], right[-1]) if far and not canvas.surroundings.far.axis else left[:0]
        parts += [left, closure, right[::-1]]
    return np.concatenate(parts)


def _beyond_node(
    divides: Divides, water: tuple[Mouth, Arrivals], edge: float, path: ComplexArray
) -> ComplexArray:
    """The part of a path beyond the stagnation point from which the divide at `edge` comes."""
    mouth, arrivals = water
    if arrivals.coordinates.size == 0:
        return path
    gap = np.abs(arrivals.coordinates - edge)
    if not mouth.breaks:
        gap = np.abs(np.mod(arrivals.coordinates - edge + 0.5 * mouth.total, mouth.total) - 0.5 * mouth.total)
    nearest = int(np.argmin(gap))
    if gap[nearest] > 1e-9 * mouth.total:
        return path
    node = divides.branches.nodes[arrivals.nodes[nearest]]
    closest = int(np.argmin(np.abs(path - node)))
    return np.concatenate([[node], path[closest + 1 :]]) if closest + 1 < path.size else path[-1:]


def _arc(canvas: Canvas, start: complex, end: complex) -> ComplexArray:
    """Anticlockwise arc of the extent between two of its points, without them."""
    first, last = (float(np.angle(z - canvas.centre)) for z in (start, end))
    turn = (last - first) % (2.0 * np.pi)
    parts: FloatArray = np.linspace(0.0, 1.0, 2 + int(_CORNERS * turn / (2.0 * np.pi)))[1:-1]
    return np.asarray(
        canvas.centre + canvas.extent * np.exp(1j * (first + turn * parts)), dtype=np.complex128
    )


def _whole_water(canvas: Canvas) -> ComplexArray:
    """All of the water within the extent."""
    if isinstance(canvas.model.layout.shore, Basin):
        return np.array([wall.point for wall in canvas.model.walls], dtype=np.complex128)
    circle = canvas.centre + canvas.extent * np.exp(2j * np.pi * np.arange(_CORNERS) / _CORNERS)
    wet = canvas.model.wet(circle)
    if bool(np.all(wet)):
        return np.asarray(circle, dtype=np.complex128)
    return np.asarray(_clipped(canvas, circle), dtype=np.complex128)


def _clipped(canvas: Canvas, circle: ComplexArray) -> ComplexArray:
    """The circle with its points on land moved to the nearest wall."""
    walls = canvas.model.walls
    moved = circle.copy()
    for i in np.nonzero(~canvas.model.wet(circle))[0]:
        wall = walls[int(np.argmin([float(w.distance(circle[i])) for w in walls]))]
        moved[i] = wall.nearest(circle[i])
    return moved

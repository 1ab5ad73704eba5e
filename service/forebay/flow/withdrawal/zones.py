"""Dividing streamlines and the outline of the water that reaches an intake.

The water of a sector is a strip bounded by the two streamlines at its edges. Traced a hair's breadth inside,
they follow the divide to its stagnation point and on along the branch, or the wall, that bounds the strip;
laid end to end round the mouth they are the outline of the whole zone.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.layout import Basin, Channel, DeadEnd
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import Surroundings
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.divides import Arrivals, Divides, bounding, lines_through
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
    extent : radius about the far field's centre where lines end [m]
    """

    model: FlowModel
    surroundings: Surroundings
    extent: float

    @property
    def centre(self) -> complex:
        """Middle of the layout [m]."""
        return self.surroundings.far.centre

    def rules(self, *, forward: bool) -> TraceRules:
        """Rules of tracing for a drawn line."""
        return TraceRules(
            forward=forward, tolerance=1e-6, largest_turn=_TURN, region=self.extent, keep_paths=True
        )

    def trimmed(self, path: ComplexArray) -> ComplexArray:
        """A path cut where it leaves the extent for the last time."""
        beyond = np.abs(path - self.centre) > self.extent
        if path.size < 2 or not beyond[-1] or beyond[-2]:
            return path
        a, b = path[-2] - self.centre, path[-1] - self.centre
        span = b - a
        half = (a.conjugate() * span).real
        square = abs(span) ** 2
        part = (np.sqrt(half**2 + square * (self.extent**2 - abs(a) ** 2)) - half) / square
        return np.append(path[:-1], self.centre + a + part * span)


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
    canvas: Canvas, divides: Divides, arrivals: Arrivals, name: str
) -> tuple[ComplexArray, ...]:
    """Streamlines that bound or divide the water of the intake `name`, in the direction of flow.

    First those that arrive at the stagnation points on the edge of the zone, then those that leave them.
    """
    branches = divides.branches
    edge = divides.arriving[bounding(divides, name)]
    nodes = np.unique(np.concatenate([branches.node[edge], arrivals.nodes]))
    back = divides.arriving[np.isin(branches.node[divides.arriving], nodes)]
    on = divides.leaving[np.isin(branches.node[divides.leaving], nodes)]
    drawn = _drawn(canvas, divides, back, forward=False) + _drawn(canvas, divides, on, forward=True)
    return tuple(drawn)


def _drawn(canvas: Canvas, divides: Divides, chosen: IntArray, *, forward: bool) -> list[ComplexArray]:
    if chosen.size == 0:
        return []
    lines = lines_through(canvas.model, divides, chosen, rules=canvas.rules(forward=forward))
    if forward:
        return [canvas.trimmed(line) for line in lines]
    return [canvas.trimmed(line[::-1])[::-1] for line in lines]


def zone_outline(
    canvas: Canvas, divides: Divides, mouth: Mouth, arrivals: Arrivals, sectors: list[Sector]
) -> ComplexArray:
    """Outline of the water that reaches a mouth, anticlockwise [m]."""
    if not mouth.breaks and len(sectors) == 1 and arrivals.coordinates.size == 0:
        return _whole_water(canvas)
    edges = np.concatenate([[s.at(np.array(_HAIR)), s.at(np.array(1.0 - _HAIR))] for s in sectors])
    wrapped = edges if mouth.breaks else np.mod(edges, mouth.total)
    rules = canvas.rules(forward=False)
    traces = trace_streamlines(
        canvas.model, mouth.release(wrapped), surroundings=canvas.surroundings, rules=rules
    )
    parts: list[ComplexArray] = []
    for k, sector in enumerate(sectors):
        left = _beyond_node(divides, arrivals, mouth, sector.low, canvas.trimmed(traces.paths[2 * k]))
        right = _beyond_node(divides, arrivals, mouth, sector.high, canvas.trimmed(traces.paths[2 * k + 1]))
        parts += [left, _closure(canvas, traces, (2 * k, 2 * k + 1), (left[-1], right[-1])), right[::-1]]
    return np.concatenate(parts)


def _beyond_node(
    divides: Divides, arrivals: Arrivals, mouth: Mouth, edge: float, path: ComplexArray
) -> ComplexArray:
    """The part of a path beyond the stagnation point from which the divide at `edge` comes."""
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


def _closure(
    canvas: Canvas, traces: Traces, pair: tuple[int, int], ends: tuple[complex, complex]
) -> ComplexArray:
    """Points between the far ends of a strip: an arc at the extent, or the outfall itself."""
    stops = [traces.stops[i] for i in pair]
    if all(stop is Stop.CAPTURED for stop in stops):
        return np.array(ends)[:0]
    if canvas.surroundings.far.axis or not all(stop in {Stop.LEFT_REGION, Stop.FAR_END} for stop in stops):
        return np.empty(0, dtype=np.complex128)
    return _arc(canvas, *ends)


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

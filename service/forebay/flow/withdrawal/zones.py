"""Dividing streamlines and the outline of the water that reaches an intake.

The water of a sector is a strip bounded by the two streamlines at its edges. Traced a hair's breadth inside,
they follow the divide to its stagnation point and on along the branch, or the wall, that bounds the strip;
laid end to end round the mouth they are the outline of the whole zone.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Basin, Channel, DeadEnd, Surveyed
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
_SAG = 1e-4
"""How far a drawn chord may sag, over the size of the layout, if at most 8 points are put on it [-]."""
_MOST_BETWEEN = 8
_HAIR, _WIDE_HAIR = 1e-9, 1e-6
"""Distance from the edge of a sector, over its flux, at which its edge is traced [-]; see `Canvas.hair`."""
_ROUNDINGS = 1e4
"""Roundings of the coordinates that fit across a hair at least [-]."""
_CORNERS = 180


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

    def drawn(self, path: ComplexArray) -> ComplexArray:
        """A traced path with enough points between, cut where it leaves the extent for good."""
        size = min(self.extent, self.surroundings.far.radius + self.model.scale)
        full = filled_in(self.model, path, _SAG * size)
        inside = np.nonzero(np.abs(full - self.centre) <= self.extent)[0]
        if inside.size == 0 or inside[-1] == full.size - 1:
            return full
        last = inside[-1:]
        cut = on_level(self.model, full[last], self._crossing(full[last], full[last + 1]))
        return np.concatenate([full[: last[0] + 1], cut])

    def _crossing(self, inner: ComplexArray, outer: ComplexArray) -> ComplexArray:
        """Where chords from inside the extent to outside cross its circle, shape (n,) [m]."""
        a, span = inner - self.centre, outer - inner
        half, square = (np.conj(a) * span).real, np.abs(span) ** 2
        part = (np.sqrt(half**2 + square * (self.extent**2 - np.abs(a) ** 2)) - half) / square
        return np.asarray(inner + part * span, dtype=np.complex128)

    def clamped(self, path: ComplexArray) -> ComplexArray:
        """A drawn path with its excursions beyond the extent moved on to the circle, where that is wet."""
        beyond = np.abs(path - self.centre) > self.extent * (1.0 + 1e-12)
        if not np.any(beyond):
            return path
        leaves = np.nonzero(~beyond[:-1] & beyond[1:])[0]
        returns = np.nonzero(beyond[:-1] & ~beyond[1:])[0]
        edge = np.concatenate(
            [self._crossing(path[leaves], path[leaves + 1]), self._crossing(path[returns + 1], path[returns])]
        )
        where = np.concatenate([leaves, returns]) + 1
        full, far = (
            np.insert(path, where, edge),
            np.insert(beyond, where, np.zeros(edge.size, dtype=np.bool_)),
        )
        away = full[far] - self.centre
        full[far] = self.centre + self.extent * away / np.abs(away)
        return np.asarray(full[~far | self.model.wet(full)], dtype=np.complex128)

    @property
    def hair(self) -> float:
        """Distance from the edge of a sector, over its flux, at which its edge is traced [-].

        Where nothing comes from far away, a line along a wall runs far out before it returns: the nearer to
        the wall, the further, until the water stands still to rounding. Far from the origin of the
        coordinates, as in a map grid, a hair must be wide enough to be seen beside their rounding.
        """
        rounding = float(np.finfo(np.float64).eps) * abs(self.centre) / self.model.scale
        hair = _HAIR if any(end.gives for end in self.surroundings.far.ends) else _WIDE_HAIR
        return max(hair, _ROUNDINGS * rounding)


def filled_in(model: FlowModel, path: ComplexArray, sag: float) -> ComplexArray:
    """A path with points put between, on the same streamline, so that its chords sag by less than `sag` [m].

    The points lie on cubics with the directions of flow at both ends, then go back to the stream function.
    """
    if path.size < 3:
        return path
    w = model.velocity(path)
    with np.errstate(invalid="ignore", divide="ignore"):
        heading = np.conj(w) / np.abs(w)
    chord = path[1:] - path[:-1]
    heading = np.where(np.isfinite(heading), heading, 0.0)
    forward = np.sign((heading[1:] * np.conj(chord)).real.sum())
    a, b = forward * heading[:-1] * np.abs(chord), forward * heading[1:] * np.abs(chord)
    deep = np.abs(b - a) / 8.0
    count = np.clip(np.ceil(np.sqrt(deep / sag)), 1, _MOST_BETWEEN).astype(np.int64)
    count[(heading[:-1] == 0.0) | (heading[1:] == 0.0)] = 1
    index = np.repeat(np.arange(chord.size), count)
    first = np.repeat(np.cumsum(count) - count, count)
    t = (np.arange(index.size) - first) / count[index]
    z = path[:-1][index] + chord[index] * t**2 * (3.0 - 2.0 * t)
    z = z + a[index] * t * (1.0 - t) ** 2 - b[index] * t**2 * (1.0 - t)
    z = np.where(t > 0.0, on_level(model, path[:-1][index], z), path[:-1][index])
    return np.append(z, path[-1])


def on_level(model: FlowModel, known: ComplexArray, near: ComplexArray) -> ComplexArray:
    """Points moved across the flow on to the streamline through `known`, shape (n,) each [m]."""
    z = near
    for _ in range(2):
        with np.errstate(invalid="ignore", divide="ignore"):
            shift = -1j * model.chord(known, z).imag / model.velocity(z)
        z = z + np.where(np.abs(shift) < 0.25 * np.abs(near - known), shift, 0.0)
    return z


def canvas_of(model: FlowModel, surroundings: Surroundings, intakes: tuple[str, ...]) -> Canvas:
    """Canvas wide enough for the layout and for the widest zone."""
    far, shore = surroundings.far, model.layout.shore
    extent = _SIZES * max(far.radius, model.scale)
    if isinstance(shore, Channel | DeadEnd):
        extent = max(extent, _WIDTHS * shore.width)
    speed = max((end.speed for end in far.ends), default=0.0)
    if speed > 0.0 and not isinstance(shore, Channel | DeadEnd):
        taken = [e.discharge for e in model.layout.elements if e.name in intakes]  # type: ignore[union-attr]
        extent = max(extent, 3.0 * max(taken, default=0.0) / model.layout.depth / speed)
    if isinstance(shore, Basin | Surveyed):
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
            drawn.append(canvas.drawn(np.append(branches.centres[branch], arriving.paths[i]))[::-1])
    for i, branch in enumerate(divides.leaving):
        if branches.node[branch] in nodes:
            drawn.append(canvas.drawn(np.append(branches.centres[branch], divides.forward.paths[i])))
    return tuple(drawn)


def edges(canvas: Canvas, sectors: list[Sector]) -> FloatArray:
    """Coordinates just inside both edges of every sector [m2/s]."""
    return np.concatenate([sector.at(np.array([canvas.hair, 1.0 - canvas.hair])) for sector in sectors])


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
        left = _beyond_node(
            divides, (mouth, arrivals), sector.low, canvas.clamped(canvas.drawn(traces.paths[2 * k]))
        )
        right = _beyond_node(
            divides, (mouth, arrivals), sector.high, canvas.clamped(canvas.drawn(traces.paths[2 * k + 1]))
        )
        far = all(traces.stops[i] is Stop.FAR_END for i in (2 * k, 2 * k + 1))
        closure = _arc(canvas, left[-1], right[-1]) if far and canvas.surroundings.far.is_round else left[:0]
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
    distance = np.abs(path - node)
    closest = int(
        np.argmax(distance < 3.0 * distance.min())
    )  # the first pass, of a loop back to the node too
    while closest + 1 < path.size and distance[closest + 1] < distance[closest]:
        closest += 1
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
    shore = canvas.model.layout.shore
    if isinstance(shore, Basin):
        return np.array([wall.point for wall in canvas.model.walls], dtype=np.complex128)
    if isinstance(shore, Surveyed):
        return np.array(shore.outer, dtype=np.complex128)
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

"""Where dividing streamlines begin: the branches of stagnation points and of the ends of line elements.

On a small circle about a stagnation point of multiplicity m the stream function takes the point's own value
2 (m + 1) times: at m + 1 branches water leaves, at m + 1 it arrives. A streamline that passes the end of a
line source divides water that has crossed the line from water that has gone by, and so does one that touches
a side.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import WATER, StagnationKind, StagnationPoint
from forebay.flow.surroundings import RESTS, Surroundings
from forebay.flow.withdrawal.faces import FACE_OFFSET, tips_on_wall, turning_places

Stream = Callable[[FloatArray], FloatArray]

_CIRCLE = 1e-3
"""Radius of the circle over the distance to the next site, wall or stagnation point [-]."""
_SAMPLES = 96
_SHIFT = 0.37
"""Angles on a circle, and what keeps them off axes of symmetry."""
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(6)
_NEWTON = 6
_TIP_START = 1e-9
"""Distance from the end of a line at which its stream function is taken, over the circle's radius [-]."""


@dataclass(frozen=True, slots=True)
class Branches:
    """Beginnings of dividing streamlines, arrays of shape (n,).

    node : index of the place they belong to
    centres, starts : that place and a point of the branch near it [m]
    outgoing : whether water leaves along the branch
    nodes : places, shape (k,) [m];  psi_errors : shape (k,), of the stream function there [m2/s]
    """

    node: IntArray
    centres: ComplexArray
    starts: ComplexArray
    outgoing: BoolArray
    nodes: ComplexArray
    psi_errors: FloatArray


def branches_of(
    model: FlowModel, points: tuple[StagnationPoint, ...], surroundings: Surroundings
) -> Branches:
    """Branches into the water of all stagnation points, ends of lines and touching places.

    Branches along walls are left out: where a wall's streamline leaves it there is another stagnation point.
    """
    found = _Collection(model)
    for point in points:
        if point.kind is not StagnationKind.CENTRE and np.isfinite(point.strain_rate):
            _add_point(found, point, surroundings)
    saddles = found.nodes.copy()
    for k in range(surroundings.lines.flux.size):
        _add_tips(found, k, surroundings, saddles)
        _add_touching(found, k, surroundings)
    return found.finished()


class _Collection:
    """Branches found so far."""

    def __init__(self, model: FlowModel) -> None:
        self.model = model
        self.nodes: list[complex] = []
        self.errors: list[float] = []
        self.rows: list[tuple[int, complex, bool]] = []

    def add_node(self, at: complex, error: float) -> None:
        self.nodes.append(at)
        self.errors.append(error)

    def add_branches(self, starts: ComplexArray, outgoing: BoolArray) -> None:
        node = len(self.nodes) - 1
        self.rows += [(node, complex(z), bool(out)) for z, out in zip(starts, outgoing, strict=True)]

    def finished(self) -> Branches:
        nodes = np.array(self.nodes, dtype=np.complex128)
        node = np.array([row[0] for row in self.rows], dtype=np.int64)
        return Branches(
            node=node,
            centres=nodes[node],
            starts=np.array([row[1] for row in self.rows], dtype=np.complex128),
            outgoing=np.array([row[2] for row in self.rows], dtype=np.bool_),
            nodes=nodes,
            psi_errors=np.array(self.errors),
        )


def _add_point(found: _Collection, point: StagnationPoint, surroundings: Surroundings) -> None:
    model = found.model
    radius = _CIRCLE * _room(model, point, surroundings)
    radius = max(radius, 30.0 * point.inclusion_radius)

    def stream(angles: FloatArray) -> FloatArray:
        ray = radius * np.exp(1j * angles)
        along = 0.5 * (_NODES + 1.0)
        velocity = model.velocity(point.at + ray[:, None] * along)
        return np.asarray((0.5 * ray * (velocity @ _WEIGHTS)).imag)

    angles = 2.0 * np.pi * (np.arange(_SAMPLES + 1) + _SHIFT) / _SAMPLES
    level = _level_angles(model, (point.at, radius), angles, stream)
    starts = point.at + radius * np.exp(1j * level)
    inside = model.wet(starts)
    if point.on != WATER:
        inside &= model.distance_to_wall(starts) > 0.1 * radius
    starts, level = starts[inside], level[inside]
    outgoing = (model.velocity(starts) * np.exp(1j * level)).real > 0.0
    found.add_node(point.at, 0.5 * point.strain_rate * point.inclusion_radius**2)
    found.add_branches(starts, outgoing)


def _room(model: FlowModel, point: StagnationPoint, surroundings: Surroundings) -> float:
    """Distance to the next site, wall or stagnation point [m]."""
    others = np.abs(surroundings.sites.at - point.at)
    others = others[others > max(3.0 * point.inclusion_radius, 1e-12 * model.scale)]
    walls = [float(wall.distance(np.asarray(point.at))) for wall in model.walls if wall.name != point.on]
    piers = [abs(point.at - pier.at) - pier.radius for pier in model.piers if pier.name != point.on]
    curved = [pier.radius for pier in model.piers if pier.name == point.on]
    return float(min([model.scale, *others, *walls, *piers, *curved]))


def _level_angles(
    model: FlowModel, circle: tuple[complex, float], angles: FloatArray, stream: Stream
) -> FloatArray:
    """Angles between the samples at which the stream function on the circle vanishes."""
    at, radius = circle
    psi = stream(angles)
    here = np.nonzero(np.sign(psi[:-1]) != np.sign(psi[1:]))[0]
    low, high = angles[here], angles[here + 1]
    level = low - psi[here] * (high - low) / (psi[here + 1] - psi[here])
    for _ in range(_NEWTON):
        ray = radius * np.exp(1j * level)
        level = np.clip(level - stream(level) / (1j * ray * model.velocity(at + ray)).imag, low, high)
    return np.asarray(level, dtype=np.float64)


def _add_tips(found: _Collection, k: int, surroundings: Surroundings, saddles: list[complex]) -> None:
    """Streamlines through both ends of line k, unless it stands on a wall or a stagnation point is near."""
    model, faces = found.model, surroundings.lines
    on_wall = tips_on_wall(model, faces, k) if faces.in_water[k] else (False, False)
    ends = ((faces.start[k], faces.end[k]), (faces.end[k], faces.start[k]))
    for (tip, other), standing in zip(ends, on_wall, strict=True):
        gaps = np.abs(surroundings.sites.at[surroundings.sites.role != RESTS] - tip)
        radius = 1e-4 * float(min([abs(other - tip), *gaps[gaps > 1e-12 * abs(other - tip)]]))
        if not standing and all(abs(saddle - tip) >= 10.0 * radius for saddle in saddles):
            _add_tip(found, (complex(tip), complex(other - tip)), (radius, bool(faces.in_water[k])))


def _add_tip(found: _Collection, end: tuple[complex, complex], circle: tuple[float, bool]) -> None:
    """Streamlines through one end: its place and the span of the line; radius, and if in the water."""
    model, (tip, span), (radius, in_water) = found.model, end, circle
    heading = span / abs(span)
    low, high = _tip_range(model, tip, heading, radius, in_water=in_water)
    base = tip - _TIP_START * radius * heading

    def stream(angles: FloatArray) -> FloatArray:
        ends = tip + radius * np.exp(1j * angles)
        return model.chord(np.full(ends.shape, base), ends).imag

    angles = np.angle(heading) + np.linspace(low, high, _SAMPLES)
    level = _level_angles(model, (tip, radius), angles, stream)
    starts = tip + radius * np.exp(1j * level)
    velocity = model.velocity(starts)
    found.add_node(tip, _TIP_START * radius * float(np.abs(velocity).max(initial=0.0)))
    found.add_branches(starts, (velocity * np.exp(1j * level)).real > 0.0)


def _tip_range(
    model: FlowModel, tip: complex, heading: complex, radius: float, *, in_water: bool
) -> tuple[float, float]:
    """Range of angles from the line's own direction that lies in the water beside it [rad]."""
    if in_water:
        return 1e-6, 2.0 * np.pi - 1e-6
    left = bool(model.wet(np.array([tip + 0.5j * heading * max(radius, 1e-8 * model.scale)]))[0])
    return (1e-6, np.pi - 1e-3) if left else (-np.pi + 1e-3, -1e-6)


def _add_touching(found: _Collection, k: int, surroundings: Surroundings) -> None:
    """Streamlines from places where the water turns between crossing and leaving line k."""
    faces = surroundings.lines
    if not faces.in_water[k]:
        return
    span = faces.end[k] - faces.start[k]
    for side in (1.0, -1.0):
        for place in turning_places(found.model, faces, k, side):
            at = complex(faces.start[k] + place * span)
            offset = 1j * FACE_OFFSET * span
            starts = np.array([at + side * offset, at - side * offset])
            speed = float(np.abs(found.model.velocity(starts)).max())
            found.add_node(at, FACE_OFFSET * abs(span) * speed)
            outgoing = faces.flux[k] > 0.0
            found.add_branches(starts if outgoing else starts[:1], np.full(2 if outgoing else 1, outgoing))

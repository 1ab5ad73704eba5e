"""A flow with the streamlines that divide released water, and where these meet a rake.

Water on the two sides of a streamline that runs into a stagnation point goes different ways beyond it, so
that fate and travel time change only there. Such streamlines are traced against the flow from every
stagnation point; where one meets a rake follows from psi, which is exact along chords.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.arrivals.rakes import Arc, Edge, Face, PointMouth, Rake, Straight
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.surroundings import Surroundings, survey
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.branches import branches_of
from forebay.flow.withdrawal.zones import filled_in

_DRAWN = TraceRules(forward=False, tolerance=1e-6, largest_turn=0.1, keep_paths=True)
"""Neighbouring points differ by about 0.1 rad in direction: chords sag by a hundredth of their length."""
_SAG = 1e-5
"""How far a chord of a dividing streamline may sag, over the scale, if at most 8 points are put on it [-]."""
_NEWTON = 5
_STEP = 1e-6
"""Difference in s for the direction of a rake [-]."""
_NEAR = 1e-2
"""Distance, over the scale, below which the distance to a dividing streamline is taken from psi [-]."""


@dataclass(frozen=True, slots=True)
class Scene:
    """What all releases of one layout have in common.

    complete : whether every stagnation point is known
    paths : dividing streamlines upstream of their stagnation points, from there outward [m]
    traces : of the same, for their ends
    """

    model: FlowModel
    surroundings: Surroundings
    complete: bool
    paths: tuple[ComplexArray, ...]
    traces: Traces

    @property
    def reference(self) -> float:
        """Flux that counts as one: largest speed at a far end times scale, and all discharges [m2/s]."""
        model = self.model
        points = sum(2.0 * np.pi * abs(s.strength) for s in model.singularities)
        lines = sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines)
        return float(max(points + lines, abs(model.layout.ambient.velocity) * model.scale, 1e-300))


def scene_of(model: FlowModel, search: StagnationSearch) -> Scene:
    """Survey a flow and trace its dividing streamlines."""
    points = np.array([point.at for point in search.points], dtype=np.complex128)
    surroundings = survey(model, points)
    branches = branches_of(model, search.points, surroundings)
    arriving = np.nonzero(~branches.outgoing)[0]
    traces = trace_streamlines(model, branches.starts[arriving], surroundings=surroundings, rules=_DRAWN)
    paths = tuple(
        np.append(branches.centres[k], filled_in(model, traces.paths[i], _SAG * model.scale))
        for i, k in enumerate(arriving)
    )
    return Scene(model, surroundings, search.complete, paths, traces)


def divide_distance(scene: Scene, z: complex) -> tuple[float, float]:
    """Distance from z to the nearest dividing streamline [m] and the flux between [m2/s]; inf without one."""
    nearest = [_nearest(path, z) for path in scene.paths if path.size > 1]
    if not nearest:
        return inf, inf
    distance, foot = min(nearest, key=lambda pair: pair[0])
    if distance > _NEAR * scene.model.scale:
        return distance, inf
    flux = abs(float(scene.model.chord(np.array([foot]), np.array([z])).imag[0])) if foot != z else 0.0
    speed = abs(complex(scene.model.velocity(np.array([z]))[0]))
    return (min(distance, flux / speed) if speed > 0.0 else distance), flux


def _nearest(path: ComplexArray, z: complex) -> tuple[float, complex]:
    """Distance to a polyline [m] and the nearest of its points."""
    span = path[1:] - path[:-1]
    with np.errstate(divide="ignore", invalid="ignore"):
        along = ((z - path[:-1]) * np.conj(span)).real / np.abs(span) ** 2
    feet = path[:-1] + np.clip(np.nan_to_num(along), 0.0, 1.0) * span
    k = int(np.argmin(np.abs(feet - z)))
    ends = path[k : k + 2]
    return float(abs(feet[k] - z)), complex(ends[int(np.argmin(np.abs(ends - z)))])


def cuts_on(scene: Scene, rake: Rake) -> FloatArray:
    """Parts s of a rake at which dividing streamlines meet it, ascending."""
    match rake:
        case PointMouth():
            return _cuts_on_mouth(scene, rake)
        case Face():
            return _cuts_on_face(scene, rake)
        case Edge(curve=curve):
            return _cuts_on_curve(scene, curve)
        case Straight() | Arc():
            return _cuts_on_curve(scene, rake)
        case _:
            raise TypeError(type(rake).__name__)


def _cuts_on_curve(scene: Scene, curve: Straight | Arc) -> FloatArray:
    found: list[FloatArray] = []
    for path in scene.paths:
        guess, low, high = _intersections(curve, path)
        if guess.size:
            found.append(_polished(scene.model, curve, guess, (low, high)))
    return np.unique(np.concatenate(found)) if found else np.empty(0)


def _intersections(
    curve: Straight | Arc, path: ComplexArray
) -> tuple[FloatArray, ComplexArray, ComplexArray]:
    """Parts of the curve at which a polyline meets it, and the ends of the pieces that do."""
    if isinstance(curve, Straight):
        side = ((path - curve.start) / (curve.end - curve.start)).imag
    else:
        side = np.abs(path - curve.centre) - curve.radius
    k = np.nonzero((side[:-1] < 0.0) != (side[1:] < 0.0))[0]
    part = side[k] / (side[k] - side[k + 1])
    s = _part_of(curve, path[k] + part * (path[k + 1] - path[k]))
    inside = (s > 0.0) & (s < 1.0)
    return s[inside], path[k][inside], path[k + 1][inside]


def _part_of(curve: Straight | Arc, z: ComplexArray) -> FloatArray:
    """Part s of the curve nearest in direction to places beside it."""
    match curve:
        case Straight():
            return np.asarray(((z - curve.start) / (curve.end - curve.start)).real)
        case Arc():
            angle = np.angle((z - curve.centre) * np.exp(-1j * curve.begin))
            return np.asarray(np.mod(np.sign(curve.turn) * angle, 2.0 * np.pi) / abs(curve.turn))


def _polished(
    model: FlowModel, curve: Straight | Arc, guess: FloatArray, piece: tuple[ComplexArray, ComplexArray]
) -> FloatArray:
    """Parts at which psi on the curve is that of the path: Newton's method from the chord's place."""
    start, end = piece
    reach = np.abs(end - start) / curve.length
    s = guess.copy()
    for _ in range(_NEWTON):
        z = curve.place(s)
        slope = (model.velocity(z) * (curve.place(s + _STEP) - z) / _STEP).imag
        with np.errstate(divide="ignore", invalid="ignore"):
            change = -model.chord(start, z).imag / slope
        step = np.where(np.isfinite(change), np.clip(change, -reach, reach), 0.0)
        s = s + step
    lost = (np.abs(s - guess) > 2.0 * reach) | (s <= 0.0) | (s >= 1.0)
    return np.where(lost, guess, s)


def _cuts_on_mouth(scene: Scene, rake: PointMouth) -> FloatArray:
    """Dividing streamlines that begin at a point outfall, by the flux at their ends."""
    owner = next(s.owner for s in scene.model.singularities if s.at == rake.at)
    traces = scene.traces
    ends = [i for i, name in enumerate(traces.names) if name == owner and traces.stops[i] is Stop.CAPTURED]
    if not ends:
        return np.empty(0)
    coordinate = rake.mouth.coordinate(traces.ends[ends]) + traces.drift[ends]
    s = np.unique(np.mod(coordinate / rake.mouth.total, 1.0))
    return np.asarray(s[(s > 0.0) & (s < 1.0)])


def _cuts_on_face(scene: Scene, rake: Face) -> FloatArray:
    """Dividing streamlines that leave one side of a line element."""
    traces, owner = scene.traces, rake.faces.owners[rake.line]
    places = [c.at for row in traces.crossings for c in row if c.line == rake.line]
    places += [
        complex(traces.ends[i])
        for i, name in enumerate(traces.names)
        if name == owner and traces.stops[i] is Stop.CAPTURED
    ]
    if not places:
        return np.empty(0)
    local = rake.faces.local(np.array(places))[:, rake.line]
    local = local[np.sign(local.imag) == rake.side]
    s = np.unique((local.real - rake.low) / (rake.high - rake.low))
    return np.asarray(s[(s > 0.0) & (s < 1.0)])

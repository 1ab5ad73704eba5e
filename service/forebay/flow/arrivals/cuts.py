"""Where dividing streamlines meet a rake: by psi, which is exact along chords."""

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.arrivals.curves import Arc, Rake, Straight
from forebay.flow.arrivals.rakes import Edge, Face, PointMouth
from forebay.flow.arrivals.scene import Scene
from forebay.flow.model import FlowModel
from forebay.flow.traces import Stop

_NEWTON = 5
_STEP = 1e-6
"""Difference in s for the direction of a rake [-]."""


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
    k, along = _crossed_line(curve, path) if isinstance(curve, Straight) else _crossed_circle(curve, path)
    s = _part_of(curve, path[k] + along * (path[k + 1] - path[k]))
    inside = (s > 0.0) & (s < 1.0)
    return s[inside], path[k][inside], path[k + 1][inside]


def _crossed_line(line: Straight, path: ComplexArray) -> tuple[IntArray, FloatArray]:
    """Pieces of a polyline that cross an unbounded line, and the part of each before that."""
    side = ((path - line.start) / (line.end - line.start)).imag
    k = np.nonzero((side[:-1] < 0.0) != (side[1:] < 0.0))[0]
    return k, np.asarray(side[k] / (side[k] - side[k + 1]))


def _crossed_circle(arc: Arc, path: ComplexArray) -> tuple[IntArray, FloatArray]:
    """Pieces of a polyline that cross a circle, once or twice, and the part of each before that."""
    span, away = path[1:] - path[:-1], path[:-1] - arc.centre
    with np.errstate(divide="ignore", invalid="ignore"):
        middle = -(np.conj(span) * away).real / np.abs(span) ** 2
        half = np.sqrt((arc.radius**2 - np.abs(away + middle * span) ** 2) / np.abs(span) ** 2)
    parts = np.stack([middle - half, middle + half])
    met, k = np.nonzero((parts >= 0.0) & (parts < 1.0))
    return k, parts[met, k]


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

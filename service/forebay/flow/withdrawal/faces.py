"""The two sides of a line element: how fast water leaves or meets them, and where that changes sign."""

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import LineFaces

FACE_OFFSET = 2e-9
"""Distance from the line at which a side is sampled, over its length: the velocity jumps on the line [-]."""
_SAMPLES = 401
_ON_WALL = 1e-9
"""Distance from a wall, over the scale of the layout, that is on it [-]."""


def on_side(faces: LineFaces, k: int, side: float, parts: FloatArray) -> ComplexArray:
    """Points beside line k, at parts in [0, 1] of its length; side +1 is to the left of start -> end [m]."""
    span = faces.end[k] - faces.start[k]
    return np.asarray(faces.start[k] + (parts + 1j * side * FACE_OFFSET) * span, dtype=np.complex128)


def arrival_speed(model: FlowModel, faces: LineFaces, k: int, side: float, parts: FloatArray) -> FloatArray:
    """Speed towards line k on one of its sides, positive where water arrives there [m/s]."""
    unit = (faces.end[k] - faces.start[k]) / faces.lengths[k]
    velocity = np.conj(model.velocity(on_side(faces, k, side, parts)))
    return np.asarray(-side * (velocity / unit).imag, dtype=np.float64)


def turning_places(model: FlowModel, faces: LineFaces, k: int, side: float) -> FloatArray:
    """Parts of the length of line k at which the speed towards this side changes sign, in order.

    Notes
    -----
    Sampled at 401 places, denser near the ends; two changes between neighbours stay unseen.
    """
    parts = 0.5 * (1.0 - np.cos(np.linspace(0.0, np.pi, _SAMPLES)))
    parts = np.clip(parts, 1e-6, 1.0 - 1e-6)
    speed = arrival_speed(model, faces, k, side, parts)
    here = np.nonzero(np.sign(speed[:-1]) * np.sign(speed[1:]) < 0.0)[0]
    low, high, rising = parts[here], parts[here + 1], np.sign(speed[here + 1])
    for _ in range(52):
        middle = 0.5 * (low + high)
        above = np.sign(arrival_speed(model, faces, k, side, middle)) == rising
        low, high = np.where(above, low, middle), np.where(above, middle, high)
    return np.asarray(0.5 * (low + high), dtype=np.float64)


def arriving_parts(model: FlowModel, faces: LineFaces, k: int, side: float) -> list[tuple[float, float]]:
    """Intervals of the length of line k on which water arrives at this side."""
    edges = np.concatenate([[0.0], turning_places(model, faces, k, side), [1.0]])
    speeds = arrival_speed(model, faces, k, side, 0.5 * (edges[:-1] + edges[1:]))
    return [(float(a), float(b)) for a, b, v in zip(edges[:-1], edges[1:], speeds, strict=True) if v > 0.0]


def tips_on_wall(model: FlowModel, faces: LineFaces, k: int) -> tuple[bool, bool]:
    """Whether the start and the end of line k stand on a wall."""
    distance = model.distance_to_wall(np.array([faces.start[k], faces.end[k]]))
    return bool(distance[0] <= _ON_WALL * model.scale), bool(distance[1] <= _ON_WALL * model.scale)

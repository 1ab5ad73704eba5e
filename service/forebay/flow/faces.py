"""A straight face past which and into which water flows: the two components of the velocity along it."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.features import WATER, Line
from forebay.flow.model import FlowModel
from forebay.flow.profiles import graded

LEFT, RIGHT = 1.0, -1.0
"""Sides of a face, seen from its start to its end."""

BESIDE = 2e-9
"""Distance from a line in the water, over its length, at which its sides are read: velocity jumps on it."""

BEFORE_SOLVED = 1e-3
"""Distance from a wall that was solved for, over the length of a face, at which velocities are read; also the
part of its length that is not read at either end, where the wall may turn [-]."""

_MARGIN_ON_WALL = 1e-12
_MARGIN_IN_WATER = 1e-5
"""Parts of the length at the ends that are not read; at 2e-9 beside a line it is 2e-4 from its end's jump."""

_FELT = 4.0
"""Distance, over the length of a face, within which a point element is felt as a bump [-]."""


@dataclass(frozen=True, slots=True)
class Face:
    """One side of a straight stretch.

    start, end : ends, x + iy [m];  side : LEFT or RIGHT, where the water is that meets it
    offset : distance in front at which the velocity is read [m]
    on : name of the wall that it is part of, or "water";  margin : part of the length not read at each end
    """

    start: complex
    end: complex
    side: float
    offset: float
    on: str
    margin: float

    @property
    def length(self) -> float:
        """Length [m]."""
        return abs(self.end - self.start)

    @property
    def along(self) -> complex:
        """Unit vector from start to end."""
        return (self.end - self.start) / self.length

    def positions(self, parts: FloatArray) -> ComplexArray:
        """Where the velocity is read at parts of the length, x + iy [m]."""
        ahead = 1j * self.side * self.offset * self.along
        return np.asarray(self.start + parts * (self.end - self.start) + ahead, dtype=np.complex128)


def faces_of(line: Line, model: FlowModel, *, offset: float = 0.0) -> tuple[Face, ...]:
    """Faces of a line element: one if it lies in a wall, else left and right.

    offset : distance in front at which velocities are read [m]. On the face if 0, which means 2e-9 of its
    length beside a line in the water (relative error of the velocity: the same over the distance to an end),
    and 1e-3 of it in front of a wall that was solved for, on which the velocity is not to be had.
    """
    length = abs(line.end - line.start)
    for wall in model.walls:
        if wall.name == line.on:
            facing = (wall.direction * np.conj(line.end - line.start)).real
            side = LEFT if facing > 0.0 else RIGHT
            return (Face(line.start, line.end, side, offset, line.on, _MARGIN_ON_WALL),)
    if line.on != WATER:
        return (solved_face((line.start, line.end), model, on=line.on, offset=offset),)
    beside = max(offset, BESIDE * length)
    return tuple(Face(line.start, line.end, side, beside, WATER, _MARGIN_IN_WATER) for side in (LEFT, RIGHT))


def solved_face(ends: tuple[complex, complex], model: FlowModel, *, on: str, offset: float) -> Face:
    """Face on a wall that was solved for; the water is where a thousandth of the length beside it is wet."""
    start, end = ends
    beside = np.asarray(0.5 * (start + end) + 1j * BEFORE_SOLVED * (end - start), dtype=np.complex128)
    side = LEFT if bool(model.wet(beside)) else RIGHT
    reading = max(offset, BEFORE_SOLVED * abs(end - start))
    return Face(start, end, side, reading, on, BEFORE_SOLVED)


def face_velocity(model: FlowModel, face: Face, parts: FloatArray) -> ComplexArray:
    """Velocity along a face: along it (start to end) + i towards it [m/s], shape of parts.

    parts : in (0, 1), parts of the length
    """
    turned = np.conj(model.velocity(face.positions(parts))) / face.along
    return np.asarray(turned.real - 1j * face.side * turned.imag, dtype=np.complex128)


def places_along(model: FlowModel, face: Face) -> FloatArray:
    """Where to look along a face: dense at its ends and beside whatever stands near it, shape (n,) [-]."""
    run = face.end - face.start
    near = [(s.at, 0.0) for s in model.singularities]
    near += [(end, 0.0) for line in model.lines for end in (line.start, line.end)]
    near += [(pier.at, pier.radius) for pier in model.piers]
    bumps = []
    for at, radius in near:
        share = (at - face.start) / run
        width = max(abs(share.imag) - radius / face.length, 0.1 * abs(share.imag))
        if -1.0 < share.real < 2.0 and 0.0 < width < _FELT:
            bumps.append((share.real, width))
    return graded(face.margin, bumps)

"""The mouth of an intake: a contour about it on which the arriving water is measured by exact flux.

The coordinate of a point on the mouth is the discharge per depth that arrives between a fixed beginning and
that point, anticlockwise: psi(beginning) - psi(point). It runs from 0 to `total`.
"""

from dataclasses import dataclass
from math import pi
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.features import Singularity
from forebay.flow.layout import outflow
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import LineFaces, Surroundings
from forebay.flow.withdrawal.faces import FACE_OFFSET, arriving_parts, on_side, tips_on_wall

_ARCS = 12
"""Chords of a path round a point mouth: at most 30 degrees each."""
_FIXED_POINT = 8
_BISECTIONS = 54


class Mouth(Protocol):
    """Where water arrives at an intake."""

    @property
    def total(self) -> float:
        """Discharge per depth that arrives [m2/s]."""
        ...

    @property
    def breaks(self) -> tuple[float, ...]:
        """Coordinates at which it begins, ends or is interrupted, none if it closes on itself [m2/s]."""
        ...

    @property
    def passed_through(self) -> bool:
        """Whether some of the arriving water goes on."""
        ...

    def coordinate(self, z: ComplexArray) -> FloatArray:
        """Coordinates of points at or just outside the mouth, shape (n,) [m2/s]."""
        ...

    def release(self, coordinate: FloatArray) -> ComplexArray:
        """Points of the mouth with these coordinates, shape (n,) [m]."""
        ...


def mouth_of(model: FlowModel, name: str, surroundings: Surroundings) -> Mouth:
    """Mouth of the intake `name`, a sink or a line sink."""
    if name in surroundings.lines.owners:
        return _line_mouth(model, surroundings.lines, surroundings.lines.owners.index(name))
    singularity = next(s for s in model.singularities if s.owner == name)
    return _point_mouth(model, singularity, surroundings)


@dataclass(frozen=True, slots=True)
class PointMouth:
    """Circle, or half a circle from the wall ahead to the wall behind, about a point sink.

    at, radius : [m];  first : direction in which the coordinate is 0
    opening : pi on a wall, else 2 pi [rad]
    """

    model: FlowModel
    at: complex
    radius: float
    first: complex
    opening: float
    total: float
    passed_through: bool = False

    @property
    def breaks(self) -> tuple[float, ...]:
        """Both walls, or nothing."""
        return (0.0, self.total) if self.opening < 6.0 else ()

    def coordinate(self, z: ComplexArray) -> FloatArray:
        """Exact flux along a spiral from the beginning to z."""
        local = (z - self.at) / (self.first * self.radius)
        angle = np.angle(local)
        low = -1.0 if self.opening < 6.0 else 0.0
        angle = np.clip(np.where(angle < low, angle + 2.0 * pi, angle), 0.0, self.opening)
        parts = np.linspace(0.0, 1.0, _ARCS + 1)
        path = self.at + self.first * self.radius * np.exp(
            np.outer(np.log(np.abs(local)) + 1j * angle, parts)
        )
        path[:, -1] = z
        chords = self.model.chord(path[:, :-1].ravel(), path[:, 1:].ravel()).imag
        return np.asarray(-chords.reshape(z.size, _ARCS).sum(axis=1), dtype=np.float64)

    def release(self, coordinate: FloatArray) -> ComplexArray:
        """Fixed-point iteration on the angle: the rest of the flow changes it by half a percent at most."""
        wanted = np.asarray(coordinate) * self.opening / self.total
        angle = wanted.copy()
        for _ in range(_FIXED_POINT):
            z = self.at + self.first * self.radius * np.exp(1j * angle)
            angle = np.clip(
                angle + wanted - self.coordinate(z) * self.opening / self.total, 0.0, self.opening
            )
        return np.asarray(self.at + self.first * self.radius * np.exp(1j * angle), dtype=np.complex128)


def _point_mouth(model: FlowModel, singularity: Singularity, surroundings: Surroundings) -> PointMouth:
    wall = singularity.wall
    return PointMouth(
        model=model,
        at=singularity.at,
        radius=float(surroundings.sites.radius[surroundings.sites.named(singularity.owner)]),
        first=wall.direction if wall else 1.0 + 0j,
        opening=pi if wall else 2.0 * pi,
        total=-outflow(singularity.kind) / model.layout.depth,
    )


@dataclass(frozen=True, slots=True)
class LineMouth:
    """Sides of a line sink on which water arrives, just off the line.

    starts, ends : shape (p,), pieces of the contour in order [m]
    at_start : coordinate where each begins [m2/s]
    sides, parts : shape (p,), (p, 2), which side a piece lies on (0 round an end) and from where to where
    """

    model: FlowModel
    faces: LineFaces
    line: int
    starts: ComplexArray
    ends: ComplexArray
    at_start: FloatArray
    sides: FloatArray
    parts: FloatArray
    total: float
    breaks: tuple[float, ...]
    passed_through: bool

    def coordinate(self, z: ComplexArray) -> FloatArray:
        """Exact flux along the contour to the foot of z, and from there to z."""
        local = self.faces.local(z)[:, self.line]
        along = np.clip(local.real, 0.0, 1.0)
        side = np.where(local.imag >= 0.0, 1.0, -1.0)
        piece = np.array([self._piece_of(s, a) for s, a in zip(side, along, strict=True)], dtype=np.int64)
        low, high = self.parts[piece].min(axis=1), self.parts[piece].max(axis=1)
        foot = self._points(piece, np.clip(along, low, high))
        flux = self.model.chord(self.starts[piece], foot) + self.model.chord(foot, z)
        return np.asarray(self.at_start[piece] - flux.imag, dtype=np.float64)

    def _piece_of(self, side: float, along: float) -> int:
        """The piece on this side that holds, or is nearest to, a part of the length."""
        own = self.sides == side if np.any(self.sides == side) else self.sides != 0.0
        middle, half = self.parts.mean(axis=1), 0.5 * np.abs(np.diff(self.parts, axis=1)[:, 0])
        return int(np.argmin(np.where(own, np.abs(along - middle) - half, np.inf)))

    def _points(self, piece: IntArray, along: FloatArray) -> ComplexArray:
        span = self.faces.end[self.line] - self.faces.start[self.line]
        return np.asarray(self.faces.start[self.line] + (along + 1j * self.sides[piece] * FACE_OFFSET) * span)

    def release(self, coordinate: FloatArray) -> ComplexArray:
        """Bisection on the part of the length."""
        wanted = np.asarray(coordinate, dtype=np.float64)
        piece = np.asarray(np.searchsorted(self.at_start, wanted, side="right") - 1, dtype=np.int64)
        piece += (self.sides[piece] == 0.0) & (piece + 1 < self.sides.size)
        piece -= self.sides[piece] == 0.0
        low, high = np.zeros(wanted.size), np.ones(wanted.size)
        begin, change = self.parts[piece, 0], self.parts[piece, 1] - self.parts[piece, 0]
        for _ in range(_BISECTIONS):
            middle = 0.5 * (low + high)
            z = self._points(piece, begin + middle * change)
            above = self.at_start[piece] - self.model.chord(self.starts[piece], z).imag > wanted
            low, high = np.where(above, low, middle), np.where(above, middle, high)
        return self._points(piece, begin + 0.5 * (low + high) * change)


def _line_mouth(model: FlowModel, faces: LineFaces, k: int) -> LineMouth:
    pieces, whole = _contour(model, faces, k)
    starts = np.array([piece[0] for piece in pieces])
    ends = np.array([piece[1] for piece in pieces])
    flux = -model.chord(starts, ends).imag
    reached = np.concatenate([[0.0], np.cumsum(flux)])
    jumps = [float(reached[p + 1]) for p in range(len(pieces) - 1) if ends[p] != starts[p + 1]]
    return LineMouth(
        model=model,
        faces=faces,
        line=k,
        starts=starts,
        ends=ends,
        at_start=reached[:-1],
        sides=np.array([piece[2] for piece in pieces]),
        parts=np.array([piece[3] for piece in pieces]),
        total=float(reached[-1]),
        breaks=() if whole and ends[-1] == starts[0] else (0.0, *jumps, float(reached[-1])),
        passed_through=not whole,
    )


Piece = tuple[complex, complex, float, tuple[float, float]]


def _contour(model: FlowModel, faces: LineFaces, k: int) -> tuple[list[Piece], bool]:
    """Pieces of the mouth in anticlockwise order, and whether it takes in the whole line."""
    if not faces.in_water[k]:
        middle = faces.start[k] + (0.5 + 1e-3j) * (faces.end[k] - faces.start[k])
        side = 1.0 if bool(model.wet(np.array([middle]))[0]) else -1.0
        parts = arriving_parts(model, faces, k, side)
        whole = parts == [(0.0, 1.0)]
        return _along(faces, k, side, parts, rounded=(whole, whole)), whole
    on_wall = tips_on_wall(model, faces, k)
    order = (1.0, -1.0) if on_wall[1] and not on_wall[0] else (-1.0, 1.0)
    both = {side: arriving_parts(model, faces, k, side) for side in order}
    whole = all(parts == [(0.0, 1.0)] for parts in both.values())
    pieces: list[Piece] = []
    for side in order:
        begins_at_end = side > 0.0
        rounded = whole and not on_wall[1 if begins_at_end else 0]
        pieces += _along(faces, k, side, both[side], rounded=(rounded, False))
    return pieces, whole


def _along(
    faces: LineFaces, k: int, side: float, parts: list[tuple[float, float]], *, rounded: tuple[bool, bool]
) -> list[Piece]:
    """Pieces along one side of a line, anticlockwise about it, with the way round its ends if `rounded`."""
    strips = parts if side < 0.0 else [(b, a) for a, b in reversed(parts)]
    pieces: list[Piece] = []
    wall = not faces.in_water[k]
    for a, b in strips:
        if rounded[0]:
            pieces += _round_end(faces, k, side, a, at_begin=True, wall=wall)
        begin, end = on_side(faces, k, side, np.array([a, b]))
        pieces.append((complex(begin), complex(end), side, (a, b)))
        if rounded[1]:
            pieces += _round_end(faces, k, side, b, at_begin=False, wall=wall)
    return pieces


def _round_end(
    faces: LineFaces, k: int, side: float, part: float, *, at_begin: bool, wall: bool
) -> list[Piece]:
    """Pieces round one end of the line, to or from its side; `wall` if they begin or end on a bank."""
    span = complex(faces.end[k] - faces.start[k])
    outward = (1.0 if part > 0.5 else -1.0) * FACE_OFFSET
    beyond = complex(faces.start[k]) + (part + outward) * span
    corner = complex(on_side(faces, k, side, np.array([part]))[0])
    if wall:
        ends = (beyond, corner) if at_begin else (corner, beyond)
        return [(*ends, 0.0, (part, part))]
    other = complex(on_side(faces, k, -side, np.array([part]))[0])
    return [(other, beyond, 0.0, (part, part)), (beyond, corner, 0.0, (part, part))]

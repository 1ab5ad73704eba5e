"""Paths along which the flow is integrated: straight pieces and circular arcs, open or closed."""

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from math import acos, ceil
from typing import ClassVar

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import FlowError

JOINED = 1e-9
"""Gap between one piece and the next that counts as none, relative to the contour's length [-]."""


class BrokenPathError(FlowError):
    """A contour has no length, or a piece does not begin where the one before it ends."""

    code = "broken-path"
    title = "The pieces of a contour must join"


@dataclass(frozen=True, slots=True)
class Straight:
    """Straight piece from `start` to `end`, x + iy [m]."""

    start: complex
    end: complex

    @property
    def length(self) -> float:
        """|end - start| [m]."""
        return abs(self.end - self.start)

    @property
    def swept_area(self) -> float:
        """Area between the piece and the origin, int (x dy - y dx)/2 [m2]."""
        return 0.5 * (self.start.conjugate() * self.end).imag

    def vertices(self, _flatness: float) -> list[complex]:
        """Where it begins [m]."""
        return [self.start]

    def part(self, low: float, high: float) -> "Straight":
        """The piece between two shares."""
        run = self.end - self.start
        return Straight(self.start + low * run, self.start + high * run)


@dataclass(frozen=True, slots=True)
class Arc:
    """Circular arc about `centre`; angles from +x [rad], anticlockwise if `to` exceeds `begin`; any turns."""

    centre: complex
    radius: float
    begin: float
    to: float

    @property
    def start(self) -> complex:
        """Where it begins [m]."""
        return self.centre + self.radius * complex(np.exp(1j * self.begin))

    @property
    def end(self) -> complex:
        """Where it ends [m]."""
        return self.centre + self.radius * complex(np.exp(1j * self.to))

    @property
    def turn(self) -> float:
        """Swept angle, signed [rad]."""
        return self.to - self.begin

    @property
    def length(self) -> float:
        """Radius times |turn| [m]."""
        return self.radius * abs(self.turn)

    @property
    def swept_area(self) -> float:
        """Area between the arc and the origin, int (x dy - y dx)/2 [m2]."""
        chord = (self.centre.conjugate() * (self.end - self.start)).imag
        return 0.5 * (chord + self.radius**2 * self.turn)

    def vertices(self, flatness: float) -> list[complex]:
        """Beginnings of chords whose middles lie `flatness` radii inside the arc [m]: r (1 - cos(a / 2))."""
        count = max(1, ceil(abs(self.turn) / (2.0 * acos(1.0 - flatness))))
        return [self.part(number / count, 1.0).start for number in range(count)]

    def part(self, low: float, high: float) -> "Arc":
        """The arc between two shares."""
        return Arc(self.centre, self.radius, self.begin + low * self.turn, self.begin + high * self.turn)


Piece = Straight | Arc


@dataclass(frozen=True)
class Contour:
    """Path of pieces, each beginning where the one before it ends; closed if it ends where it began."""

    name: str
    pieces: tuple[Piece, ...]

    FULL_TURN: ClassVar[float] = 2.0 * np.pi

    def __post_init__(self) -> None:
        if not self.length > 0.0:
            raise BrokenPathError("the contour has no length")
        for index, (one, other) in enumerate(pairwise(self.pieces)):
            gap = abs(other.start - one.end)
            if gap > self._reach:
                detail = f"the piece begins {gap:.3g} m from the end of the one before"
                raise BrokenPathError(detail, (index + 1,))

    @classmethod
    def polyline(cls, name: str, points: ComplexArray, *, closed: bool = False) -> "Contour":
        """Straight pieces through points, shape (n,) [m], back to the first one if `closed`."""
        places = [complex(z) for z in points]
        if closed and places[0] != places[-1]:
            places.append(places[0])
        return cls(name, tuple(Straight(a, b) for a, b in pairwise(places) if a != b))

    @classmethod
    def circle(cls, name: str, centre: complex, radius: float) -> "Contour":
        """Full circle, anticlockwise."""
        return cls(name, (Arc(centre, radius, 0.0, cls.FULL_TURN),))

    @property
    def _reach(self) -> float:
        size = max(abs(place) for piece in self.pieces for place in (piece.start, piece.end))
        return JOINED * (self.length + size)

    @cached_property
    def length(self) -> float:
        """Sum of the pieces' lengths [m]."""
        return float(sum(piece.length for piece in self.pieces))

    @property
    def closed(self) -> bool:
        """Whether it ends where it began."""
        return abs(self.pieces[-1].end - self.pieces[0].start) <= self._reach

    def traced(self, flatness: float) -> ComplexArray:
        """Vertices of chords that stand for the contour, x + iy [m]; arcs are `flatness` of a radius off."""
        pieces = [piece.vertices(flatness) for piece in self.pieces]
        return np.array([*(place for piece in pieces for place in piece), self.pieces[-1].end])

    @property
    def enclosed_area(self) -> float | None:
        """Signed area, anticlockwise positive, each part as often as it is wound round [m2]; None if open."""
        return float(sum(piece.swept_area for piece in self.pieces)) if self.closed else None

"""Straight images of elements in the walls of a shore, for what must be exact next to an element."""

from dataclasses import dataclass, replace
from itertools import combinations

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, IntArray
from forebay.flow.maps import LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.shores import Frame, Wall

_SQUARE = 1e-9
"""Walls within this of a right angle have a common image in their corner [-]."""
_SAMPLE = 0.3 + 0.4j
"""A place in every strip and half-plane, whose images differ [-]."""


@dataclass(frozen=True, eq=False)
class Rule:
    """An element is seen from z as from image(z) = shift + turn z, or shift + turn conj z if `reflects`.

    allowed : shape (m,), elements that are seen so;  number : of the image in `Frame.images`
    """

    shift: complex
    turn: complex
    reflects: bool
    allowed: BoolArray
    number: int = 0

    @property
    def is_identity(self) -> bool:
        """Whether the element itself is seen."""
        return not self.reflects and self.turn == 1.0

    def image(self, z: ComplexArray) -> ComplexArray:
        """Where z is seen from [m]."""
        return np.asarray(self.shift + self.turn * (np.conj(z) if self.reflects else z), dtype=np.complex128)


@dataclass(frozen=True, eq=False)
class Mirrors:
    """The element itself first, its images in every wall, and in the corners of a rectangle."""

    rules: tuple[Rule, ...]

    @classmethod
    def of(cls, frame: Frame, middle: ComplexArray) -> "Mirrors":
        """Mirrors of a shore for elements with these middles [m]."""
        everything = np.ones(middle.size, dtype=np.bool_)
        rules = [Rule(0j, 1.0 + 0j, reflects=False, allowed=everything)]
        for wall in frame.walls:
            turn = wall.direction**2
            shift = wall.point - turn * wall.point.conjugate()
            rules.append(Rule(shift, turn, reflects=True, allowed=_seen(frame, wall, middle)))
        rules += [
            Rule(2.0 * corner, -1.0 + 0j, reflects=False, allowed=everything) for corner in _corners(frame)
        ]
        return cls(tuple(replace(rule, number=_number(frame, rule)) for rule in rules))

    def arrays(self) -> tuple[ComplexArray, ComplexArray, BoolArray, IntArray, BoolArray]:
        """Turns, shifts, which reflect, image numbers, shape (r,); which elements are seen, shape (r, m)."""
        return (
            np.array([rule.turn for rule in self.rules], dtype=np.complex128),
            np.array([rule.shift for rule in self.rules], dtype=np.complex128),
            np.array([rule.reflects for rule in self.rules], dtype=np.bool_),
            np.array([rule.number for rule in self.rules], dtype=np.int64),
            np.array([rule.allowed for rule in self.rules], dtype=np.bool_),
        )


def _seen(frame: Frame, wall: Wall, middle: ComplexArray) -> BoolArray:
    """In a corner a wall mirrors what stands on its own side of the vertex only."""
    if not isinstance(frame.map, LogarithmMap):
        return np.ones(middle.size, dtype=np.bool_)
    inward = wall.direction if wall.after == np.inf else -wall.direction
    return np.asarray(((middle - wall.point) * np.conj(inward)).real > 0.0, dtype=np.bool_)


def _number(frame: Frame, rule: Rule) -> int:
    """Which of the images of a pole is the one that a rule sees."""
    if isinstance(frame.map, LogarithmMap):
        return int(rule.reflects)
    sample = _SAMPLE * min(frame.length, 1.0)
    seen = frame.map.forward(rule.image(frame.map.inverse(np.array([sample]))))[0]
    off = frame.images(sample).positions - seen
    if frame.kappa == PERIODIC:
        off = off - 2j * np.pi * np.round(off.imag / (2.0 * np.pi))
    return int(np.argmin(np.abs(off)))


def _corners(frame: Frame) -> list[complex]:
    """Where the walls of a rectangle meet, x + iy [m]; other images stay away from short elements."""
    if isinstance(frame.map, LogarithmMap):
        return []
    corners = []
    for one, other in combinations(frame.walls, 2):
        if abs((one.direction * other.direction.conjugate()).real) > _SQUARE:
            continue
        across = ((other.point - one.point) * one.direction.conjugate()).real
        corners.append(one.point + across * one.direction)
    return corners

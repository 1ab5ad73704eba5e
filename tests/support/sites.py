"""Shores of every kind in oblique frames, and places on them: water by fractions, walls by samples."""

import cmath
from dataclasses import dataclass
from math import radians

import numpy as np
from numpy.typing import NDArray

from forebay.flow.layout import (
    Basin,
    Channel,
    Corner,
    DeadEnd,
    OpenWater,
    Shore,
    StraightBank,
    Surveyed,
)

ComplexArray = NDArray[np.complex128]

SPAN = 60.0
"""Size of the part of the water in which elements are placed [m]."""

NEAREST_TO_WALL = 0.04
"""Fractions 0 and 1 of a place lie this fraction of the span inside the walls."""


def direction(degrees: float) -> complex:
    """Return the unit vector at an angle."""
    return cmath.rect(1.0, radians(degrees))


SHORES: dict[str, Shore] = {
    "open-water": OpenWater(),
    "straight-bank": StraightBank(point=3 - 2j, along=direction(25)),
    "channel": Channel(point=-5 + 4j, along=direction(-40), width=SPAN),
    "corner-right": Corner(vertex=2 + 1j, along=direction(15), interior_angle=radians(90)),
    "corner-obtuse": Corner(vertex=2 + 1j, along=direction(200), interior_angle=radians(115)),
    "corner-reflex": Corner(vertex=-7 + 1j, along=direction(70), interior_angle=radians(250)),
    "dead-end": DeadEnd(point=1 + 8j, along=direction(130), width=SPAN),
    "basin": Basin(corner=-4 - 3j, along=direction(55), length=1.5 * SPAN, width=SPAN),
    "basin-long": Basin(corner=6 + 1j, along=direction(-20), length=7 * SPAN, width=SPAN),
}

STRAIGHT_THROUGH = frozenset({"open-water", "straight-bank", "channel"})
"""Shores along which a current can run."""

BASINS = frozenset({"basin", "basin-long"})


def _frame(shore: Shore) -> tuple[complex, complex]:
    """Origin and direction of the frame in which the water is easily described."""
    match shore:
        case Surveyed():
            raise NotImplementedError
        case OpenWater():
            return 0j, 1 + 0j
        case StraightBank() | Channel() | DeadEnd():
            return shore.point, shore.along
        case Corner():
            return shore.vertex, shore.along
        case Basin():
            return shore.corner, shore.along


def _inset(fraction: float) -> float:
    return NEAREST_TO_WALL + (1 - 2 * NEAREST_TO_WALL) * fraction


def place(shore: Shore, across: float, along: float) -> complex:
    """Map two fractions in [0, 1] to a place in the water, at least a little off every wall."""
    a, s = _inset(across), _inset(along)
    origin, unit = _frame(shore)
    local: complex
    match shore:
        case Surveyed():
            raise NotImplementedError
        case OpenWater():
            local = complex((s - 0.5) * SPAN, (a - 0.5) * SPAN)
        case StraightBank():
            local = complex((s - 0.5) * SPAN, a * SPAN)
        case Channel():
            local = complex((2 * s - 1) * SPAN, a * shore.width)
        case Corner():
            local = cmath.rect((0.1 + s) * SPAN, a * shore.interior_angle)
        case DeadEnd():
            local = complex(1.5 * s * SPAN, a * shore.width)
        case Basin():
            local = complex(s * shore.length, a * shore.width)
    return origin + unit * local


@dataclass(frozen=True)
class WallSample:
    """Points on one straight wall and the unit direction along it (water on the left)."""

    name: str
    points: ComplexArray
    along: complex


def _line(name: str, start: complex, end: complex, fractions: NDArray[np.float64]) -> WallSample:
    step = end - start
    points = np.asarray(start + step * fractions, dtype=np.complex128)
    return WallSample(name, points, step / abs(step))


def wall_samples(shore: Shore, count: int = 41) -> tuple[WallSample, ...]:
    """Sample every straight wall of a shore, ends (where the velocity may be singular or zero) left out."""
    fractions = (np.arange(count) + 0.5) / count
    origin, unit = _frame(shore)

    def line(name: str, start: complex, end: complex) -> WallSample:
        return _line(name, origin + unit * start, origin + unit * end, fractions)

    match shore:
        case Surveyed():
            raise NotImplementedError
        case OpenWater():
            return ()
        case StraightBank():
            return (line("bank", -SPAN, SPAN),)
        case Channel():
            top = 1j * shore.width
            return (
                line("right bank", -2 * SPAN, 2 * SPAN),
                line("left bank", 2 * SPAN + top, -2 * SPAN + top),
            )
        case Corner():
            second = cmath.rect(2 * SPAN, shore.interior_angle)
            return (line("first bank", 0, 2 * SPAN), line("second bank", second, 0))
        case DeadEnd():
            top, far = 1j * shore.width, 3 * SPAN
            return (
                line("right bank", 0, far),
                line("left bank", far + top, top),
                line("closed end", top, 0),
            )
        case Basin():
            top, far = 1j * shore.width, shore.length
            return (
                line("right bank", 0, far),
                line("far end", far, far + top),
                line("left bank", far + top, top),
                line("near end", top, 0),
            )


def bank_place(shore: Shore, along: float) -> complex:
    """Place on the first wall of a shore; on open water between two rows of cells."""
    walls = wall_samples(shore, 3)
    if not walls:
        return place(shore, 0.515, 0.013 + 0.97 * along)
    first, last = walls[0].points[0], walls[0].points[-1]
    return complex(first + (last - first) * (0.25 + 0.5 * along))

"""What is released: frozen values, SI units, positions as complex x + iy [m].

All of a release starts between t = 0 and `duration`, evenly in time, and drifts with the depth-mean flow.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import FlowError


class ReleaseError(FlowError):
    """A release is not of a shape that water can be let go from."""

    code = "release-impossible"
    title = "A release cannot be where or what it is said to be"


@dataclass(frozen=True, slots=True)
class AtPoint:
    """Release at one place."""

    at: complex


@dataclass(frozen=True, slots=True)
class AlongLine:
    """Release spread evenly over the wet length of a polyline; `points` of at least two places [m]."""

    points: tuple[complex, ...]

    def __post_init__(self) -> None:
        if len(set(self.points)) < 2:
            raise ReleaseError("the line has no length")


@dataclass(frozen=True, slots=True)
class OverDisc:
    """Release spread evenly over the wet part of a disc."""

    centre: complex
    radius: float

    @property
    def area(self) -> float:
        """Land included [m2]."""
        return float(np.pi * self.radius**2)


@dataclass(frozen=True, slots=True)
class OverPolygon:
    """Release spread evenly over the wet part of a simple polygon; `points` are made anticlockwise [m].

    Raises ReleaseError if it has no area or its edges meet.
    """

    points: tuple[complex, ...]

    def __post_init__(self) -> None:
        kept = [z for k, z in enumerate(self.points) if z != self.points[k - 1]]
        ring = np.array(kept, dtype=np.complex128)
        if (
            ring.size < 3
            or abs(_signed_area(ring)) <= 1e-12 * float(np.ptp(ring.real) + np.ptp(ring.imag)) ** 2
        ):
            raise ReleaseError("the polygon has no area")
        if _meets_itself(ring):
            raise ReleaseError("the edges of the polygon meet")
        if _signed_area(ring) < 0.0:
            kept.reverse()
        object.__setattr__(self, "points", tuple(kept))

    @property
    def area(self) -> float:
        """Land included [m2]."""
        return _signed_area(np.array(self.points))


@dataclass(frozen=True, slots=True)
class FromOutfall:
    """The water that an outfall gives, weighted by its flux."""

    outfall: str


Place = AtPoint | AlongLine | OverDisc | OverPolygon | FromOutfall
Patch = OverDisc | OverPolygon


@dataclass(frozen=True, slots=True)
class Release:
    """A named release; `duration` over which it is let go evenly from t = 0, 0 for all at once [s]."""

    name: str
    place: Place
    duration: float = 0.0


def _signed_area(ring: ComplexArray) -> float:
    return float(0.5 * (np.conj(ring) * np.roll(ring, -1)).imag.sum())


def _meets_itself(ring: ComplexArray) -> bool:
    """Whether two edges that are not neighbours touch, or neighbours fold back on each other."""
    a, b = ring, np.roll(ring, -1)
    span = b - a
    if np.any((np.conj(span) * np.roll(span, -1)).imag == 0.0) and np.any(
        np.abs(np.angle(np.roll(span, -1) / span)) > np.pi - 1e-12
    ):
        return True
    count = ring.size
    first, second = np.triu_indices(count, 2)
    apart = ~((first == 0) & (second == count - 1))
    first, second = first[apart], second[apart]
    return bool(np.any(_touch(a[first], b[first], a[second], b[second])))


def _touch(a: ComplexArray, b: ComplexArray, c: ComplexArray, d: ComplexArray) -> np.ndarray:
    """Whether segments a-b and c-d have a point in common."""
    side_c, side_d = _side(a, b, c), _side(a, b, d)
    side_a, side_b = _side(c, d, a), _side(c, d, b)
    proper = (side_c * side_d < 0) & (side_a * side_b < 0)
    for p, q, r, side in ((a, b, c, side_c), (a, b, d, side_d), (c, d, a, side_a), (c, d, b, side_b)):
        proper = proper | ((side == 0) & (np.abs(r - p) + np.abs(r - q) <= np.abs(q - p) * (1 + 1e-12)))
    return np.asarray(proper)


def _side(a: ComplexArray, b: ComplexArray, c: ComplexArray) -> np.ndarray:
    return np.asarray(np.sign((np.conj(b - a) * (c - a)).imag))

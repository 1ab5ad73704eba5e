"""Fields of line elements in the plane where the shore is simple: panels, images, Gauss nodes as arrays."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels import strip, wedge
from forebay.flow.segments import Segment

STRIP_PANEL = 2.0
"""Longest panel in a strip of width pi [-]: remainders are analytic within pi of it."""

_WEDGE_PANEL = 0.5
"""Longest panel in a wedge, relative to its distance from the vertex [-]."""

_WEDGE_NODES = 12
"""Panels are so short that remainders are analytic within 3 half-lengths of their middles, an ellipse of
parameter 5.8; the error is below 5.8^-24 = 1e-18."""

_DECADES = 37.0
"""exp(-37) = 1e-16: error left by the nodes in a strip [-]."""

Places = Callable[[complex], Sequence[complex]]
"""All places from which a source at a given place is seen, itself first; in a strip those with |Im| <= pi."""

Arrays = tuple[ComplexArray, ComplexArray, FloatArray, FloatArray]
"""Starts, ends, strengths over 2 pi and facings of segments, shape (m,) each."""


class LineField(Protocol):
    """Field of a line element at places of shape (n,) [-]."""

    def velocity(self, w: ComplexArray) -> ComplexArray:
        """W [m2/s]; not finite at the line's ends."""
        ...

    def jet(self, w: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        """W and its derivative [m2/s]."""
        ...

    def potential(self, w: ComplexArray) -> ComplexArray:
        """Integral of W, cut along the line and its extension beyond the start [m2/s]."""
        ...

    def chords(self, p: ComplexArray, q: ComplexArray) -> ComplexArray:
        """Integrals of W along straight chords p -> q [m2/s]."""
        ...

    def magnitude(self, w: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W [m2/s]."""
        ...


@dataclass(frozen=True, eq=False)
class PlainField:
    """1/(w - s) over segments: open water, or a straight bank with the image listed as well."""

    segments: Arrays

    @classmethod
    def of(cls, panels: Sequence[Segment], shares: Sequence[float], *, mirrored: bool) -> "PlainField":
        """Panels, each with its image in the real axis if `mirrored`."""
        places = (lambda s: (s, s.conjugate())) if mirrored else (lambda s: (s,))
        return cls(_with_images(panels, shares, places))

    def velocity(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        return self.jet(w)[0]

    def jet(self, w: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        """As `LineField`."""
        velocity, slope = strip.plain_jet(w, *self.segments)
        return velocity, slope

    def potential(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        return np.asarray(strip.plain_potential(w, *self.segments), dtype=np.complex128)

    def chords(self, p: ComplexArray, q: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        return np.asarray(strip.plain_chords(p, q, *self.segments), dtype=np.complex128)

    def magnitude(self, w: ComplexArray) -> FloatArray:
        """As `LineField`."""
        return np.asarray(strip.plain_magnitude(w, *self.segments), dtype=np.float64)


@dataclass(frozen=True, eq=False)
class StripField:
    """coth((w - s)/2)/2 + offset over segments in or below the strip 0 <= Im w <= pi."""

    segments: Arrays
    nodes: ComplexArray
    weights: FloatArray
    offset: float

    @classmethod
    def of(
        cls, panels: Sequence[Segment], shares: Sequence[float], *, places: Places, offset: float
    ) -> "StripField":
        """Panels of at most `STRIP_PANEL` with all their images."""
        segments = _with_images(panels, shares, places)
        half = 0.5 * max(abs(panel.run) for panel in panels)
        growth = np.log(np.pi / half + np.hypot(np.pi / half, 1.0))
        nodes, weights = _gauss(segments, int(np.ceil(0.5 * _DECADES / growth)) + 1)
        return cls(segments, nodes, weights, offset)

    def velocity(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        sums = strip.strip_velocity(w, self.segments, self.nodes, self.weights, self.offset)
        return np.asarray(sums, dtype=np.complex128)

    def jet(self, w: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        """As `LineField`."""
        velocity, slope = strip.strip_jet(w, self.segments, self.nodes, self.weights, self.offset)
        return velocity, slope

    def potential(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        sums = strip.strip_potential(w, self.segments, self.nodes, self.weights, self.offset)
        return np.asarray(sums, dtype=np.complex128)

    def chords(self, p: ComplexArray, q: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        sums = strip.strip_chords((p, q), self.segments, self.nodes, self.weights, self.offset)
        return np.asarray(sums, dtype=np.complex128)

    def magnitude(self, w: ComplexArray) -> FloatArray:
        """As `LineField`."""
        return np.asarray(strip.strip_magnitude(w, self.segments, self.offset), dtype=np.float64)


@dataclass(frozen=True, eq=False)
class WedgeField:
    """Sources and their mirror images in the wedge 0 <= arg w <= angle; nothing leaves through the vertex."""

    panels: Arrays
    logs: ComplexArray
    weights: FloatArray
    angle: float

    @classmethod
    def of(cls, panels: Sequence[Segment], shares: Sequence[float], *, angle: float) -> "WedgeField":
        """Panels no longer than `wedge_panel` allows."""
        arrays = _with_images(panels, shares, lambda s: (s,))
        nodes, weights = _gauss(arrays, _WEDGE_NODES)
        return cls(arrays, wedge.wedge_logs(nodes, angle), weights, angle)

    def velocity(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        return self.jet(w)[0]

    def jet(self, w: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        """As `LineField`."""
        velocity, slope = wedge.wedge_jet(w, self.panels, self.logs, self.weights, self.angle)
        return velocity, slope

    def potential(self, w: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        sums = wedge.wedge_potential(w, self.panels, self.logs, self.weights, self.angle)
        return np.asarray(sums, dtype=np.complex128)

    def chords(self, p: ComplexArray, q: ComplexArray) -> ComplexArray:
        """As `LineField`."""
        sums = wedge.wedge_chords((p, q), self.panels, self.logs, self.weights, self.angle)
        return np.asarray(sums, dtype=np.complex128)

    def magnitude(self, w: ComplexArray) -> FloatArray:
        """As `LineField`."""
        return np.asarray(wedge.wedge_magnitude(w, self.panels, self.angle), dtype=np.float64)


def wedge_panel(start: complex, end: complex, angle: float) -> float:
    """Longest panel allowed for a piece of a line in a wedge: a share of its distance from the vertex."""
    run = end - start
    along = np.clip(-(start * np.conj(run)).real / abs(run) ** 2, 0.0, 1.0)
    reach = min(_WEDGE_PANEL, 0.6 * angle, max(0.05, 2.0 * np.pi - angle))
    return reach * float(abs(start + along * run))


def _with_images(panels: Sequence[Segment], shares: Sequence[float], places: Places) -> Arrays:
    """Panels, then image after image of them; an image that coincides with its panel faces as it does."""
    seen = [(list(places(panel.start)), list(places(panel.end))) for panel in panels]
    rows = []
    for index in range(len(seen[0][0])):
        for panel, share, (starts, ends) in zip(panels, shares, seen, strict=True):
            start, end = starts[index], ends[index]
            facing = panel.facing if _coincide(0.5 * (start + end), panel.middle) else 0
            rows.append((start, end, share, float(facing)))
    table = np.array(rows, dtype=np.complex128).T
    return table[0].copy(), table[1].copy(), table[2].real.copy(), table[3].real.copy()


def _coincide(place: complex, other: complex) -> bool:
    """Whether two places are the same to rounding, up to shifts by 2 pi i."""
    gap = place - other
    turns = round(gap.imag / (2.0 * np.pi))
    return abs(gap - 2j * np.pi * turns) <= 1e-12 * (1.0 + abs(other))


def _gauss(segments: Arrays, count: int) -> tuple[ComplexArray, FloatArray]:
    """Nodes on every segment, shape (m, count), and their weights, shape (count,), which add to 1."""
    places, weights = np.polynomial.legendre.leggauss(count)
    start, end = segments[0][:, None], segments[1][:, None]
    return 0.5 * (start + end) + 0.5 * (end - start) * places, 0.5 * weights

"""Rakes on which water counts by its flux: edges of a patch, mouths of outfalls, sides of line elements.

A rake says what water lies between two of its places: length of a line, flux of an outfall, or, for the
boundary of a patch, the flux that enters there.
"""

from dataclasses import dataclass
from math import pi

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.arrivals.curves import Arc, Straight
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import LineFaces
from forebay.flow.withdrawal.faces import on_side
from forebay.flow.withdrawal.mouths import Mouth


@dataclass(frozen=True, slots=True)
class Edge:
    """A straight piece or an arc as part of an anticlockwise boundary; weight: flux that enters [m2/s]."""

    model: FlowModel
    curve: Straight | Arc

    @property
    def length(self) -> float:
        """Of the curve [m]."""
        return self.curve.length

    def place(self, s: FloatArray) -> ComplexArray:
        """Places of the curve."""
        return self.curve.place(s)

    def weights(self, s: FloatArray) -> FloatArray:
        """Psi at the later place less psi at the earlier one, turned inward; exact along chords."""
        z = self.curve.place(s)
        return np.asarray(-self.model.chord(z[:-1], z[1:]).imag)

    def delay(self, z: ComplexArray) -> FloatArray:
        """None."""
        return np.zeros(z.shape)


@dataclass(frozen=True, slots=True)
class PointMouth:
    """Circle about a point outfall; s is the part of its flux, exact; weight: flux [m2/s].

    at, strength : of the outfall, whose own speed is strength / r [m], [m2/s]
    """

    model: FlowModel
    mouth: Mouth
    at: complex
    strength: float

    @property
    def length(self) -> float:
        """Circumference [m]."""
        return 2.0 * pi * float(abs(self.place(np.array([0.5]))[0] - self.at))

    def place(self, s: FloatArray) -> ComplexArray:
        """Places on the circle."""
        return self.mouth.release(np.clip(s, 0.0, 1.0) * self.mouth.total)

    def weights(self, s: FloatArray) -> FloatArray:
        """Flux [m2/s]."""
        return abs(self.mouth.total) * np.diff(s)

    def delay(self, z: ComplexArray) -> FloatArray:
        """From the centre to r: r2/2g - x r3/3g2, g/r the outfall's own speed, x the rest outward [s]."""
        outward = z - self.at
        r, g = np.abs(outward), self.strength
        rest = (self.model.velocity(z) * outward).real / r - g / r
        return np.asarray(r**2 / (2.0 * g) - rest * r**3 / (3.0 * g**2))


@dataclass(frozen=True, slots=True)
class Face:
    """Part of one side of a line element, from `low` to `high` of its length.

    side : +1 to the left of start -> end, else -1
    own : whether only the line's own water counts, evenly, where a current adds to it; else all that leaves
        the side, negative where water arrives [m2/s]
    """

    model: FlowModel
    faces: LineFaces
    line: int
    side: float
    low: float
    high: float
    own: bool

    @property
    def length(self) -> float:
        """Of this part [m]."""
        return float(self.faces.lengths[self.line]) * (self.high - self.low)

    def place(self, s: FloatArray) -> ComplexArray:
        """Places just off the line."""
        return on_side(self.faces, self.line, self.side, self.low + (self.high - self.low) * s)

    def weights(self, s: FloatArray) -> FloatArray:
        """Flux [m2/s]: of the line alone if `own`, else exact differences of psi."""
        if self.own:
            return np.asarray(self.faces.flux[self.line] * self.length * np.diff(s))
        z = self.place(s)
        return np.asarray(-self.side * self.model.chord(z[:-1], z[1:]).imag)

    def delay(self, z: ComplexArray) -> FloatArray:
        """None."""
        return np.zeros(z.shape)

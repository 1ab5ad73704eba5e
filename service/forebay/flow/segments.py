"""Straight segments of sources: the geometry of line elements."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels import segment


@dataclass(frozen=True, slots=True)
class Segment:
    """Straight segment of sources.

    start, end : ends, complex [m] or [-]
    facing : 0, or for a segment in a wall the sign of Im((z - start) / (end - start)) on the water's side
    """

    start: complex
    end: complex
    facing: int = 0

    @property
    def run(self) -> complex:
        """end - start."""
        return self.end - self.start

    @property
    def middle(self) -> complex:
        """Midpoint."""
        return 0.5 * (self.start + self.end)

    def sides(self, z: ComplexArray) -> FloatArray:
        """1 left of the line start -> end, -1 right, 0 on it to rounding; in a wall the water's side."""
        places = np.asarray(z, dtype=np.complex128)
        found = segment.sides(places.ravel(), self.start, self.end, float(self.facing))
        return np.asarray(found.reshape(places.shape), dtype=np.float64)

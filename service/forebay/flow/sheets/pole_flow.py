"""Poles of the mapped plane as a flow of their own."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.corner_chords import corner_chords
from forebay.flow.maps import LogarithmMap
from forebay.flow.poles import PoleField
from forebay.flow.shores import Frame


@dataclass(frozen=True, eq=False)
class PoleFlow:
    """Poles in the frame of a shore, all of one owner."""

    field: PoleField
    frame: Frame

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords, shape (n,) [m2/s]; none starts at a pole."""
        if isinstance(self.frame.map, LogarithmMap):
            return np.asarray(corner_chords(self.frame.map, self.field, a, b, 1)[:, 0])
        tau = self.frame.map.forward
        return np.asarray(self.field.chords(tau(a), tau(b), owner_count=1)[:, 0])

    def potential(self, z: ComplexArray) -> ComplexArray:
        """F with principal logarithms, shape (n,) [m2/s]."""
        return self.field.potential(self.frame.map.forward(z))

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """W, shape (n,) [m/s]."""
        return self.field.velocity(self.frame.map.forward(z)) * self.frame.map.slope(z)

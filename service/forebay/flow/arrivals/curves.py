"""Curves from which streamlines are released, each place named by a part s of the curve, 0 <= s <= 1."""

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray

Part = tuple[float, float]
"""Part of a curve, from s to s."""


class Rake(Protocol):
    """Where streamlines begin."""

    @property
    def length(self) -> float:
        """Of the curve, at least [m]."""
        ...

    def place(self, s: FloatArray) -> ComplexArray:
        """Places, shape (n,) [m]."""
        ...

    def weights(self, s: FloatArray) -> FloatArray:
        """What lies between neighbours of ascending s, shape (n - 1,)."""
        ...

    def delay(self, z: ComplexArray) -> FloatArray:
        """Time before the water is at places of the rake, shape (n,) [s]."""
        ...


@dataclass(frozen=True, slots=True)
class Straight:
    """Straight piece; weight: length [m]."""

    start: complex
    end: complex

    @property
    def length(self) -> float:
        """|end - start| [m]."""
        return abs(self.end - self.start)

    def place(self, s: FloatArray) -> ComplexArray:
        """Start + s (end - start)."""
        return np.asarray(self.start + s * (self.end - self.start), dtype=np.complex128)

    def weights(self, s: FloatArray) -> FloatArray:
        """Lengths [m]."""
        return self.length * np.diff(s)

    def delay(self, z: ComplexArray) -> FloatArray:
        """None."""
        return np.zeros(z.shape)


@dataclass(frozen=True, slots=True)
class Arc:
    """Arc of a circle, anticlockwise from `begin` through `turn` [rad]; weight: length [m]."""

    centre: complex
    radius: float
    begin: float
    turn: float

    @property
    def length(self) -> float:
        """Radius times turn [m]."""
        return self.radius * abs(self.turn)

    def place(self, s: FloatArray) -> ComplexArray:
        """Centre + radius exp(i (begin + s turn))."""
        return np.asarray(
            self.centre + self.radius * np.exp(1j * (self.begin + s * self.turn)), dtype=np.complex128
        )

    def weights(self, s: FloatArray) -> FloatArray:
        """Lengths [m]."""
        return self.length * np.diff(s)

    def delay(self, z: ComplexArray) -> FloatArray:
        """None."""
        return np.zeros(z.shape)

"""Conformal maps from the site to the plane in which banks are mirrors.

Every shore is mapped so that its banks lie on Im tau = 0 (and Im tau = pi), where the image of a
pole is its conjugate. Two families are enough: the affine map (open water, straight bank, channel,
dead end, basin) and the logarithm (corner).
"""

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray


class ConformalMap(Protocol):
    """tau(z) with its first two derivatives and its inverse; arrays of any shape."""

    @property
    def affine(self) -> bool:
        """Whether tau is a + b z, so that straight chords stay straight."""
        ...

    def forward(self, z: ComplexArray) -> ComplexArray:
        """tau(z) [-], z in the water or on its banks [m]."""
        ...

    def slope(self, z: ComplexArray) -> ComplexArray:
        """dtau/dz [1/m]."""
        ...

    def curvature(self, z: ComplexArray) -> ComplexArray:
        """d2tau/dz2 [1/m2]."""
        ...

    def inverse(self, tau: ComplexArray) -> ComplexArray:
        """z(tau) [m]."""
        ...


@dataclass(frozen=True, slots=True)
class AffineMap:
    """tau = rate (z - origin).

    origin : point that maps to 0, x + iy [m]
    rate : complex, |rate| in [1/m]; its argument turns the bank on to the real axis
    """

    origin: complex
    rate: complex

    @property
    def affine(self) -> bool:
        """Straight chords stay straight."""
        return True

    def forward(self, z: ComplexArray) -> ComplexArray:
        """tau(z) [-]."""
        return self.rate * (z - self.origin)

    def slope(self, z: ComplexArray) -> ComplexArray:
        """dtau/dz [1/m], the same everywhere."""
        return np.full(np.shape(z), self.rate, dtype=np.complex128)

    def curvature(self, z: ComplexArray) -> ComplexArray:
        """Zero everywhere [1/m2]."""
        return np.zeros(np.shape(z), dtype=np.complex128)

    def inverse(self, tau: ComplexArray) -> ComplexArray:
        """z(tau) [m]."""
        return tau / self.rate + self.origin


@dataclass(frozen=True, slots=True)
class LogarithmMap:
    """tau = n log((z - vertex) conj(along) / unit), n = pi / interior angle, for a corner.

    The argument is taken in (-pi + alpha/2, pi + alpha/2], so that the cut lies on the bisector of the
    land, and water lies in 0 <= Im tau <= pi.

    vertex : the corner, x + iy [m];  along : unit complex direction of the first bank
    angle : interior angle alpha, 0 < alpha <= 2 pi [rad];  unit : length that maps to Re tau = 0 [m]
    """

    vertex: complex
    along: complex
    angle: float
    unit: float

    @property
    def affine(self) -> bool:
        """Straight chords become curves."""
        return False

    @property
    def exponent(self) -> float:
        """n = pi / alpha [-]."""
        return float(np.pi) / self.angle

    def forward(self, z: ComplexArray) -> ComplexArray:
        """tau(z) [-]; Re tau is -inf at the vertex."""
        local = (z - self.vertex) * (np.conj(self.along) / self.unit)
        half = 0.5 * self.angle
        tau = np.empty(np.shape(local), dtype=np.complex128)
        with np.errstate(divide="ignore"):
            tau.real = self.exponent * np.log(np.abs(local))
        tau.imag = self.exponent * (np.angle(local * np.exp(-1j * half)) + half)
        return tau

    def slope(self, z: ComplexArray) -> ComplexArray:
        """dtau/dz = n / (z - vertex) [1/m]."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(self.exponent / (z - self.vertex), dtype=np.complex128)

    def curvature(self, z: ComplexArray) -> ComplexArray:
        """d2tau/dz2 = -n / (z - vertex)^2 [1/m2]."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(-self.exponent / (z - self.vertex) ** 2, dtype=np.complex128)

    def inverse(self, tau: ComplexArray) -> ComplexArray:
        """z(tau) [m]."""
        spread = np.exp(tau / self.exponent) * (self.unit * self.along)
        return np.asarray(spread + self.vertex, dtype=np.complex128)

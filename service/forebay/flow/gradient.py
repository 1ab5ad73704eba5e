"""The linear part of the ambient current: shear, strain and solid rotation."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Ambient
from forebay.flow.terms import Jet


@dataclass(frozen=True, slots=True)
class GradientTerm:
    """Linear current W = slope (z - at) + skew conj(z - at).

    slope : u_x - i (u_y + v_x)/2, the strain [1/s]
    skew : -i vorticity / 2 [1/s]
    at : where it vanishes, x + iy [m]
    owner : index of the ambient among the model's owners
    """

    slope: complex
    skew: complex
    at: complex
    owner: int

    @classmethod
    def of(cls, ambient: Ambient, owner: int) -> "GradientTerm":
        """Gradient part of an ambient current whose gradient has zero trace."""
        (u_x, u_y), (v_x, _) = ambient.gradient
        return cls(complex(u_x, -0.5 * (u_y + v_x)), -0.5j * ambient.vorticity, ambient.at, owner)

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """W = slope (z - at) + skew conj(z - at) [m/s], any shape."""
        away = z - self.at
        return np.asarray(self.slope * away + self.skew * np.conj(away), dtype=np.complex128)

    def jet(self, z: ComplexArray) -> Jet:
        """Conjugate velocity [m/s] and its constant derivatives [1/s] at z, any shape [m]."""
        shape = np.shape(z)
        return Jet(
            self.velocity(z),
            np.full(shape, self.slope, dtype=np.complex128),
            np.full(shape, self.skew, dtype=np.complex128),
        )

    def potential(self, z: ComplexArray) -> ComplexArray:
        """slope d^2/2 + i Im(skew) |d|^2/2 with d = z - at [m2/s]; with vorticity only psi has a meaning.

        psi_y = u and psi_x = -v hold for both parts: skew conj(d) = -i (vorticity/2) conj(d) has
        psi = -(vorticity/4) |d|^2.
        """
        away = z - self.at
        rotation = 0.5j * self.skew.imag * (away.real**2 + away.imag**2)
        return np.asarray(0.5 * self.slope * away * away + rotation, dtype=np.complex128)

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords a -> b [m2/s]: the midpoint rule is exact for linear W."""
        return np.asarray(self.velocity(0.5 * (a + b)) * (b - a), dtype=np.complex128)

    def arcs(
        self, centre: ComplexArray, start: ComplexArray, end: ComplexArray, turn: FloatArray
    ) -> ComplexArray:
        """Integral of W dz along circular arcs [m2/s].

        int slope (z - at) dz is a difference of squares; int conj(z - at) dz = conj(centre - at)(end - start)
        + i radius^2 turn.

        centre, start, end : shape (n,), of the arcs [m];  turn : shape (n,), swept angle, signed [rad]
        """
        strain = 0.5 * self.slope * ((end - self.at) ** 2 - (start - self.at) ** 2)
        swept = np.conj(centre - self.at) * (end - start) + 1j * np.abs(start - centre) ** 2 * turn
        return np.asarray(strain + self.skew * swept, dtype=np.complex128)

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """|slope d| + |skew d| [m/s]."""
        return np.asarray((abs(self.slope) + abs(self.skew)) * np.abs(z - self.at), dtype=np.float64)

"""What a part of the flow must be able to say: velocity, its derivatives, its integral along a chord."""

from dataclasses import dataclass
from typing import Protocol

from forebay.flow.arrays import ComplexArray, FloatArray


@dataclass(frozen=True, slots=True)
class Jet:
    """Conjugate velocity W = u - iv and its first derivatives, arrays of one shape.

    velocity : W = u - iv [m/s]
    slope : dW/dz = (u_x - v_y)/2 - i (u_y + v_x)/2 [1/s], for zero divergence u_x - i u_y where irrotational
    skew : dW/dzbar = (divergence - i vorticity)/2 [1/s]; zero where the flow is irrotational
    """

    velocity: ComplexArray
    slope: ComplexArray
    skew: ComplexArray

    def __add__(self, other: "Jet") -> "Jet":
        return Jet(self.velocity + other.velocity, self.slope + other.slope, self.skew + other.skew)


class Term(Protocol):
    """A part of the flow that is no sum of poles: line element, vortex core, ambient gradient.

    owner : index into the model's owners, who answers for its flux and circulation
    """

    @property
    def owner(self) -> int:
        """Index into the model's owners."""
        ...

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Conjugate velocity W = u - iv [m/s] at z, any shape [m]."""
        ...

    def jet(self, z: ComplexArray) -> Jet:
        """Conjugate velocity [m/s] and derivatives [1/s] at z, any shape [m]."""
        ...

    def potential(self, z: ComplexArray) -> ComplexArray:
        """Complex potential phi + i psi [m2/s] on a principal branch; phi is meaningless where rotational."""
        ...

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along the straight chords a -> b [m2/s]: circulation + i flux, exact."""
        ...

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts added up in W [m/s]: the scale of its rounding error."""
        ...

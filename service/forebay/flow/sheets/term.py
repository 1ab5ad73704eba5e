"""The sheets of one owner as a part of the flow."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.sheets.field import SheetField
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.pole_flow import PoleFlow
from forebay.flow.terms import Jet


@dataclass(frozen=True, eq=False)
class SheetTerm:
    """Sheets, and for potentials the poles at the starts of closed rings where the density jumps.

    W has no pole there: the sheet carries what the pole would, so that velocities come from the sheets alone.
    On a ring values are those on the water's side; at its vertices logarithms are cut off.

    field : the sheets;  owner : index among the model's owners
    vortices : poles of F at the starts of rings, None for none;  mesh : of all rings, whoever owns them
    origin : x + iy, from which the coordinates of `field` and `vortices` count, not those of `mesh` [m]
    """

    field: SheetField
    owner: int
    vortices: PoleFlow | None
    mesh: Mesh
    origin: complex

    def local(self, z: ComplexArray) -> ComplexArray:
        """Coordinates of the field, shape (n,) [m]."""
        return np.asarray(z, dtype=np.complex128).ravel() - self.origin

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Conjugate velocity [m/s] at z, any shape [m]; accurate to 1e-12 of the speeds on the rings."""
        at = np.asarray(z, dtype=np.complex128)
        return self.field.velocity(self.local(at)).reshape(at.shape)

    def jet(self, z: ComplexArray) -> Jet:
        """Conjugate velocity [m/s] and derivatives [1/s] at z, any shape."""
        at = np.asarray(z, dtype=np.complex128)
        velocity, slope = self.field.jet(self.local(at))
        return Jet(
            velocity.reshape(at.shape), slope.reshape(at.shape), np.zeros(at.shape, dtype=np.complex128)
        )

    def potential(self, z: ComplexArray) -> ComplexArray:
        """Complex potential [m2/s], any shape; one branch in the water if there are no poles."""
        at = np.asarray(z, dtype=np.complex128)
        total = self.field.potential(self.local(at))
        if self.vortices is not None:
            total = total + self.vortices.potential(self.local(at))
        return total.reshape(at.shape)

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords in the water [m2/s], shape of a."""
        start, end = np.broadcast_arrays(np.asarray(a, np.complex128), np.asarray(b, np.complex128))
        both = np.concatenate((self.local(start), self.local(end)))
        places, inverse = np.unique(both, return_inverse=True)
        values = self.field.potential(places)[inverse.ravel()]
        sums = values[start.size :] - values[: start.size]
        if self.vortices is not None:
            sums = sums + self.vortices.chord(self.local(start), self.local(end))
        return sums.reshape(start.shape)

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W [m/s]."""
        at = np.asarray(z, dtype=np.complex128)
        return self.field.magnitude(self.local(at)).reshape(at.shape)

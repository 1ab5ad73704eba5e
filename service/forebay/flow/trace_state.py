"""What is under way while streamlines are traced: lines and attempted steps, as arrays."""

from dataclasses import dataclass

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray


@dataclass(slots=True)
class Lines:
    """The lines still under way, arrays of one length; `index` says which seed each belongs to.

    `psi` is what a line has strayed from the stream function that it keeps to, `level` that one less its
    seed's: it changes where a line has followed a wall, `walks` times so far.
    """

    index: IntArray
    z: ComplexArray
    w: ComplexArray
    step: FloatArray
    psi: FloatArray
    level: FloatArray
    walks: IntArray
    time: FloatArray
    distance: FloatArray

    def kept(self, stay: BoolArray) -> "Lines":
        """The lines marked `stay`."""
        return Lines(*(getattr(self, name)[stay] for name in self.__slots__))


@dataclass(slots=True)
class Stride:
    """One attempted step: new places, error over tolerance, time taken, velocity before projection.

    blocked : whether it may not be taken, for a line element or, if also `ashore`, since it ends on land
    """

    z: ComplexArray
    w: ComplexArray
    error: FloatArray
    time: FloatArray
    blocked: BoolArray
    ashore: BoolArray

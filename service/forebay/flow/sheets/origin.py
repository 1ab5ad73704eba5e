"""An origin near the walls: coordinates far from theirs cost the digits that short elements need."""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.maps import AffineMap, LogarithmMap
from forebay.flow.sheets.known import KnownFlow
from forebay.flow.sheets.ring import Ring
from forebay.flow.shores import Frame


@dataclass(frozen=True, slots=True)
class Shifted:
    """A flow in coordinates that count from an origin, x + iy [m]."""

    flow: KnownFlow
    origin: complex

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords [m2/s]."""
        return self.flow.chord(a + self.origin, b + self.origin)

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """W [m/s]."""
        return self.flow.velocity(z + self.origin)


def middle_of(rings: tuple[Ring, ...]) -> complex:
    """Middle of the box round all rings, x + iy [m]."""
    vertices = np.concatenate([ring.vertices for ring in rings])
    low = complex(vertices.real.min(), vertices.imag.min())
    return 0.5 * (low + complex(vertices.real.max(), vertices.imag.max()))


def shifted_rings(rings: tuple[Ring, ...], origin: complex) -> tuple[Ring, ...]:
    """Rings in coordinates that count from an origin."""
    return tuple(replace(r, vertices=r.vertices - origin, body=r.body - origin) for r in rings)


def shifted_frame(frame: Frame, origin: complex) -> Frame:
    """A frame in coordinates that count from an origin."""
    walls = tuple(replace(wall, point=wall.point - origin) for wall in frame.walls)
    match frame.map:
        case AffineMap() as affine:
            return replace(frame, map=replace(affine, origin=affine.origin - origin), walls=walls)
        case LogarithmMap() as corner:
            return replace(frame, map=replace(corner, vertex=corner.vertex - origin), walls=walls)
        case _:
            raise TypeError(frame.map)

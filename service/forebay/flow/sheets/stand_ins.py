"""Elements on the land round surveyed water: what the sheets carry on their account beyond the wall.

The density on the outer ring is the flow in the water less some flow beyond the ring. For elements in the
water that is minus the known flow, which is regular there, and the density is phi + i psi of the water. An
element on the ring acts as a pole of twice its strength, singular on both sides. Beyond the ring the pole of
a stand-in in the water takes its place, so that the known part of the density is

    strength (log(z - stand-in) - log(z - element)),

with psi of the element on the wall as the mean of passing it left and right. Without it the flow beyond the
ring would have to fit land and open edges as the water's does, and be singular wherever these meet.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.errors import ElementMisplacedError, Path
from forebay.flow.kernels.ring_walls import nearest_edges, rings_around
from forebay.flow.layout import Element, Layout, LineSink, LineSource, outflow
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.standing import DOUBLED, Footings

_FREE = 0.5
"""Distance of a stand-in from the ring over that from its element, at least [-]."""
_HALVINGS = 40
"""Most halvings of the distance between the two: a trillionth of the water's breadth [-]."""
_ON = 1e-9
"""Distance from the line of a wall over its length within which places lie on it [-]."""
_LINE_NODES, _LINE_WEIGHTS = np.polynomial.legendre.leggauss(16)
_PLACES = np.array([-1.0, -0.5, 0.5, 1.0])
"""Where the known part of the density is taken on an element: both ends, where it is continuous."""
_FIT = np.linalg.inv(np.polynomial.legendre.legvander(_PLACES, _PLACES.size - 1))


@dataclass(frozen=True, eq=False)
class StandIns:
    """Poles on the outer ring and the stand-ins in their place beyond it.

    places : shape (k,), poles, a line as several [m];  strengths : coefficients of their logarithms [m2/s]
    walls : shape (k,), edges on which they stand, from end to end [m];  others : stand-ins [m]
    """

    places: ComplexArray
    strengths: FloatArray
    walls: ComplexArray
    others: ComplexArray

    def density(self, mesh: Mesh) -> ComplexArray:
        """Known part of the density, Legendre coefficients, shape (m, 4) [m2/s].

        It is zero at the ring's start, where its jump is that of the poles of the known flow. On land, where
        phi is unknown, phi only falls off from the open edges; so does psi on these.
        """
        total = np.zeros((mesh.count, _PLACES.size), dtype=np.complex128)
        count = int(mesh.bounds[1])
        values = self._along(mesh, count)
        opened = mesh.is_equipotential[:count]
        ends = values[:, [0, -1]].real * _touching(opened)
        share = 0.5 * (1.0 + _PLACES)
        phi = np.where(opened[:, None], values.real, _ramp(ends, share))
        psi = np.where(opened[:, None], _ramp(values[:, [0, -1]].imag, share), values.imag)
        total[:count] = (phi + 1j * psi) @ _FIT.T
        return total

    def _along(self, mesh: Mesh, count: int) -> ComplexArray:
        """Stand-ins less poles at the places of every element of the outer ring, shape (count, 4)."""
        z = mesh.middle[:count, None] + mesh.half[:count, None] * _PLACES
        z[:, 0], z[:, -1] = mesh.start[:count], mesh.end[:count]
        total = np.zeros(z.size, dtype=np.complex128)
        columns = zip(self.places, self.strengths, self.walls, self.others, strict=True)
        for place, strength, wall, other in columns:
            total += strength * (_turned(z.ravel(), other) - _turned(z.ravel(), place, wall))
        return total.reshape(z.shape)


def _turned(z: ComplexArray, place: complex, wall: complex | None = None) -> ComplexArray:
    """Log(z - place) along a path, imaginary part from 0.

    wall : on which the place stands; the imaginary part stays where the path passes it [m]
    """
    arms = z - place
    distance = np.maximum(np.abs(arms), np.finfo(np.float64).tiny)
    turns = np.angle(arms[1:] * np.conj(arms[:-1]))
    if wall is not None:
        along = np.abs((arms * np.conj(wall)).imag) <= _ON * abs(wall) ** 2
        turns[along[1:] & along[:-1]] = 0.0
    return np.asarray(np.log(distance) + 1j * np.concatenate(([0.0], np.cumsum(turns))))


def _touching(opened: BoolArray) -> FloatArray:
    """1 for the ends of elements that an open edge touches, else 0, shape (m, 2)."""
    return np.column_stack((np.roll(opened, 1), np.roll(opened, -1))).astype(np.float64)


def _ramp(ends: FloatArray, share: FloatArray) -> FloatArray:
    return np.asarray(ends[:, :1] + (ends[:, 1:] - ends[:, :1]) * share, dtype=np.float64)


def stand_ins_of(layout: Layout, standing: Footings, outer: Ring, origin: complex) -> StandIns | None:
    """Stand-ins of the elements on an outer ring, None without any.

    outer : in coordinates that count from `origin`, x + iy [m]
    """
    parts = []
    for k, footing in standing.items():
        if footing.ring.is_solid:
            continue
        places, shares = _spread(layout.elements[k])
        places = places - origin
        strength = DOUBLED * outflow(layout.elements[k]) / (2.0 * np.pi * layout.depth)
        wall = (footing.wall.before + footing.wall.after) * footing.wall.direction
        other = _stand_in(outer, complex(shares @ places), 1j * footing.wall.direction, ("elements", k))
        parts.append((places, strength * shares, np.full(places.size, wall), np.full(places.size, other)))
    if not parts:
        return None
    places, strengths, walls, others = (np.concatenate(column) for column in zip(*parts, strict=True))
    return StandIns(places, strengths, walls, others)


def _spread(element: Element) -> tuple[ComplexArray, FloatArray]:
    """Where an element stands [m] and how much of it stands there [-]; a line at Gauss nodes.

    On the line's own edge psi is exact; elsewhere what is amiss is left to the unknown part of the density.
    """
    match element:
        case LineSource(start=start, end=end) | LineSink(start=start, end=end):
            nodes = 0.5 * (start + end) + 0.5 * (end - start) * _LINE_NODES
            return np.asarray(nodes, dtype=np.complex128), 0.5 * _LINE_WEIGHTS
        case _:
            return np.array([element.at], dtype=np.complex128), np.ones(1)


def _stand_in(outer: Ring, at: complex, inward: complex, path: Path) -> complex:
    """A place in the water before a wall, as far from it as it is from all of the ring up to a factor."""
    distance = outer.breadth
    for _ in range(_HALVINGS):
        place = np.array([at + distance * inward])
        gap = nearest_edges(place, outer.starts, outer.ends)[0][0]
        inside = rings_around(place, outer.starts, outer.ends, np.array([0, outer.starts.size]))[0] == 0
        if inside and gap >= _FREE * distance:
            return complex(place[0])
        distance *= 0.5
    raise ElementMisplacedError("the element stands in a corner too narrow to be told from its walls", path)

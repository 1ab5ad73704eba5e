"""Line elements as slits: how far the velocity turns round them, and what hides at their ends.

At an end the velocity is logarithmically unbounded, and a saddle sits exponentially close to an end that
faces a
current; it is a property of the constant strength. Small discs about the ends are therefore left out of the
search and looked at by themselves. A slit has index 0 or 1 as the current across it is strong or weak.

In a wall that was solved for, nothing can be proven on the wall itself. There the component through a slit
has one sign, so that the direction of the velocity runs within half a turn between the signs that the
component along the wall has just before and behind.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.features import Line
from forebay.flow.lines import LineTerm
from forebay.flow.model import FlowModel
from forebay.flow.ring_track import Opening, mesh_of, opening_of
from forebay.flow.segments import Segment
from forebay.flow.stagnation.field import BoundedField
from forebay.flow.stagnation.turning import Disc, turning

TIP = 1e-7
"""Radius of the discs about the ends, as part of the line's length [-]."""


@dataclass(frozen=True, slots=True)
class Slit:
    """One line element.

    line, term : as in the model;  jump : W on its left less W on its right [m/s]
    in_wall : whether it lies in a wall;  roots : whether start and end stand on a straight wall
    opening : where it stands on a ring, None if it does not
    """

    line: Line
    term: LineTerm
    jump: complex
    in_wall: bool
    roots: tuple[bool, bool]
    opening: Opening | None = None

    @property
    def length(self) -> float:
        """Length [m]."""
        return abs(self.line.end - self.line.start)

    @property
    def tangent(self) -> complex:
        """Unit direction from start to end."""
        return (self.line.end - self.line.start) / self.length

    def local(self, z: ComplexArray) -> ComplexArray:
        """Place along (real part) and to the left (imaginary part) [m]."""
        return np.asarray((z - self.line.start) * np.conj(self.tangent), dtype=np.complex128)

    def distance(self, z: ComplexArray) -> FloatArray:
        """Distance from the line [m]."""
        local = self.local(z)
        return np.abs(local - np.clip(local.real, 0.0, self.length))

    def to_ends(self, z: ComplexArray) -> FloatArray:
        """Distance from the nearer end [m]."""
        return np.minimum(np.abs(z - self.line.start), np.abs(z - self.line.end))

    def lock(self, z: ComplexArray, side: IntArray) -> ComplexArray:
        """What makes the model's W at z the one continued from a side (1 left, -1 right, 0 neither) [m/s]."""
        whole = Segment(self.term.panels[0].start, self.term.panels[-1].end)
        local = self.local(z)
        beside = (local.real > 0.0) & (local.real < self.length) & (side != 0)
        if self.in_wall:
            return np.zeros(z.shape, dtype=np.complex128)
        taken = whole.sides(self.term.frame.forward(z))
        return np.where(beside, 0.5 * (side - taken) * self.jump, 0.0)


def slits_of(model: FlowModel) -> list[Slit]:
    """The line elements of a model as slits."""
    terms = [term for term in model.terms if isinstance(term, LineTerm)]
    mesh = mesh_of(model)
    found = []
    for line, term in zip(model.lines, terms, strict=True):
        tangent = (line.end - line.start) / abs(line.end - line.start)
        in_wall = line.wall is not None
        opening = None if mesh is None else opening_of(model, mesh, line)
        reach = 1e-9 * model.scale
        roots = tuple(
            any(float(wall.distance(np.asarray(end))) <= reach for wall in model.walls)
            for end in (line.start, line.end)
        )
        jump = -1j * line.flux * np.conj(tangent)
        found.append(Slit(line, term, jump, in_wall, (roots[0], roots[1]), opening))
    return found


class SlitTurning:
    """Turning of W along the edge of one slit; raises UnprovenTurningError where it cannot be proven."""

    def __init__(self, field: BoundedField, slit: Slit) -> None:
        self._field = field
        self._slit = slit
        self.hidden: list[tuple[complex, int]] = []

    def total(self) -> float:
        """Turning along the edge, the water on the left, from wall to wall where it touches one [rad]."""
        slit = self._slit
        if slit.opening is not None:
            return self._along_ring(slit.opening)
        if slit.in_wall:
            return self._along_wall()
        edge = self._side(1) - self._side(-1)
        for at_end in (False, True):
            edge += self._root(at_end=at_end) if slit.roots[at_end] else -self._tip(at_end=at_end)
        return edge

    def _disc(self, side: int) -> Disc:
        """Proof for discs of which W is continued from one side of the slit."""

        def disc(z: ComplexArray, radius: FloatArray) -> tuple[ComplexArray, BoolArray]:
            sides = np.full(z.shape, side, dtype=np.int64)
            discs = self._field.discs(z, radius, self._slit.lock(z, sides))
            return discs.velocity, np.abs(discs.velocity) > 1.02 * discs.spread(radius)

        return disc

    def _side(self, side: int) -> float:
        """From start to end, between the discs about the ends."""
        graded = TIP * (0.5 / TIP) ** np.linspace(0.0, 1.0, 40)
        part = np.concatenate([graded, 1.0 - graded[-2::-1]])
        line = self._slit.line
        return turning(self._disc(side), line.start + (line.end - line.start) * part)

    def _arc(self, centre: complex, first: float, last: float, side: int) -> float:
        """Round an end from one direction to another, angles in the site [rad]."""
        ring = np.exp(1j * np.linspace(first, last, 33))
        return turning(self._disc(side), centre + TIP * self._slit.length * ring)

    def _tip(self, *, at_end: bool) -> float:
        """Anticlockwise round a free end; notes a zero within its disc."""
        slit = self._slit
        centre = slit.line.end if at_end else slit.line.start
        first, last = (-1, 1) if at_end else (1, -1)
        back = float(np.angle(slit.tangent)) - (np.pi if at_end else 0.0)
        turn = self._arc(centre, back, back + np.pi, first) + self._arc(
            centre, back + np.pi, back + 2 * np.pi, last
        )
        place = np.array([centre + TIP * slit.length * slit.tangent * (-1.0 if at_end else 1.0)])
        ahead = self._limit(at_end=at_end)
        closing = np.angle(ahead / self._disc(last)(place, np.zeros(1))[0][0])
        closing += np.angle(self._disc(first)(place, np.zeros(1))[0][0] / ahead)
        self.hidden.append((centre, round((turn + float(closing)) / (2.0 * np.pi))))
        return turn

    def _limit(self, *, at_end: bool) -> complex:
        """Direction of W at an end, where it is unbounded."""
        slit = self._slit
        return complex(slit.line.flux * np.conj(slit.tangent) * (1.0 if at_end else -1.0))

    def _root(self, *, at_end: bool) -> float:
        """Clockwise round an end that stands on a wall: from slit to wall and from wall to slit."""
        slit = self._slit
        centre = slit.line.end if at_end else slit.line.start
        along = self._wall_direction(centre)
        heading = float(np.angle(along))
        out = slit.tangent * (-1.0 if at_end else 1.0)
        theta = heading + float(np.angle(out / along)) % (2.0 * np.pi)
        beyond, before = (1, -1) if at_end else (-1, 1)
        ahead = self._arc(centre, theta, heading, beyond)
        behind = self._arc(centre, heading + np.pi, theta, before)
        if abs((slit.tangent / along).real) > 1e-6:
            limit = complex(
                np.conj(along) * (slit.tangent / along).real * slit.line.flux * (1.0 if at_end else -1.0)
            )
            place = np.array([centre + TIP * slit.length * out])
            beside = [complex(self._disc(side)(place, np.zeros(1))[0][0]) for side in (beyond, before)]
            zeros = round((float(np.angle(limit / beside[0])) - ahead) / np.pi)
            zeros += round((float(np.angle(beside[1] / limit)) - behind) / np.pi)
            self.hidden.append((centre, zeros))
        return ahead + behind

    def _wall_direction(self, at: complex) -> complex:
        walls = self._field.model.walls
        return min(walls, key=lambda wall: float(wall.distance(np.asarray(at)))).direction

    def _along_wall(self) -> float:
        """A line in a wall: round its first end, along it, round its last, the water on the left."""
        slit = self._slit
        along = self._wall_direction(0.5 * (slit.line.start + slit.line.end))
        forward = (slit.tangent * along.conjugate()).real > 0.0
        ends = (slit.line.start, slit.line.end) if forward else (slit.line.end, slit.line.start)
        heading = float(np.angle(along))
        total = self._side(1) if forward else -self._side(1)
        step = TIP * slit.length * along
        for centre, inward, sign in ((ends[0], step, -1.0), (ends[1], -step, 1.0)):
            turn = self._arc(centre, heading + np.pi, heading, 1)
            total += turn
            beside = self._disc(1)(np.array([centre + inward]), np.zeros(1))[0][0]
            limit = complex(slit.line.flux * np.conj(along) * sign)
            closing = float(np.angle(limit / beside)) * sign
            self.hidden.append((centre, round((closing - turn) / np.pi)))
        return total

    def _along_ring(self, opening: Opening) -> float:
        """A line in a wall that was solved for, from just before it to just behind it."""
        track, step = opening.track, TIP * (opening.high - opening.low)
        s = track.wrapped(np.array([opening.low - step, opening.high + step]))
        z, direction = track.places(s), track.mesh.direction[track.elements(s)]
        along = (self._field.model.velocity(z) * direction).real
        for k, limit in enumerate((opening.toward, -opening.toward)):
            hides = along[k] * limit < 0.0 and not opening.is_convex(at_end=bool(k))
            self.hidden.append((complex(z[k]), int(hides)))
        angle = opening.toward * np.pi * (along < 0.0)
        return float(angle[1] - angle[0])

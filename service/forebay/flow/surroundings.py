"""What a streamline can meet: the places that bound its step, take it in, or let it pass."""

from dataclasses import dataclass
from math import pi

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.far_field import FarField, far_field_of
from forebay.flow.features import Line
from forebay.flow.kernels.nearest import nearest_sites
from forebay.flow.layout import Doublet, Element, Surveyed, outflow
from forebay.flow.model import FlowModel
from forebay.flow.open_edges import OpenEdges, open_edges_of
from forebay.flow.placement import TOUCHING
from forebay.flow.shoreline import Shoreline, shoreline_of

_NEAR = 0.005
"""Radius of capture over the distance to the next site, and the other velocity over the element's own [-]."""
_TOUCH = 1e-9
"""Distance from a line element, over its length, at which it is reached [-]."""
_NEAR_SOLVED = 4.0
"""The same in a wall that was solved for, over the distance that counts as on it, if that is more [-]."""
_TIP = 1e-7
"""Radius of capture about the end of a line over its length [-]."""
_RING = np.exp(2j * np.pi * (np.arange(16) + 0.5) / 16)

_REST = 1e-6
"""Radius about a stagnation point in which a line has met it, over the distance to the next site [-]."""

GIVES, TAKES, LETS_PASS, BOTH, RESTS = 1, -1, 0, 2, 3
"""What a site does to water: a source, a sink, neither, both (doublet), or a stagnation point."""


@dataclass(frozen=True, slots=True)
class Sites:
    """Places that bound the step of a streamline, shape (m,) each.

    at : [m];  owners : names, "" for a vertex of the walls, a pier's centre or a stagnation point
    role : GIVES, TAKES, LETS_PASS, BOTH or RESTS;  radius : of capture or rest [m]
    strength : speed near the site is strength / r, 0 where it is not [m2/s]
    """

    at: ComplexArray
    owners: tuple[str, ...]
    role: IntArray
    radius: FloatArray
    strength: FloatArray

    def nearest(self, z: ComplexArray) -> tuple[FloatArray, IntArray]:
        """Distance to the nearest site [m] and its index."""
        distance, index = nearest_sites(z, self.at)
        return distance, index

    def captured(self, distance: FloatArray, index: IntArray, *, forward: bool) -> BoolArray:
        """Whether the nearest site takes the streamline in, with the water or against it."""
        if self.at.size == 0:
            return np.zeros(distance.shape, dtype=np.bool_)
        role = self.role[index]
        takes = (role == BOTH) | (role == (TAKES if forward else GIVES))
        return np.asarray((distance < self.radius[index]) & takes, dtype=np.bool_)

    def at_rest(self, distance: FloatArray, index: IntArray) -> BoolArray:
        """Whether the nearest site is a stagnation point that the streamline has met."""
        if self.at.size == 0:
            return np.zeros(distance.shape, dtype=np.bool_)
        return np.asarray((distance < self.radius[index]) & (self.role[index] == RESTS), dtype=np.bool_)

    def named(self, owner: str) -> int:
        """Index of the first site of an element."""
        return self.owners.index(owner)


@dataclass(frozen=True, slots=True)
class LineFaces:
    """Line elements as thin faces, shape (k,) each.

    start, end : [m];  owners : names;  flux : out of both sides together, per length [m/s]
    in_water : whether water can pass to the other side (not so on a bank)
    touch : distance at which it is reached, over its length [-]
    side : 1 or -1 as the water lies left or right of it if it lies in a wall that was solved for, else 0
    """

    start: ComplexArray
    end: ComplexArray
    owners: tuple[str, ...]
    flux: FloatArray
    in_water: BoolArray
    touch: FloatArray
    side: FloatArray

    @property
    def lengths(self) -> FloatArray:
        """Lengths [m]."""
        return np.abs(self.end - self.start)

    def local(self, z: ComplexArray) -> ComplexArray:
        """(z - start) / (end - start), shape (n, k): real part along, imaginary part to the left [-]."""
        return np.asarray((z[:, None] - self.start) / (self.end - self.start), dtype=np.complex128)

    def crossed(self, a: ComplexArray, b: ComplexArray) -> BoolArray:
        """Whether the chords a -> b, shape (n,), touch any line."""
        p, q = self.local(a), self.local(b)
        opposite = p.imag * q.imag <= 0.0
        with np.errstate(divide="ignore", invalid="ignore"):
            at = p.real + (q.real - p.real) * (p.imag / (p.imag - q.imag))
        return np.asarray(np.any(opposite & (at >= 0.0) & (at <= 1.0), axis=1))

    def ahead(self, z: ComplexArray, heading: ComplexArray, *, forward: bool) -> tuple[FloatArray, IntArray]:
        """Distance along the heading to the nearest line [m], inf without one, and its index; shape (n,).

        In a wall that was solved for only what takes water in can be met, with the water or against it, and
        where it is reached: beyond, the flow means nothing.
        """
        p = self.local(z)
        slope = heading[:, None] / (self.end - self.start)
        height = p.imag - self.side * self.touch
        with np.errstate(divide="ignore", invalid="ignore"):
            steps = -height / slope.imag
        there = (self.side != 0.0) & (self.side * slope.imag < 0.0)
        there &= np.abs(p.imag) <= self.touch
        steps = np.where(there, 0.0, steps)
        with np.errstate(invalid="ignore"):
            at = p.real + steps * slope.real
        takes = (self.side == 0.0) | ((self.flux < 0.0) == forward)
        met = ((steps > 0.0) | there) & (at >= 0.0) & (at <= 1.0) & takes
        steps = np.where(met, steps, np.inf)
        index = np.argmin(steps, axis=1)
        return steps[np.arange(z.size), index], index

    def beside(self, z: ComplexArray, index: IntArray) -> BoolArray:
        """Whether points are at the line of their own index, or at its extension, shape (n,)."""
        height = self.local(z).imag[np.arange(z.size), index]
        return np.asarray(
            np.abs(height - (self.side * self.touch)[index]) <= self.touch[index], dtype=np.bool_
        )


@dataclass(frozen=True, slots=True)
class Surroundings:
    """Everything a streamline of one model can meet."""

    sites: Sites
    lines: LineFaces
    far: FarField | OpenEdges
    shoreline: Shoreline | None = None


def survey(model: FlowModel, stagnation: ComplexArray) -> Surroundings:
    """Sites, lines and far field of a model.

    Parameters
    ----------
    model : the flow
    stagnation : shape (k,), known stagnation points, about which steps are shortened; may be empty [m]
    """
    lines = _line_faces(model)
    names = {element.name: element for element in model.layout.elements}
    at = [s.at for s in model.singularities]
    owners = [s.owner for s in model.singularities]
    role = [_role(names[s.owner]) for s in model.singularities]
    for tips in (lines.start, lines.end):
        at += list(tips)
        owners += list(lines.owners)
        role += [GIVES if flux > 0.0 else TAKES for flux in lines.flux]
    fixed = [pier.at for pier in model.piers] + _vertices(model)
    places = np.array(at + fixed + list(stagnation), dtype=np.complex128)
    role += [LETS_PASS] * len(fixed) + [RESTS] * stagnation.size
    radius, strength = _captures(model, places, lines)
    spacing = np.minimum(_spacing(places), model.scale)
    radius += np.where(np.array(role) == RESTS, _REST * spacing, 0.0)
    sites = Sites(
        at=places,
        owners=tuple(owners) + ("",) * (places.size - len(at)),
        role=np.array(role, dtype=np.int64),
        radius=radius,
        strength=strength,
    )
    return Surroundings(sites, lines, _far(model, places), shoreline_of(model, stagnation, sites))


def _far(model: FlowModel, places: ComplexArray) -> FarField | OpenEdges:
    """Where streamlines leave the site for good."""
    if isinstance(model.layout.shore, Surveyed):
        return open_edges_of(model, model.layout.shore)
    return far_field_of(model, places if places.size else np.zeros(1, dtype=np.complex128))


def _spacing(places: ComplexArray) -> FloatArray:
    """Distance from every place to the next one [m], inf for a single place's."""
    gaps = np.abs(places[:, None] - places)
    np.fill_diagonal(gaps, np.inf)
    return np.asarray(gaps.min(axis=1, initial=np.inf), dtype=np.float64)


def _vertices(model: FlowModel) -> list[complex]:
    """Ends of the straight walls [m]."""
    ends = [wall.point - wall.before * wall.direction for wall in model.walls if np.isfinite(wall.before)]
    return ends + [
        wall.point + wall.after * wall.direction for wall in model.walls if np.isfinite(wall.after)
    ]


def _role(element: Element) -> int:
    if isinstance(element, Doublet):
        return BOTH
    return int(np.sign(outflow(element)))


def _line_faces(model: FlowModel) -> LineFaces:
    solved = np.array(
        [line.wall is not None and line.wall not in model.walls for line in model.lines], dtype=np.bool_
    )
    side = np.array([_side(line) for line in model.lines], dtype=np.float64)
    lengths = np.array([abs(line.end - line.start) for line in model.lines])
    return LineFaces(
        start=np.array([line.start for line in model.lines], dtype=np.complex128),
        end=np.array([line.end for line in model.lines], dtype=np.complex128),
        owners=tuple(line.owner for line in model.lines),
        flux=np.array([line.flux for line in model.lines], dtype=np.float64),
        in_water=np.array([line.wall is None for line in model.lines], dtype=np.bool_),
        touch=np.where(solved, np.maximum(_TOUCH, _NEAR_SOLVED * TOUCHING * model.scale / lengths), _TOUCH),
        side=np.where(solved, side, 0.0),
    )


def _side(line: Line) -> float:
    """1 if the water lies left of a line in a wall, -1 if right, 0 in the water."""
    if line.wall is None:
        return 0.0
    return float(np.sign((line.wall.direction * (line.end - line.start).conjugate()).real))


def _captures(model: FlowModel, places: ComplexArray, lines: LineFaces) -> tuple[FloatArray, FloatArray]:
    """Radius of capture [m] and strength [m2/s] of every place."""
    radius = np.zeros(places.size)
    strength = np.zeros(places.size)
    for j, singularity in enumerate(model.singularities):
        element = next(e for e in model.layout.elements if e.name == singularity.owner)
        sides = 1.0 if singularity.on == "water" else 2.0
        strength[j] = sides * abs(outflow(element)) / model.layout.depth / (2.0 * pi)
        radius[j] = _radius(
            model, places[j], strength[j] * np.sign(outflow(element)), _room(model, places, j)
        )
    first = len(model.singularities)
    radius[first : first + 2 * lines.flux.size] = _TIP * np.tile(lines.lengths, 2)
    return radius, strength


def _room(model: FlowModel, places: ComplexArray, j: int) -> float:
    """Distance from place j to the next place or wall, the wall it stands on left out [m]."""
    at, own = complex(places[j]), model.singularities[j].wall
    others = np.abs(np.delete(places, j) - at)
    walls = [float(wall.distance(np.asarray(at))) for wall in model.walls if wall is not own]
    piers = [abs(at - pier.at) - pier.radius for pier in model.piers]
    rings = [model.rings_set.gap_beside(at, own)] if model.rings else []
    return float(min([model.scale, *others[others > 0.0], *walls, *piers, *rings]))


def _radius(model: FlowModel, at: complex, strength: float, room: float) -> float:
    """Radius within which the element's own velocity exceeds all others two hundred times [m]."""
    ring = at + 0.1 * room * _RING
    ring = ring[model.wet(ring)]
    rest = model.velocity(ring) - strength / (ring - at)
    return _NEAR * min(room, abs(strength) / float(np.max(np.abs(rest)))) if strength else _NEAR * room

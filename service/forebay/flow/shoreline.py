"""Walls that were solved for, as ways for the water beside them.

Such a wall lets through what its residual says, so that a streamline closer to it than that runs into it.
Beyond, it follows the wall: to a stagnation point, where the wall's own streamline goes off into the water,
to an element on the wall, to an open edge, or to the bank on which the wall ends.
"""

from dataclasses import dataclass
from functools import cached_property
from math import log, nan
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.kernels.ring_walls import nearest_edges
from forebay.flow.model import FlowModel
from forebay.flow.placement import TOUCHING
from forebay.flow.ring_track import Opening, RingTrack, mesh_of, opening_of
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.ring import EdgeKind
from forebay.flow.traces import Stop

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(5)
"""None of these are the six at which elements have their poles."""
_JOINING = 1e-2
"""Flux between a streamline and a wall, over the bound of psi, below which it can run into the wall [-]."""
_ON = 10.0
"""Distance from a wall at which streamlines and stagnation points are on it, over what counts as touching."""
_START = 1e-3
"""Distance from a stagnation point at which its streamline begins, over that to the next place [-]."""
_DOUBT = 15.0
"""The same over the distance within which the stagnation point is known [-]."""
_TIP = 1e-6
"""Distance from the end of an element on a wall, over its length, that is at its end [-]."""
_STILL = 1e-6
"""Speed along a wall, over its mean on the way, below which it counts as that much [-]."""
_BEYOND = 1e-6
"""Distance from the end of a wall on a bank at which water goes on along the bank, over the scale [-]."""


class Captures(Protocol):
    """Places at which streamlines end, shape (m,) each."""

    @property
    def at(self) -> ComplexArray:
        """x + iy [m]."""
        ...

    @property
    def owners(self) -> tuple[str, ...]:
        """Names."""
        ...

    @property
    def radius(self) -> FloatArray:
        """Of capture [m]."""
        ...

    @property
    def strength(self) -> FloatArray:
        """Speed near the place is strength / r [m2/s]."""
        ...


@dataclass(frozen=True, slots=True)
class Landmark:
    """A place on a ring at which water that follows the wall stops or goes off.

    low, high : from where to where along the ring [m]
    stop : why a streamline ends there, None where it goes on;  name : of the element or the open edge
    toward : 1 if only water that runs there meets it, -1 if only followed against the flow, 0 if either
    time : from its edge to its end [s]
    onward : where a streamline goes on, x + iy [m];  rate : of strain at a stagnation point, else 0 [1/s]
    """

    low: float
    high: float
    stop: Stop | None
    name: str
    toward: float = 0.0
    time: float = 0.0
    onward: complex = complex(nan, nan)
    rate: float = 0.0


@dataclass(frozen=True, slots=True)
class Walk:
    """A way along a wall: places, the last one at its end [m], time on it [s], and what it leads to."""

    path: ComplexArray
    time: float
    landmark: Landmark


@dataclass(frozen=True, eq=False)
class Shoreline:
    """All solved walls of a model with the landmarks of every ring."""

    model: FlowModel
    mesh: Mesh
    landmarks: tuple[tuple[Landmark, ...], ...]

    @cached_property
    def tracks(self) -> tuple[RingTrack, ...]:
        """Every ring by the length along it."""
        return tuple(RingTrack(self.mesh, number) for number in range(len(self.mesh.rings)))

    def follow(self, z: complex, sense: float, flux: float) -> Walk | None:
        """The way of water at z along the nearest wall, or over the nearest open edge.

        None if nothing lies on it, and if z is in the water and farther away than the error of psi can lead.

        sense : 1 with the flow, -1 against it;  flux : between z and the nearest edge [m2/s]
        """
        gaps, index = nearest_edges(np.array([z]), self.mesh.start, self.mesh.end)
        element, error = int(index[0]), 0.0 if self.model.bound is None else self.model.bound.absolute
        if self.mesh.kind[element] != EdgeKind.LAND:
            return self._over(element, z) if flux <= error else None
        touches = float(gaps[0]) <= _ON * TOUCHING * self.model.scale
        if flux > _JOINING * error and not touches and bool(self.model.rings_set.inside(np.array([z]))[0]):
            return None
        track = self.tracks[int(self.mesh.ring[element])]
        s = track.length_at(element, z)
        velocity = self.model.velocity(track.places(np.array([s])))[0] * self.mesh.direction[element]
        step = 1.0 if sense * float(velocity.real) > 0.0 else -1.0
        found = self._next(track, s, step)
        if found is None or found[0].toward * sense < 0.0:
            return None
        return self._along(track, (s, s + step * found[1]), found[0], flux)

    def _along(self, track: RingTrack, way: tuple[float, float], landmark: Landmark, flux: float) -> Walk:
        """The way between two lengths along a ring to a landmark.

        At a stagnation point it ends where the streamline there begins, and the rest takes the time of a
        hyperbola of the given flux to the wall.
        """
        start, end = way
        place = complex(track.places(track.wrapped(np.array([end])))[0])
        last = min(abs(end - start), abs(place - landmark.onward)) if landmark.rate > 0.0 else 0.0
        time = self._time(track, start, end - float(np.sign(end - start)) * last) + landmark.time
        if last > 0.0:
            turns = landmark.rate * last**2 / max(flux, float(np.finfo(np.float64).tiny))
            time += max(0.0, log(turns)) / landmark.rate
        return Walk(track.way(start, end), time, landmark)

    def _over(self, element: int, z: complex) -> Walk:
        """The end at an open edge."""
        track = self.tracks[int(self.mesh.ring[element])]
        s = track.length_at(element, z)
        name = self.mesh.rings[track.number].edges[int(self.mesh.edge[element])]
        return Walk(track.places(np.array([s])), 0.0, Landmark(s, s, Stop.FAR_END, name))

    def _next(self, track: RingTrack, s: float, step: float) -> tuple[Landmark, float] | None:
        """The next landmark and the way to it [m]."""
        best: tuple[Landmark, float] | None = None
        for landmark in self.landmarks[track.number]:
            gap = landmark.low - s if step > 0.0 else s - landmark.high
            gap = gap % track.length if track.closed else gap
            if gap > 0.0 and (best is None or gap < best[1]):
                best = landmark, gap
        return best

    def _time(self, track: RingTrack, a: float, b: float) -> float:
        """Time from a to b along a ring at the speed along the wall, five places on every element [s].

        In a corner the wall itself stands still; what passes it has some speed.
        """
        edges = track.cuts(min(a, b), max(a, b))
        half = 0.5 * np.diff(edges)
        s = track.wrapped((edges[:-1] + half)[:, None] + half[:, None] * _NODES)
        element = track.elements(s.ravel())
        speed = np.abs((self.model.velocity(track.places(s.ravel())) * self.mesh.direction[element]).real)
        speed = np.maximum(speed, _STILL * float(speed.mean())).reshape(s.shape)
        return float(np.sum(half[:, None] * _WEIGHTS / speed))


def shoreline_of(model: FlowModel, stagnation: ComplexArray, captures: Captures) -> Shoreline | None:
    """Shoreline of a model, None if no wall was solved for.

    stagnation : shape (k,), stagnation points [m];  captures : what takes water in or gives it
    """
    mesh = mesh_of(model)
    if mesh is None:
        return None
    rows: list[list[Landmark]] = [[] for _ in mesh.rings]
    openings = [(s.owner, opening_of(model, mesh, s)) for s in model.singularities]
    openings += [(line.owner, opening_of(model, mesh, line)) for line in model.lines]
    for owner, opening in openings:
        if opening is not None:
            rows[opening.track.number].append(_mouth(opening, owner, captures))
    for z in stagnation:
        _add_departure(rows, (model, mesh), complex(z), np.concatenate([stagnation, captures.at]))
    for number in range(len(mesh.rings)):
        rows[number] += _ends(model, RingTrack(mesh, number))
    return Shoreline(model, mesh, tuple(tuple(row) for row in rows))


def _mouth(opening: Opening, owner: str, captures: Captures) -> Landmark:
    k = captures.owners.index(owner)
    reach = float(captures.radius[k]) if opening.low == opening.high else 0.0
    time = reach**2 / (2.0 * float(captures.strength[k])) if reach > 0.0 else 0.0
    return Landmark(opening.low - reach, opening.high + reach, Stop.CAPTURED, owner, opening.toward, time)


def _add_departure(
    rows: list[list[Landmark]], flow: tuple[FlowModel, Mesh], z: complex, others: ComplexArray
) -> None:
    """A stagnation point on a ring: water that has followed the wall goes off square to it."""
    model, mesh = flow
    distance, index = nearest_edges(np.array([z]), mesh.start, mesh.end)
    if distance[0] > _ON * TOUCHING * model.scale:
        return
    element = int(index[0])
    track = RingTrack(mesh, int(mesh.ring[element]))
    s = track.length_at(element, z)
    if any(_is_in(landmark, track, s) for landmark in rows[track.number]):
        return
    jet = model.jet(np.array([z]))
    rate = abs(complex(jet.slope[0]))
    gaps = np.abs(others - z)
    room = float(np.min(gaps[gaps > _ON * TOUCHING * model.scale], initial=model.scale))
    reach = max(_START * room, _DOUBT * 2.0 * abs(complex(jet.velocity[0])) / rate if rate > 0.0 else 0.0)
    onward = z + reach * track.inward(s)
    rows[track.number].append(Landmark(s, s, None, "", onward=onward, rate=rate))


def _is_in(landmark: Landmark, track: RingTrack, s: float) -> bool:
    """Whether a place lies on an element or at its end, where a zero is one of its constant strength."""
    margin = _TIP * (landmark.high - landmark.low)
    beyond = track.wrapped(np.array([s - landmark.low + margin]))[0]
    return landmark.stop is not None and 0.0 <= beyond <= landmark.high - landmark.low + 2.0 * margin


def _ends(model: FlowModel, track: RingTrack) -> list[Landmark]:
    """Open edges of a closed ring, or the banks on which an open one ends."""
    ring = track.mesh.rings[track.number]
    edges = np.concatenate([[0.0], np.cumsum(ring.lengths)])
    if ring.closed:
        return [
            Landmark(float(edges[k]), float(edges[k + 1]), Stop.FAR_END, ring.edges[k])
            for k in np.flatnonzero(~ring.is_land)
        ]
    found = []
    for s, sign in ((0.0, -1.0), (track.length, 1.0)):
        at = complex(track.places(np.array([s]))[0])
        bank = min(model.walls, key=lambda wall: float(wall.distance(np.asarray(at))))
        onward = at + sign * _BEYOND * model.scale * bank.direction
        found.append(Landmark(s, s, None, "", onward=onward))
    return found

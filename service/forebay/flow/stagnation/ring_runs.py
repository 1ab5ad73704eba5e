"""Runs of places along polygonal walls and open edges at which the velocity has one real component.

A run ends where the kind of the wall changes and at elements that stand on it: beside a point element the
speed along the wall is unbounded, towards a sink and away from a source, and a line element lets water pass
through the wall. Places are dense beside elements, which need not have finer sheets than their wall without
them.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.ring_track import Opening, RingTrack, opening_of
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.ring import EdgeKind
from forebay.flow.stagnation.slits import TIP

_PARTS = 0.5 + 0.5 * np.array([-0.995, -0.9, -0.6, -0.2, 0.2, 0.6, 0.9, 0.995])
"""Where the sign is looked at on every element [-]."""
_STEPS = 0.5 ** np.arange(1, 31)
"""Distances from an element on the wall at which it is looked at too, over the sheets' size there [-]."""
_NEAREST = 1e-10
"""The least of these over the length of the ring, a thousand roundings of places on it [-]."""
_UNIFORM = -2
"""Group of elements of which neither component is zero."""


@dataclass(frozen=True, slots=True)
class Run:
    """Consecutive places of one ring on edges of one kind, shape (n,).

    z : places [m];  speed : component along or across, infinite at a point element [m/s]
    element : of each;  turn : factor that makes the component of W real
    closed : whether the last is followed by the first
    """

    z: ComplexArray
    speed: FloatArray
    element: IntArray
    turn: ComplexArray
    closed: bool


@dataclass(frozen=True, slots=True)
class _Places:
    """Lengths along a ring [m], speeds known beforehand, nan elsewhere [m/s], and after which a run ends."""

    s: FloatArray
    speed: FloatArray
    last: BoolArray


def runs_of(model: FlowModel, mesh: Mesh) -> list[Run]:
    """All runs along the rings of a model."""
    standing = [opening_of(model, mesh, element) for element in model.singularities]
    standing += [opening_of(model, mesh, line) for line in model.lines]
    openings = [opening for opening in standing if opening is not None]
    runs: list[Run] = []
    for number in range(len(mesh.rings)):
        own = [opening for opening in openings if opening.track.number == number]
        runs += _runs_along(model, RingTrack(mesh, number), own)
    return runs


def _runs_along(model: FlowModel, track: RingTrack, openings: list[Opening]) -> list[Run]:
    mesh, places = track.mesh, _places(track, openings)
    element = track.elements(places.s)
    group = np.where(mesh.kind == EdgeKind.UNIFORM, _UNIFORM, mesh.group)[element]
    z = track.places(places.s)
    turn = mesh.direction[element] * np.where(mesh.is_equipotential[element], -1j, 1.0)
    speed, unknown = places.speed.copy(), np.isnan(places.speed)
    speed[unknown] = (model.velocity(z[unknown]) * turn[unknown]).real
    last = places.last | (group != np.roll(group, -1))
    last[-1] |= not track.closed
    whole = not np.any(last)
    order = np.arange(z.size) if whole else np.roll(np.arange(z.size), -int(np.flatnonzero(last)[0]) - 1)
    parts = np.split(order, np.flatnonzero(last[order])[:-1] + 1)
    return [
        Run(z[part], speed[part], element[part], turn[part], whole)
        for part in parts
        if group[part[0]] != _UNIFORM
    ]


def _places(track: RingTrack, openings: list[Opening]) -> _Places:
    """Places on every element, more beside openings and none within them."""
    found = [
        _Places(s, np.full(s.size, np.nan), np.zeros(s.size, dtype=np.bool_)) for s in [track.spread(_PARTS)]
    ]
    found += [_beside(track, opening) for opening in openings]
    s, speed, last = (
        np.concatenate([getattr(part, name) for part in found]) for name in ("s", "speed", "last")
    )
    kept = (s >= 0.0) & (s <= track.length)
    for opening in openings:
        kept &= ~_within(track, opening, s)
    s, speed, last = s[kept], speed[kept], last[kept]
    order = np.lexsort((~last, s))
    return _Places(s[order], speed[order], last[order])


def _beside(track: RingTrack, opening: Opening) -> _Places:
    """Places before and behind an opening; the run before it ends at the nearest one."""
    size = 2.0 * float(np.abs(track.mesh.half[track.elements(np.array([opening.low]))])[0])
    least = _margin(track, opening)
    steps = size * _STEPS
    steps = np.append(steps[steps > least], least)
    before, behind = opening.low - steps, opening.high + steps[::-1]
    speed = np.full(2 * steps.size, np.nan)
    if opening.low == opening.high:
        before, behind = np.append(before, opening.low), np.insert(behind, 0, opening.high)
        known = opening.toward * inf
        speed = np.concatenate([np.full(steps.size, np.nan), [known, -known], np.full(steps.size, np.nan)])
    last = np.zeros(speed.size, dtype=np.bool_)
    last[before.size - 1] = True
    return _Places(track.wrapped(np.concatenate([before, behind])), speed, last)


def _margin(track: RingTrack, opening: Opening) -> float:
    """Distance from an opening below which nothing is looked at [m]."""
    return float(max(TIP * (opening.high - opening.low), _NEAREST * track.length))


def _within(track: RingTrack, opening: Opening, s: FloatArray) -> BoolArray:
    """Whether places lie inside an opening or next to it; the very place of a point element does not."""
    margin = 0.5 * _margin(track, opening)
    beyond = s - opening.low + margin
    inside = track.wrapped(beyond) if track.closed else beyond
    within = (inside > 0.0) & (inside < opening.high - opening.low + 2.0 * margin)
    return np.asarray(within & (s != track.wrapped(np.array([opening.low]))[0]), dtype=np.bool_)

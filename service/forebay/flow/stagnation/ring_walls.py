"""Zeros on polygonal walls and open edges: there the velocity has one real component, which changes sign.

Along a wall that is the component along it, across an equipotential edge the one through it. A boundary that
is solved to a tolerance knows slow water, in a creek or an inner corner, only up to the error of its
velocity; changes of sign there come in pairs that mean nothing. So each change carries its `standing`: the
least speed that would have to be taken for zero so that it vanishes together with a neighbour (persistence).

References
----------
H. Edelsbrunner, D. Letscher, A. Zomorodian, Topological persistence and simplification, Discrete
Comput. Geom. 28 (2002) 511-533.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.ring import EdgeKind

_PLACES = np.array([-0.995, -0.9, -0.6, -0.2, 0.2, 0.6, 0.9, 0.995])
"""Where the sign is looked at on every element."""
_BISECTIONS = 50


@dataclass(frozen=True, slots=True)
class Flip:
    """A change of sign.

    at : place, x + iy [m];  on : name of its edge
    size : over which the speed changes there: of the element, or to the change it would vanish with [m]
    standing : least speed to be taken for zero so that it vanishes with another change [m/s]
    """

    at: complex
    on: str
    size: float
    standing: float


@dataclass(frozen=True, slots=True)
class _Run:
    """Consecutive places of one ring on edges of one kind, shape (n,).

    z : places [m];  speed : component along or across [m/s];  element : of each
    turn : factor that makes the component of W real;  closed : whether the last is followed by the first
    """

    z: ComplexArray
    speed: FloatArray
    element: IntArray
    turn: ComplexArray
    closed: bool


def ring_flips(model: FlowModel, mesh: Mesh) -> list[Flip]:
    """All changes of sign along the rings of a model, poles on the wall left out."""
    poles = np.array([s.at for s in model.singularities], dtype=np.complex128)
    return [flip for run in _runs(model, mesh) for flip in _flips(model, mesh, run, poles)]


def _runs(model: FlowModel, mesh: Mesh) -> list[_Run]:
    z, element = mesh.points(_PLACES)
    across = mesh.is_equipotential[element]
    turn = mesh.direction[element] * np.where(across, -1j, 1.0)
    speed = (model.velocity(z) * turn).real
    runs = []
    group = np.where(mesh.kind == EdgeKind.UNIFORM, -2, mesh.group)[element]
    for k in range(len(mesh.rings)):
        own = np.flatnonzero(mesh.ring[element] == k)
        cuts = np.flatnonzero(np.diff(group[own])) + 1
        if cuts.size == 0:
            parts = [own]
        elif mesh.rings[k].closed:
            parts = np.split(np.roll(own, -cuts[0]), cuts[1:] - cuts[0])
        else:
            parts = np.split(own, cuts)
        for part in parts:
            if group[part[0]] != -2:
                closed = cuts.size == 0 and mesh.rings[k].closed
                runs.append(_Run(z[part], speed[part], element[part], turn[part], closed))
    return runs


def _flips(model: FlowModel, mesh: Mesh, run: _Run, poles: ComplexArray) -> list[Flip]:
    following = np.roll(np.arange(run.z.size), -1)
    changes = np.sign(run.speed) * np.sign(run.speed[following]) < 0.0
    if not run.closed:
        changes[-1] = False
    here = np.flatnonzero(changes)
    if here.size == 0:
        return []
    places = np.array([_refined(model, mesh, run, int(k), int(following[k])) for k in here])
    is_pole = _holds_pole(run, here, following, poles)
    standing, partner = _standing(run, here[~is_pole])
    names = [mesh.rings[mesh.ring[e]].edges[mesh.edge[e]] for e in run.element[here[~is_pole]]]
    sizes = 2.0 * np.abs(mesh.half[run.element[here[~is_pole]]])
    own = places[~is_pole]
    apart = np.where(partner >= 0, np.abs(own - own[partner]), np.inf)
    sizes = np.minimum(sizes, np.where(apart > 0.0, apart, np.inf))
    return [
        Flip(complex(at), name, float(size), float(least))
        for at, name, size, least in zip(own, names, sizes, standing, strict=True)
    ]


def _refined(model: FlowModel, mesh: Mesh, run: _Run, a: int, b: int) -> complex:
    """Where the sign changes between two places; the vertex if they lie on different edges."""
    if mesh.edge[run.element[a]] != mesh.edge[run.element[b]]:
        return complex(mesh.end[run.element[a]])
    low, high, sign = complex(run.z[a]), complex(run.z[b]), np.sign(run.speed[a])
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        value = (model.velocity(np.array([middle]))[0] * run.turn[a]).real
        low, high = (middle, high) if value * sign > 0.0 else (low, middle)
    return 0.5 * (low + high)


def _holds_pole(run: _Run, here: IntArray, following: IntArray, poles: ComplexArray) -> np.ndarray:
    """Whether an element stands on the wall between the two places of a change."""
    a, b = run.z[here], run.z[following[here]]
    if poles.size == 0:
        return np.zeros(here.size, dtype=np.bool_)
    share = (poles - a[:, None]) / (b - a)[:, None]
    between = (share.real > 0.0) & (share.real < 1.0) & (np.abs(share.imag) < 1e-6)
    return np.asarray(between.any(axis=1), dtype=np.bool_)


def _standing(run: _Run, here: IntArray) -> tuple[FloatArray, IntArray]:
    """Standing of every change [m/s], and which other it vanishes with, -1 for none; shape of here."""
    left = list(range(here.size))
    standing, partner = np.full(here.size, inf), np.full(here.size, -1, dtype=np.int64)
    tops = [_top(run, int(here[k]), int(here[(k + 1) % here.size])) for k in left]
    if not run.closed and tops:
        tops[-1] = inf
    while len(left) >= 2:
        k = int(np.argmin(tops))
        if tops[k] == inf:
            break
        j = (k + 1) % len(left)
        standing[left[k]] = standing[left[j]] = tops[k]
        partner[left[k]], partner[left[j]] = left[j], left[k]
        before = (k - 1) % len(left)
        tops[before] = max(tops[before], tops[k], tops[j])
        for index in sorted((k, j), reverse=True):
            del left[index], tops[index]
    return standing, partner


def _top(run: _Run, a: int, b: int) -> float:
    """Largest speed after place a up to place b [m/s]."""
    count = (b - a) % run.z.size or run.z.size
    index = (a + 1 + np.arange(count)) % run.z.size
    return float(np.max(np.abs(run.speed[index])))

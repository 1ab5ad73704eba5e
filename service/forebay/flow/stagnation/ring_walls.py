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
from forebay.flow.stagnation.ring_runs import Run, runs_of

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


def ring_flips(model: FlowModel, mesh: Mesh) -> list[Flip]:
    """All changes of sign along the rings of a model, elements on the wall left out."""
    return [flip for run in runs_of(model, mesh) for flip in _flips(model, mesh, run)]


def _flips(model: FlowModel, mesh: Mesh, run: Run) -> list[Flip]:
    following = np.roll(np.arange(run.z.size), -1)
    changes = np.sign(run.speed) * np.sign(run.speed[following]) < 0.0
    if not run.closed:
        changes[-1] = False
    here = np.flatnonzero(changes)
    if here.size == 0:
        return []
    places = _refined(model, mesh, run, (here, following[here]))
    standing, partner = _standing(run, here)
    names = [mesh.rings[mesh.ring[e]].edges[mesh.edge[e]] for e in run.element[here]]
    sizes = 2.0 * np.abs(mesh.half[run.element[here]])
    apart = np.where(partner >= 0, np.abs(places - places[partner]), np.inf)
    sizes = np.minimum(sizes, np.where(apart > 0.0, apart, np.inf))
    return [
        Flip(complex(at), name, float(size), float(least))
        for at, name, size, least in zip(places, names, sizes, standing, strict=True)
    ]


def _refined(model: FlowModel, mesh: Mesh, run: Run, between: tuple[IntArray, IntArray]) -> ComplexArray:
    """Where signs change between places, shape (n,) [m]; the vertex if they lie on different edges."""
    a, b = between
    low, high, sign = run.z[a], run.z[b], np.sign(run.speed[a])
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        ahead = (model.velocity(middle) * run.turn[a]).real * sign > 0.0
        low, high = np.where(ahead, middle, low), np.where(ahead, high, middle)
    at_vertex = mesh.edge[run.element[a]] != mesh.edge[run.element[b]]
    return np.where(at_vertex, mesh.end[run.element[a]], 0.5 * (low + high))


def _standing(run: Run, here: IntArray) -> tuple[FloatArray, IntArray]:
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


def _top(run: Run, a: int, b: int) -> float:
    """Largest speed after place a up to place b [m/s]."""
    count = (b - a) % run.z.size or run.z.size
    index = (a + 1 + np.arange(count)) % run.z.size
    return float(np.max(np.abs(run.speed[index])))

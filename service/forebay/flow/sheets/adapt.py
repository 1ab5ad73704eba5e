"""From walls to a mesh that is fine enough: coarse elements, split where a flow disobeys the walls."""

import hashlib
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.maps import LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.sheets.field import Panels
from forebay.flow.sheets.known import Known
from forebay.flow.sheets.memo import MEMO
from forebay.flow.sheets.mesh import DEGREE, Mesh, coarse_mesh
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.solution import Solution, solve
from forebay.flow.sheets.system import System, factorised
from forebay.flow.shores import Frame

MOST_UNKNOWNS = 6000
"""Unknowns beyond which a mesh is not split any more: 288 MB and 15 s [-]."""
PASSES = 20
"""Most rounds of splitting [-]."""
_LEAP = 1.0 / 50.0
"""Longest element at first over the breadth of surveyed water [-]."""
_PIECES = 1.0 / 8.0
"""Longest element at first over the diagonal of a solid [-]."""
_FROM_VERTEX = 0.3
"""Longest element over its distance from the vertex of a corner, whose images stand as near [-]."""
_ACROSS = 0.25
"""Longest element over the width of a strip, so that its images in both walls stay apart [-]."""
_SLACK = 1.5
"""Residual over the tolerance up to which a flow is content with the mesh that others made [-]."""


@dataclass(frozen=True, eq=False)
class Walls:
    """Rings in the frame of their shore: all that a factorisation depends on.

    rings : the walls;  frame : of the shore, with its origin near the rings
    reach : distance within which a point counts as on a wall [m];  tolerance : of psi, over the flux [-]
    """

    rings: tuple[Ring, ...]
    frame: Frame
    reach: float
    tolerance: float

    def digest(self) -> bytes:
        """What tells these walls from others."""
        text = hashlib.sha256(repr((self.frame, self.reach, self.tolerance)).encode())
        for ring in self.rings:
            text.update(ring.vertices.tobytes())
            text.update(repr((ring.closed, ring.edges, ring.kinds, ring.is_solid)).encode())
        return text.digest()

    def coarse(self) -> Mesh:
        """The first mesh."""
        longest = [_PIECES * ring.diameter if ring.is_solid else _LEAP * ring.breadth for ring in self.rings]
        limit = np.inf if self.rings[0].is_solid else longest[0]
        if self.frame.kappa == PERIODIC and not isinstance(self.frame.map, LogarithmMap):
            place = self.rings[0].vertices[:1]
            limit = _ACROSS * np.pi / float(np.abs(self.frame.map.slope(place))[0])
        mesh = coarse_mesh(self.rings, tuple(min(length, limit) for length in longest))
        if isinstance(self.frame.map, LogarithmMap):
            mesh = _off_vertex(mesh, self.frame.map)
        return mesh


def _off_vertex(mesh: Mesh, corner: LogarithmMap) -> Mesh:
    """Elements short against their distance from the vertex of a corner."""
    narrow = min(1.0, float(np.sin(min(corner.angle, 0.5 * np.pi))))
    while True:
        gap = np.abs(mesh.middle - corner.vertex) - np.abs(mesh.half)
        excess = 2.0 * np.abs(mesh.half) / np.maximum(_FROM_VERTEX * narrow * gap, 1e-9 * np.abs(mesh.half))
        if np.all(excess <= 1.0) or mesh.count * DEGREE > MOST_UNKNOWNS:
            return mesh
        mesh = mesh.halved(excess > 1.0)


def factorise(walls: Walls, mesh: Mesh) -> System:
    """Equations of a mesh, from the store if they are there."""
    text = hashlib.sha256(walls.digest())
    for cut in mesh.cuts:
        text.update(cut.tobytes())
        text.update(b"/")
    return MEMO.system(text.digest(), lambda: factorised(mesh, Panels.of(mesh, walls.frame, walls.reach)))


def adapted(walls: Walls, mesh: Mesh, flows: Sequence[Known]) -> Mesh:
    """Mesh on which all flows obey the walls to the tolerance, or the finest that is allowed."""
    for _ in range(PASSES):
        system = factorise(walls, mesh)
        worst = worst_of([solve(system, known) for known in flows])
        if worst.max() <= walls.tolerance:
            return mesh
        finer = finer_mesh(walls, mesh, worst)
        if finer is None:
            return mesh
        mesh = finer
    return mesh


def finer_mesh(walls: Walls, mesh: Mesh, worst: FloatArray) -> Mesh | None:
    """Mesh with the elements split that disobey, None if it would become too large."""
    finer = mesh.refined(worst, walls.tolerance)
    return finer if finer.count * DEGREE <= MOST_UNKNOWNS else None


def worst_of(solutions: Sequence[Solution]) -> FloatArray:
    """Largest indicator over the flux of all flows, element by element [-]."""
    return np.asarray(np.max([s.indicator / s.known.flux for s in solutions], axis=0))


@lru_cache(maxsize=256)
def _remembered(digest: bytes) -> list[Mesh]:  # noqa: ARG001
    """Place for the mesh of some walls."""
    return []


def forget_meshes() -> None:
    """Make every mesh anew from now on."""
    _remembered.cache_clear()


def mesh_for(walls: Walls, typical: Sequence[Known]) -> Mesh:
    """Mesh that serves the typical flows past some walls; the same whatever was asked before."""
    place = _remembered(walls.digest())
    if not place:
        mesh = walls.coarse()
        place.append(adapted(walls, mesh, typical) if typical else mesh)
    return place[0]


def content(solution: Solution, walls: Walls) -> bool:
    """Whether a flow obeys the walls well enough on a mesh made for others."""
    return bool(worst_of([solution]).max() <= _SLACK * walls.tolerance)

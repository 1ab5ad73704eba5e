"""Piers beside sheets: multipoles of the piers as further unknowns, eliminated against the sheets exactly."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Pier
from forebay.flow.piers import PierSolution, multipole_potentials, solve_piers
from forebay.flow.poles import PoleField
from forebay.flow.sheets.solution import Solution
from forebay.flow.sheets.system import COLLOCATION, System
from forebay.flow.shores import Frame


@dataclass(frozen=True, eq=False)
class PierSet:
    """Piers of a layout, the frame of its shore and its poles."""

    piers: tuple[Pier, ...]
    frame: Frame
    field: PoleField


class SheetEcho:
    """What the sheets answer to unit multipoles of the piers."""

    def __init__(self, piers: PierSet, system: System, offset: float) -> None:
        self._piers = piers
        self._system = system
        self._offset = offset
        self._order = 0
        self._answers: FloatArray = np.empty((system.size, 0))

    def answers(self, order: int) -> FloatArray:
        """Unknowns of the sheets for every unit multipole up to an order, shape (N, 2 p order)."""
        if order != self._order:
            self._answers = self._system.solve(self._loads(order))
            self._order = order
        return self._answers

    def __call__(self, z: ComplexArray, order: int) -> ComplexArray:
        """Velocities that the sheets add, shape (2 p order, n) [1/m]."""
        return (self._system.velocity_rows(z, self._offset) @ self.answers(order)).T

    def _loads(self, order: int) -> FloatArray:
        """Right-hand sides of unit multipoles: they are single-valued along the rings."""
        set_, system = self._piers, self._system
        z, _ = system.collocation
        origins = _origins(system)
        at_points = multipole_potentials(set_.piers, set_.frame, set_.field, z, order)
        at_origins = multipole_potentials(set_.piers, set_.frame, set_.field, origins, order)
        values = at_points - np.repeat(at_origins[:, system.mesh.ring], COLLOCATION.size, axis=1)
        return np.where(system.is_open_row, -values.real, -values.imag).T


def _origins(system: System) -> ComplexArray:
    """Where the potential along a ring counts from, see `along_rings`."""
    mesh = system.mesh
    return np.array(
        [
            mesh.middle[first] if ring.closed else ring.vertices[0]
            for ring, first in zip(mesh.rings, mesh.bounds[:-1], strict=True)
        ]
    )


def solve_with_piers(piers: PierSet, solution: Solution) -> tuple[PierSolution, FloatArray]:
    """Multipoles of the piers, and the unknowns of the sheets with what they answer.

    solution : of the sheets without the multipoles
    """
    echo = SheetEcho(piers, solution.system, solution.offset)

    def base(z: ComplexArray) -> ComplexArray:
        own = np.full(z.size, -2, dtype=np.int64)
        return solution.known.flow.velocity(z) + solution.field.velocity(z, own)

    found = solve_piers(piers.piers, piers.frame, piers.field, base, echo)
    answers = echo.answers(found.moments.shape[1])
    return found, solution.values + answers @ found.unknowns

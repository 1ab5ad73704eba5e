"""One flow on a factorised mesh: its density, and how well it obeys what it should."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.sheets.field import SheetField
from forebay.flow.sheets.known import Known
from forebay.flow.sheets.system import CHECKS, COLLOCATION, System
from forebay.flow.sheets.unknowns import Levels

_EDGES = np.array([0.0, 0.002, 0.01, 0.03, 0.07, 0.14, 0.25, 0.4, 0.5])
CELLS = 2.0 * np.concatenate((_EDGES, 1.0 - _EDGES[-2::-1])) - 1.0
"""Ends of the cells in which the slip along an open element is taken: fine where it is singular."""
CELL_MIDDLES, CELL_WIDTHS = 0.5 * (CELLS[1:] + CELLS[:-1]), np.diff(CELLS)
_LEAK = 4.0
"""How much more an integral of slip along an open element may do to psi than a residual, at most [-]."""


@dataclass(frozen=True, eq=False)
class Solution:
    """Values of the unknowns for one known flow.

    system : equations;  known : right-hand side;  values : shape (N,), unknowns
    offset : of the kernel of W, see `assembly.offset_of` [-]
    """

    system: System
    known: Known
    values: FloatArray
    offset: float = 0.0

    @cached_property
    def levels(self) -> Levels:
        """Known psi and density."""
        return self.known.levels(self.system.mesh)

    @cached_property
    def field(self) -> SheetField:
        """Field of the sheets."""
        return self.system.field(self.system.density(self.values, self.levels.density), self.offset)

    @cached_property
    def residuals(self) -> FloatArray:
        """Error of psi on walls, of phi on equipotential edges at `CHECKS`, shape (m, 12) [m2/s]."""
        mesh, columns = self.system.mesh, self.system.unknowns
        z, own = mesh.points(CHECKS)
        found = (self.field.potential(z, own) + self.known.along(mesh, CHECKS).ravel()).reshape(
            mesh.count, -1
        )
        padded = np.append(self.values, 0.0)
        wanted = _between(self.levels.target, CHECKS) + padded[columns.level][:, None]
        constant = padded[columns.constant] if columns.constant >= 0 else 0.0
        potential = found.real + constant - padded[columns.potential][:, None]
        error = np.where(mesh.is_equipotential[:, None], potential, found.imag - wanted)
        return np.asarray(error, dtype=np.float64)

    @cached_property
    def open_elements(self) -> IntArray:
        """Elements of equipotential edges."""
        return np.flatnonzero(self.system.mesh.is_equipotential)

    @cached_property
    def slip(self) -> FloatArray:
        """Speed along equipotential elements, which should be zero, in their cells; shape (k, 15) [m/s]."""
        mesh, chosen = self.system.mesh, self.open_elements
        if chosen.size == 0:
            return np.zeros((0, CELL_MIDDLES.size))
        z = mesh.middle[chosen, None] + mesh.half[chosen, None] * CELL_MIDDLES
        own = np.repeat(chosen, CELL_MIDDLES.size)
        velocity = self.field.velocity(z.ravel(), own) + self.known.flow.velocity(z.ravel())
        return np.asarray(
            np.abs((velocity.reshape(z.shape) * mesh.direction[chosen, None]).real), dtype=np.float64
        )

    @cached_property
    def leaks(self) -> FloatArray:
        """Integral of the slip along every equipotential element, shape (k,) [m2/s]."""
        return np.asarray(self.slip @ CELL_WIDTHS * np.abs(self.system.mesh.half[self.open_elements]))

    @cached_property
    def indicator(self) -> FloatArray:
        """Largest residual of every element, or what its slip may do to psi; shape (m,) [m2/s]."""
        worst = np.max(np.abs(self.residuals), axis=1)
        worst[self.open_elements] = np.maximum(worst[self.open_elements], _LEAK * self.leaks)
        return np.asarray(worst, dtype=np.float64)


def _between(ends: FloatArray, abscissae: FloatArray) -> FloatArray:
    """Linear function on elements from its values at both ends."""
    return np.asarray(ends[:, :1] * 0.5 * (1.0 - abscissae) + ends[:, 1:] * 0.5 * (1.0 + abscissae))


def load_of(system: System, known: Known) -> FloatArray:
    """Right-hand side for a known flow, shape (N,)."""
    mesh = system.mesh
    levels = known.levels(mesh)
    total = known.along(mesh, COLLOCATION).ravel() + _known_part(system, levels.density)
    target = _between(levels.target, COLLOCATION).ravel()
    return np.asarray(np.where(system.is_open_row, -total.real, target - total.imag))


def _known_part(system: System, density: ComplexArray) -> ComplexArray:
    """Potential of the known part of the density at the collocation points."""
    z, own = system.collocation
    chosen = np.any(density != 0.0, axis=1)
    if not chosen.any():
        return np.zeros(z.size, dtype=np.complex128)
    number = np.where(chosen, np.cumsum(chosen) - 1, -2)
    return SheetField(system.panels.part(chosen), density[chosen]).potential(z, number[own])


def solve(system: System, known: Known) -> Solution:
    """Solution for one known flow."""
    return Solution(system, known, system.solve(load_of(system, known)))

"""The dense equations of a mesh: the stream function on walls, the potential on equipotential edges."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.linalg import lu_factor, lu_solve

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.kernels.sheet_rows import influence_rows
from forebay.flow.sheets.field import HALF_VANDER, Panels, SheetField
from forebay.flow.sheets.mesh import DEGREE, Mesh
from forebay.flow.sheets.unknowns import Unknowns, unknowns_of

COLLOCATION = np.polynomial.legendre.leggauss(DEGREE)[0]
"""Where an element obeys its condition."""
CHECKS = np.array([-0.9995, -0.985, -0.95, -0.75, -0.6, -0.25, 0.25, 0.6, 0.75, 0.95, 0.985, 0.9995])
"""Where the residual is taken: none of the points of `COLLOCATION`."""


@dataclass(frozen=True, eq=False)
class System:
    """Factorised equations of a mesh in a frame; depends on the geometry alone.

    mesh, panels, unknowns : see there
    factors, pivots : LU factorisation of the matrix, shapes (N, N) and (N,)
    """

    mesh: Mesh
    panels: Panels
    unknowns: Unknowns
    factors: FloatArray
    pivots: IntArray

    @property
    def size(self) -> int:
        """Number of unknowns N."""
        return self.unknowns.count

    @property
    def bytes(self) -> int:
        """Memory of the factorisation, which outweighs everything else [B]."""
        return self.factors.nbytes + self.panels.poles.nbytes

    @cached_property
    def collocation(self) -> tuple[ComplexArray, IntArray]:
        """Points of the rows [m], and the element of each."""
        return self.mesh.points(COLLOCATION)

    @cached_property
    def is_open_row(self) -> BoolArray:
        """Whether a row holds the potential."""
        return np.repeat(self.mesh.is_equipotential, COLLOCATION.size)

    def solve(self, load: FloatArray) -> FloatArray:
        """Unknowns for right-hand sides, shape (N,) or (N, k)."""
        return np.asarray(lu_solve((self.factors, self.pivots), load, check_finite=False), dtype=np.float64)

    def density(self, values: FloatArray, known: ComplexArray | None = None) -> ComplexArray:
        """Legendre coefficients of the density, shape (m, 4).

        values : shape (N,);  known : known part, of the same shape
        """
        mesh, columns = self.mesh, self.unknowns
        padded = np.append(values, 0.0)
        node = padded[columns.real] + 1j * padded[columns.imag]
        first, last = node[mesh.first_node], node[mesh.last_node]
        bubbles = values[columns.bubble[:, None] + np.arange(DEGREE - 1)]
        unknown = legendre(first, last, bubbles * np.where(mesh.is_equipotential, 1j, 1.0)[:, None])
        return unknown if known is None else unknown + known

    def field(self, density: ComplexArray, offset: float = 0.0) -> SheetField:
        """Field of a density."""
        return SheetField(self.panels, density, offset)

    def velocity_rows(self, z: ComplexArray, offset: float) -> ComplexArray:
        """Influence of every unknown on W at points off the elements, shape (n, N) [1/m]."""
        own = np.full(z.size, -2, dtype=np.int64)
        sides = [
            _influence(self.mesh, self.panels, self.unknowns, (z, own, np.full(z.size, factor)), offset)
            for factor in (1.0 + 0j, -1j)
        ]
        return np.asarray(sides[0] + 1j * sides[1], dtype=np.complex128)


def legendre(first: ComplexArray, last: ComplexArray, bubbles: ComplexArray) -> ComplexArray:
    """Legendre coefficients from values at both ends and bubbles P_n - P_(n-2), shape (m, 4)."""
    density = np.zeros((first.size, DEGREE + 1), dtype=np.complex128)
    density[:, 0], density[:, 1] = 0.5 * (first + last), 0.5 * (last - first)
    density[:, 2:] += bubbles
    density[:, : DEGREE - 1] -= bubbles
    return density


def _influence(
    mesh: Mesh,
    panels: Panels,
    unknowns: Unknowns,
    wanted: tuple[ComplexArray, IntArray, ComplexArray],
    offset: float | None = None,
) -> FloatArray:
    """Influence of every unknown at points, shape (n, N).

    wanted : points [m], the element that each lies on or -2, and a factor
    offset : of the kernel for Re(factor W); None for Re(factor F)
    """
    z, own, factor = wanted
    of_velocity = offset is not None
    points = (z, own, panels.frame.map.forward(z), panels.frame.map.slope(z), factor.astype(np.complex128))
    basis = (
        panels.poles,
        panels.basis(of_velocity=of_velocity),
        panels.own_basis(of_velocity=of_velocity),
        HALF_VANDER,
    )
    columns = (
        mesh.first_node,
        mesh.last_node,
        unknowns.real,
        unknowns.imag,
        unknowns.bubble,
        ~mesh.is_equipotential,
    )
    kernel = (panels.chart, offset or 0.0, of_velocity)
    return influence_rows(points, panels.elements, basis, panels.mirrors.arrays(), columns, kernel)


def factorised(mesh: Mesh, panels: Panels) -> System:
    """Equations of a mesh, factorised.

    Rows: Im F = psi - psi of the solid on walls, Re F + constant - phi of the edge on equipotential edges.
    """
    unknowns = unknowns_of(mesh)
    z, own = mesh.points(COLLOCATION)
    open_ = mesh.is_equipotential[own]
    matrix = _influence(mesh, panels, unknowns, (z, own, np.where(open_, 1.0 + 0j, -1j)))
    row = np.arange(z.size)
    for column, chosen in (
        (unknowns.potential[own], open_ & (unknowns.potential[own] >= 0)),
        (unknowns.level[own], unknowns.level[own] >= 0),
    ):
        matrix[row[chosen], column[chosen]] -= 1.0
    if unknowns.constant >= 0:
        matrix[row[open_], unknowns.constant] += 1.0
    factors, pivots = lu_factor(matrix, overwrite_a=True, check_finite=False)
    return System(mesh, panels, unknowns, factors, np.asarray(pivots, dtype=np.int64))

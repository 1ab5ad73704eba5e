"""How wrong the stream function can be: residuals turned into a bound that holds everywhere in the water.

The error e of psi is harmonic. On the banks it is the residual; on island k the residual plus a constant d_k;
on an equipotential edge its normal derivative is the slip. Then |e| <= land + max |d_k| + barrier:

- d_k by Green's identity with the flow of unit circulation round island k and no other drive: at most the
  integral of |residual| |its wall speed| plus that of |slip| |its psi|;
- barrier: a single layer of the slip on the open edges, whose normal derivative exceeds it (comparison).

Rigorous up to sampling (12 points an element) and to the error of the auxiliary flows, which enters squared.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, FloatArray
from forebay.flow.kernels.sheet_layer import layer_peak
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.solution import CELL_MIDDLES, CELL_WIDTHS, Solution

_COLLINEAR = 1e-9
"""Sine of the angle below which elements lie in one line and let nothing in for each other [-]."""
_GAUSS, _WEIGHTS = np.polynomial.legendre.leggauss(8)


@dataclass(frozen=True, eq=False)
class BoundaryBound:
    """Bound of the error that the walls leave in the flow.

    absolute : of psi everywhere in the water [m2/s];  relative : the same over `flux` [-]
    flux : flow through surveyed water, or current times the largest outline plus all discharges [m2/s]
    land, islands, edges : the three parts [m2/s];  levels : of every free solid's own constant, by name
    ring, vertex : where the residual is largest: name of the wall, nearest vertex, x + iy [m]
    unknowns : number of them
    """

    absolute: float
    relative: float
    flux: float
    land: float
    islands: float
    edges: float
    levels: dict[str, float]
    ring: str
    vertex: complex
    unknowns: int

    def velocity(self, distance: FloatArray) -> FloatArray:
        """Bound of the velocity's error at distances from the walls [m], inf on them [m/s]."""
        with np.errstate(divide="ignore"):
            return np.asarray(4.0 / np.pi * self.absolute / np.maximum(distance, 0.0), dtype=np.float64)


def bound_of(solution: Solution, duals: tuple[Solution, ...], names: tuple[str, ...]) -> BoundaryBound:
    """Bound for one flow.

    duals : for every free solid the flow of unit circulation round it;  names : of those solids
    """
    mesh = solution.system.mesh
    residual = np.max(np.abs(solution.residuals), axis=1)
    residual[mesh.is_equipotential] = 0.0
    levels = {name: _level(solution, dual, residual) for name, dual in zip(names, duals, strict=True)}
    land, edges = float(residual.max()), _barrier(solution)
    islands = max(levels.values(), default=0.0)
    total, flux = land + islands + edges, solution.known.flux
    ring, vertex = _worst(solution)
    size = solution.system.size
    return BoundaryBound(total, total / flux, flux, land, islands, edges, levels, ring, vertex, size)


def _worst(solution: Solution) -> tuple[str, complex]:
    mesh = solution.system.mesh
    e = int(np.argmax(solution.indicator))
    ring = mesh.rings[mesh.ring[e]]
    ends = (complex(ring.starts[mesh.edge[e]]), complex(ring.ends[mesh.edge[e]]))
    return ring.edges[mesh.edge[e]], min(ends, key=lambda z: abs(z - complex(mesh.middle[e])))


def _level(solution: Solution, dual: Solution, residual: FloatArray) -> float:
    """Bound of the constant of one solid [m2/s]."""
    vander = np.polynomial.legendre.legvander(_GAUSS, dual.field.density.shape[1] - 1)
    speed = np.abs((dual.field.slope @ vander[:, :-1].T).real) @ _WEIGHTS
    opened = solution.open_elements
    if opened.size == 0:
        return float(np.sum(residual * speed))
    values = (dual.field.density @ vander.T).imag
    psi = np.max(np.abs(values - values[_land(solution)].mean()), axis=1)[opened]
    return float(np.sum(residual * speed) + np.sum(psi * solution.leaks))


def _land(solution: Solution) -> BoolArray:
    """Elements of the outer ring's land, on which the auxiliary flows have one psi."""
    mesh = solution.system.mesh
    return np.asarray((mesh.ring == 0) & ~mesh.is_equipotential, dtype=np.bool_)


def _barrier(solution: Solution) -> float:
    """Largest value of the single layer on the open edges [m2/s]."""
    mesh, chosen = solution.system.mesh, solution.open_elements
    if chosen.size == 0:
        return 0.0
    layer = solution.slip + _reinforcement(mesh, solution)[:, None]
    half = mesh.half[chosen]
    size = float(np.max(np.abs(mesh.rings[0].vertices[:, None] - mesh.rings[0].vertices)))
    places = np.unique(np.concatenate([mesh.middle[chosen], mesh.start[chosen], mesh.end[chosen]]))
    weights = layer * CELL_WIDTHS * np.abs(half)[:, None]
    elements = mesh.middle[chosen], half
    return float(layer_peak(places, elements, (CELL_MIDDLES, CELL_WIDTHS), weights, size))


def _reinforcement(mesh: Mesh, solution: Solution) -> FloatArray:
    """What the layer needs on top of the slip against the layers on other edges, shape (k,) [m/s].

    A layer of density q on an element lets in q / pi times the angle under which it is seen.
    """
    chosen = solution.open_elements
    middle, start, end = mesh.middle[chosen], mesh.start[chosen], mesh.end[chosen]
    seen = np.abs(np.angle((end - middle[:, None]) / (start - middle[:, None]))) / np.pi
    straight = np.abs((np.conj(mesh.direction[chosen, None]) * (middle - middle[:, None])).imag)
    seen[straight <= _COLLINEAR * np.abs(middle - middle[:, None])] = 0.0
    mean = solution.leaks / (2.0 * np.abs(mesh.half[chosen]))
    return np.asarray(np.linalg.solve(np.eye(chosen.size) - seen, seen @ mean), dtype=np.float64)

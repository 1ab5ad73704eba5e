"""Zeros on and beside the rings of a flow, and which of all zeros the error of the boundary has made up.

The count of zeros follows from what stands in the water and not from the solution. Water that hardly moves,
in a creek say, is known up to the velocity error of the boundary only, and zeros of the computed flow there
come in pairs that the true flow need not have. If more zeros are found than counted, the faintest pairs are
left out, as long as the speeds between them stay below that error.
"""

from dataclasses import dataclass
from math import inf, pi

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.model import FlowModel
from forebay.flow.sheets.mesh import DEGREE
from forebay.flow.sheets.term import SheetTerm
from forebay.flow.stagnation.describe import Zero
from forebay.flow.stagnation.field import EPS
from forebay.flow.stagnation.quadtree import Quadtree
from forebay.flow.stagnation.result import WATER
from forebay.flow.stagnation.ring_walls import ring_flips
from forebay.flow.stagnation.ringside import ring_distance, strip_zeros

_TWIN = 4.0
"""A zero within this many gaps of one on the wall is the same, moved off by the boundary's residual [-]."""


@dataclass(frozen=True, slots=True)
class _Candidate:
    """A zero, the speed that keeps it apart from others, and the error of the velocity there [m/s]."""

    zero: Zero
    standing: float
    doubt: float


def with_rings(model: FlowModel, tree: Quadtree, zeros: list[Zero], degree: int | None) -> list[Zero]:
    """The zeros found, those on rings and beside them, less those that only the boundary's error has made.

    Parameters
    ----------
    model : a flow with rings
    tree : the search, run, with its strip
    zeros : found in it
    degree : the count that all weights must add up to; None if unknown, then nothing is left out
    """
    walls = _on_walls(model)
    water = [_in_water(model, zero) for zero in zeros if zero.on == WATER and zero.weight > 0]
    water = [one for one in water if not _is_twin(one.zero.at, walls)]
    others = [zero for zero in zeros if zero.on != WATER or zero.weight <= 0]
    water += _in_strip(model, tree, [one.zero for one in (*walls, *water)])
    found = [*walls, *water]
    weight = sum(one.zero.weight for one in found) + sum(zero.weight for zero in others)
    if degree is not None:
        found = _without_faintest(found, weight - degree)
    return others + [one.zero for one in found]


def _on_walls(model: FlowModel) -> list[_Candidate]:
    term = next(term for term in model.terms if isinstance(term, SheetTerm))
    flips = ring_flips(model, term.mesh)
    if not flips:
        return []
    z = np.array([flip.at for flip in flips], dtype=np.complex128)
    gaps = _gaps(model, z, np.array([flip.size for flip in flips]))
    return [
        _Candidate(Zero(flip.at, flip.on, float(gap), 1, 1), flip.standing, _wall_doubt(model, flip.size))
        for flip, gap in zip(flips, gaps, strict=True)
    ]


def _gaps(model: FlowModel, z: ComplexArray, most: FloatArray) -> FloatArray:
    """Distance to the zero of W nearby, |W| / |W'| doubled, at most the element's size, shape of z [m]."""
    jet = model.jet(z)
    with np.errstate(divide="ignore", invalid="ignore"):
        gap = 2.0 * (np.abs(jet.velocity) + 16.0 * EPS * model.magnitude(z)) / np.abs(jet.slope)
    return np.asarray(np.fmin(np.where(np.isfinite(gap), gap, most), most), dtype=np.float64)


def _doubt(model: FlowModel, distance: float) -> float:
    """Error of the velocity at a distance from the rings, 4 E / (pi distance) [m/s]."""
    return 4.0 / pi * model.bound.absolute / distance if model.bound and distance > 0.0 else inf


def _wall_doubt(model: FlowModel, size: float) -> float:
    """Error of the speed along a wall where psi is off by E, 2 n^2 E / size for a density of degree n [m/s].

    Markov's inequality: A. A. Markov, Zap. Imp. Akad. Nauk 62 (1889) 1-24.
    """
    return 2.0 * DEGREE**2 * model.bound.absolute / size if model.bound else inf


def _in_water(model: FlowModel, zero: Zero) -> _Candidate:
    at = np.array([zero.at])
    distance = float(ring_distance(model, at)[0])
    slope = abs(complex(model.jet(at).slope[0]))
    return _Candidate(zero, 0.5 * slope * distance, _doubt(model, distance))


def _is_twin(at: complex, walls: list[_Candidate]) -> bool:
    return any(abs(at - one.zero.at) <= _TWIN * one.zero.radius for one in walls)


def _in_strip(model: FlowModel, tree: Quadtree, known: list[Zero]) -> list[_Candidate]:
    """Zeros in the strip that are not known already."""
    if not tree.strip:
        return []
    boxes = np.array(tree.strip, dtype=np.complex128)
    found = strip_zeros(model, boxes[:, 0], boxes[:, 1].real)
    found = np.array([z for z in found if not _is_known(complex(z), known, model.scale)], dtype=np.complex128)
    if found.size == 0:
        return []
    none = np.full(found.size, -1, dtype=np.int64)
    distance = ring_distance(model, found)
    proofs = tree.prove(found, none, np.zeros_like(none), 0.1 * distance)
    gaps = _gaps(model, found, 0.5 * distance)
    radii = [gap if proof is None else proof.radius for proof, gap in zip(proofs, gaps, strict=True)]
    zeros = [Zero(complex(z), WATER, float(radius), 1, 2) for z, radius in zip(found, radii, strict=True)]
    return [_in_water(model, zero) for zero in zeros]


def _is_known(at: complex, known: list[Zero], scale: float) -> bool:
    return any(
        abs(at - zero.at) <= max((_TWIN if zero.on != WATER else 1.0) * zero.radius, 1e-8 * scale)
        for zero in known
    )


def _without_faintest(found: list[_Candidate], excess: int) -> list[_Candidate]:
    """Zeros less the faintest ones that together weigh the excess, if all of them are doubtful.

    A change of sign on a wall goes with the neighbour that has the same standing.
    """
    order = sorted(range(len(found)), key=lambda k: (found[k].standing, found[k].zero.at.real))
    dropped: set[int] = set()
    for k in order:
        if excess <= 0 or not found[k].standing <= found[k].doubt:
            break
        dropped.add(k)
        excess -= found[k].zero.weight
    return found if excess != 0 else [one for k, one in enumerate(found) if k not in dropped]

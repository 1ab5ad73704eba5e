"""The walls of a layout solved: outlines and surveyed shores as terms of its flow."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from weakref import WeakKeyDictionary

import numpy as np

from forebay.flow.errors import Path, UnsolvedBoundaryError
from forebay.flow.layout import Layout, Surveyed
from forebay.flow.piers import PierSolution
from forebay.flow.poles import PoleField
from forebay.flow.sheets.adapt import PASSES, Walls, content, factorise, finer_mesh, mesh_for, worst_of
from forebay.flow.sheets.bound import BoundaryBound, bound_of
from forebay.flow.sheets.known import Known, KnownFlow, StillWater
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.origin import shifted_rings
from forebay.flow.sheets.piers import PierSet, solve_with_piers
from forebay.flow.sheets.pole_flow import PoleFlow
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.solution import Solution, solve
from forebay.flow.sheets.system import System
from forebay.flow.sheets.term import SheetTerm
from forebay.flow.sheets.typical import typical_flows

WORST = 1e-2
"""Bound over the flow through above which there is no answer [-]."""

_DUALS: "WeakKeyDictionary[System, tuple[Solution, ...]]" = WeakKeyDictionary()
"""Auxiliary flows of factorisations that are still kept."""

Vortices = Callable[[Ring, complex], PoleField]
"""Pole of a strength [m2/s] at the start of a ring, with its images in the shore."""
WithMoments = Callable[[PierSolution], KnownFlow]
"""The flow without the rings once the multipoles of the piers are known."""


@dataclass(frozen=True, eq=False)
class Boundary:
    """Solved walls.

    solution : of the sheets;  terms : their parts of the flow;  piers : multipoles, None without piers
    bound : of the error
    """

    solution: Solution
    terms: tuple[SheetTerm, ...]
    piers: PierSolution | None
    bound: BoundaryBound


@dataclass(frozen=True, eq=False)
class Task:
    """What there is to solve.

    layout : the site;  walls : rings in a frame of their own, in coordinates that count from `origin`
    known : the flow without rings and without multipoles of piers;  piers : None without any
    with_moments : see `WithMoments`;  vortices : see `Vortices`;  offset : of the kernel
    """

    layout: Layout
    walls: Walls
    origin: complex
    known: Known
    piers: PierSet | None
    with_moments: WithMoments
    vortices: Vortices
    offset: float


def solve_boundary(task: Task) -> Boundary:
    """Sheets on all rings, solved together with the piers.

    Raises
    ------
    UnsolvedBoundaryError : the bound of psi stays above a hundredth of the flow
    UnsolvedStructureError : the piers cannot be solved
    """
    walls = task.walls
    mesh = mesh_for(walls, typical_flows(task.layout.shore, walls.rings, walls.frame))
    solution, piers = _solved(task, factorise(walls, mesh))
    for _ in range(PASSES):
        if content(solution, walls):
            break
        finer = finer_mesh(walls, mesh, worst_of([solution]))
        if finer is None:
            break
        mesh = finer
        solution, piers = _solved(task, factorise(walls, mesh))
    bound = _bound(task, solution)
    if not bound.relative <= WORST:
        raise UnsolvedBoundaryError(
            f"the stream function may be wrong by {bound.relative:.2g} of the flow, worst at {bound.ring} "
            f"near ({bound.vertex.real:.6g}, {bound.vertex.imag:.6g})",
            _path(task.layout, bound.ring),
            relative=bound.relative,
            x=bound.vertex.real,
            y=bound.vertex.imag,
        )
    return Boundary(solution, _terms(task, solution), piers, bound)


def _solved(task: Task, system: System) -> tuple[Solution, PierSolution | None]:
    solution = solve(system, task.known)
    solution = replace(solution, offset=task.offset)
    if task.piers is None:
        return solution, None
    piers, values = solve_with_piers(task.piers, solution)
    known = replace(task.known, flow=task.with_moments(piers))
    return Solution(system, known, values, task.offset), piers


def _terms(task: Task, solution: Solution) -> tuple[SheetTerm, ...]:
    """A term for every owner: outlines for themselves, a surveyed shore and its islands for the ambient."""
    mesh, field = solution.system.mesh, solution.field
    whole = Mesh(shifted_rings(mesh.rings, -task.origin), mesh.cuts)
    owners = np.array([ring.owner for ring in mesh.rings])[mesh.ring]
    terms = []
    for owner in sorted({ring.owner for ring in mesh.rings}):
        chosen = owners == owner
        part = replace(field, panels=field.panels.part(chosen), density=field.density[chosen])
        rings = [
            (r, g) for r, g in zip(mesh.rings, solution.known.logs, strict=True) if r.owner == owner and g
        ]
        poles = [task.vortices(ring, g) for ring, g in rings]
        merged = _merged(poles)
        vortices = None if merged is None else PoleFlow(merged, task.walls.frame)
        terms.append(SheetTerm(part, owner, vortices, whole, task.origin))
    return tuple(terms)


def _merged(fields: list[PoleField]) -> PoleField | None:
    if not fields:
        return None
    poles = np.concatenate([field.poles for field in fields])
    strengths = np.concatenate([field.strengths for field in fields])
    return replace(fields[0], poles=poles, strengths=strengths, owners=np.zeros(poles.size, dtype=np.int64))


def _bound(task: Task, solution: Solution) -> BoundaryBound:
    mesh = solution.system.mesh
    free = [k for k, ring in enumerate(mesh.rings) if ring.is_solid and ring.closed]
    duals = _DUALS.get(solution.system)
    if duals is None:
        duals = tuple(_dual(task, solution.system, k) for k in free)
        _DUALS[solution.system] = duals
    bound = bound_of(solution, duals, tuple(mesh.rings[k].name for k in free))
    return replace(bound, vertex=bound.vertex + task.origin)


def _dual(task: Task, system: System, chosen: int) -> Solution:
    """Unit circulation round one solid and no other drive."""
    rings = system.mesh.rings
    unit = -1j / (2.0 * np.pi)
    logs = [unit if k == chosen else 0j for k in range(len(rings))]
    if not rings[0].is_solid:
        logs[0] = -unit
    poles = tuple(
        PoleFlow(task.vortices(ring, log), task.walls.frame)
        for ring, log in zip(rings, logs, strict=True)
        if log
    )
    return solve(system, Known(StillWater(), poles, _still(rings), tuple(logs), (), 1.0))


def _still(rings: tuple[Ring, ...]) -> dict[str, float]:
    return {n: 0.0 for ring in rings for n, kind in zip(ring.edges, ring.kinds, strict=True) if kind}


def _path(layout: Layout, name: str) -> Path:
    for k, structure in enumerate(layout.structures):
        if structure.name == name:
            return ("structures", k)
    if isinstance(layout.shore, Surveyed):
        for k, island in enumerate(layout.shore.islands):
            if island.name == name:
                return ("shore", "islands", k)
    return ("shore",)

"""An island in a channel against quadratic finite elements on a grid that is graded towards its corners."""

import numpy as np
import pytest
from skfem import Basis, ElementQuad2, Functional, MeshQuad, asm, condense, solve
from skfem.models.poisson import laplace

from forebay.flow.layout import EdgeProfile, Island, Layout, OpenEdge, Surveyed
from forebay.flow.model import compile_layout

LENGTH, BREADTH = 8.0, 4.0
LEFT, RIGHT, LOW, HIGH = 3.0, 4.5, 1.4, 2.2
"""The island: a rectangle that leaves unequal ways on both sides."""
FINEST = 1e-4
"""Cells at the island's corners [m]: the error of the fluxes there is of the order of its power 4/3, 5e-6."""


def graded(start, end, *towards):
    """Cuts from start to end whose steps grow by a third away from the ends named."""
    if len(towards) == 2:
        middle = 0.5 * (start + end)
        return np.concatenate((graded(start, middle, start)[:-1], graded(middle, end, end)))
    count = int(np.ceil(np.log1p(abs(end - start) / FINEST / 3.0) / np.log(4.0 / 3.0)))
    steps = np.cumsum((4.0 / 3.0) ** np.arange(count))
    away = towards[0] + (start + end - 2.0 * towards[0]) * np.insert(steps / steps[-1], 0, 0.0)
    return away if towards[0] == start else away[::-1]


def lines(start, low, high, end):
    parts = (graded(start, low, low), graded(low, high, low, high)[1:], graded(high, end, high)[1:])
    return np.concatenate(parts)


@Functional
def along(w):
    """Velocity along the channel."""
    return w["phi"].grad[0]


def conductance_and_share():
    """Flux for a unit drop of the potential, and the part of it that passes below the island."""
    mesh = MeshQuad.init_tensor(lines(0.0, LEFT, RIGHT, LENGTH), lines(0.0, LOW, HIGH, BREADTH))
    x, y = mesh.p[:, mesh.t].mean(axis=1)
    beside = (x > LEFT) & (x < RIGHT)
    kept = ~(beside & (y > LOW) & (y < HIGH))
    below = (beside & (y < LOW))[kept]
    water = mesh.remove_elements(np.flatnonzero(~kept))
    basis = Basis(water, ElementQuad2())
    matrix = asm(laplace, basis)
    phi = np.zeros(basis.N)
    east = basis.get_dofs(lambda x: x[0] == LENGTH).all()
    west = basis.get_dofs(lambda x: x[0] == 0.0).all()
    phi[east] = 1.0
    phi = solve(*condense(matrix, x=phi, D=np.concatenate((east, west))))
    under = Basis(water, ElementQuad2(), elements=np.flatnonzero(below))
    # every section below the island passes the same flux: its mean over them is an integral over their area
    flux = along.assemble(under, phi=under.interpolate(phi)) / (RIGHT - LEFT)
    total = phi @ matrix @ phi
    return total, flux / total


@pytest.mark.slow
def test_island_in_a_channel():
    total, share = conductance_and_share()
    island = Island("island", (LEFT + 1j * LOW, LEFT + 1j * HIGH, RIGHT + 1j * HIGH, RIGHT + 1j * LOW))
    edges = (
        OpenEdge("west", 3, 1, 1.0, EdgeProfile.EQUIPOTENTIAL),
        OpenEdge("east", 1, 1, None, EdgeProfile.EQUIPOTENTIAL),
    )
    outer = (0j, LENGTH + 0j, LENGTH + 1j * BREADTH, 1j * BREADTH)
    model = compile_layout(Layout(1.0, shore=Surveyed(outer, (island,), edges)))
    path = np.array([0.5j, LEFT - 1.0 + 0.5j, RIGHT + 1.0 + 0.5j, LENGTH + 0.5j])
    drop = model.chord(path[:-1], path[1:]).sum().real
    middle = 0.5 * (LEFT + RIGHT)
    assert model.bound is not None
    below = model.chord(np.array([middle + 0j]), np.array([middle + 1j * LOW]))[0].imag
    assert below == pytest.approx(share, abs=model.bound.levels["island"] + 2e-5)
    assert 1.0 / drop == pytest.approx(total, rel=1e-4)  # the tolerance of psi, and 2e-5 of the grid's

"""Zeros that coincide, or lie too close together for a proof of each: one disc and their number."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.stagnation.turning import Disc, UnprovenTurningError, winding

_FACTORS = (1.5, 3.0, 6.0, 12.0, 25.0, 50.0, 100.0, 300.0, 1000.0, 3000.0, 1e4)
_SMALLEST = 1e-10


@dataclass(frozen=True, slots=True)
class Cluster:
    """A disc of the mapped plane with the number of zeros in it."""

    at: complex
    radius: float
    zeros: int


def groups(at: ComplexArray, distance: float) -> list[ComplexArray]:
    """Candidates grouped by single linkage at a distance [-]."""
    left = np.ones(at.size, dtype=np.bool_)
    found: list[ComplexArray] = []
    while left.any():
        member = np.zeros(at.size, dtype=np.bool_)
        member[int(np.flatnonzero(left)[0])] = True
        while True:
            near = np.abs(at[:, None] - at[member]).min(axis=1) <= distance
            grown: BoolArray = member | (left & near)
            if np.array_equal(grown, member):
                break
            member = grown
        left &= ~member
        found.append(at[member])
    return found


def enclose(disc: Disc, centre: complex, spread: float, room: float) -> Cluster | None:
    """Smallest tried circle about `centre` on which the number of zeros inside is proven.

    spread : farthest candidate from the centre [-];  room : largest radius allowed [-]
    """
    least = max(spread, _SMALLEST * max(room, abs(centre)))
    for factor in _FACTORS:
        radius = factor * least
        if radius > room:
            break
        try:
            return Cluster(centre, radius, winding(disc, centre, radius))
        except UnprovenTurningError:
            continue
    return None


def room_about(centre: complex, others: ComplexArray, radii: FloatArray, poles: ComplexArray) -> float:
    """Largest radius about a centre that keeps clear of other discs and of poles [-]."""
    limits = [0.5 * float(np.min(np.abs(poles - centre), initial=np.inf))]
    if others.size:
        limits.append(float(np.min(np.abs(others - centre) - radii)))
    return 0.9 * min(limits)

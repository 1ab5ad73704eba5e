"""Flows that a mesh is made for, so that it serves every current: the simplest ones that a shore has."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import Channel, Corner, DeadEnd, OpenWater, Shore, StraightBank
from forebay.flow.sheets.known import Known, StillWater
from forebay.flow.sheets.ring import Ring
from forebay.flow.shores import Frame


@dataclass(frozen=True, slots=True)
class PotentialFlow:
    """A flow whose potential is single-valued.

    potential : F(z) [m2/s];  derivative : W = dF/dz [m/s]
    """

    potential: Callable[[ComplexArray], ComplexArray]
    derivative: Callable[[ComplexArray], ComplexArray]

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Difference of F [m2/s]."""
        return self.potential(b) - self.potential(a)

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """W [m/s] at z."""
        return self.derivative(z)


def typical_flows(shore: Shore, rings: tuple[Ring, ...], frame: Frame) -> tuple[Known, ...]:
    """Flows past some walls, none where a shore has none of its own (a basin, a lake)."""
    edges = list(dict.fromkeys(n for r in rings for n, k in zip(r.edges, r.kinds, strict=True) if k))
    still = (0j,) * len(rings)
    if edges:
        return tuple(
            Known(StillWater(), (), {n: (n == edges[0]) - float(n == edge) for n in edges}, still, (), 1.0)
            for edge in edges[1:]
        )
    flows = _potential_flows(shore, frame)
    return tuple(Known(flow, (), {}, still, (), _flux(flow, rings)) for flow in flows)


def _flux(flow: PotentialFlow, rings: tuple[Ring, ...]) -> float:
    """Largest difference of the potential over a solid [m2/s]."""
    values = [flow.potential(ring.vertices) for ring in rings]
    return max(float(np.max(np.abs(value - value[0]))) for value in values)


def _potential_flows(shore: Shore, frame: Frame) -> list[PotentialFlow]:
    tau, slope = frame.map.forward, frame.map.slope
    along = PotentialFlow(tau, slope)
    match shore:
        case OpenWater():
            return [along, PotentialFlow(lambda z: 1j * tau(z), lambda z: 1j * slope(z))]
        case StraightBank() | Channel():
            return [along]
        case Corner():
            return [PotentialFlow(lambda z: np.exp(tau(z)), lambda z: np.exp(tau(z)) * slope(z))]
        case DeadEnd():
            return [PotentialFlow(lambda z: np.cosh(tau(z)), lambda z: np.sinh(tau(z)) * slope(z))]
        case _:
            return []

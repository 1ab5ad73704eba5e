"""What a solution on sheets starts from: the flow without the walls, discharges and circulations."""

from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.sheets.along import along_rings
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.stand_ins import StandIns
from forebay.flow.sheets.unknowns import Levels, levels_of


class KnownFlow(Protocol):
    """A flow that knows nothing of the rings."""

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords, shape (n,) [m2/s]."""
        ...

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """W [m/s] at z, shape (n,)."""
        ...


@dataclass(frozen=True, slots=True)
class StillWater:
    """No flow."""

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Zero [m2/s]."""
        return np.zeros(np.broadcast(a, b).shape, dtype=np.complex128)

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Zero [m/s]."""
        return np.zeros(np.shape(z), dtype=np.complex128)


@dataclass(frozen=True, eq=False)
class Known:
    """Data of one flow.

    flow : without the rings;  vortices : poles of F at the starts of closed rings
    outflows : out of the water through every open edge, by name [m2/s]
    logs : coefficient of log(z - start) at the start of every ring, 0 for open ones [m2/s]
    pinned : elements on the rings, x + iy [m];  flux : what residuals are compared with [m2/s]
    stand_ins : of elements on the land round surveyed water, None without any
    """

    flow: KnownFlow
    vortices: tuple[KnownFlow, ...]
    outflows: dict[str, float]
    logs: tuple[complex, ...]
    pinned: tuple[complex, ...]
    flux: float
    stand_ins: StandIns | None = None

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Flow and poles at the starts of rings."""
        return sum((pole.chord(a, b) for pole in self.vortices), self.flow.chord(a, b))

    def along(self, mesh: Mesh, abscissae: FloatArray) -> ComplexArray:
        """Potential along the rings, see `along_rings`."""
        return along_rings(mesh, abscissae, self.chord, self.pinned)

    def levels(self, mesh: Mesh) -> Levels:
        """Known psi and density on the elements."""
        levels = levels_of(mesh, self.outflows, self.logs)
        if self.stand_ins is None:
            return levels
        return replace(levels, density=levels.density + self.stand_ins.density(mesh))

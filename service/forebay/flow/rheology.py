"""Generalised Newtonian fluids, such as sludges: a viscosity that depends on the rate of shear.

Herschel and Bulkley's law with Papanastasiou's regularisation of the yield stress,

    mu = K g^(n-1) + tau_y (1 - exp(-m g)) / g,    g = sqrt(2 D' : D'),

holds the power law (tau_y = 0) and Bingham's plastic (n = 1). Below the yield stress the regularised fluid
creeps at about tau / (m tau_y) instead of standing still.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import FloatArray


@dataclass(frozen=True, slots=True)
class GeneralisedFluid:
    """Herschel-Bulkley fluid.

    consistency : K, viscous stress at the shear rate 1 1/s [Pa]; for n = 1 the plastic viscosity
    index : n [-], below 1 shear-thinning;  yield_stress : tau_y [Pa];  density : [kg/m3]
    regularisation : m [s], the larger the sharper the yield; without meaning where tau_y = 0
    """

    consistency: float
    index: float
    yield_stress: float
    density: float
    regularisation: float = 0.0

    def apparent_viscosity(self, shear_rate: FloatArray) -> FloatArray:
        """Apparent viscosity mu [Pa.s] at shear rates g >= 0 [1/s], any shape.

        At g = 0 the limit: tau_y m, plus K for n = 1; inf for n < 1.

        References
        ----------
        Herschel, Bulkley, Kolloid-Zeitschrift 39 (1926) 291-300; T. C. Papanastasiou, Flows of materials with
        yield, J. Rheology 31 (1987) 385-404 (both from memory).
        """
        g = np.asarray(shear_rate, dtype=np.float64)
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            viscous = self.consistency * g ** (self.index - 1.0)
            yielding = np.where(g > 0.0, -np.expm1(-self.regularisation * g) / g, self.regularisation)
        return np.asarray(viscous + self.yield_stress * yielding, dtype=np.float64)

    def shear_stress(self, shear_rate: FloatArray) -> FloatArray:
        """Shear stress mu g [Pa] in simple shear at rates g >= 0 [1/s]; 0 at rest."""
        g = np.asarray(shear_rate, dtype=np.float64)
        return np.asarray(
            self.consistency * g**self.index - self.yield_stress * np.expm1(-self.regularisation * g)
        )


def shear_rate(rate: FloatArray) -> FloatArray:
    """Invariant rate of shear g = sqrt(2 D' : D') [1/s] of strain rates, shape (..., 3, 3).

    D' is the strain rate less its mean normal part; in simple shear g is the velocity gradient.
    """
    divergence = np.trace(rate, axis1=-2, axis2=-1)
    deviator = rate - divergence[..., None, None] * np.eye(3) / 3.0
    return np.asarray(np.sqrt(2.0 * np.sum(deviator * deviator, axis=(-2, -1))))

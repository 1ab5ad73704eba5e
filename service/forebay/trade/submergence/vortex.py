"""The vortex that a circulation could feed at an inlet: dip, core and largest speed."""

from dataclasses import dataclass
from math import atan, degrees, log, pi, sqrt

from forebay.trade.submergence.inlet import Inlet
from forebay.trade.water import WaterProperties

BURGERS_PEAK = 1.1209064227785
"""Root of 1 + 2 x^2 = exp(x^2), x > 0: a Burgers vortex is fastest there, over its core radius r0 [-]."""

BURGERS_SPEED = 0.6381726863389
"""(1 - exp(-x^2)) / x at that place: largest speed over Gamma / (2 pi r0) [-]."""


@dataclass(frozen=True, slots=True)
class Vortex:
    """What a circulation could become at an inlet.

    core_radius : given, or the least possible, that of Burgers' vortex r0 = sqrt(4 nu / alpha) with the
    viscosity of water at rest [m];  is_core_given : which. Dips and speeds of the latter are upper bounds.
    critical_core_radius : core below which Burgers' dip is deeper than the water over the inlet [m]
    rankine_dip, burgers_dip : of the surface at the axis [m], as if nothing stood in its way
    rankine_speed, burgers_speed : largest speed round the axis [m/s]
    number : Gamma S / Q [-];  swirl_angle : in the pipe if all of it entered in rigid rotation [deg]
    """

    circulation: float
    core_radius: float
    is_core_given: bool
    critical_core_radius: float
    rankine_dip: float
    burgers_dip: float
    rankine_speed: float
    burgers_speed: float
    number: float
    swirl_angle: float

    @property
    def draws_air(self) -> bool | None:
        """Whether Burgers' dip is as deep as the water over the inlet; None where no core is given."""
        return self.core_radius <= self.critical_core_radius if self.is_core_given else None


def vortex_of(inlet: Inlet, circulation: float, water: WaterProperties, gravity: float) -> Vortex:
    """Vortex of a circulation [m2/s] at an inlet.

    Rankine: v = Gamma r / (2 pi a^2) inside a, dip Gamma^2 / (4 pi^2 g a^2) at the axis. Burgers: v = Gamma
    / (2 pi r) (1 - exp(-r^2/a^2)), dip ln 2 Gamma^2 / (4 pi^2 g a^2). Without a core radius a^2 = 4 nu /
    alpha with the axial strain alpha = V / S of water that speeds up from rest at the surface: molecular
    viscosity, so that a real, turbulent core is wider by far and its dip shallower.

    References
    ----------
    Burgers 1948, Advances in Applied Mechanics 1, 171-199; Rankine: Lamb, Hydrodynamics, article 27 (from
    memory). The dip of Burgers' vortex rests on the integral of (1 - exp(-t))^2 / t^2 = 2 ln 2.
    """
    strain = inlet.velocity / inlet.submergence
    core = inlet.core_radius or sqrt(4.0 * water.kinematic_viscosity / strain)
    speed = abs(circulation) / (2.0 * pi * core)
    pipe = inlet.throat or inlet.diameter
    through = inlet.discharge / (0.25 * pi * pipe**2)
    return Vortex(
        circulation=circulation,
        core_radius=core,
        is_core_given=inlet.core_radius is not None,
        critical_core_radius=abs(circulation) / (2.0 * pi) * sqrt(log(2.0) / (gravity * inlet.submergence)),
        rankine_dip=speed**2 / gravity,
        burgers_dip=log(2.0) * speed**2 / gravity,
        rankine_speed=speed,
        burgers_speed=BURGERS_SPEED * speed,
        number=abs(circulation) * inlet.submergence / inlet.discharge,
        swirl_angle=degrees(atan(abs(circulation) / (pi * pipe) / through)),
    )

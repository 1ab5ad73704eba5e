"""Behind a pier the water separates, which potential flow does not know."""

from collections.abc import Iterator

from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

SEPARATION_REYNOLDS = 50.0
"""Reynolds number above which the wake of a cylinder sheds vortices [-]."""

STROUHAL = 0.2
"""Shedding frequency times diameter over speed [-]."""

LEE = 5.0
"""Length of the lee that is always wrong, in diameters [-]."""

COLD_WATER_VISCOSITY = 1.8e-6
"""Kinematic viscosity of fresh water at 0 degC, the largest of natural water [m2/s]."""

VORTEX_STREET = 0.2
"""Shallow-wake number below which a vortex street forms [-]."""

STEADY_BUBBLE = 0.5
"""Shallow-wake number above which the wake is a steady bubble [-]."""

PIER_LEE = WarningKind(
    code="pier-lee",
    severity=Severity.CAUTION,
    meaning="the water separates from a pier: its lee holds a wake where the model has smooth flow",
    threshold="Re = U D / nu > 50, which is every pier in a current",
    formula="shedding frequency f = 0.2 U / D; lee of at least 5 D",
    source="bluff-body shedding, Strouhal number about 0.2 (Blevins, Flow-Induced Vibration)",
    unit="1",
)

SHALLOW_WAKE = WarningKind(
    code="shallow-wake",
    severity=Severity.CAUTION,
    meaning="which kind of wake a pier has in water this shallow; in every case there is one",
    threshold="S < 0.2 vortex street, 0.2 to 0.5 unsteady bubble, > 0.5 steady bubble",
    formula="S = c_f D / h",
    source="Chen and Jirka 1995, Fluid Dynamics Research 16, 11-34",
    unit="1",
)


def pier_lee(site: Site) -> Iterator[ApplicabilityWarning]:
    """Every pier that water flows past."""
    for path, pier in site.piers():
        speed, diameter = site.speed_scale(pier.at, besides=pier), 2.0 * pier.radius
        reynolds = speed * diameter / COLD_WATER_VISCOSITY
        if reynolds > SEPARATION_REYNOLDS:
            frequency = STROUHAL * speed / diameter
            yield PIER_LEE.raised(
                f"Water at up to {speed:.2g} m/s separates from pier {pier.name!r} (Reynolds number "
                f"{reynolds:.2g}): eddies leave it about every {1.0 / frequency:.2g} s "
                f"({frequency:.2g} 1/s), and "
                f"for at least {LEE * diameter:.3g} m behind it the computed flow is wrong.",
                path,
                value=reynolds,
                limit=SEPARATION_REYNOLDS,
            )


def shallow_wake(site: Site) -> Iterator[ApplicabilityWarning]:
    """Kind of wake of every pier, where the bed friction is known."""
    friction = site.data.bed_friction
    if friction is None:
        return
    for path, pier in site.piers():
        number = friction * 2.0 * pier.radius / site.layout.depth
        yield SHALLOW_WAKE.raised(
            f"Pier {pier.name!r} has the shallow-wake number {number:.2g}: {_kind_of_wake(number)} "
            "behind it.",
            path,
            value=number,
            limit=VORTEX_STREET if number < VORTEX_STREET else STEADY_BUBBLE,
        )


def _kind_of_wake(number: float) -> str:
    if number < VORTEX_STREET:
        return "a vortex street"
    return "an unsteady bubble" if number <= STEADY_BUBBLE else "a steady bubble"

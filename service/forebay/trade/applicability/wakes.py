"""Behind a body in the stream the water separates, which potential flow does not know."""

from collections.abc import Iterator

from forebay.trade.applicability.bodies import Body
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
    meaning=(
        "the water separates from a pier, an outline or an island: its lee holds a wake where the model has "
        "smooth flow"
    ),
    threshold="Re = U D / nu > 50, which is every body in a current; D across the stream",
    formula="shedding frequency f = 0.2 U / D of bodies that stand free; lee of at least 5 D",
    source="bluff-body shedding, Strouhal number about 0.2 (Blevins, Flow-Induced Vibration)",
    unit="1",
)

SHALLOW_WAKE = WarningKind(
    code="shallow-wake",
    severity=Severity.CAUTION,
    meaning=(
        "which kind of wake a body that stands free has in water this shallow; in every case there is one"
    ),
    threshold="S < 0.2 vortex street, 0.2 to 0.5 unsteady bubble, > 0.5 steady bubble",
    formula="S = c_f D / h, D across the stream; not for groynes, which water passes on one side only",
    source="Chen and Jirka 1995, Fluid Dynamics Research 16, 11-34",
    unit="1",
)


def pier_lee(site: Site) -> Iterator[ApplicabilityWarning]:
    """Every body that water flows past."""
    for body in site.bodies:
        speed, breadth = site.speed_past(body), site.breadth(body)
        reynolds = speed * breadth / COLD_WATER_VISCOSITY
        if reynolds > SEPARATION_REYNOLDS:
            yield PIER_LEE.raised(
                f"Water at up to {speed:.2g} m/s separates from {body.called} (Reynolds number "
                f"{reynolds:.2g}): {_eddies(body, speed / breadth)}, and for at least {LEE * breadth:.3g} m "
                "behind it the computed flow is wrong.",
                body.path,
                value=reynolds,
                limit=SEPARATION_REYNOLDS,
            )


def _eddies(body: Body, rate: float) -> str:
    """What the lee holds; rate : speed over breadth [1/s]."""
    if not body.stands_free:
        return "an eddy stays in its lee"
    frequency = STROUHAL * rate
    return f"eddies leave it about every {1.0 / frequency:.2g} s ({frequency:.2g} 1/s)"


def shallow_wake(site: Site) -> Iterator[ApplicabilityWarning]:
    """Kind of wake of every body that stands free, where the bed friction is known."""
    friction = site.data.bed_friction
    if friction is None:
        return
    for body in site.bodies:
        if not body.stands_free:
            continue
        number = friction * site.breadth(body) / site.layout.depth
        yield SHALLOW_WAKE.raised(
            f"The {body.called} has the shallow-wake number {number:.2g}: {_kind_of_wake(number)} behind it.",
            body.path,
            value=number,
            limit=VORTEX_STREET if number < VORTEX_STREET else STEADY_BUBBLE,
        )


def _kind_of_wake(number: float) -> str:
    if number < VORTEX_STREET:
        return "a vortex street"
    return "an unsteady bubble" if number <= STEADY_BUBBLE else "a steady bubble"

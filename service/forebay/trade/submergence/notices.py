"""What has to be said with the numbers of an inlet."""

from collections.abc import Iterator

from forebay.flow.errors import Path
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.screens.notices import CRITERION_FROM_MEMORY, REGULATOR_DECIDES
from forebay.trade.submergence.check import InletCheck
from forebay.trade.submergence.rules import Standing

SUBMERGENCE_SHORT = WarningKind(
    code="submergence-short",
    severity=Severity.CAUTION,
    meaning="less water stands over the inlet than a rule asks for: vortices that draw air become likely",
    threshold="available < required submergence of a rule",
    formula="the rule's",
    source="the rule named",
    unit="m",
)

SWIRL_UNDERESTIMATED = WarningKind(
    code="swirl-underestimated",
    severity=Severity.NOTE,
    meaning=(
        "frictionless flow carries the swirl of given vortices and shear only; separation at walls and "
        "piers, wind and uneven bays add to it"
    ),
    threshold="always with a circulation read from a layout",
    formula="circulation on rings round the inlet",
    source="Kelvin's circulation theorem",
)

VELOCITY_OUT_OF_BAND = WarningKind(
    code="inlet-velocity-out-of-band",
    severity=Severity.CAUTION,
    meaning="the velocity at the bell is outside the band that pump stations are built to",
    threshold="outside the band of its discharge",
    formula="V = 4 Q / (pi D^2)",
    source="ANSI/HI 9.8 (from memory)",
    unit="m/s",
)

AIR_COULD_BE_DRAWN = WarningKind(
    code="air-could-be-drawn",
    severity=Severity.CAUTION,
    meaning="the dip of the vortex with the core given is as deep as the water over the inlet",
    threshold="dip >= submergence, where a core radius is given",
    formula="ln 2 Gamma^2 / (4 pi^2 g r0^2)",
    source="Burgers' vortex; own check by quadrature",
    unit="m",
)

INLET_KINDS = (SUBMERGENCE_SHORT, SWIRL_UNDERESTIMATED, VELOCITY_OUT_OF_BAND, AIR_COULD_BE_DRAWN)
"""Every kind of warning that inlets raise beyond those of screens."""


def inlet_notices(checks: tuple[InletCheck, ...]) -> tuple[ApplicabilityWarning, ...]:
    """Warnings of a check of inlets; paths start at the request."""
    message = "Submergence rules are a screening: the intake's designer and the pump's maker decide."
    return (
        REGULATOR_DECIDES.raised_in_request(message, ()),
        *_remembered(checks),
        *(notice for index, check in enumerate(checks) for notice in _of_inlet(check, index)),
    )


def _remembered(checks: tuple[InletCheck, ...]) -> Iterator[ApplicabilityWarning]:
    """A caution for each rule used that is listed from memory."""
    rules = {found.rule.id: found.rule for check in checks for found in check.rules}
    for rule in rules.values():
        if rule.standing is Standing.FROM_MEMORY:
            message = f"{rule.id!r} is listed from memory: read {rule.source} before relying on it."
            yield CRITERION_FROM_MEMORY.raised_in_request(message, ("allow_from_memory",))


def _of_inlet(check: InletCheck, index: int) -> Iterator[ApplicabilityWarning]:
    path: Path = ("inlets", index)
    inlet, vortex, band = check.inlet, check.vortex, check.band
    for found in check.rules:
        if found.passed is False:
            message = (
                f"{inlet.name!r} has {found.available:.3g} m of water over its {found.datum.value}; "
                f"{found.rule.id} asks for {found.required:.3g} m."
            )
            yield SUBMERGENCE_SHORT.raised_in_request(
                message, path, value=found.available, limit=found.required
            )
    if check.rings and inlet.circulation is None:
        yield SWIRL_UNDERESTIMATED.raised_in_request(f"{inlet.name!r}: {SWIRL_UNDERESTIMATED.meaning}.", path)
    if vortex is not None and vortex.draws_air:
        message = (
            f"A vortex of {abs(vortex.circulation):.3g} m2/s with a core of {vortex.core_radius:.2g} m would "
            f"lower the surface over {inlet.name!r} by {vortex.burgers_dip:.3g} m, down to the inlet."
        )
        yield AIR_COULD_BE_DRAWN.raised_in_request(
            message, path, value=vortex.burgers_dip, limit=inlet.submergence
        )
    if band is not None and not band.contains(inlet.velocity):
        bound = band.least if inlet.velocity < band.least else band.largest
        message = (
            f"{inlet.velocity:.3g} m/s at the bell of {inlet.name!r}; "
            f"the band is {band.least:g} to {band.largest:g} m/s."
        )
        yield VELOCITY_OUT_OF_BAND.raised_in_request(message, path, value=inlet.velocity, limit=bound)

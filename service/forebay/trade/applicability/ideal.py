"""Peculiarities of the ideal elements themselves."""

import math
from collections.abc import Iterator

from forebay.flow.layout import LineSink, LineSource, Surveyed, Vortex
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

END_SHARE = 1.0 / (1.0 + math.exp(math.pi))
"""Share of a line element, at each end, where the tangential speed exceeds the normal one [-]."""

LINE_ENDS = WarningKind(
    code="line-ends",
    severity=Severity.NOTE,
    meaning="an even flux along a line makes the speed along it logarithmically infinite at both ends",
    threshold=(
        "always, for line sources and sinks; value: distance from the end where along exceeds across [m]"
    ),
    formula="v = (sigma / 2 pi) ln((s - x) / x) along, sigma / 2 across; equal at x = s / (1 + exp(pi))",
    source="line source potential (own check)",
    unit="m",
)

ROTATIONAL_FIELD = WarningKind(
    code="rotational-field",
    severity=Severity.NOTE,
    meaning="where the water turns there is no potential, and Bernoulli's head holds along streamlines only",
    threshold="vorticity of the ambient gradient not zero, or a vortex with a core",
    formula="omega = dv/dx - du/dy",
    source="Kelvin's and Bernoulli's theorems (Batchelor 1967, sections 3.5 and 5.3)",
    unit="1/s",
)

AMBIENT_ZERO = WarningKind(
    code="ambient-zero",
    severity=Severity.NOTE,
    meaning="without a current a capture zone has no finite width: in time an intake draws from everywhere",
    threshold="ambient velocity zero, no flow through open edges, and an intake",
    formula="width Q / (h U) for U -> 0",
    source="sink in a uniform current (Bear 1979, Hydraulics of Groundwater; own check)",
    unit="m/s",
)


def line_ends(site: Site) -> Iterator[ApplicabilityWarning]:
    """Every line element."""
    for path, element in site.elements():
        if isinstance(element, LineSource | LineSink):
            reach = END_SHARE * abs(element.end - element.start)
            yield LINE_ENDS.raised(
                f"Towards the ends of {element.name!r} the speed along it grows without bound, a "
                "property of its even "
                f"flux; within {reach:.2g} m of an end it exceeds the speed across.",
                path,
                value=reach,
            )


def rotational_field(site: Site) -> Iterator[ApplicabilityWarning]:
    """Ambient vorticity and vortex cores."""
    spin = site.layout.ambient.vorticity
    if spin != 0.0:
        yield ROTATIONAL_FIELD.raised(
            f"The ambient gradient turns the water everywhere (vorticity {spin:.3g} 1/s): no "
            "potential exists, and "
            "head and pressure coefficient are not given.",
            ("ambient", "gradient"),
            value=spin,
            limit=0.0,
        )
    for path, element in site.elements():
        if isinstance(element, Vortex) and element.core is not None:
            spin = element.circulation / (math.pi * element.core.radius**2)
            yield ROTATIONAL_FIELD.raised(
                f"Inside the core of {element.name!r} the water turns (vorticity about {spin:.3g} "
                "1/s): no potential "
                "exists there, and Bernoulli's head is not given.",
                path,
                value=spin,
                limit=0.0,
            )


def ambient_zero(site: Site) -> Iterator[ApplicabilityWarning]:
    """Intakes without a current."""
    driven = isinstance(site.layout.shore, Surveyed) and site.current > 0.0
    if site.layout.ambient.velocity == 0j and not driven and any(site.intakes()):
        yield AMBIENT_ZERO.raised(
            "There is no ambient current: the capture zone of an intake has no finite width.",
            ("ambient", "velocity"),
            value=0.0,
            limit=0.0,
        )

"""Bed friction and turbulence, which a perfect fluid has not."""

import math
from collections.abc import Iterator

from forebay.trade.applicability.geometry import distance_to, ends_of
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

FRICTION_SHARE = 0.3
"""Share of the friction length over which the bed may be forgotten [-]."""

MIXING_COEFFICIENT = 0.6
"""Transverse mixing over depth times friction velocity in natural streams, within a half [-]."""

STRIP_SHARE = 0.25
"""Spread, as a share of the captured strip, above which shares are blurred [-]."""

FRICTION_LENGTH = WarningKind(
    code="friction-length",
    severity=Severity.CAUTION,
    meaning="over the extent of the layout bed friction changes the flow that potential theory keeps",
    threshold="largest distance between elements or piers > 0.3 L_f",
    formula="L_f = h / c_f",
    source="shallow-flow momentum balance (Chen and Jirka 1995); share customary",
    unit="m",
)

TRANSVERSE_MIXING = WarningKind(
    code="transverse-mixing",
    severity=Severity.CAUTION,
    meaning=(
        "turbulence blurs the edges of the captured strip on the way from an outfall: shares are not sharp"
    ),
    threshold="sigma > w / 4",
    formula="sigma = sqrt(2 eps x / U), eps = 0.6 h u*, u* = U sqrt(c_f), w = Q / (h U)",
    source="Fischer et al. 1979, Mixing in Inland and Coastal Waters, chapter 5",
    unit="m",
)

MIXING_LEFT_OUT = WarningKind(
    code="mixing-left-out",
    severity=Severity.NOTE,
    meaning=(
        "shares and arrivals follow the mean flow alone: turbulence mixes water across dividing streamlines"
    ),
    threshold="always, where a layout has both an outfall and an intake",
    formula="advection only",
    source="Fischer et al. 1979, Mixing in Inland and Coastal Waters, chapter 5",
)

TURBULENCE_LEFT_OUT = WarningKind(
    code="turbulence-left-out",
    severity=Severity.NOTE,
    meaning="dissipation and G are those of the mean flow; in a river turbulence dissipates far more",
    threshold="always, where strain, dissipation or G of a layout are in the answer",
    formula="turbulent dissipation about u*^3 / (kappa z)",
    source="boundary-layer equilibrium (Nezu and Nakagawa 1993, Turbulence in Open-Channel Flows)",
)


def friction_length(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layouts that are long against the friction length."""
    friction, extent = site.data.bed_friction, site.extent
    if not friction:
        return
    limit = FRICTION_SHARE * site.layout.depth / friction
    if extent > limit:
        yield FRICTION_LENGTH.raised(
            f"The layout extends over {extent:.3g} m; beyond {limit:.3g} m (0.3 h / c_f) bed friction "
            "matters.",
            value=extent,
            limit=limit,
        )


def transverse_mixing(site: Site) -> Iterator[ApplicabilityWarning]:
    """Intakes whose strip is narrow against the spread on the way from the farthest outfall."""
    friction, current, depth = site.data.bed_friction, site.current, site.layout.depth
    outfalls = [element for _, element in site.outfalls()]
    if friction is None or current == 0.0 or not outfalls:
        return
    for path, intake in site.intakes():
        way = max(distance_to(outfall, end) for outfall in outfalls for end in ends_of(intake))
        spread = math.sqrt(2.0 * MIXING_COEFFICIENT * depth * math.sqrt(friction) * way)
        limit = STRIP_SHARE * intake.discharge / (depth * current)
        if spread > limit:
            yield TRANSVERSE_MIXING.raised(
                f"Over {way:.3g} m turbulence spreads water by {spread:.2g} m across the current, "
                "more than a quarter "
                f"({limit:.2g} m) of the strip that {intake.name!r} draws: its shares are not sharp.",
                path,
                value=spread,
                limit=limit,
            )


def mixing_left_out(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layouts with an outfall and an intake."""
    if any(site.outfalls()) and any(site.intakes()):
        yield MIXING_LEFT_OUT.raised(
            "Shares follow the mean flow alone: turbulent mixing across dividing streamlines is left "
            "out, and no "
            "dilution is claimed."
        )


def turbulence_left_out(site: Site) -> Iterator[ApplicabilityWarning]:
    """Answers with strain rates, dissipation or G."""
    if site.readings.has_dissipation:
        yield TURBULENCE_LEFT_OUT.raised(
            "Strain rate, dissipation and G are those of the mean flow: turbulence, which dissipates "
            "far more in "
            "rivers, is left out. Near a point element they are those of the singularity, not of an opening."
        )

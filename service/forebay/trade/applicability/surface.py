"""The water surface is taken as a rigid, calm lid over an even bed."""

import math
from collections.abc import Iterator

from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.water import STANDARD_GRAVITY

STRAINED_FROUDE = 0.3
"""Froude number above which the surface drops by more than 4.5 % of the depth [-]."""

FAILED_FROUDE = 0.5
"""Froude number above which the surface drops by more than 12.5 % of the depth [-]."""

DRIFT = 0.03
"""Surface drift as a share of the wind speed [-]."""

DRIFT_SHARE = 0.3
"""Drift, as a share of the current, above which it matters [-]."""

SPED_UP = 0.05
"""First-order speed-up by a falling surface, as a share, above which it is said [-]."""

UNEVENNESS = 0.2
"""Range of depth, as a share of the mean depth, above which the velocity has no potential [-]."""

LID = "open-channel hydraulics: velocity head V^2/2g against depth (own check); thresholds customary"

RIGID_LID = WarningKind(
    code="rigid-lid",
    severity=Severity.NOTE,
    meaning="the surface drops noticeably where the water is fast; the depth is taken as unchanged",
    threshold="F > 0.3 (depth changes by 4.5 %), up to 0.5",
    formula="F = V / sqrt(g h); relative change of depth F^2 / 2",
    source=LID,
    unit="1",
)

RIGID_LID_FAILED = WarningKind(
    code="rigid-lid-failed",
    severity=Severity.UNSAFE_TO_USE,
    meaning="the surface drops by more than an eighth of the depth: the rigid lid does not hold",
    threshold="F > 0.5 (depth changes by 12.5 %)",
    formula="F = V / sqrt(g h); relative change of depth F^2 / 2",
    source=LID,
    unit="1",
)

SPEED_UP = WarningKind(
    code="surface-speed-up",
    severity=Severity.NOTE,
    meaning="where the surface drops, continuity raises the speed beyond the computed one",
    threshold="(1 - F^2)^(-1/2) - 1 > 0.05, that is F > 0.305, up to F = 0.5",
    formula="first-order speed-up (1 - F^2)^(-1/2): 5 % at F = 0.30, 15 % at F = 0.50",
    source="shallow-water analogy of the Prandtl-Glauert rule (from memory)",
    unit="1",
)

WIND_DRIFT = WarningKind(
    code="wind-drift",
    severity=Severity.CAUTION,
    meaning="wind moves the top metre of the water about as fast as the modelled current",
    threshold="0.03 W > 0.3 U",
    formula="drift = 0.03 W, W the wind speed at 10 m",
    source="AMS Glossary of Meteorology, wind drift: 2.5 to 3 % of the wind speed",
    unit="m/s",
)

UNEVEN_DEPTH = WarningKind(
    code="uneven-depth",
    severity=Severity.CAUTION,
    meaning="where the depth varies, discharge per width and not velocity is free of divergence",
    threshold="(largest - least depth) / mean depth > 0.2",
    formula="div (h u) = 0",
    source="shallow-water continuity; threshold customary",
    unit="1",
)


def speeds(site: Site) -> Iterator[tuple[str, float]]:
    """Speeds at hand [m/s], each with what it is."""
    for end, speed in site.far_speeds.items():
        yield ("the ambient current" if end == "ambient" else f"the current at the {end} end"), speed
    if site.readings.max_speed is not None:
        yield "the largest speed in the answer", site.readings.max_speed


def rigid_lid(site: Site) -> Iterator[ApplicabilityWarning]:
    """Speeds with a Froude number above 0.3."""
    for what, speed in speeds(site):
        froude = _froude(site, speed)
        if STRAINED_FROUDE < froude <= FAILED_FROUDE:
            yield RIGID_LID.raised(_lid_message(what, speed, froude), value=froude, limit=STRAINED_FROUDE)


def rigid_lid_failed(site: Site) -> Iterator[ApplicabilityWarning]:
    """Speeds with a Froude number above 0.5."""
    for what, speed in speeds(site):
        froude = _froude(site, speed)
        if froude > FAILED_FROUDE:
            yield RIGID_LID_FAILED.raised(
                _lid_message(what, speed, froude), value=froude, limit=FAILED_FROUDE
            )


def speed_up(site: Site) -> Iterator[ApplicabilityWarning]:
    """Speeds that a falling surface raises by more than a twentieth."""
    for what, speed in speeds(site):
        froude = _froude(site, speed)
        if froude > FAILED_FROUDE:
            continue
        share = 1.0 / math.sqrt(1.0 - froude**2) - 1.0
        if share > SPED_UP:
            yield SPEED_UP.raised(
                f"{what.capitalize()}, {speed:.3g} m/s, would be about {100.0 * share:.2g} % higher with a "
                "surface that follows the pressure.",
                value=share,
                limit=SPED_UP,
            )


def _froude(site: Site, speed: float) -> float:
    return speed / math.sqrt(STANDARD_GRAVITY * site.layout.depth)


def _lid_message(what: str, speed: float, froude: float) -> str:
    return (
        f"{what.capitalize()}, {speed:.3g} m/s, has the Froude number {froude:.3g}: the surface drops by "
        f"{50.0 * froude**2:.3g} % of the depth, which the model leaves out."
    )


def wind_drift(site: Site) -> Iterator[ApplicabilityWarning]:
    """Wind that drives the surface as the current does."""
    wind = site.data.wind_speed
    if wind is not None and DRIFT * wind > DRIFT_SHARE * site.current:
        yield WIND_DRIFT.raised(
            f"A wind of {wind:g} m/s drives the surface at about {DRIFT * wind:.2g} m/s, against a "
            "current of "
            f"{site.current:.2g} m/s: floating matter and the top metre go their own way{_heading(site)}.",
            value=DRIFT * wind,
            limit=DRIFT_SHARE * site.current,
        )


def _heading(site: Site) -> str:
    direction = site.data.wind_direction
    if direction is None:
        return ""
    return (
        f", towards {direction:g} deg turned by about 10 to 15 deg (to the right in the northern hemisphere)"
    )


def uneven_depth(site: Site) -> Iterator[ApplicabilityWarning]:
    """Depths that differ by more than a fifth."""
    if site.data.depth_range is None:
        return
    least, largest = site.data.depth_range
    unevenness = (largest - least) / site.layout.depth
    if unevenness > UNEVENNESS:
        yield UNEVEN_DEPTH.raised(
            f"Depths from {least:g} to {largest:g} m differ by {100 * unevenness:.3g} % of the mean depth.",
            ("depth",),
            value=unevenness,
            limit=UNEVENNESS,
        )

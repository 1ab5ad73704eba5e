"""Tides that turn before a wake is steady, and the turning earth."""

import math
from collections.abc import Iterator

from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

STEADY_WAKE = 50.0
"""Keulegan-Carpenter number up to which a wake is not quasi-steady [-]; 10 to 50 in the literature."""

SLIGHT_ROTATION = 10.0
"""Rossby number below which the earth's rotation is felt [-]."""

STRONG_ROTATION = 1.0
"""Rossby number below which it rules [-]."""

EARTH_RATE = 7.2921159e-5
"""Angular velocity of the earth [rad/s] (IERS conventional value)."""

SEA_WATER = 0.5
"""Salinity from which water is taken to be tidal where no tide is given [g/kg]: the limit of fresh water."""

ROTATION_SOURCE = "Rossby number (own check of f = 1.03126e-4 1/s at 45 deg); thresholds from memory"

TIDAL_REVERSAL = WarningKind(
    code="tidal-reversal",
    severity=Severity.CAUTION,
    meaning="the tide turns before the wake of a pier, an outline or an island is quasi-steady",
    threshold="KC <= 50 (10 to 50 in the literature)",
    formula="KC = U T / D, D across the stream",
    source="Keulegan-Carpenter number; threshold from memory",
    unit="1",
)

EARTH_ROTATION = WarningKind(
    code="earth-rotation",
    severity=Severity.NOTE,
    meaning="over the extent of the layout the earth's rotation turns the current noticeably",
    threshold="Ro < 10, down to 1",
    formula="Ro = U / (f L), f = 2 Omega sin(latitude), L the largest distance in the layout",
    source=ROTATION_SOURCE,
    unit="1",
)

EARTH_ROTATION_STRONG = WarningKind(
    code="earth-rotation-strong",
    severity=Severity.CAUTION,
    meaning="over the extent of the layout the earth's rotation rules the current",
    threshold="Ro < 1",
    formula=EARTH_ROTATION.formula,
    source=ROTATION_SOURCE,
    unit="1",
)

TIDAL_PERIOD_UNKNOWN = WarningKind(
    code="tidal-period-unknown",
    severity=Severity.NOTE,
    meaning="the water is saline and no tidal period is given, so that reversal of wakes cannot be judged",
    threshold="datum missing, salinity >= 0.5 g/kg and a body in the stream",
    formula="none",
    source="convention of this service",
)

LATITUDE_UNKNOWN = WarningKind(
    code="latitude-unknown",
    severity=Severity.NOTE,
    meaning="latitude is not given, so that the effect of the earth's rotation cannot be judged",
    threshold="datum missing, and Ro < 10 at the pole",
    formula=EARTH_ROTATION.formula,
    source="convention of this service",
)


def tidal_reversal(site: Site) -> Iterator[ApplicabilityWarning]:
    """Bodies in a current that reverses."""
    period = site.data.tidal_period
    if period is None:
        return
    for body in site.bodies:
        number = site.current * period / site.breadth(body)
        if number <= STEADY_WAKE:
            yield TIDAL_REVERSAL.raised(
                f"The current past {body.called} reverses after {number:.3g} times its breadth across the "
                "stream: the wake of one tide meets the next.",
                body.path,
                value=number,
                limit=STEADY_WAKE,
            )


def tidal_period_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """Bodies in saline water of unknown tide."""
    saline = site.layout.water.salinity >= SEA_WATER
    if site.data.tidal_period is None and saline and site.bodies:
        yield TIDAL_PERIOD_UNKNOWN.raised(
            "No tidal period is given: whether the wakes of piers, outlines and islands are steady before "
            "the tide turns cannot be judged."
        )


def earth_rotation(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layouts with a Rossby number between one and ten."""
    number = _rossby(site, site.data.latitude)
    if number is not None and STRONG_ROTATION <= number < SLIGHT_ROTATION:
        yield EARTH_ROTATION.raised(_rotation_message(number), value=number, limit=SLIGHT_ROTATION)


def earth_rotation_strong(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layouts with a Rossby number below one."""
    number = _rossby(site, site.data.latitude)
    if number is not None and number < STRONG_ROTATION:
        yield EARTH_ROTATION_STRONG.raised(_rotation_message(number), value=number, limit=STRONG_ROTATION)


def latitude_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layouts so large and slow that the latitude would matter."""
    if site.data.latitude is not None:
        return
    number = _rossby(site, 90.0)
    if number is not None and number < SLIGHT_ROTATION:
        yield LATITUDE_UNKNOWN.raised(
            "No latitude is given: over this extent and at this current the earth's rotation may matter."
        )


def _rotation_message(number: float) -> str:
    return (
        f"Rossby number {number:.2g}: the earth's rotation turns the current over the extent of the layout."
    )


def _rossby(site: Site, latitude: float | None) -> float | None:
    """Rossby number [-]; None without latitude, current, extent or rotation."""
    extent = site.extent
    if latitude is None or site.current == 0.0 or extent == 0.0:
        return None
    rate = 2.0 * EARTH_RATE * abs(math.sin(math.radians(latitude)))
    return site.current / (rate * extent) if rate > 0.0 else None

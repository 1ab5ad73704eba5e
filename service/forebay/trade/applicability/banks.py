"""Banks and walls: sluggish water beside them, vortices against them, corners that stick out."""

import math
from collections.abc import Iterator

from forebay.flow.layout import Channel, Core, CoreModel, Corner, Vortex
from forebay.trade.applicability.geometry import (
    bank_distance,
    distance_to,
    element_bank_distance,
    ring_distance,
)
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

CORE_REACH = {CoreModel.RANKINE: 2.0, CoreModel.LAMB_OSEEN: 3.0}
"""Distance, in core radii, beyond which a wall leaves the core alone [-]."""

STRAIGHT = 180.0
"""Interior angle above which the velocity at a vertex is unbounded [deg]."""

BANK_SHEAR = WarningKind(
    code="bank-shear",
    severity=Severity.NOTE,
    meaning="water beside a bank is slower than the mean: the real zone of a bank intake is wider",
    threshold=(
        "distance to the bank at most the larger of the depth and Q / (2 pi h U); any distance "
        "without current"
    ),
    formula="at Q / (2 pi h U) the zone of an intake touches the bank; nearer, it draws from the bank itself",
    source="sink beside a wall (own check); slow bank water: open-channel hydraulics",
    unit="m",
)

CORE_NEAR_WALL = WarningKind(
    code="core-near-wall",
    severity=Severity.CAUTION,
    meaning="a vortex core reaches a wall, where its shape is not that of a free vortex",
    threshold="distance < 2 core radii (rankine) or 3 (lamb-oseen)",
    formula="strain by the image over vorticity a^2 / (8 d^2), 3 % at 2 a; exp(-d^2 / a^2) = 1e-4 at 3 a",
    source="Lamb-Oseen and Rankine vortex profiles (own check)",
    unit="m",
)

SALIENT_CORNER = WarningKind(
    code="salient-corner",
    severity=Severity.CAUTION,
    meaning=(
        "at a corner that sticks out into the water the velocity is unbounded; real water separates there"
    ),
    threshold="interior angle > 180 deg",
    formula="speed ~ r^(pi/alpha - 1)",
    source="corner flow (Batchelor 1967, section 6.5)",
    unit="deg",
)

CHANNEL_END_SPLIT = WarningKind(
    code="channel-end-split",
    severity=Severity.NOTE,
    meaning=(
        "without a current nothing decides how two channel ends share the net exchange: each is given half"
    ),
    threshold="zero ambient velocity in a channel, and a net discharge",
    formula="net discharge / 2 at each end",
    source="convention of this service",
    unit="m3/s",
)


def bank_shear(site: Site) -> Iterator[ApplicabilityWarning]:
    """Intakes that draw water from beside a bank."""
    for path, element in site.intakes():
        distance = element_bank_distance(site.layout.shore, element)
        if math.isinf(distance):
            continue
        reach = element.discharge / (2.0 * math.pi * site.layout.depth)
        limit = max(site.layout.depth, reach / site.current) if site.current > 0.0 else math.inf
        if distance <= limit:
            yield BANK_SHEAR.raised(
                f"{element.name!r} is {max(distance, 0.0):.3g} m from a bank and draws water from "
                "beside it, which is "
                "slower than the mean: its real capture zone is wider there.",
                path,
                value=max(distance, 0.0),
                limit=None if math.isinf(limit) else limit,
            )


def core_near_wall(site: Site) -> Iterator[ApplicabilityWarning]:
    """Vortices whose core reaches a bank, a pier or an outline."""
    for path, element in site.elements():
        if not isinstance(element, Vortex) or element.core is None:
            continue
        limit = _reach(element.core)
        walls = [distance_to(pier, element.at) for pier in site.layout.piers]
        walls += [ring_distance(element.at, outline.points) for outline in site.layout.outlines]
        distance = min([bank_distance(site.layout.shore, element.at), *walls])
        if distance < limit:
            yield CORE_NEAR_WALL.raised(
                f"The core of {element.name!r} reaches a wall {distance:.3g} m away ({limit:.3g} m "
                "are needed): a "
                "real vortex would be deformed there.",
                path,
                value=distance,
                limit=limit,
            )


def _reach(core: Core) -> float:
    return CORE_REACH[core.model] * core.radius


def salient_corner(site: Site) -> Iterator[ApplicabilityWarning]:
    """A corner of more than 180 degrees."""
    shore = site.layout.shore
    if isinstance(shore, Corner) and math.degrees(shore.interior_angle) > STRAIGHT:
        angle = math.degrees(shore.interior_angle)
        yield SALIENT_CORNER.raised(
            f"The corner of {angle:.4g} deg sticks out into the water: computed speeds grow without "
            "bound towards it, "
            "while real water separates.",
            ("shore", "interior_angle"),
            value=angle,
            limit=STRAIGHT,
        )


def channel_end_split(site: Site) -> Iterator[ApplicabilityWarning]:
    """A channel without current whose elements do not balance."""
    still = site.layout.ambient.velocity == 0j and isinstance(site.layout.shore, Channel)
    if still and site.net_outflow != 0.0:
        half = 0.5 * abs(site.net_outflow)
        yield CHANNEL_END_SPLIT.raised(
            "Nothing says how the two ends of the channel share the net exchange: each is given "
            f"half, {half:.3g} m3/s.",
            ("ambient", "velocity"),
            value=half,
        )

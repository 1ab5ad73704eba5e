"""An outfall is taken as a passive source: it pushes water aside but throws no jet."""

import math
from collections.abc import Iterator

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import LineSource, Source
from forebay.trade.applicability.geometry import ends_of
from forebay.trade.applicability.site import PortShape, Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

SPEED_RATIO = 1.0
"""Port speed over current above which the jet shapes the flow [-]."""

JET_LENGTHS = 5.0
"""Distance, in momentum lengths, within which an outfall is a jet [-]."""

JETS = "Fischer et al. 1979, Mixing in Inland and Coastal Waters, chapter 9; Jirka 2004"

OUTFALL_PASSIVE = WarningKind(
    code="outfall-passive",
    severity=Severity.NOTE,
    meaning="inflow to an intake is like a potential sink, outflow is a jet: a source only displaces water",
    threshold="always, for every source and line source",
    formula="momentum of the discharge left out",
    source=JETS,
)

OUTFALL_JET_SPEED = WarningKind(
    code="outfall-jet-speed",
    severity=Severity.CAUTION,
    meaning="the discharge leaves its port faster than the current: a jet",
    threshold="U0 / Ua > 1",
    formula="U0 = Q / port area, Ua the current",
    source=JETS,
    unit="1",
)

OUTFALL_JET_REACH = WarningKind(
    code="outfall-jet-reach",
    severity=Severity.CAUTION,
    meaning="something of interest lies where the outfall's momentum still rules",
    threshold="distance < 5 l_M",
    formula=(
        "round port: l_M = sqrt(Q U0) / Ua; slot: l_M = m / Ua^2, m = U0 Q / length; U0 = Q / port area; "
        "the discharge itself counts over l_Q = sqrt(port area)"
    ),
    source=JETS,
    unit="m",
)


def outfall_passive(site: Site) -> Iterator[ApplicabilityWarning]:
    """Every outfall."""
    for path, element in site.outfalls():
        yield OUTFALL_PASSIVE.raised(
            f"{element.name!r} only displaces water here: its momentum, buoyancy and mixing are left out.",
            path,
        )


def outfall_jet_speed(site: Site) -> Iterator[ApplicabilityWarning]:
    """Outfalls of known port area that are faster than the current."""
    for path, element, area in _ports(site):
        speed, current = element.discharge / area, site.current
        if speed > SPEED_RATIO * current:
            yield OUTFALL_JET_SPEED.raised(
                f"{element.name!r} leaves its port at {speed:.2g} m/s into a current of {current:.2g} "
                "m/s: a jet.",
                (*path,),
                value=speed / current if current > 0.0 else None,
                limit=SPEED_RATIO,
            )


def outfall_jet_reach(site: Site) -> Iterator[ApplicabilityWarning]:
    """Outfalls of known port area with something within five momentum lengths."""
    for path, element, area in _ports(site):
        nearest = _nearest(site, element)
        current = site.current
        limit = JET_LENGTHS * momentum_length(site, element, area) if current > 0.0 else math.inf
        if nearest is not None and nearest[0] < limit:
            reach = (
                f"closer than {limit:.3g} m, where its jet rules" if current > 0.0 else "in still water a jet"
            )
            yield OUTFALL_JET_REACH.raised(
                f"{nearest[1]} is {nearest[0]:.3g} m from {element.name!r}: {reach}.",
                path,
                value=nearest[0],
                limit=limit if current > 0.0 else None,
            )


def momentum_length(site: Site, element: Source | LineSource, area: float) -> float:
    """Distance over which an outfall's momentum rules, l_M [m]; area : of its port [m2]."""
    speed = element.discharge / area
    slot = isinstance(element, LineSource) and site.data.port_shapes.get(element.name) is not PortShape.ROUND
    if slot and isinstance(element, LineSource):
        return speed * element.discharge / abs(element.end - element.start) / site.current**2
    return math.sqrt(element.discharge * speed) / site.current


def _ports(site: Site) -> Iterator[tuple[tuple[str | int, ...], Source | LineSource, float]]:
    for path, element in site.outfalls():
        area = site.data.port_areas.get(element.name)
        if area is not None:
            yield path, element, area


def _nearest(site: Site, element: Source | LineSource) -> tuple[float, str] | None:
    """Distance [m] to the nearest other element, pier or point of the answer, and what it is."""
    found = [site.nearest_thing(end, besides=element) for end in ends_of(element)]
    near = [(distance, repr(name)) for distance, name in filter(None, found)]
    points = site.readings.points
    if points is not None and points.size > 0:
        near.append((_least_distance(element, points.ravel()), "a point of the answer"))
    return min(near, default=None)


def _least_distance(element: Source | LineSource, places: ComplexArray) -> float:
    """Distance from an outfall to the nearest of places, shape (n,) [m]."""
    start, end = ends_of(element)[0], ends_of(element)[-1]
    chord = end - start
    share = np.clip(((places - start) * chord.conjugate()).real / abs(chord) ** 2, 0.0, 1.0) if chord else 0.0
    return float(np.min(np.abs(places - start - share * chord)))

"""Water of two densities: which layer an intake draws from, and whether an outfall's water rises."""

import math
from collections.abc import Iterator

from forebay.flow.layout import LineSink, Sink
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.water import STANDARD_GRAVITY, water_properties

POINT_FACTOR = 0.69
"""Critical distance of a point sink over (Q^2/g')^(1/5) [-]: Q^2/(g' h^5) = 6.5."""

LINE_FACTOR = 2.3
"""q^2/(g' h^3) at which a line sink begins to draw the other layer [-]."""

MARGIN = 1.5
"""Distances below this multiple of the critical one leave the layer in doubt [-]."""

SPREADING = 0.1
"""Richardson number above which buoyant water spreads at the surface [-]."""

LAYER_WITHDRAWAL = WarningKind(
    code="layer-withdrawal",
    severity=Severity.CAUTION,
    meaning="the interface between layers is so near that which of them feeds the intake is in doubt",
    threshold="distance from the opening to the interface < 1.5 h_c; without elevations, the whole depth",
    formula="point: h_c = 0.69 (Q^2/g')^(1/5); line: h_c = (q^2/(2.3 g'))^(1/3); g' = g drho/rho",
    source="Craya 1949; Lubin and Springer 1967; Wood 2001 (from memory)",
    unit="m",
)

BUOYANT_SPREADING = WarningKind(
    code="buoyant-spreading",
    severity=Severity.CAUTION,
    meaning="an outfall's water differs so much in density that it rises or sinks and spreads by itself",
    threshold="g' h / U^2 > 0.1; any difference without current",
    formula="g' = g |drho| / rho; with the port known also F' = U0 / sqrt(g' D)",
    source="buoyant surface spreading (Fischer et al. 1979, chapter 9; threshold from memory, 0.1 to 1)",
    unit="1",
)


def layer_withdrawal(site: Site) -> Iterator[ApplicabilityWarning]:
    """Intakes with an interface within one and a half critical distances."""
    reduced = _reduced_gravity(site, site.data.density_difference)
    if reduced is None:
        return
    for path, element in site.intakes():
        limit = MARGIN * critical_distance(element, reduced)
        distance, known = _to_interface(site, element)
        if distance < limit:
            yield LAYER_WITHDRAWAL.raised(
                f"The interface is {known} {distance:.3g} m from {element.name!r}; closer than {limit:.3g} m "
                "(1.5 critical distances) either layer may feed it.",
                path,
                value=distance,
                limit=limit,
            )


def critical_distance(element: Sink | LineSink, reduced_gravity: float) -> float:
    """Distance to an interface at which an intake begins to draw the layer beyond it [m].

    reduced_gravity : g' [m/s2];  a line sink counts with its discharge per length of the line
    """
    if isinstance(element, Sink):
        return float(POINT_FACTOR * (element.discharge**2 / reduced_gravity) ** 0.2)
    flux = element.discharge / abs(element.end - element.start)
    return float((flux**2 / (LINE_FACTOR * reduced_gravity)) ** (1.0 / 3.0))


def _to_interface(site: Site, element: Sink | LineSink) -> tuple[float, str]:
    """Distance to the interface [m], or the largest that it can have where elevations are unknown."""
    depth, interface = site.layout.depth, site.data.interface_elevation
    elevation = site.data.elevations.get(element.name)
    if elevation is not None and interface is not None:
        return abs(elevation - interface), ""
    known = elevation if interface is None else interface
    if known is None:
        return depth, "at most"
    return max(known, depth - known), "at most"


def buoyant_spreading(site: Site) -> Iterator[ApplicabilityWarning]:
    """Outfalls whose water is lighter or heavier than the water around."""
    for path, element in site.outfalls():
        reduced = _reduced_gravity(site, site.data.excess_densities.get(element.name))
        if reduced is None:
            continue
        current, depth = site.current, site.layout.depth
        number = reduced * depth / current**2 if current > 0.0 else None
        if number is None or number > SPREADING:
            rises = "rises" if site.data.excess_densities[element.name] < 0.0 else "sinks"
            yield BUOYANT_SPREADING.raised(
                f"The water of {element.name!r} {rises} and spreads in a layer of its own"
                f"{_densimetric(site, element.name, element.discharge, reduced)}; the model mixes it over "
                "the depth at once.",
                path,
                value=number,
                limit=SPREADING,
            )


def _densimetric(site: Site, name: str, discharge: float, reduced: float) -> str:
    area = site.data.port_areas.get(name)
    if area is None:
        return ""
    diameter = math.sqrt(4.0 * area / math.pi)
    return f" (densimetric Froude number {discharge / area / math.sqrt(reduced * diameter):.2g})"


def _reduced_gravity(site: Site, difference: float | None) -> float | None:
    """Reduced gravity of a density difference [m/s2]; None without one."""
    if not difference:
        return None
    water = site.layout.water
    return STANDARD_GRAVITY * abs(difference) / water_properties(water.temperature, water.salinity).density

"""What is not known of a site and would have to be, for the other rules to be evaluated."""

from collections.abc import Iterator
from dataclasses import replace

from forebay.flow.errors import Path
from forebay.flow.layout import Sink
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind


def _unknown(code: str, datum: str, needed_for: str) -> WarningKind:
    return WarningKind(
        code=code,
        severity=Severity.NOTE,
        meaning=f"{datum} is not given, so that {needed_for} cannot be judged",
        threshold="datum missing",
        formula="none",
        source="convention of this service",
    )


BED_FRICTION_UNKNOWN = _unknown(
    "bed-friction-unknown", "bed friction", "friction length, wake of piers and transverse mixing"
)
PORT_AREA_UNKNOWN = _unknown("port-area-unknown", "port area of an outfall", "the reach of its jet")
WIND_UNKNOWN = _unknown("wind-unknown", "wind", "drift of the surface")
DENSITY_DIFFERENCE_UNKNOWN = _unknown(
    "density-difference-unknown", "density difference", "withdrawal from layers and spreading of warm water"
)
DEPTH_RANGE_UNKNOWN = _unknown("depth-range-unknown", "range of depth", "the effect of an uneven bed")
INTERFACE_UNKNOWN = _unknown(
    "interface-unknown", "elevation of the interface between layers", "how near it is to an intake"
)
INTAKE_ELEVATION_UNKNOWN = _unknown(
    "intake-elevation-unknown", "elevation of an intake", "whether its near field reaches one depth or two"
)

WATER_TEMPERATURE_ASSUMED = WarningKind(
    code="water-temperature-assumed",
    severity=Severity.NOTE,
    meaning="no water temperature is given: density and viscosity are those at the default temperature",
    threshold="temperature missing where an answer depends on it; value: the temperature assumed [Cel]",
    formula="none",
    source="convention of this service",
    unit="Cel",
)


def _message(kind: WarningKind) -> str:
    return f"{kind.meaning[0].upper()}{kind.meaning[1:]}."


def bed_friction_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """No bed friction."""
    if site.data.bed_friction is None:
        yield BED_FRICTION_UNKNOWN.raised(_message(BED_FRICTION_UNKNOWN))


def port_area_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """Outfalls without a port area."""
    for path, element in site.outfalls():
        if element.name not in site.data.port_areas:
            yield _of(PORT_AREA_UNKNOWN, element.name, path)


def wind_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """No wind."""
    if site.data.wind_speed is None:
        yield WIND_UNKNOWN.raised(_message(WIND_UNKNOWN))


def density_difference_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """No density difference."""
    if site.data.density_difference is None:
        yield DENSITY_DIFFERENCE_UNKNOWN.raised(_message(DENSITY_DIFFERENCE_UNKNOWN))


def interface_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """Layers of known densities, with an intake, whose interface is not known."""
    stratified = bool(site.data.density_difference) and any(site.intakes())
    if stratified and site.data.interface_elevation is None:
        yield INTERFACE_UNKNOWN.raised(_message(INTERFACE_UNKNOWN))


def depth_range_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """No range of depth."""
    if site.data.depth_range is None:
        yield DEPTH_RANGE_UNKNOWN.raised(_message(DEPTH_RANGE_UNKNOWN), ("depth",))


def intake_elevation_unknown(site: Site) -> Iterator[ApplicabilityWarning]:
    """Compact intakes without an elevation."""
    for path, element in site.elements():
        if isinstance(element, Sink) and element.name not in site.data.elevations:
            yield _of(INTAKE_ELEVATION_UNKNOWN, element.name, path)


def water_temperature_assumed(site: Site) -> Iterator[ApplicabilityWarning]:
    """An answer that depends on a temperature that the layout does not give."""
    assumed = site.readings.assumed_temperature
    if assumed is not None:
        yield temperature_assumed(assumed, ("water", "temperature"))


def temperature_assumed(temperature: float, path: Path, *, in_layout: bool = True) -> ApplicabilityWarning:
    """The note that a temperature [degC] is the default one; `path` from the layout or from the request."""
    message = f"No water temperature is given: density and viscosity are those at {temperature:g} degC."
    raised = WATER_TEMPERATURE_ASSUMED.raised(message, path, value=temperature)
    return replace(raised, in_layout=in_layout)


def _of(kind: WarningKind, name: str, path: Path) -> ApplicabilityWarning:
    return kind.raised(f"{name!r}: {kind.meaning}.", path)

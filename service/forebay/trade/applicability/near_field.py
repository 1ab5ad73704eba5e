"""Near a compact intake or outfall the flow has a vertical part, which the depth mean cannot show."""

from collections.abc import Iterator

import numpy as np

from forebay.flow.layout import Sink, Source
from forebay.flow.point_intake.reach import depth_mean_error, near_field_reach
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

REACH = 2.0
"""Reach of the near field of an opening at the bed or surface, in depths [-]: 1 % error beyond."""

MID_DEPTH_REACH = 1.0
"""Reach of the near field of an opening at mid-depth, in depths [-]: 1 % error beyond."""

TOLERATED = 0.01
"""Relative error of the depth mean from which values count as in the near field of a known opening [-]."""

RATIO = "1 + 2 sum cos(n pi z0/h) cos(n pi z/h) (n pi r/h) K1(n pi r/h), speed over Q / (2 pi r h)"
SOURCE = "image sum for a point opening between rigid planes (method of images; own check)"

NEAR_FIELD = WarningKind(
    code="near-field",
    severity=Severity.NOTE,
    meaning=(
        "within a depth or two of a compact opening the speed differs from the depth mean by up to its whole"
    ),
    threshold="always, for every point source and sink; value: one depth, limit: two depths [m]",
    formula=RATIO,
    source=SOURCE,
    unit="m",
)

NEAR_FIELD_OVERLAP = WarningKind(
    code="near-field-overlap",
    severity=Severity.CAUTION,
    meaning=(
        "something stands in the near field of a compact opening, so that depth means do not "
        "describe their effect"
    ),
    threshold="distance below two depths (below one depth if the opening is at mid-depth)",
    formula=RATIO,
    source=SOURCE,
    unit="m",
)

NEAR_FIELD_RESULT = WarningKind(
    code="near-field-result",
    severity=Severity.CAUTION,
    meaning="values were asked for in the near field of a compact opening",
    threshold="distance below two depths, the elevation of the opening unknown",
    formula=RATIO,
    source=SOURCE,
    unit="m",
)

NEAR_FIELD_ERROR = WarningKind(
    code="near-field-error",
    severity=Severity.CAUTION,
    meaning="depth means were asked for near an opening of known elevation; value: their error there",
    threshold="largest |ratio - 1| over the depth at the nearest point > 0.01",
    formula=RATIO,
    source=SOURCE,
    unit="1",
)


def near_field(site: Site) -> Iterator[ApplicabilityWarning]:
    """How far from each compact element the plane answer is to be distrusted."""
    depth = site.layout.depth
    for path, element in site.compact():
        if element.name in site.data.elevations:
            reach = _reach(site, element)
            yield NEAR_FIELD.raised(
                f"Closer than {reach:.3g} m to {element.name!r} speeds differ from the depth mean by more "
                "than 1 %.",
                path,
                value=reach,
            )
            continue
        yield NEAR_FIELD.raised(
            f"Closer than {REACH * depth:g} m to {element.name!r} (two depths; {depth:g} m if it "
            "opens at mid-depth) "
            "the flow is not uniform over the depth: speeds there are not those of the depth mean.",
            path,
            value=MID_DEPTH_REACH * depth,
            limit=REACH * depth,
        )


def near_field_overlap(site: Site) -> Iterator[ApplicabilityWarning]:
    """Another element or a pier within two depths of a compact element."""
    for path, element in site.compact():
        limit = _reach(site, element)
        nearest = site.nearest_thing(element.at, besides=element)
        if nearest is not None and nearest[0] < limit:
            known = element.name in site.data.elevations
            judged = "in its near field" if known else _judged(nearest[0], site.layout.depth)
            yield NEAR_FIELD_OVERLAP.raised(
                f"{nearest[1]!r} is {nearest[0]:.3g} m from {element.name!r}, {judged}.",
                path,
                value=nearest[0],
                limit=limit,
            )


def near_field_result(site: Site) -> Iterator[ApplicabilityWarning]:
    """Values asked for within two depths of a compact element."""
    points, limit = site.readings.points, REACH * site.layout.depth
    if points is None or points.size == 0:
        return
    for path, element in site.compact():
        if element.name in site.data.elevations:
            continue
        distances = np.abs(np.asarray(points).ravel() - element.at)
        nearest, count = float(distances.min()), int(np.count_nonzero(distances < limit))
        if nearest < limit:
            yield NEAR_FIELD_RESULT.raised(
                f"{count} of {distances.size} points lie within two depths of {element.name!r}, the "
                "nearest at "
                f"{nearest:.3g} m, {_judged(nearest, site.layout.depth)}.",
                path,
                value=nearest,
                limit=limit,
            )


def near_field_error(site: Site) -> Iterator[ApplicabilityWarning]:
    """Error of the depth mean at the point nearest to each opening of known elevation."""
    points = site.readings.points
    if points is None or points.size == 0 or site.readings.resolves_openings:
        return
    for path, element in site.compact():
        elevation = site.data.elevations.get(element.name)
        if elevation is None:
            continue
        nearest = float(np.abs(np.asarray(points).ravel() - element.at).min())
        error = depth_mean_error(nearest, elevation, site.layout.depth)
        if error > TOLERATED:
            yield NEAR_FIELD_ERROR.raised(
                f"{nearest:.3g} m from {element.name!r}, the nearest point asked for, the speed that it "
                f"makes differs over the depth from the depth mean by up to {100.0 * error:.3g} %; the model "
                "point-intake-3d of field/sample gives it.",
                path,
                value=error,
                limit=TOLERATED,
            )


def _reach(site: Site, element: Source | Sink) -> float:
    """Distance within which depth means do not hold [m]; two depths where the elevation is unknown."""
    elevation = site.data.elevations.get(element.name)
    depth = site.layout.depth
    return REACH * depth if elevation is None else near_field_reach(elevation, depth, TOLERATED)


def _judged(distance: float, depth: float) -> str:
    if distance < MID_DEPTH_REACH * depth:
        return f"less than one depth ({depth:g} m): in its near field wherever it opens"
    return f"less than two depths ({REACH * depth:g} m): in its near field if it opens at the bed or surface"

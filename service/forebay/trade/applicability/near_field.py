"""Near a compact intake or outfall the flow has a vertical part, which the depth mean cannot show."""

from collections.abc import Iterator

import numpy as np

from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

REACH = 2.0
"""Reach of the near field of an opening at the bed or surface, in depths [-]: 1 % error beyond."""

MID_DEPTH_REACH = 1.0
"""Reach of the near field of an opening at mid-depth, in depths [-]: 1 % error beyond."""

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
    threshold="distance below two depths (below one depth if the opening is at mid-depth)",
    formula=RATIO,
    source=SOURCE,
    unit="m",
)


def near_field(site: Site) -> Iterator[ApplicabilityWarning]:
    """How far from each compact element the plane answer is to be distrusted."""
    depth = site.layout.depth
    for path, element in site.compact():
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
    limit = REACH * site.layout.depth
    for path, element in site.compact():
        nearest = site.nearest_thing(element.at, besides=element)
        if nearest is not None and nearest[0] < limit:
            judged = _judged(nearest[0], site.layout.depth)
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


def _judged(distance: float, depth: float) -> str:
    if distance < MID_DEPTH_REACH * depth:
        return f"less than one depth ({depth:g} m): in its near field wherever it opens"
    return f"less than two depths ({REACH * depth:g} m): in its near field if it opens at the bed or surface"

"""Walls that were solved for: the bound of the error, and cuts that meet the land at a blunt angle."""

import math
from collections.abc import Iterator

from forebay.flow.layout import OpenEdge, Surveyed
from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind

WIDE = 1e-3
"""Bound over the flow through from which an answer is not to three figures [-]."""

SQUARE = 90.0
"""Angle of the water between an open edge and the land beyond which the speed there is unbounded [deg]."""

ROUNDING = 1e-3
"""Angles that little above a right one are drawn square [deg]."""

BOUNDARY_BOUND_WIDE = WarningKind(
    code="boundary-bound-wide",
    severity=Severity.CAUTION,
    meaning="flows between walls and islands are certain to less than three figures",
    threshold="bound > 1e-3 of the flow through",
    formula="bound of the stream function over the flow through; twice that for the flux between two points",
    source="maximum principle for harmonic functions (own check)",
    unit="1",
)

BOUNDARY_BOUND = WarningKind(
    code="boundary-bound",
    severity=Severity.NOTE,
    meaning="the bound of the error that solved walls leave is above the tolerance asked for",
    threshold="bound > tolerance, up to 1e-3 of the flow through",
    formula="bound of the stream function over the flow through; the error itself is usually far below it",
    source="maximum principle for harmonic functions (own check)",
    unit="1",
)

OPEN_EDGE_BLUNT = WarningKind(
    code="open-edge-blunt",
    severity=Severity.NOTE,
    meaning="where an open edge meets the land at a blunt angle the computed speed is unbounded",
    threshold="angle between edge and land, in the water, > 90 deg by more than 0.001; equipotential profile",
    formula="speed ~ r^(pi / (2 alpha) - 1)",
    source="corner of an equipotential and a wall (own check); draw cuts square to the banks",
    unit="deg",
)


def boundary_bound_wide(site: Site) -> Iterator[ApplicabilityWarning]:
    """Solved walls whose bound spoils the third figure."""
    bound = site.readings.boundary_bound
    if bound is not None and bound > max(WIDE, site.layout.tolerance):
        yield BOUNDARY_BOUND_WIDE.raised(
            f"The stream function is known to {bound:.2g} of the flow through: ask for fewer corners "
            "(`simplify`) or look at `boundary`.",
            ("tolerance",),
            value=bound,
            limit=max(WIDE, site.layout.tolerance),
        )


def boundary_bound(site: Site) -> Iterator[ApplicabilityWarning]:
    """Solved walls whose bound misses the tolerance."""
    bound, tolerance = site.readings.boundary_bound, site.layout.tolerance
    if bound is not None and tolerance < bound <= max(WIDE, tolerance):
        yield BOUNDARY_BOUND.raised(
            f"The proven bound is {bound:.2g} of the flow through; `boundary` says where it comes from.",
            ("tolerance",),
            value=bound,
            limit=tolerance,
        )


def open_edge_blunt(site: Site) -> Iterator[ApplicabilityWarning]:
    """Cuts that are not square to the land at one of their ends."""
    shore = site.layout.shore
    if not isinstance(shore, Surveyed):
        return
    for index, edge in enumerate(shore.edges):
        angle = max(_angles(shore, edge))
        if angle > SQUARE + ROUNDING and edge.profile == "equipotential":
            yield OPEN_EDGE_BLUNT.raised(
                f"An end of {edge.name} meets the land at {angle:.4g} deg: speeds there are not to be used.",
                ("shore", "open_edges", index),
                value=angle,
                limit=SQUARE,
            )


def _angles(shore: Surveyed, edge: OpenEdge) -> tuple[float, float]:
    """Angles of the water at both ends of an open edge [deg]."""
    outer, last = shore.outer, edge.first + edge.count
    return _corner(outer, edge.first), _corner(outer, last % len(outer))


def _corner(ring: tuple[complex, ...], vertex: int) -> float:
    """Interior angle at a vertex of an anticlockwise ring [deg]."""
    before, at, after = ring[vertex - 1], ring[vertex], ring[(vertex + 1) % len(ring)]
    ratio = (before - at) / (after - at)
    return math.degrees(math.atan2(ratio.imag, ratio.real)) % 360.0

"""Whether and when released water reaches intakes: one analysis for every kind of release."""

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.arrivals.dividing import scene_of
from forebay.flow.arrivals.fates import Follower
from forebay.flow.arrivals.findings import ArrivalRules, Findings, reported
from forebay.flow.arrivals.lines import find_line, find_outfall
from forebay.flow.arrivals.patches import find_patch
from forebay.flow.arrivals.points import find_point
from forebay.flow.arrivals.release import AlongLine, AtPoint, FromOutfall, OverDisc, OverPolygon, Release
from forebay.flow.arrivals.result import ReleaseArrivals
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch

_POINT_TOLERANCE = 1e-9
"""Of the tracing of single points."""
_COARSEST, _FINEST = 1e-6, 1e-10
_PART = 1e-3
"""Tolerance of the tracing over that of the shares, within the bounds above [-]."""


def arrive(
    model: FlowModel, search: StagnationSearch, releases: tuple[Release, ...], rules: ArrivalRules
) -> tuple[ReleaseArrivals, ...]:
    """Arrivals, outcomes and curves of releases.

    Parameters
    ----------
    model : the flow
    search : all its stagnation points; if not complete, the answers say `incomplete` and state no error
    releases : points, lines, patches and outfalls
    rules : intakes, transects, horizon and accuracy

    Returns
    -------
    One ReleaseArrivals for each release, in order.

    Notes
    -----
    Advection by the depth-mean flow alone. Shares of lines and outfalls are exact but for the place of the
    divides (1e-9); those of patches, and all curves, are refined until doubling the streamlines changes them
    by less than `rules.tolerance`, which the errors state.
    """
    scene = scene_of(model, search, _places(releases), rules.transects)
    tolerance = min(_COARSEST, max(_FINEST, _PART * rules.tolerance))
    many = Follower(scene, rules.transects, tolerance)
    single = Follower(scene, rules.transects, _POINT_TOLERANCE)
    return tuple(reported(release, _found(release, many, single, rules), rules) for release in releases)


def _places(releases: tuple[Release, ...]) -> ComplexArray:
    """Places that hold all releases between them [m]."""
    places: list[complex] = []
    for release in releases:
        match release.place:
            case AtPoint(at=at):
                places.append(at)
            case AlongLine(points=points) | OverPolygon(points=points):
                places += points
            case OverDisc(centre=centre, radius=radius):
                places += [centre + radius * 1j**k for k in range(4)]
            case FromOutfall():
                continue
    return np.array(places, dtype=np.complex128)


def _found(release: Release, many: Follower, single: Follower, rules: ArrivalRules) -> Findings:
    match release.place:
        case AtPoint(at=at):
            return find_point(single, at)
        case AlongLine():
            return find_line(many, release.place, rules)
        case OverDisc() | OverPolygon():
            return find_patch(many, release.place, rules)
        case FromOutfall(outfall=name):
            return find_outfall(many, name, rules)

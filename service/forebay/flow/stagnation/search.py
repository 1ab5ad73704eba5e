"""The search: picks the method, adds up the weights, puts the points in order."""

from forebay.flow.model import FlowModel
from forebay.flow.stagnation.describe import describe
from forebay.flow.stagnation.rational import RationalSearch
from forebay.flow.stagnation.result import SearchMethod, StagnationSearch, Window


def search_model(model: FlowModel, window: Window | None = None) -> StagnationSearch:
    """Stagnation points of a flow, in a window or in all of its water."""
    found = search_rational(model)
    return found if window is None else restricted(found, window)


def restricted(found: StagnationSearch, window: Window) -> StagnationSearch:
    """The points of a search that lie in a window; if nothing is missing in all, nothing is in the window."""
    points = tuple(point for point in found.points if window.contains(point.at))
    missing = found.expected_count - found.found_count
    return StagnationSearch(
        points=points,
        expected_count=len(points) + missing,
        found_count=len(points),
        complete=found.complete,
        method=found.method,
        degree=found.degree,
        weight=found.weight,
        unresolved=found.unresolved,
    )


def search_rational(model: FlowModel) -> StagnationSearch:
    """All stagnation points of a rational model in all of its water."""
    search = RationalSearch(model)
    zeros = search.run()
    weight = sum(zero.weight for zero in zeros)
    complete = weight == search.degree and search.unproven == 0
    points = sorted((describe(model, zero) for zero in zeros), key=lambda p: (p.at.real, p.at.imag))
    missing = 0 if complete else max(1, (search.degree - weight + 1) // 2)
    return StagnationSearch(
        points=tuple(points),
        expected_count=len(points) + missing,
        found_count=len(points),
        complete=complete,
        method=SearchMethod.DEGREE,
        degree=search.degree,
        weight=weight,
    )

"""The search: picks the method, adds up the weights, puts the points in order."""

from forebay.flow.model import FlowModel
from forebay.flow.stagnation.corners import corner_zeros
from forebay.flow.stagnation.count import UncountableFieldError
from forebay.flow.stagnation.describe import Zero, describe
from forebay.flow.stagnation.general import GeneralSearch
from forebay.flow.stagnation.rational import RationalSearch
from forebay.flow.stagnation.regions import Region, default_region, region_of
from forebay.flow.stagnation.result import SearchMethod, StagnationPoint, StagnationSearch, Window


def search_model(model: FlowModel, window: Window | None = None) -> StagnationSearch:
    """Stagnation points of a flow, in a window or in all of its water.

    Parameters
    ----------
    model : the flow
    window : rectangle of the site; default all of the water where W_tau is rational, else `default_region`

    Notes
    -----
    Where the velocity is rational everything is found and counted, and the window only picks. Water that
    stands still everywhere has no stagnation points to list: no points, and `complete` false.
    """
    if model.is_rational:
        found = _search_rational(model)
        return found if window is None else restricted(found, window)
    region = default_region(model) if window is None else region_of(model, window)
    if region.size == 0.0:  # the window lies on land
        return StagnationSearch((), 0, 0, complete=True, method=SearchMethod.WINDING, degree=0, weight=0)
    found = _search_general(model, region)
    return found if window is None else restricted(found, window)


def restricted(found: StagnationSearch, window: Window) -> StagnationSearch:
    """The points that lie in a window; where nothing is missing in all, nothing is missing in the window."""
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


def _search_rational(model: FlowModel) -> StagnationSearch:
    try:
        search = RationalSearch(model)
    except UncountableFieldError:
        return StagnationSearch((), 0, 0, complete=False, method=SearchMethod.DEGREE, degree=0, weight=0)
    zeros = search.run()
    zeros += corner_zeros(model, zeros)
    points = describe(model, zeros)
    # weights of zeros of a rational flow are never negative: proven ones that make up the degree are all
    return _answer(points, zeros, SearchMethod.DEGREE, search.degree, proven=True)


def _search_general(model: FlowModel, region: Region) -> StagnationSearch:
    search = GeneralSearch(model, region)
    zeros = search.run()
    zeros += corner_zeros(model, zeros)
    proven = search.degree is not None and not search.unresolved
    found = _answer(describe(model, zeros), zeros, SearchMethod.WINDING, search.degree or 0, proven=proven)
    return StagnationSearch(
        points=found.points,
        expected_count=found.expected_count,
        found_count=found.found_count,
        complete=found.complete,
        method=found.method,
        degree=found.degree,
        weight=found.weight,
        unresolved=tuple(search.unresolved),
    )


def _answer(
    points: tuple[StagnationPoint, ...], zeros: list[Zero], method: SearchMethod, degree: int, *, proven: bool
) -> StagnationSearch:
    weight = sum(zero.weight for zero in zeros)
    complete = proven and weight == degree
    missing = 0 if complete else max(1, (degree - weight + 1) // 2)
    return StagnationSearch(
        points=points,
        expected_count=len(points) + missing,
        found_count=len(points),
        complete=complete,
        method=method,
        degree=degree,
        weight=weight,
    )

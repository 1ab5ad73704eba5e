"""Use case: whether and when released water reaches each intake."""

from forebay.flow.arrivals.analysis import arrive
from forebay.flow.arrivals.findings import ArrivalRules
from forebay.flow.arrivals.release import FromOutfall, Release
from forebay.flow.arrivals.result import ReleaseArrivals
from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Layout, LineSource, Source
from forebay.flow.model import compile_layout
from forebay.workflows.stagnation import search_stagnation


def compute_arrivals(
    layout: Layout, releases: tuple[Release, ...], rules: ArrivalRules
) -> tuple[ReleaseArrivals, ...]:
    """Arrivals of releases at intakes and transects, and what becomes of the rest.

    Parameters
    ----------
    layout : the site
    releases : what is let go
    rules : intakes that count, transects, horizon, accuracy

    Returns
    -------
    One ReleaseArrivals for each release, in order; one that cannot be answered says why in its status.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    UnknownNameError : an intake is not a sink of the layout, or an outfall no source; `path` says which
    """
    for index, name in enumerate(rules.intakes):
        if name not in layout.intakes:
            raise UnknownNameError("No sink or line sink has this name.", ("intakes", index))
    sources = {element.name for element in layout.elements if isinstance(element, Source | LineSource)}
    for index, release in enumerate(releases):
        if isinstance(release.place, FromOutfall) and release.place.outfall not in sources:
            raise UnknownNameError("No source or line source has this name.", ("releases", index, "outfall"))
    model = compile_layout(layout)
    return arrive(model, search_stagnation(layout), releases, rules)

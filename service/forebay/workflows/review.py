"""Review of a layout: where its numbers should not be trusted."""

from forebay.flow.layout import Layout
from forebay.flow.settling import grounded
from forebay.trade.applicability.review import evaluate
from forebay.trade.applicability.site import Readings, Site, SiteData
from forebay.trade.applicability.warning import ApplicabilityWarning


def review_layout(
    layout: Layout, readings: Readings | None = None, *, data: SiteData | None = None
) -> tuple[ApplicabilityWarning, ...]:
    """Applicability warnings of a layout, and of an answer where one is at hand.

    Parameters
    ----------
    layout : Layout
        The site; nothing is computed of its flow.
    readings : Readings, optional
        The answer at hand. Without one the layout is checked first, since nothing has yet.
    data : SiteData, optional
        Bed friction, port areas, wind and so on; what is missing is itself a note.

    Returns
    -------
    tuple of ApplicabilityWarning
        The most serious first; paths are steps from the layout, values and limits in SI.

    Raises
    ------
    LayoutError
        If the layout describes something that cannot be, as `grounded`.
    """
    if readings is None:
        grounded(layout)
    return evaluate(Site(layout, data or SiteData(), readings or Readings()))

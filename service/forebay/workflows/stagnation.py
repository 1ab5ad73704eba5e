"""Use case: every stagnation point of a layout, with the proof that none is missing."""

from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationSearch, Window
from forebay.flow.stagnation.search import search_model


def search_stagnation(layout: Layout, window: Window | None = None) -> StagnationSearch:
    """Stagnation points of a layout, each with a proven disc, and their independent count.

    Parameters
    ----------
    layout : the site
    window : rectangle to which the answer is restricted; default all of the water where the velocity is
    rational,
        else a generous region about the elements (see `flow.stagnation.regions`)

    Returns
    -------
    StagnationSearch; `complete` is false rather than the list silently short.

    Raises
    ------
    LayoutError : the layout cannot be
    """
    return search_model(compile_layout(layout), window)

"""Use case: every stagnation point of a layout, with the proof that none is missing."""

from functools import lru_cache

from forebay.flow.layout import Layout, Surveyed
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationSearch, Window
from forebay.flow.stagnation.search import restricted, search_model

_REMEMBERED = 32
"""Searches kept: one request asks several questions of one layout."""


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
    if window is not None and isinstance(layout.shore, Surveyed):  # searched as a whole anyway
        return restricted(_searched(layout, None), window)
    return _searched(layout, window)


@lru_cache(maxsize=_REMEMBERED)
def _searched(layout: Layout, window: Window | None) -> StagnationSearch:
    return search_model(compile_layout(layout), window)

"""Integrate along contours: circulation, flux and discharge, element by element."""

from collections.abc import Iterable

from forebay.flow.contour import ContourIntegral, integrate_contour
from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.flow.paths import Contour


def integrate_contours(layout: Layout, contours: Iterable[Contour]) -> tuple[ContourIntegral, ...]:
    """Circulation, flux and discharge along contours, in their order.

    Parameters
    ----------
    layout : the site;  contours : the paths, x + iy [m]

    Returns
    -------
    One `ContourIntegral` for each; a contour through a point element or over land has a status and no values.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    """
    model = compile_layout(layout)
    return tuple(integrate_contour(model, contour) for contour in contours)

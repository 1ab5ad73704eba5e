"""Bound of the error that solved walls leave in the flow."""

from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.flow.sheets.bound import BoundaryBound


def bound_boundary(layout: Layout) -> BoundaryBound | None:
    """Bound of the flow along outlines and surveyed rings; None where every wall is met exactly.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    """
    return compile_layout(layout).bound

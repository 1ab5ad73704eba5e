"""Draw the flow net of a layout."""

from forebay.charts.elements import LONGEST_NAME
from forebay.charts.flow_net import draw_scene, map_aspect
from forebay.charts.options import FlowNetOptions, Layer, Picture, Scene
from forebay.charts.sheet import shortened
from forebay.charts.window import choose_window
from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import Layout, LineSink, Sink
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.result import StagnationPoint, Window
from forebay.flow.withdrawal.result import WithdrawalStatus
from forebay.workflows.stagnation import search_stagnation
from forebay.workflows.withdrawal import trace_withdrawal

Notes = tuple[str, ...]

MORE_POINTS = "There may be more stagnation points than shown: the count does not close."

UNCERTAIN = frozenset({WithdrawalStatus.INCOMPLETE, WithdrawalStatus.UNRESOLVED})
"""Statuses with which a dividing streamline may be missing."""


def draw_flow_net(layout: Layout, options: FlowNetOptions | None = None) -> Picture:
    """Flow net of a layout as SVG or PNG.

    Parameters
    ----------
    layout : the site
    options : wishes; default: an SVG with everything on it

    Returns
    -------
    Picture with its media type and bytes, the same bytes for the same input.

    Raises
    ------
    LayoutError : the layout describes something that cannot be

    Notes
    -----
    Stagnation points are searched in the window shown, dividing streamlines traced from all intakes, each
    only if its layer is asked for. What could not be certified is said in the picture.
    """
    options = options or FlowNetOptions()
    model = compile_layout(layout)
    window = options.window or choose_window(model, map_aspect(options.size) if options.size else None)
    points, point_notes = _stagnation_points(layout, window, options.layers)
    lines, line_notes = _dividing_streamlines(layout, options.layers)
    return draw_scene(Scene(model, window, points, lines, point_notes + line_notes), options)


def _stagnation_points(
    layout: Layout, window: Window, layers: frozenset[Layer]
) -> tuple[tuple[StagnationPoint, ...], Notes]:
    """Stagnation points in the window, and what must be said if there may be more."""
    if Layer.STAGNATION_POINTS not in layers:
        return (), ()
    search = search_stagnation(layout, window)
    return search.points, () if search.complete else (MORE_POINTS,)


def _dividing_streamlines(layout: Layout, layers: frozenset[Layer]) -> tuple[tuple[ComplexArray, ...], Notes]:
    """Dividing streamlines of all intakes [m], and what must be said if there may be more."""
    has_intake = any(isinstance(element, Sink | LineSink) for element in layout.elements)
    if Layer.DIVIDING_STREAMLINES not in layers or not has_intake:
        return (), ()
    intakes = trace_withdrawal(layout, None).intakes
    lines = tuple(line for intake in intakes for line in intake.dividing_streamlines if line.size > 1)
    doubtful = [shortened(intake.name, LONGEST_NAME) for intake in intakes if intake.status in UNCERTAIN]
    notes = (f"Dividing streamlines may be missing for: {', '.join(doubtful)}.",) if doubtful else ()
    return lines, notes

"""Draw the zones of the intakes of a layout that has been assessed."""

from forebay.charts.flow_net import map_aspect
from forebay.charts.options import FlowNetOptions, Picture, Scene
from forebay.charts.window import choose_window
from forebay.charts.zones import Zone, draw_zones
from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.flow.withdrawal.result import IntakeWithdrawal


def draw_intake_zones(
    layout: Layout, intakes: tuple[IntakeWithdrawal, ...], options: FlowNetOptions
) -> Picture:
    """Map of the water that each intake takes.

    Parameters
    ----------
    layout : the site
    intakes : where the water of its intakes comes from
    options : wishes

    Returns
    -------
    Picture, the same bytes for the same input; an intake without a zone is not on it.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    """
    model = compile_layout(layout)
    window = options.window or choose_window(model, map_aspect(options.size) if options.size else None)
    lines = tuple(line for intake in intakes for line in intake.dividing_streamlines if line.size > 1)
    zones = tuple(Zone(intake.name, intake.zone) for intake in intakes)
    return draw_zones(Scene(model, window, (), lines), zones, options)

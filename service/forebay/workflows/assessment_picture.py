"""Draw the flow net of a layout that has been assessed."""

from forebay.charts.flow_net import draw_scene, map_aspect
from forebay.charts.options import FlowNetOptions, Picture, Scene
from forebay.charts.window import choose_window
from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.workflows.assessment import Assessment

MORE_POINTS = "There may be more stagnation points than shown: the count does not close."
NO_POINTS = "Stagnation points are not shown: their search failed."
NO_LINES = "Dividing streamlines are not shown: the trace of the intakes' water failed."


def draw_assessment(layout: Layout, assessment: Assessment, options: FlowNetOptions) -> Picture:
    """Flow net with the stagnation points and dividing streamlines that an assessment has found.

    Parameters
    ----------
    layout : the site
    assessment : of the same site
    options : wishes

    Returns
    -------
    Picture, the same bytes for the same input; what an assessment could not find is said in it.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    """
    model = compile_layout(layout)
    window = options.window or choose_window(model, map_aspect(options.size) if options.size else None)
    search, intakes = assessment.stagnation.answer, assessment.withdrawal.answer or ()
    points = () if search is None else tuple(p for p in search.points if window.contains(p.at))
    lines = tuple(line for intake in intakes for line in intake.dividing_streamlines if line.size > 1)
    return draw_scene(Scene(model, window, points, lines, _notes(assessment)), options)


def _notes(assessment: Assessment) -> tuple[str, ...]:
    """What must be said of what is not shown."""
    search = assessment.stagnation.answer
    notes = [NO_POINTS] if search is None else [] if search.complete else [MORE_POINTS]
    notes += [NO_LINES] if assessment.withdrawal.problem is not None else []
    return tuple(notes)

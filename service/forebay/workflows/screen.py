"""Check fish-protection screens: approach and sweeping velocity along their faces, against limits."""

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.errors import FlowError, LayoutError, UnknownNameError
from forebay.flow.faces import Face, face_velocity, faces_of, places_along, solved_face
from forebay.flow.features import WATER, Line
from forebay.flow.layout import Layout, LineSink
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.sheets.standing import footing_of
from forebay.trade.screens.face_flow import FaceFlow
from forebay.trade.screens.rules import Limit, Verdict, judge
from forebay.trade.screens.screen import (
    FaceMisplacedError,
    Screen,
    ScreenGeometryError,
    bypass_of,
    end_reach_of,
)
from forebay.trade.screens.screen_flow import Basis, ScreenFlow, SideFlow

_ON_WALL = 1e-6
"""Distance from a wall, over the length of a face, that is on it [-]."""


@dataclass(frozen=True, slots=True)
class ScreenCheck:
    """A screen with the flow that meets it and what the limits say of it."""

    flow: ScreenFlow
    verdicts: tuple[Verdict, ...]


def check_screens(
    layout: Layout, screens: tuple[Screen, ...], limits: tuple[Limit, ...], *, passing: float | None = None
) -> tuple[ScreenCheck, ...]:
    """Approach and sweeping velocity, exposure and verdicts of screens, in their order.

    Parameters
    ----------
    layout : the site
    screens : over line sinks of the layout by name, or over faces on walls; a face draws as a line sink that
        is added to the layout, unless it spans several edges of a wall that was solved for
    limits : what every screen is judged by;  passing : flow of the river or tide that passes [m3/s]

    Returns
    -------
    One ScreenCheck for each. Approach velocity is the normal velocity of the depth-mean flow times depth over
    effective height, so that its mean is discharge over effective area; sweeping velocity is the depth mean.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    UnknownNameError : no line sink has the name, path ("screens", i, "element")
    FaceMisplacedError, ScreenGeometryError : path ("screens", i, ...)
    """
    compile_layout(layout)
    drawing = _with_faces(layout, screens)
    checks = []
    for index, screen in enumerate(screens):
        try:
            flow = _flow_of(drawing, screen)
        except FlowError as error:
            error.path = error.path if error.in_layout else ("screens", index, *error.path)
            raise
        checks.append(ScreenCheck(flow, judge(flow, limits, passing=passing)))
    return tuple(checks)


def _with_faces(layout: Layout, screens: Iterable[Screen]) -> Layout:
    """The layout with a line sink for every face that can draw: along a bank, or one edge of another wall."""
    for index, screen in enumerate(screens):
        if screen.face is None:
            continue
        model = compile_layout(layout)
        sink = LineSink(screen.name, *screen.face, screen.discharge or 0.0)
        if not _along_wall(model, sink):
            detail = "the face must lie along a bank or along the wall of a structure"
            raise FaceMisplacedError(detail, ("screens", index, "face"))
        if not _can_draw(model, sink):
            continue
        layout = replace(layout, elements=(*layout.elements, sink))
        try:
            compile_layout(layout)
        except LayoutError as error:
            raise FaceMisplacedError(error.detail, ("screens", index, "face")) from None
    return layout


def _along_wall(model: FlowModel, line: LineSink) -> bool:
    """Whether a stretch lies on walls all along."""
    places, reach = _along(line)
    return reach > 0.0 and bool((np.abs(model.distance_to_wall(places)) <= reach).all())


def _can_draw(model: FlowModel, line: LineSink) -> bool:
    """Whether a stretch on walls lies along one straight bank, or along one edge of another wall."""
    places, reach = _along(line)
    on_bank = any(bool((wall.distance(places) <= reach).all()) for wall in model.walls)
    return on_bank or footing_of(line, model.rings_set, reach) is not None


def _along(line: LineSink) -> tuple[ComplexArray, float]:
    """Places along a stretch, x + iy [m], and how far from a wall still is on it [m]."""
    run = line.end - line.start
    places = np.asarray(line.start + np.linspace(0.0, 1.0, 33) * run, dtype=np.complex128)
    return places, _ON_WALL * abs(run)


def _flow_of(layout: Layout, screen: Screen) -> ScreenFlow:
    """Flow that meets one screen."""
    model = compile_layout(layout)
    line = next((line for line in model.lines if line.owner == screen.name and line.flux < 0.0), None)
    if line is not None:
        return _drawing(layout, model, screen, line)
    if screen.face is None:
        raise UnknownNameError("No line sink has this name.", ("element",))
    face = solved_face(screen.face, model, on=_wall_name(model, screen.face), offset=screen.sample_offset)
    mean = (screen.discharge or 0.0) / face.length / layout.depth
    flow = _face_flow((model, model), screen, face, layout.depth, mean)
    return ScreenFlow(screen, screen.discharge or 0.0, Basis.CALCULATED, (SideFlow(flow, flow),))


def _drawing(layout: Layout, model: FlowModel, screen: Screen, line: Line) -> ScreenFlow:
    """Screen over a line sink, with the flow that its pump makes and with that without it."""
    still, reason = _without(layout, screen.name)
    sides = []
    for face in faces_of(line, model, offset=screen.sample_offset):
        # nothing crosses a wall but what the line draws: known exactly, not read
        on_face = screen.sample_offset == 0.0 or face.offset > screen.sample_offset
        even = -line.flux if line.on != WATER and on_face else None
        on = _face_flow((model, model), screen, face, layout.depth, even)
        off = None if still is None else _face_flow((model, still), screen, face, layout.depth, even)
        sides.append(SideFlow(on, off))
    discharge = -line.flux * layout.depth * abs(line.end - line.start)
    return ScreenFlow(screen, discharge, Basis.MODELLED, tuple(sides), reason)


def _without(layout: Layout, name: str) -> tuple[FlowModel | None, str]:
    """The flow without one element, or why there is none."""
    rest = tuple(element for element in layout.elements if element.name != name)
    try:
        return compile_layout(replace(layout, elements=rest)), ""
    except LayoutError as error:
        return None, f"without the pump there is no steady flow: {error.detail}"


def _face_flow(
    models: tuple[FlowModel, FlowModel], screen: Screen, face: Face, depth: float, even: float | None
) -> FaceFlow:
    """One side of a screen.

    models : of the approach and of the sweeping velocity;  even : velocity into the face over the whole
    depth where it is the same all along [m/s], None to read it
    """
    drawing, swept = models
    factor = depth / screen.effective_height
    _require_wet(drawing, face)

    def approach(parts: FloatArray) -> FloatArray:
        if even is not None:
            return np.full(parts.shape, factor * even)
        return factor * face_velocity(drawing, face, parts).imag

    def along(parts: FloatArray) -> FloatArray:
        return face_velocity(swept, face, parts).real

    reach = end_reach_of(screen, face.length) / face.length
    bypass = bypass_of(screen, face.length)
    return FaceFlow(face, approach, along, places_along(drawing, face), max(reach, face.margin), bypass)


def _require_wet(model: FlowModel, face: Face) -> None:
    """Raise ScreenGeometryError if velocities would be read on land."""
    parts = np.linspace(0.0, 1.0, 101)[1:-1]
    if not bool(model.wet(face.positions(parts)).all()):
        raise ScreenGeometryError("velocities would be read on land or in a structure", ("sample_offset",))


def _wall_name(model: FlowModel, ends: tuple[complex, complex]) -> str:
    """Name of the wall on which a stretch lies."""
    index = int(model.nearest_wall(np.asarray(0.5 * (ends[0] + ends[1]), dtype=np.complex128)))
    return model.wall_names[index]

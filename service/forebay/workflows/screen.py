"""Check fish-protection screens: approach and sweeping velocity along their faces, against limits."""

from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.errors import FlowError, LayoutError, UnknownNameError
from forebay.flow.faces import LEFT, RIGHT, Face, face_velocity, faces_of, places_along
from forebay.flow.features import Line
from forebay.flow.layout import Layout, LineSink
from forebay.flow.model import FlowModel, compile_layout
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

_INTO_WATER = 1e-3
"""Distance beside a face, over its length, at which is looked for water [-]."""

_MARGIN = 1e-3
"""Part of a face on a structure's wall that is not read at either end, where the wall may turn [-]."""


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
    screens : over line sinks of the layout by name, or over faces on walls; a face on a bank draws as a line
        sink that is added to the layout, one on the wall of a structure or of a surveyed shore does not draw
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
    """The layout with a line sink for every face that lies along a straight bank."""
    model = compile_layout(layout)
    for index, screen in enumerate(screens):
        if screen.face is None or not _on_bank(model, screen.face):
            continue
        sink = LineSink(screen.name, *screen.face, screen.discharge or 0.0)
        layout = replace(layout, elements=(*layout.elements, sink))
        try:
            compile_layout(layout)
        except LayoutError as error:
            raise FaceMisplacedError(error.detail, ("screens", index, "face")) from None
    return layout


def _on_bank(model: FlowModel, face: tuple[complex, complex]) -> bool:
    ends = np.array([*face, 0.5 * (face[0] + face[1])])
    reach = _ON_WALL * abs(face[1] - face[0])
    return any(bool(np.all(wall.distance(ends) <= reach)) for wall in model.walls)


def _flow_of(layout: Layout, screen: Screen) -> ScreenFlow:
    """Flow that meets one screen."""
    model = compile_layout(layout)
    line = next((line for line in model.lines if line.owner == screen.name and line.flux < 0.0), None)
    if line is not None:
        return _drawing(layout, model, screen, line)
    if screen.face is None:
        raise UnknownNameError("No line sink has this name.", ("element",))
    return _calculated(model, screen, screen.face)


def _drawing(layout: Layout, model: FlowModel, screen: Screen, line: Line) -> ScreenFlow:
    """Screen over a line sink, with the flow that its pump makes and with that without it."""
    still, reason = _without(layout, screen.name)
    sides = tuple(
        SideFlow(
            _face_flow(model, screen, face, layout.depth),
            None if still is None else _face_flow(model, screen, face, layout.depth, still),
        )
        for face in faces_of(line, model, offset=screen.sample_offset)
    )
    discharge = -line.flux * layout.depth * abs(line.end - line.start)
    return ScreenFlow(screen, discharge, Basis.MODELLED, sides, reason)


def _without(layout: Layout, name: str) -> tuple[FlowModel | None, str]:
    """The flow without one element, or why there is none."""
    rest = tuple(element for element in layout.elements if element.name != name)
    try:
        return compile_layout(replace(layout, elements=rest)), ""
    except LayoutError as error:
        return None, f"without the pump there is no steady flow: {error.detail}"


def _face_flow(
    model: FlowModel, screen: Screen, face: Face, depth: float, still: FlowModel | None = None
) -> FaceFlow:
    """One side of a screen; `still` is the flow whose sweeping velocity counts, if it is another one."""
    _require_wet(model, face)
    factor = depth / screen.effective_height
    swept = still or model

    def approach(parts: FloatArray) -> FloatArray:
        return factor * face_velocity(model, face, parts).imag

    def along(parts: FloatArray) -> FloatArray:
        return face_velocity(swept, face, parts).real

    reach = end_reach_of(screen, face.length) / face.length
    bypass = bypass_of(screen, face.length)
    return FaceFlow(face, approach, along, places_along(model, face), max(reach, face.margin), bypass)


def _require_wet(model: FlowModel, face: Face) -> None:
    """Raise ScreenGeometryError if velocities would be read on land."""
    parts = np.linspace(0.0, 1.0, 101)[1:-1]
    if not bool(model.wet(face.positions(parts)).all()):
        raise ScreenGeometryError(
            "velocities would be read on land or inside a structure", ("sample_offset",)
        )


def _calculated(model: FlowModel, screen: Screen, ends: tuple[complex, complex]) -> ScreenFlow:
    """Screen on a wall that cannot draw: approach is discharge over area, sweeping is that of the flow."""
    face = _face_on_wall(model, screen, ends)
    _require_wet(model, face)
    discharge = screen.discharge or 0.0
    mean = discharge / (face.length * screen.effective_height)

    def approach(parts: FloatArray) -> FloatArray:
        return np.full(parts.shape, mean)

    def along(parts: FloatArray) -> FloatArray:
        return face_velocity(model, face, parts).real

    reach = end_reach_of(screen, face.length) / face.length
    bypass = bypass_of(screen, face.length)
    flow = FaceFlow(face, approach, along, places_along(model, face), max(reach, face.margin), bypass)
    return ScreenFlow(screen, discharge, Basis.CALCULATED, (SideFlow(flow, flow),))


def _face_on_wall(model: FlowModel, screen: Screen, ends: tuple[complex, complex]) -> Face:
    """Face on the wall of a structure or of a surveyed shore.

    Raises FaceMisplacedError if the stretch does not lie on a wall all along, or has no water on one side.
    """
    start, end = ends
    length = abs(end - start)
    along = np.asarray(start + np.linspace(0.0, 1.0, 33) * (end - start), dtype=np.complex128)
    if length == 0.0 or not bool((np.abs(model.distance_to_wall(along)) <= _ON_WALL * length).all()):
        raise FaceMisplacedError("the face must lie along a bank or along the wall of a structure", ("face",))
    beside = 0.5 * (start + end) + 1j * _INTO_WATER * (end - start) * np.array([LEFT, RIGHT])
    wet = model.wet(beside)
    if bool(wet[0]) == bool(wet[1]):
        raise FaceMisplacedError("the face has water on both sides or on none", ("face",))
    side = LEFT if wet[0] else RIGHT
    offset = max(screen.sample_offset, _INTO_WATER * length)
    return Face(start, end, side, offset, _wall_name(model, 0.5 * (start + end)), _MARGIN)


def _wall_name(model: FlowModel, at: complex) -> str:
    """Name of the wall nearest to a place."""
    index = int(model.nearest_wall(np.asarray(at)))
    names = [*(wall.name for wall in model.walls), *(pier.name for pier in model.piers)]
    return names[index] if 0 <= index < len(names) else "wall"

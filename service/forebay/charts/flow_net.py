"""The flow net: one picture of where the water goes, from a scene."""

from dataclasses import dataclass

import numpy as np

from forebay.charts.elements import Drawn, draw_elements, draw_piers, draw_stagnation_points
from forebay.charts.key import KEY_HEIGHT
from forebay.charts.layers import draw_arrowheads, draw_land, draw_lines, draw_speed
from forebay.charts.lettering import draw_labels
from forebay.charts.mapframe import MapFrame, fit_box, open_map
from forebay.charts.margins import (
    FOOT,
    HEAD,
    NOTES,
    SIDE,
    TICKS,
    counting_notes,
    draw_foot,
    draw_head,
    draw_key,
)
from forebay.charts.net import FlowNet, compute_net, net_notes
from forebay.charts.options import FlowNetOptions, Layer, Picture, Scene
from forebay.charts.palette import DIVIDING, EQUIPOTENTIAL, INK, PAPER
from forebay.charts.ring_marks import draw_open_edges, draw_outlines
from forebay.charts.sheet import Box, Style, blank_sheet
from forebay.charts.symbols import Glyph

DEFAULT_WIDTH = 1200
"""Width of a picture [px] when none is asked for, and the one at which the scale is 1."""


@dataclass(frozen=True, slots=True)
class Plan:
    """Size of a sheet [px], its scale, and the box that the map takes [px]."""

    width: int
    height: int
    scale: float
    map: Box


def map_aspect(size: tuple[int, int]) -> float:
    """Height over width of the space for the map on a sheet of a size [px]."""
    scale = scale_of(*size)
    return (size[1] - scale * (HEAD + TICKS + KEY_HEIGHT + NOTES + FOOT)) / (size[0] - scale * sum(SIDE))


def scale_of(width: int, height: int) -> float:
    """Size of text and symbols relative to a sheet of 1200 x 800 px."""
    return float(np.clip(min(width / DEFAULT_WIDTH, height / 800), 0.75, 4.0))


def plan_sheet(options: FlowNetOptions, scene: Scene) -> Plan:
    """The sheet asked for, or one as high as its map needs."""
    window = scene.window
    aspect = (window.y[1] - window.y[0]) / (window.x[1] - window.x[0])
    rest = HEAD + TICKS + KEY_HEIGHT + NOTES + FOOT
    if options.size is None:
        across = DEFAULT_WIDTH - sum(SIDE)
        size = DEFAULT_WIDTH, round(rest + across * min(max(aspect, 0.25), 0.75))
        scale = 1.0
    else:
        size = options.size
        scale = scale_of(*size)
    space = Box(scale * SIDE[0], scale * HEAD, size[0] - scale * SIDE[1], size[1] - scale * (rest - HEAD))
    return Plan(*size, scale, fit_box(space, window))


def draw_scene(scene: Scene, options: FlowNetOptions) -> Picture:
    """Draw the flow net of a scene.

    Parameters
    ----------
    scene : the flow, the window and what was found in it
    options : format, size, units, layers

    Returns
    -------
    Picture, the same bytes for the same input on one machine. Groups of the SVG carry the ids
    `speed, streamlines, equipotentials, dividing-streamlines, land, walls, element-<n>, pier-<n>,
    outline-<n>, open-edge-<n>, stagnation-point-<n>, label-<n>, title, caution, scale-bar, speed-band-<n>`.

    Notes
    -----
    Labels overlap neither each other nor a symbol nor the frame; one that finds no place is left out, and
    the picture says how many were. Lines as in `contours.draw_levels`.
    """
    plan = plan_sheet(options, scene)
    net = compute_net(scene, options, (plan.map.right - plan.map.left) / plan.scale)
    with blank_sheet(plan.width, plan.height, plan.scale) as sheet:
        frame = open_map(sheet, plan.map, scene.window, options.units)
        drawn = draw_map(frame, scene, net, layers=options.layers)
        left_out = draw_labels(frame, scene, drawn) if Layer.LABELS in options.layers else 0
        draw_head(sheet, scene, options)
        draw_key(frame, scene, net, options=options, glyphs=drawn.glyphs)
        notes = [*net_notes(net, scene, options), *scene.notes, *counting_notes(drawn, left_out)]
        draw_foot(sheet, notes)
        return Picture(options.media_type, sheet.encode(options.media_type, options.title))


def draw_map(frame: MapFrame, scene: Scene, net: FlowNet, *, layers: frozenset[Layer]) -> Drawn:
    """Everything inside the frame but the labels."""
    drawn = Drawn()
    if Layer.SPEED in layers:
        draw_speed(frame, net)
    if net.equipotentials is not None:
        style: Style = {"linewidth": 0.9, "color": EQUIPOTENTIAL, "dashes": (5.0, 3.0), "zorder": 3.0}
        draw_lines(frame, net.equipotentials.lines, name="equipotentials", **style)
        drawn.glyphs.add(Glyph.EQUIPOTENTIAL)
    if net.streamlines is not None:
        draw_lines(frame, net.streamlines.lines, name="streamlines", linewidth=1.1, color=INK, zorder=4.0)
        draw_arrowheads(frame, scene, net.streamlines)
        drawn.glyphs.add(Glyph.STREAMLINE)
    draw_land(frame, scene, drawn)
    if Layer.DIVIDING_STREAMLINES in layers and scene.dividing_streamlines:
        lines = scene.dividing_streamlines
        draw_lines(frame, lines, name="dividing-streamlines-casing", linewidth=4.6, color=PAPER, zorder=8.0)
        draw_lines(frame, lines, name="dividing-streamlines", linewidth=2.4, color=DIVIDING, zorder=8.1)
        drawn.glyphs.add(Glyph.DIVIDING)
    draw_open_edges(frame, scene, drawn)
    draw_outlines(frame, scene.model.layout.outlines, drawn)
    draw_piers(frame, scene.model.piers, drawn)
    draw_elements(frame, scene.model.layout.elements, drawn)
    if Layer.STAGNATION_POINTS in layers:
        draw_stagnation_points(frame, scene.stagnation_points, drawn)
    return drawn

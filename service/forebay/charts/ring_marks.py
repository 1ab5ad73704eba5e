"""Outlines, islands and open edges on the map, with the labels they want."""

from math import hypot

import numpy as np

from forebay.charts.elements import LONGEST_NAME, STRUCTURE_ZORDER, Drawn, wish_for
from forebay.charts.labels import Wish
from forebay.charts.mapframe import MapFrame
from forebay.charts.options import Scene
from forebay.charts.rings import closed, middle_of, opening_line
from forebay.charts.sheet import Box, shortened
from forebay.charts.steps import figures
from forebay.charts.symbols import Glyph, Stamp, stamp_line, stamp_solid
from forebay.charts.units import DisplayUnits
from forebay.flow.arrays import ComplexArray
from forebay.flow.ends import End
from forebay.flow.layout import Outline, Surveyed
from forebay.trade.survey.rings import inscribed_circle

OPENING_ZORDER = 7.5


def draw_outlines(frame: MapFrame, outlines: tuple[Outline, ...], drawn: Drawn) -> None:
    """Outlines at their true size; the label leads to the middle of the widest part."""
    stamp = Stamp(frame.axes, frame.sheet, STRUCTURE_ZORDER)
    for index, outline in enumerate(outlines):
        points = np.array(outline.points, dtype=np.complex128)
        centre, radius = inscribed_circle(points)
        if not frame.window.contains(centre):
            drawn.beyond += 1
            continue
        stamp_solid(stamp, frame.points(points), name=f"outline-{index + 1}")
        drawn.glyphs.add(Glyph.OUTLINE)
        keep_clear(frame, closed(outline.points), drawn)
        text = shortened(outline.name, LONGEST_NAME)
        drawn.wishes.append(wish_for(frame, text, frame.on_sheet(centre), radius / frame.pixel))


def draw_open_edges(frame: MapFrame, scene: Scene, drawn: Drawn) -> None:
    """Open edges as broken lines with their names and what flows there."""
    shore = scene.model.layout.shore
    if not isinstance(shore, Surveyed):
        return
    stamp = Stamp(frame.axes, frame.sheet, OPENING_ZORDER)
    for index, (edge, end) in enumerate(zip(shore.edges, scene.model.ends, strict=True)):
        line = opening_line(shore, edge)
        x, y = frame.points(line).T.tolist()
        stamp_line(stamp, Glyph.OPEN_EDGE, tuple(x), tuple(y), name=f"open-edge-{index + 1}")
        drawn.glyphs.add(Glyph.OPEN_EDGE)
        keep_clear(frame, line, drawn)
        middle = middle_of(line)
        if frame.window.contains(middle):
            text = opening_label(end, scene.model.layout.depth, frame.units)
            drawn.wishes.append(wish_for(frame, text, frame.on_sheet(middle), 0.0))


def opening_label(end: End, depth: float, units: DisplayUnits) -> str:
    """Name of an open edge and the discharge there, in or out of the water."""
    discharge = units.lengthwise(end.inflow * depth, 3)
    way = "in" if discharge >= 0.0 else "out"
    return f"{shortened(end.name, LONGEST_NAME)}\n{figures(abs(discharge))} {units.discharge} {way}"


def keep_clear(frame: MapFrame, line: ComplexArray, drawn: Drawn) -> None:
    """Keep labels off a line."""
    radius = 4.0 * frame.sheet.scale
    for start, end in zip(line[:-1].tolist(), line[1:].tolist(), strict=True):
        count = 1 + min(int(abs(end - start) / frame.pixel / radius), 200)
        for share in np.linspace(0.0, 1.0, count, endpoint=False):
            x, y = frame.on_sheet(start + share * (end - start))
            drawn.taken.append(Box(x - radius, y - radius, x + radius, y + radius))


def island_wishes(frame: MapFrame, scene: Scene, drawn: Drawn) -> list[list[Wish]]:
    """Names of islands: inside those that hold them, as a list of one place each; beside the others.

    The names beside are added to what `drawn` wishes for.
    """
    shore = scene.model.layout.shore
    inside: list[list[Wish]] = []
    for island in shore.islands if isinstance(shore, Surveyed) else ():
        centre, radius = inscribed_circle(np.array(island.points, dtype=np.complex128))
        if not frame.window.contains(centre):
            continue
        text = shortened(island.name, LONGEST_NAME)
        wish = wish_for(frame, text, frame.on_sheet(centre), radius / frame.pixel)
        if 0.5 * hypot(*wish.size) <= radius / frame.pixel:
            inside.append([Wish(text, wish.size, wish.anchor, 0.0)])
        else:
            drawn.wishes.append(wish)
    return inside

"""What stands round the map: title, key, notes, caution."""

from math import nan
from typing import Final

from forebay.charts.elements import Drawn
from forebay.charts.key import (
    COLUMN,
    COLUMNS,
    KEY_HEIGHT,
    Bearings,
    draw_bearings,
    draw_speed_scale,
    draw_symbols,
)
from forebay.charts.mapframe import MapFrame
from forebay.charts.net import FlowNet
from forebay.charts.options import FlowNetOptions, Layer, Scene
from forebay.charts.palette import DIVIDING, FAINT_INK
from forebay.charts.sheet import Box, Sheet, shortened
from forebay.charts.steps import figures
from forebay.charts.symbols import Glyph
from forebay.flow.layout import Surveyed

CAUTION: Final = (
    "Screening level: depth-mean, steady, frictionless flow. "
    "Not for the safety of divers, swimmers or craft. "
    "The regulator's criteria and licensed engineers decide."
)

HEAD, TICKS, NOTES, FOOT = 66.0, 46.0, 72.0, 46.0
"""Height of title, tick labels, notes and caution [px at scale 1]."""

SIDE = 84.0, 22.0
"""Margins left (with tick labels) and right [px at scale 1]."""

LONGEST_TITLE = 90
"""Characters of a title that are shown."""


def draw_head(sheet: Sheet, scene: Scene, options: FlowNetOptions) -> None:
    """Title, and the facts of the layout under it."""
    unit, left = sheet.scale, SIDE[0] * sheet.scale
    room = sheet.width - left - SIDE[1] * unit
    title = shortened(options.title, LONGEST_TITLE)
    size = 19.0 * min(1.0, room / max(sheet.measure(title, 19.0, bold=True)[0], 1.0))
    sheet.write(title, (left, 14 * unit), size=size, name="title", weight="bold")
    sheet.write(subtitle(scene, options), (left, 42 * unit), size=12, name="subtitle", color=FAINT_INK)


def subtitle(scene: Scene, options: FlowNetOptions) -> str:
    """Shore, depth and number of elements."""
    layout, units = scene.model.layout, options.units
    kind = type(layout.shore).__name__
    words = "".join(f" {letter.lower()}" if letter.isupper() else letter for letter in kind).strip()
    depth = f"{figures(units.lengthwise(layout.depth, 1))} {units.length}"
    counts = ", ".join((_count(len(layout.elements), "element"), _count(len(layout.structures), "structure")))
    words = "surveyed water" if isinstance(layout.shore, Surveyed) else words
    return f"{words.capitalize()}, mean depth {depth}; {counts}; plan view, depth-mean potential flow"


def _count(number: int, noun: str) -> str:
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def draw_key(
    frame: MapFrame, scene: Scene, net: FlowNet, *, options: FlowNetOptions, glyphs: set[Glyph]
) -> None:
    """Symbols left, bearings in the middle, speed right."""
    sheet, unit = frame.sheet, frame.sheet.scale
    top = frame.box.bottom + TICKS * unit + 8 * unit
    left, right = SIDE[0] * unit, sheet.width - SIDE[1] * unit
    shown = [glyph for glyph in Glyph if glyph in glyphs]
    if Glyph.VORTEX in shown and Glyph.CLOCKWISE_VORTEX in shown:
        shown.remove(Glyph.CLOCKWISE_VORTEX)
    draw_symbols(sheet, Box(left, top, right, top + KEY_HEIGHT * unit), shown)
    middle = max(left + (COLUMNS * COLUMN + 4) * unit, (left + right) / 2 - 110 * unit)
    layout = scene.model.layout
    ambient = complex(nan, nan) if isinstance(layout.shore, Surveyed) else layout.ambient.velocity
    draw_bearings(frame, middle, top, Bearings(ambient, options.north))
    if Layer.SPEED in options.layers:
        space = Box(max(right - 330 * unit, middle + 215 * unit), top, right, top + KEY_HEIGHT * unit)
        draw_speed_scale(sheet, space, net.levels, options.units)


def counting_notes(drawn: Drawn, left_out: int) -> list[str]:
    """How many elements lie outside the window, and what found no place in it."""
    notes = []
    if drawn.hidden:
        notes.append(f"Stagnation points too near a symbol to be marked: {drawn.hidden}.")
    if drawn.beyond:
        notes.append(f"Outside this window: {drawn.beyond} of the layout's elements and structures.")
    if left_out:
        notes.append(f"Labels left out for want of room: {left_out}.")
    return notes


def draw_foot(sheet: Sheet, notes: list[str]) -> None:
    """Notes, and below a rule the caution."""
    unit, left = sheet.scale, SIDE[0] * sheet.scale
    width = sheet.width - left - SIDE[1] * unit
    top = sheet.height - (FOOT + NOTES) * unit
    for index, line in enumerate(sheet.wrap(" ".join(notes), 10.5, width)[:4]):
        sheet.write(
            line, (left, top + 15.5 * index * unit), size=10.5, name=f"note-{index + 1}", color=FAINT_INK
        )
    rule = sheet.height - FOOT * unit
    sheet.paper.plot((left, left + width), (rule, rule), color=DIVIDING, linewidth=sheet.points(1.5))
    for index, line in enumerate(sheet.wrap(CAUTION, 11.5, width)):
        place = (left, rule + (6 + 16 * index) * unit)
        name = "caution" if index == 0 else f"caution-{index + 1}"
        sheet.write(line, place, size=11.5, name=name, weight="bold")

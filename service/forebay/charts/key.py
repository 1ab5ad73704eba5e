"""The band under the map: what the symbols mean, which way the water goes, how far, how fast."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from forebay.charts.mapframe import MapFrame
from forebay.charts.palette import FAINT_INK, FASTER, INK, LAND, LAND_HATCH, ramp_colours
from forebay.charts.sheet import Box, Sheet
from forebay.charts.steps import figures, round_down
from forebay.charts.symbols import Glyph, Stamp, stamp_disc, stamp_line, stamp_point, stamp_solid
from forebay.charts.units import DisplayUnits
from forebay.flow.arrays import FloatArray

KEY_HEIGHT = 114.0
"""Height of the band [px at scale 1]."""

COLUMNS = 2
"""Columns of symbols in the key."""

PITCH = 18.5
"""Distance of the rows of symbols [px at scale 1]."""

COLUMN = 162.0
"""Width of a column of symbols [px at scale 1]."""

TEXT = 11.0
"""Size of the band's text [px at scale 1]."""

LINES = {
    Glyph.STREAMLINE,
    Glyph.EQUIPOTENTIAL,
    Glyph.DIVIDING,
    Glyph.LINE_INTAKE,
    Glyph.LINE_OUTFALL,
    Glyph.OPEN_EDGE,
}


@dataclass(frozen=True, slots=True)
class Bearings:
    """Ambient velocity u + iv [m/s], nan where there can be none, and north from +x [rad], if known."""

    ambient: complex
    north: float | None


def draw_symbols(sheet: Sheet, space: Box, glyphs: Sequence[Glyph]) -> None:
    """The key's symbols in columns."""
    stamp = Stamp(sheet.paper, sheet, 5.0)
    unit = sheet.scale
    rows = max(4, -(-len(glyphs) // COLUMNS))
    for index, glyph in enumerate(glyphs):
        x = space.left + COLUMN * unit * (index // rows)
        y = space.top + unit * (8 + PITCH * (index % rows))
        middle, name = x + 14 * unit, f"key-{glyph.name.lower().replace('_', '-')}"
        if glyph in LINES:
            stamp_line(stamp, glyph, (x, x + 28 * unit), (y, y), name=name)
        elif glyph is Glyph.LAND:
            land_sample(sheet, Box(x + 2 * unit, y - 7 * unit, x + 26 * unit, y + 7 * unit), name=name)
        elif glyph is Glyph.OUTLINE:
            corners = np.array([(x + 4, y + 6), (x + 26, y + 6), (x + 20, y - 6), (x + 10, y - 6)])
            stamp_solid(stamp, np.array([x, y]) + unit * (corners - np.array([x, y])), name=name)
        elif glyph is Glyph.PIER:
            stamp_disc(stamp, complex(middle, y), 7 * unit, name=name)
        else:
            stamp_point(stamp, glyph, middle, y, name=name)
        sheet.write(glyph.value, (x + 36 * unit, y), size=TEXT, name=f"{name}-text", va="center")


def land_sample(sheet: Sheet, box: Box, *, name: str) -> None:
    """A piece of land for the key."""
    from matplotlib.patches import Rectangle

    corner, width, height = (box.left, box.top), box.right - box.left, box.bottom - box.top
    sheet.paper.add_patch(Rectangle(corner, width, height, facecolor=LAND, edgecolor="none", zorder=5))
    sheet.paper.add_patch(
        Rectangle(
            corner,
            width,
            height,
            facecolor="none",
            edgecolor=LAND_HATCH,
            hatch="/////",
            lw=0,
            zorder=5,
            gid=name,
        )
    )


def draw_bearings(frame: MapFrame, left: float, top: float, bearings: Bearings) -> None:
    """North or the directions of x and y, the ambient current, and the scale bar."""
    sheet, unit = frame.sheet, frame.sheet.scale
    draw_compass(sheet, left + 26 * unit, top + 46 * unit, bearings.north)
    draw_current(sheet, left + 76 * unit, top, bearings.ambient, frame.units)
    longest = 120 * unit * frame.pixel / frame.units.metre
    length = round_down(longest)
    pixels = length * frame.units.metre / frame.pixel
    x, y = left + 76 * unit, top + 66 * unit
    stamp = Stamp(sheet.paper, sheet, 5.0)
    stamp.line((x, x + pixels), (y, y), width=3, gid="scale-bar")
    for end in (x, x + pixels / 2, x + pixels):
        stamp.line((end, end), (y - 5 * unit, y + 1.5 * unit), width=1.2)
    text = f"{figures(length)} {frame.units.length}"
    sheet.write(text, (x, y + 6 * unit), size=TEXT, name="scale-bar-text")


def draw_compass(sheet: Sheet, x: float, y: float, north: float | None) -> None:
    """An arrow to the north, or arrows along +x and +y."""
    unit = sheet.scale
    if north is not None:
        tip = 30 * unit * np.exp(1j * north)
        arrow(
            sheet, (x - tip.real * 0.8, y + tip.imag * 0.8), (x + tip.real, y - tip.imag), name="north-arrow"
        )
        beyond = 1.3 * tip
        sheet.write(
            "N",
            (x + beyond.real, y - beyond.imag),
            size=13,
            name="north-text",
            ha="center",
            va="center",
            weight="bold",
        )
        return
    x, y = x - 14 * unit, y + 18 * unit
    arrow(sheet, (x, y), (x + 36 * unit, y), name="x-arrow")
    arrow(sheet, (x, y), (x, y - 36 * unit), name="y-arrow")
    sheet.write("x", (x + 42 * unit, y), size=TEXT, name="x-text", ha="center", va="center")
    sheet.write("y", (x, y - 44 * unit), size=TEXT, name="y-text", ha="center", va="center")


def draw_current(sheet: Sheet, left: float, top: float, ambient: complex, units: DisplayUnits) -> None:
    """The ambient current as an arrow in the plan's directions, with its speed."""
    unit = sheet.scale
    speed = abs(ambient)
    if np.isnan(speed):
        return
    if speed == 0.0:
        sheet.write(
            "no ambient current", (left, top + 22 * unit), size=TEXT, name="current-text", va="center"
        )
        return
    along = 16 * unit * ambient / speed
    x, y = left + 18 * unit, top + 22 * unit
    arrow(
        sheet,
        (x - along.real, y + along.imag),
        (x + along.real, y - along.imag),
        name="current-arrow",
        width=2.6,
    )
    text = f"current\n{figures(units.lengthwise(speed, 1))} {units.speed}"
    sheet.write(text, (left + 44 * unit, y), size=TEXT, name="current-text", va="center")


def arrow(
    sheet: Sheet, start: tuple[float, float], end: tuple[float, float], *, name: str, width: float = 1.6
) -> None:
    """A straight arrow on the sheet [px]."""
    from matplotlib.patches import FancyArrowPatch

    sheet.paper.add_patch(
        FancyArrowPatch(
            start,
            end,
            arrowstyle="-|>",
            mutation_scale=sheet.points(11 + 2 * width),
            linewidth=sheet.points(width),
            color=INK,
            shrinkA=0,
            shrinkB=0,
            zorder=6,
            gid=name,
        )
    )


def draw_speed_scale(sheet: Sheet, space: Box, levels: FloatArray, units: DisplayUnits) -> None:
    """Bands of speed with their limits; the last box is for what is faster."""
    from matplotlib.patches import Rectangle

    unit = sheet.scale
    sheet.write(
        f"speed [{units.speed}]", (space.left, space.top + 4 * unit), size=TEXT, name="speed-scale-title"
    )
    colours = [*ramp_colours(len(levels) - 1), FASTER]
    width = min((space.right - space.left) / (len(colours) + 0.6), 40 * unit)
    top, height = space.top + 24 * unit, 18 * unit
    for index, colour in enumerate(colours):
        box = Rectangle(
            (space.left + index * width, top), width, height, facecolor=colour, edgecolor=FAINT_INK
        )
        box.set(linewidth=sheet.points(0.7), zorder=5, gid=f"speed-band-{index + 1}")
        sheet.paper.add_patch(box)
    texts = [figures(float(level)) for level in levels]
    widest = max(sheet.measure(text, 10)[0] for text in texts)
    every = max(1, int(np.ceil((widest + 6 * unit) / width)))
    for index, text in enumerate(texts[::every]):
        x = space.left + index * every * width
        sheet.write(text, (x, top + height + 5 * unit), size=10, name=f"speed-limit-{index + 1}", ha="center")
    x = space.left + len(levels) * width
    sheet.write(
        "faster", (x, top - 3 * unit), size=10, name="speed-faster", ha="right", va="bottom", color=FAINT_INK
    )

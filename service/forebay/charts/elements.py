"""Elements, structures and banks on the map, with the labels they want."""

from dataclasses import dataclass, field
from typing import assert_never

import numpy as np

from forebay.charts.labels import Wish, inside
from forebay.charts.land import visible_part
from forebay.charts.mapframe import MapFrame
from forebay.charts.sheet import Box, shortened
from forebay.charts.steps import figures
from forebay.charts.symbols import (
    STAGNATION_RADIUS,
    SYMBOL_RADIUS,
    Glyph,
    Stamp,
    stamp_disc,
    stamp_line,
    stamp_point,
)
from forebay.charts.units import DisplayUnits
from forebay.flow.layout import Doublet, Element, LineSink, LineSource, Pier, Sink, Source, Vortex
from forebay.flow.shores import Wall
from forebay.flow.stagnation.result import StagnationPoint

LONGEST_NAME = 28
"""Characters of a name that a label shows."""

LABEL_SIZE = 11.0
"""Size of labels [px at scale 1]."""

LABEL_BORDER = 3.0
"""Border of paper round the text of a label [px at scale 1]."""

SMALLEST_PIER = 2.5
"""Radius below which a pier is drawn larger than it is [px at scale 1]."""

SMALL_PIER = 9.0
"""Radius below which the stagnation points of a pier would hide it, and are left out [px at scale 1]."""

WALL_SHARES = (0.5, 0.3, 0.7, 0.15, 0.85)
"""Shares of the visible part of a wall at which its name is tried."""

ELEMENT_ZORDER = 10.0
STRUCTURE_ZORDER = 7.0


@dataclass(slots=True)
class Drawn:
    """What has been drawn so far.

    taken : boxes that labels must not cover [px];  symbols : those of elements among them
    wishes : labels wanted;  glyphs : what the key explains
    beyond : elements and structures outside the window;  hidden : stagnation points under a symbol
    """

    taken: list[Box] = field(default_factory=list)
    symbols: list[Box] = field(default_factory=list)
    wishes: list[Wish] = field(default_factory=list)
    glyphs: set[Glyph] = field(default_factory=set)
    beyond: int = 0
    hidden: int = 0

    def add(self, frame: MapFrame, glyph: Glyph, *, text: str, at: complex, radius: float) -> None:
        """Note a symbol at `at` [m] of a radius [px] and the label that it wants."""
        x, y = frame.on_sheet(at)
        self.glyphs.add(glyph)
        box = Box(x - radius, y - radius, x + radius, y + radius)
        self.taken.append(box)
        small = radius < SMALL_PIER * frame.sheet.scale
        if glyph is Glyph.PIER and small:
            self.symbols.append(box.grown(STAGNATION_RADIUS * frame.sheet.scale))
        elif glyph not in (Glyph.PIER, Glyph.STAGNATION):
            self.symbols.append(box)
        if text:
            self.wishes.append(wish_for(frame, text, (x, y), radius))


def wish_for(frame: MapFrame, text: str, anchor: tuple[float, float], radius: float) -> Wish:
    """A label's wish with the size of its text."""
    width, height = frame.sheet.measure(text, LABEL_SIZE)
    border = 2 * LABEL_BORDER * frame.sheet.scale
    return Wish(text, (width + border, height + border), anchor, radius)


def draw_elements(frame: MapFrame, elements: tuple[Element, ...], drawn: Drawn) -> None:
    """Symbols of the elements inside the window."""
    stamp = Stamp(frame.axes, frame.sheet, ELEMENT_ZORDER)
    for index, element in enumerate(elements):
        name = f"element-{index + 1}"
        match element:
            case LineSource() | LineSink():
                draw_line_element(frame, stamp, element, drawn=drawn, name=name)
            case Source() | Sink() | Vortex() | Doublet():
                if not frame.window.contains(element.at):
                    drawn.beyond += 1
                    continue
                glyph = glyph_of(element)
                turned = float(np.angle(element.moment)) if isinstance(element, Doublet) else 0.0
                x, y = frame.points(np.array([element.at]))[0]
                stamp_point(stamp, glyph, float(x), float(y), turned=turned, name=name)
                radius = SYMBOL_RADIUS * frame.sheet.scale
                drawn.add(frame, glyph, text=label_of(element, frame.units), at=element.at, radius=radius)
            case _:
                assert_never(element)


def draw_line_element(
    frame: MapFrame, stamp: Stamp, element: LineSource | LineSink, *, drawn: Drawn, name: str
) -> None:
    """A line element, with room kept free along all of it; the label leads to its middle."""
    middle = (element.start + element.end) / 2
    if not any(frame.window.contains(at) for at in (element.start, middle, element.end)):
        drawn.beyond += 1
        return
    (x0, y0), (x1, y1) = frame.points(np.array([element.start, element.end]))
    glyph = glyph_of(element)
    stamp_line(stamp, glyph, (float(x0), float(x1)), (float(y0), float(y1)), name=name)
    radius = 5.0 * frame.sheet.scale
    count = 1 + int(abs(element.end - element.start) / frame.pixel / radius)
    for share in np.linspace(0.0, 1.0, count + 1):
        at = element.start + share * (element.end - element.start)
        if frame.window.contains(at):
            drawn.add(frame, glyph, text="", at=at, radius=radius)
    shown = middle if frame.window.contains(middle) else at_edge(frame, element)
    drawn.wishes.append(wish_for(frame, label_of(element, frame.units), frame.on_sheet(shown), radius))


def at_edge(frame: MapFrame, element: LineSource | LineSink) -> complex:
    """The end of a line element that lies in the window."""
    return element.start if frame.window.contains(element.start) else element.end


def draw_piers(frame: MapFrame, piers: tuple[Pier, ...], drawn: Drawn) -> None:
    """Piers at their true size, but never too small to be seen."""
    stamp = Stamp(frame.axes, frame.sheet, STRUCTURE_ZORDER)
    for index, pier in enumerate(piers):
        if not frame.window.contains(pier.at):
            drawn.beyond += 1
            continue
        pixels = max(pier.radius / frame.pixel, SMALLEST_PIER * frame.sheet.scale)
        centre = complex(*frame.points(np.array([pier.at]))[0])
        stamp_disc(stamp, centre, pixels * frame.pixel / frame.units.metre, name=f"pier-{index + 1}")
        radius = frame.units.lengthwise(pier.radius, 1)
        text = f"{shortened(pier.name, LONGEST_NAME)}\npier, radius {figures(radius)} {frame.units.length}"
        drawn.add(frame, Glyph.PIER, text=text, at=pier.at, radius=pixels)


def draw_stagnation_points(frame: MapFrame, points: tuple[StagnationPoint, ...], drawn: Drawn) -> None:
    """A diamond at each stagnation point of the site; those that belong to line ends alone are left out."""
    stamp = Stamp(frame.axes, frame.sheet, ELEMENT_ZORDER + 1)
    symbols = tuple(drawn.symbols)
    for index, point in enumerate(points):
        if point.is_artefact or not frame.window.contains(point.at):
            continue
        if any(inside(box, frame.on_sheet(point.at)) for box in symbols):
            drawn.hidden += 1
            continue
        x, y = frame.points(np.array([point.at]))[0]
        stamp_point(stamp, Glyph.STAGNATION, float(x), float(y), name=f"stagnation-point-{index + 1}")
        radius = STAGNATION_RADIUS * frame.sheet.scale
        drawn.add(frame, Glyph.STAGNATION, text="", at=point.at, radius=radius)


def wall_wishes(frame: MapFrame, walls: tuple[Wall, ...]) -> list[list[Wish]]:
    """For each visible wall the label it wants, on the land side, at several places; one is enough."""
    wishes = []
    for wall in walls:
        part = visible_part(wall, frame.window)
        if part is None:
            continue
        middles = [part[0] + share * (part[1] - part[0]) for share in WALL_SHARES]
        wishes.append([inland_wish(frame, wall, middle) for middle in middles])
    return wishes


def inland_wish(frame: MapFrame, wall: Wall, place: complex) -> Wish:
    """The name of a wall beside a place on it, clear of the wall on the land side."""
    inland = -1j * wall.direction
    wish = wish_for(frame, wall.name, frame.on_sheet(place), 0.0)
    width, height = wish.size
    away = 0.5 * (abs(inland.real) * width + abs(inland.imag) * height) + 4 * frame.sheet.scale
    return Wish(wish.text, wish.size, frame.on_sheet(place + away * frame.pixel * inland), 0.0)


def glyph_of(element: Element) -> Glyph:
    """The symbol of an element."""
    match element:
        case Source():
            return Glyph.OUTFALL
        case Sink():
            return Glyph.INTAKE
        case LineSource():
            return Glyph.LINE_OUTFALL
        case LineSink():
            return Glyph.LINE_INTAKE
        case Vortex():
            return Glyph.VORTEX if element.circulation >= 0 else Glyph.CLOCKWISE_VORTEX
        case Doublet():
            return Glyph.DOUBLET
    assert_never(element)


def label_of(element: Element, units: DisplayUnits) -> str:
    """Name, kind and strength of an element in two lines."""
    name = shortened(element.name, LONGEST_NAME)
    match element:
        case Vortex():
            circulation = units.lengthwise(element.circulation, 2)
            what = f"vortex {figures(circulation)} {units.strength}".replace("-", "\N{MINUS SIGN}")
            return f"{name}\n{what}"
        case Doublet():
            moment = units.lengthwise(abs(element.moment), 3)
            return f"{name}\ndoublet {figures(moment)} {units.discharge}"
        case Source() | Sink() | LineSource() | LineSink():
            word = "intake" if isinstance(element, Sink | LineSink) else "outfall"
            return f"{name}\n{word} {figures(units.lengthwise(element.discharge, 3))} {units.discharge}"
    assert_never(element)

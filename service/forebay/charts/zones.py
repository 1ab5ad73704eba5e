"""The zones of the intakes: the water that each of them takes, told apart by hatching and not by colour."""

from dataclasses import dataclass
from itertools import cycle, islice
from typing import Final

from forebay.charts.elements import LONGEST_NAME, Drawn, draw_elements, draw_piers
from forebay.charts.flow_net import plan_sheet
from forebay.charts.layers import draw_land, draw_lines, ring_path
from forebay.charts.lettering import draw_labels
from forebay.charts.mapframe import MapFrame, open_map
from forebay.charts.margins import SIDE, TICKS, draw_foot, draw_head
from forebay.charts.options import FlowNetOptions, Picture, Scene
from forebay.charts.palette import DIVIDING, INK, PAPER
from forebay.charts.ring_marks import draw_open_edges, draw_outlines
from forebay.charts.sheet import Sheet, Style, blank_sheet, shortened
from forebay.flow.arrays import ComplexArray

FILLS: Final = (
    ("#dee7bc", "---"),
    ("#92cbbd", "|||"),
    ("#fcf6e3", "xxx"),
    ("#7096c3", "+++"),
    ("#b7dab6", "\\\\\\"),
    ("#6c76ae", ""),
)
"""Colour and hatching of one zone after the other; two of the same colour in grey differ in hatching."""

MOST_NAMED = 12
"""Zones that the key names."""

ROWS = 4
"""Zones below one another in the key."""

COLUMN = 190.0
"""Width of a column of the key [px at scale 1]."""

PITCH = 22.0
"""Distance between the lines of the key [px at scale 1]."""

EXPLANATION: Final = (
    "Hatched: the water that reaches the intake named in the key, as far as it was traced. Thick lines "
    "divide waters of different fates."
)


@dataclass(frozen=True, slots=True)
class Zone:
    """Water of one intake: its outline [m], empty where it has none."""

    name: str
    outline: ComplexArray


def draw_zones(scene: Scene, zones: tuple[Zone, ...], options: FlowNetOptions) -> Picture:
    """Draw the zones of intakes on the map of a scene.

    Parameters
    ----------
    scene : the flow, the window, its dividing streamlines
    zones : one for each intake; those without an outline are left out
    options : format, size, units, title

    Returns
    -------
    Picture, the same bytes for the same input on one machine. Groups of the SVG carry the ids `zone-<n>` and
    those of the flow net.
    """
    shown = tuple(zone for zone in zones if zone.outline.size > 2)
    plan = plan_sheet(options, scene)
    with blank_sheet(plan.width, plan.height, plan.scale) as sheet:
        frame = open_map(sheet, plan.map, scene.window, options.units)
        fill_zones(frame, shown)
        drawn = draw_surroundings(frame, scene)
        left_out = draw_labels(frame, scene, drawn)
        draw_head(sheet, scene, options)
        name_zones(frame, shown[:MOST_NAMED])
        draw_foot(sheet, zone_notes(scene, len(shown), left_out))
        return Picture(options.media_type, sheet.encode(options.media_type, options.title))


def fill_zones(frame: MapFrame, zones: tuple[Zone, ...]) -> None:
    """Each zone in its colour and hatching."""
    from matplotlib.patches import PathPatch

    for index, (zone, style) in enumerate(zip(zones, fills(len(zones)), strict=True)):
        path = ring_path(frame, [zone.outline])
        colour, hatch = style
        frame.axes.add_patch(PathPatch(path, facecolor=colour, edgecolor="none", zorder=1.0))
        marks: Style = {
            "facecolor": "none",
            "edgecolor": INK,
            "hatch": hatch,
            "linewidth": 0.0,
            "alpha": 0.55,
        }
        frame.axes.add_patch(PathPatch(path, zorder=1.1, gid=f"zone-{index + 1}", **marks))


def fills(count: int) -> list[tuple[str, str]]:
    """Colour and hatching of so many zones."""
    return list(islice(cycle(FILLS), count))


def draw_surroundings(frame: MapFrame, scene: Scene) -> Drawn:
    """Land, dividing streamlines, structures and elements."""
    drawn = Drawn()
    draw_land(frame, scene, drawn)
    if scene.dividing_streamlines:
        lines = scene.dividing_streamlines
        draw_lines(frame, lines, name="dividing-streamlines-casing", linewidth=4.6, color=PAPER, zorder=8.0)
        draw_lines(frame, lines, name="dividing-streamlines", linewidth=2.0, color=DIVIDING, zorder=8.1)
    draw_open_edges(frame, scene, drawn)
    draw_outlines(frame, scene.model.layout.outlines, drawn)
    draw_piers(frame, scene.model.piers, drawn)
    draw_elements(frame, scene.model.layout.elements, drawn)
    return drawn


def name_zones(frame: MapFrame, zones: tuple[Zone, ...]) -> None:
    """The key: a sample of each zone with its name."""
    sheet, unit = frame.sheet, frame.sheet.scale
    top = frame.box.bottom + (TICKS + 16) * unit
    for index, (zone, style) in enumerate(zip(zones, fills(len(zones)), strict=True)):
        x = SIDE[0] * unit + COLUMN * unit * (index // ROWS)
        y = top + PITCH * unit * (index % ROWS)
        draw_sample(sheet, x, y, style)
        name = shortened(zone.name, LONGEST_NAME)
        sheet.write(name, (x + 42 * unit, y), size=11.5, name=f"key-zone-{index + 1}", va="center")


def draw_sample(sheet: Sheet, x: float, y: float, style: tuple[str, str]) -> None:
    """A piece of a zone, its left end at a place on the sheet [px]."""
    from matplotlib.patches import Rectangle

    unit, (colour, hatch) = sheet.scale, style
    corner, width, height = (x, y - 7 * unit), 34 * unit, 14 * unit
    sheet.paper.add_patch(Rectangle(corner, width, height, facecolor=colour, edgecolor="none", zorder=5.0))
    marks: Style = {"facecolor": "none", "edgecolor": INK, "hatch": hatch, "linewidth": 0.0, "alpha": 0.55}
    sheet.paper.add_patch(Rectangle(corner, width, height, zorder=5.1, **marks))


def zone_notes(scene: Scene, count: int, left_out: int) -> list[str]:
    """What the picture shows, and what found no place in it."""
    notes = [EXPLANATION, *scene.notes]
    if count > MOST_NAMED:
        notes.append(f"Zones not named in the key: {count - MOST_NAMED}.")
    if left_out:
        notes.append(f"Labels left out for want of room: {left_out}.")
    return notes

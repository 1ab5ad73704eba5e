"""Labels on the map: of elements, piers and banks."""

from itertools import pairwise

import numpy as np

from forebay.charts.elements import LABEL_SIZE, Drawn, wall_wishes
from forebay.charts.labels import Ground, Placed, Wish, nearest_on, place_labels
from forebay.charts.mapframe import MapFrame
from forebay.charts.options import Scene
from forebay.charts.palette import INK, PAPER, WALL
from forebay.charts.ring_marks import island_wishes
from forebay.charts.sheet import Box, Sheet, Style
from forebay.flow.arrays import ComplexArray


def draw_labels(frame: MapFrame, scene: Scene, drawn: Drawn) -> int:
    """Labels of elements, structures, open edges, islands and banks; how many found no place."""
    border = 4 * frame.sheet.scale
    lines = [
        frame.on_sheet(complex(at))
        for line in scene.dividing_streamlines
        for at in spaced(line, 12 * frame.sheet.scale * frame.pixel)
    ]
    walls = [*island_wishes(frame, scene, drawn), *wall_wishes(frame, scene.model.walls)]
    ground = Ground(frame.box.grown(-border), drawn.taken, lines, frame.sheet.scale)
    placed, left_over = place_labels(drawn.wishes, ground)
    for index, label in enumerate(placed):
        write_label(frame, label, name=f"label-{index + 1}")
    taken = [*drawn.taken, *(label.box for label in placed)]
    for index, wishes in enumerate(walls):
        name_wall(frame, wishes, taken, name=f"wall-label-{index + 1}")
    return len(left_over)


def spaced(line: ComplexArray, spacing: float) -> ComplexArray:
    """Vertices of a line, refined so that neighbours are at most `spacing` apart [m]."""
    pieces = [
        start + (end - start) * np.linspace(0.0, 1.0, min(2 + int(abs(end - start) / spacing), 400))
        for start, end in pairwise(line)
    ]
    return np.concatenate(pieces) if pieces else line


def write_label(frame: MapFrame, label: Placed, *, name: str) -> None:
    """The text on paper, with a leader line if it stands away from its symbol."""
    sheet, box = frame.sheet, label.box
    if label.leader:
        end = nearest_on(box, label.wish.anchor)
        x, y = (label.wish.anchor[0], end[0]), (label.wish.anchor[1], end[1])
        sheet.paper.plot(x, y, color=INK, linewidth=sheet.points(0.9), zorder=2.0, gid=f"{name}-leader")
    draw_paper(sheet, box)
    middle = (box.left + box.right) / 2, (box.top + box.bottom) / 2
    sheet.write(
        label.wish.text, middle, size=LABEL_SIZE, name=name, ha="center", va="center", linespacing=1.2
    )


def draw_paper(sheet: Sheet, box: Box) -> None:
    """A piece of nearly opaque paper under a text."""
    from matplotlib.patches import Rectangle

    width, height = box.right - box.left, box.bottom - box.top
    style: Style = {"facecolor": PAPER, "edgecolor": "none", "alpha": 0.82, "zorder": 4.0}
    sheet.paper.add_patch(Rectangle((box.left, box.top), width, height, **style))


def name_wall(frame: MapFrame, wishes: list[Wish], taken: list[Box], *, name: str) -> None:
    """The name of a wall at the first of its places that is free; nowhere if none is."""
    inner = frame.box.grown(-2 * frame.sheet.scale)
    for wish in wishes:
        (x, y), (width, height) = wish.anchor, wish.size
        box = Box(x - width / 2, y - height / 2, x + width / 2, y + height / 2)
        if box.within(inner) and not any(box.overlaps(other) for other in taken):
            taken.append(box)
            draw_paper(frame.sheet, box)
            style: Style = {"ha": "center", "va": "center", "color": WALL, "style": "italic"}
            frame.sheet.write(wish.text, (x, y), size=LABEL_SIZE, name=name, **style)
            return

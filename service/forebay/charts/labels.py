"""Where labels stand: near what they name, off each other, off the symbols, inside the map."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from math import cos, hypot, pi, sin

import numpy as np

from forebay.charts.sheet import Box
from forebay.flow.arrays import FloatArray

DIRECTIONS = 16
"""Directions from its anchor in which a label is tried."""

DISTANCES = (8.0, 16.0, 30.0, 50.0, 80.0, 120.0, 170.0, 230.0)
"""Distances between symbol and label that are tried [px at scale 1]."""

LEADER_FROM = 22.0
"""Distance from which a line leads from the symbol to its label [px at scale 1]."""

PREFERRED = {14: 0.0, 2: 1.0, 10: 2.0, 6: 2.0}
"""Price of the directions towards the corners, up and to the right first; the others cost OTHERWISE [px]."""

OTHERWISE = 4.0
"""Price of a direction that is not preferred [px]."""

COVERING = 6.0
"""Price of covering a point of a line, against a distance of 1 px."""


@dataclass(frozen=True, slots=True)
class Wish:
    """A label that wants a place: its size, its anchor on the sheet, the radius of the symbol there [px]."""

    text: str
    size: tuple[float, float]
    anchor: tuple[float, float]
    radius: float


@dataclass(frozen=True, slots=True)
class Placed:
    """A label with its box on the sheet, and whether a leader line is wanted."""

    wish: Wish
    box: Box
    leader: bool


@dataclass(frozen=True, slots=True)
class Ground:
    """What labels must keep off.

    frame : they must lie inside;  taken : no label may overlap these
    lines : points that are better not covered [px];  scale : of the sheet
    """

    frame: Box
    taken: Sequence[Box]
    lines: Sequence[tuple[float, float]] = field(default=())
    scale: float = 1.0


def place_labels(wishes: Iterable[Wish], ground: Ground) -> tuple[list[Placed], list[Wish]]:
    """Labels with their places, in the order of the wishes, and those for which there is none.

    Notes
    -----
    Greedy: each label takes the cheapest of DIRECTIONS x len(DISTANCES) places that is free. Price =
    distance + COVERING per covered point of a line. No label overlaps another, a symbol, or the frame.
    """
    placed: list[Placed] = []
    left_over: list[Wish] = []
    taken = list(ground.taken)
    for wish in wishes:
        spots = sorted(candidates(wish, ground), key=lambda spot: spot[0])
        free = next((box for _, box in spots if not any(box.overlaps(other) for other in taken)), None)
        if free is None:
            left_over.append(wish)
            continue
        taken.append(free)
        gap = distance_to(free, wish.anchor) - wish.radius
        placed.append(Placed(wish, free, gap >= LEADER_FROM * ground.scale))
    return placed, left_over


def candidates(wish: Wish, ground: Ground) -> list[tuple[float, Box]]:
    """Places inside the frame with their prices."""
    spots = []
    points = np.array(ground.lines, dtype=np.float64).reshape(-1, 2)
    for distance in DISTANCES:
        for direction in range(DIRECTIONS):
            box = box_beside(wish, distance * ground.scale, 2 * pi * direction / DIRECTIONS)
            if box.within(ground.frame):
                dislike = PREFERRED.get(direction, OTHERWISE)
                spots.append((distance + dislike + COVERING * covered(box, points), box))
    return spots


def box_beside(wish: Wish, distance: float, angle: float) -> Box:
    """Box of a label about `distance` away from the symbol in a direction (y downwards)."""
    width, height = wish.size
    reach = wish.radius + distance
    x = (
        wish.anchor[0]
        + reach * cos(angle)
        + 0.5 * width * (cos(angle) / max(abs(cos(angle)), abs(sin(angle))))
    )
    y = (
        wish.anchor[1]
        + reach * sin(angle)
        + 0.5 * height * (sin(angle) / max(abs(cos(angle)), abs(sin(angle))))
    )
    return Box(x - width / 2, y - height / 2, x + width / 2, y + height / 2)


def inside(box: Box, point: tuple[float, float]) -> bool:
    """Whether a point lies in a box."""
    return box.left <= point[0] <= box.right and box.top <= point[1] <= box.bottom


def covered(box: Box, points: FloatArray) -> int:
    """How many points, shape (n, 2), lie in a box, its edges included."""
    x, y = points.T
    return int(np.count_nonzero((box.left <= x) & (x <= box.right) & (box.top <= y) & (y <= box.bottom)))


def distance_to(box: Box, point: tuple[float, float]) -> float:
    """Distance from a point to a box [px], 0 inside."""
    return hypot(*(a - b for a, b in zip(nearest_on(box, point), point, strict=True)))


def nearest_on(box: Box, point: tuple[float, float]) -> tuple[float, float]:
    """Point of a box nearest to a point."""
    return min(max(point[0], box.left), box.right), min(max(point[1], box.top), box.bottom)

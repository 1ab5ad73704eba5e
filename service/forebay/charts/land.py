"""Land, banks and where their names may stand."""

from typing import assert_never

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import (
    Basin,
    Channel,
    Corner,
    DeadEnd,
    OpenWater,
    Shore,
    StraightBank,
    Surveyed,
)
from forebay.flow.shores import Wall
from forebay.flow.stagnation.result import Window
from forebay.trade.survey.rings import signed_area

FAN = 49
"""Points on the arc that stands for the far rim of a corner's land."""


def reach_of(window: Window, place: complex) -> float:
    """A length that leads from `place` beyond the window in any direction [m]."""
    middle = complex(sum(window.x), sum(window.y)) / 2
    return abs(middle - place) + 2 * abs(complex(window.x[1] - window.x[0], window.y[1] - window.y[0]))


def land_rings(shore: Shore, window: Window) -> list[ComplexArray]:  # noqa: PLR0911
    """Closed rings round the land in and about the window, x + iy [m]; a ring within another is its hole."""
    match shore:
        case OpenWater():
            return []
        case StraightBank(point, along):
            return [half_plane(point, along, reach_of(window, point))]
        case Channel(point, along, width):
            opposite = point + 1j * along * width
            reach = reach_of(window, point) + width
            return [half_plane(point, along, reach), half_plane(opposite, -along, reach)]
        case Corner(vertex, along, angle):
            return corner_land(vertex, along, angle, reach_of(window, vertex))
        case DeadEnd(point, along, width):
            far = reach_of(window, point) + width
            local = [far, 0, 1j * width, far + 1j * width, far + 1j * far, -far + 1j * far, -far - 1j * far]
            return [np.asarray(point + along * np.array([*local, far - 1j * far]), dtype=np.complex128)]
        case Basin(corner, along, length, width):
            far = reach_of(window, corner) + length + width
            rim = np.array([-1 - 1j, 1 - 1j, 1 + 1j, -1 + 1j]) * far
            water = np.array([0, 1j * width, length + 1j * width, length])
            return [np.asarray(corner + along * ring, dtype=np.complex128) for ring in (rim, water)]
        case Surveyed():
            return surveyed_land(shore, window)
    assert_never(shore)


def surveyed_land(shore: Surveyed, window: Window) -> list[ComplexArray]:
    """Land outside the outer ring, and the islands."""
    outer = np.array(shore.outer)
    middle = complex(outer.mean())
    far = reach_of(window, middle) + 2 * float(np.max(np.abs(outer - middle)))
    square: ComplexArray = middle + far * np.array([-1 - 1j, 1 - 1j, 1 + 1j, -1 + 1j], dtype=np.complex128)
    # each ring runs against the one that holds it, so that water is a hole and an island is none
    islands = [turned(np.array(island.points), anticlockwise=True) for island in shore.islands]
    return [square, turned(outer, anticlockwise=False), *islands]


def turned(ring: ComplexArray, *, anticlockwise: bool) -> ComplexArray:
    """The ring in one sense."""
    return ring if (signed_area(ring) > 0.0) == anticlockwise else ring[::-1]


def half_plane(point: complex, along: complex, reach: float) -> ComplexArray:
    """Land to the right of a bank through `point`."""
    local = np.array([-reach, -reach - 1j * reach, reach - 1j * reach, reach])
    return np.asarray(point + along * local, dtype=np.complex128)


def corner_land(vertex: complex, along: complex, angle: float, reach: float) -> list[ComplexArray]:
    """Land behind a corner: from the second bank round to the first; none behind a thin wall."""
    if angle >= 2 * np.pi - 1e-9:
        return []
    rim = vertex + along * reach * np.exp(1j * np.linspace(angle, 2 * np.pi, FAN))
    return [np.concatenate([[vertex], rim]).astype(np.complex128)]


def visible_part(wall: Wall, window: Window) -> tuple[complex, complex] | None:
    """Ends of the part of a wall inside the window [m]; None if there is none."""
    reach = reach_of(window, wall.point)
    first, last = -min(wall.before, reach), min(wall.after, reach)
    for position, rate, (low, high) in (
        (wall.point.real, wall.direction.real, window.x),
        (wall.point.imag, wall.direction.imag, window.y),
    ):
        if abs(rate) < 1e-12:
            if not low <= position <= high:
                return None
            continue
        bounds = sorted(((low - position) / rate, (high - position) / rate))
        first, last = max(first, bounds[0]), min(last, bounds[1])
    if last <= first:
        return None
    return wall.point + first * wall.direction, wall.point + last * wall.direction

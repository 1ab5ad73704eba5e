"""Land, banks and where their names may stand."""

from typing import assert_never

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.layout import Basin, Channel, Corner, DeadEnd, OpenWater, Shore, StraightBank
from forebay.flow.shores import Wall
from forebay.flow.stagnation.result import Window

FAN = 49
"""Points on the arc that stands for the far rim of a corner's land."""


def reach_of(window: Window, place: complex) -> float:
    """A length that leads from `place` beyond the window in any direction [m]."""
    middle = complex(sum(window.x), sum(window.y)) / 2
    return abs(middle - place) + 2 * abs(complex(window.x[1] - window.x[0], window.y[1] - window.y[0]))


def land_rings(shore: Shore, window: Window) -> list[ComplexArray]:
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
    assert_never(shore)


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

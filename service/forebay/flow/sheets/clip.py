"""The part of an outline that stands in the water of a shore with straight banks."""

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.shores import Frame, Wall

NEAR_BANK = 1e-6
"""Distance from a bank, over the size of the outline, within which a vertex is put on it [-]."""
_SHORT = 1e-9
"""Edges shorter than this part of the outline's size are left out [-]."""


@dataclass(frozen=True, eq=False)
class Cut:
    """What is left of an outline.

    runs : parts of the ring that stand in the water, from bank to bank or closed, solid on the right [m]
    closed : whether there is one run, which meets no bank
    body : the whole outline, inside on the right [m]
    """

    runs: tuple[ComplexArray, ...]
    closed: bool
    body: ComplexArray


def clockwise(points: ComplexArray) -> ComplexArray:
    """The same ring with its inside on the right."""
    area = 0.5 * float(np.sum((np.conj(points) * np.roll(points, -1)).imag))
    return points[::-1] if area > 0.0 else points


def distinct(points: ComplexArray) -> ComplexArray:
    """The ring without edges that are too short to mean anything."""
    size = abs(complex(np.ptp(points.real), np.ptp(points.imag)))
    kept = np.abs(points - np.roll(points, 1)) > _SHORT * size
    return points[kept]


def cut_at_banks(points: ComplexArray, frame: Frame) -> Cut:
    """An outline without what lies on or behind the banks.

    points : shape (n,), simple ring of any sense [m]
    """
    size = abs(complex(np.ptp(points.real), np.ptp(points.imag)))
    ring = clockwise(distinct(points))
    reach = NEAR_BANK * size
    for wall in frame.walls:
        near = np.asarray(wall.distance(ring)) <= reach
        ring = np.where(near, wall.nearest(ring), ring)
    pieces: list[tuple[complex, complex]] = []
    for a, b in zip(ring, np.roll(ring, -1), strict=True):
        pieces += _pieces(complex(a), complex(b), frame, reach)
    runs, closed = _joined(pieces, frame, reach)
    return Cut(runs, closed, ring)


def _pieces(a: complex, b: complex, frame: Frame, reach: float) -> list[tuple[complex, complex]]:
    """Parts of an edge in the water."""
    crossings = [share for wall in frame.walls if (share := _crossing(a, b, wall)) is not None]
    shares = [0.0, *sorted(crossings), 1.0]
    ends = [a, *(_onto(a + (b - a) * share, frame.walls) for share in shares[1:-1]), b]
    kept = []
    for start, end in pairwise(ends):
        middle = np.asarray(0.5 * (start + end))
        dry = not bool(frame.wet(frame.map.forward(middle), np.zeros(())))
        along = any(float(wall.distance(middle)) <= 2.0 * reach for wall in frame.walls)
        along = along and _same_wall(start, end, frame.walls, reach)
        if not dry and not along and abs(end - start) > 0.0:
            kept.append((start, end))
    return kept


def _same_wall(a: complex, b: complex, walls: tuple[Wall, ...], reach: float) -> bool:
    places = np.array([a, b])
    return any(float(np.max(wall.distance(places))) <= reach for wall in walls)


def _crossing(a: complex, b: complex, wall: Wall) -> float | None:
    """Share of the edge at which it crosses a wall."""
    above, below = (((z - wall.point) * wall.direction.conjugate()).imag for z in (a, b))
    if above * below >= 0.0:
        return None
    share = above / (above - below)
    along = ((a + (b - a) * share - wall.point) * wall.direction.conjugate()).real
    return float(share) if -wall.before < along < wall.after else None


def _onto(z: complex, walls: tuple[Wall, ...]) -> complex:
    nearest = min(walls, key=lambda wall: float(wall.distance(np.asarray(z))))
    return complex(nearest.nearest(np.asarray(z)))


def _joined(
    pieces: list[tuple[complex, complex]], frame: Frame, reach: float
) -> tuple[tuple[ComplexArray, ...], bool]:
    """Pieces in a row as runs; a run ends where the ring meets a bank."""
    runs: list[list[complex]] = []
    for start, end in pieces:
        if runs and runs[-1][-1] == start and not _on_wall(start, frame, reach):
            runs[-1].append(end)
        else:
            runs.append([start, end])
    if not runs:
        return (), False
    if runs[-1][-1] == runs[0][0] and not _on_wall(runs[0][0], frame, reach):
        if len(runs) == 1:
            return (np.array(runs[0][:-1]),), True
        runs[0] = runs.pop()[:-1] + runs[0]
    return tuple(np.array(run) for run in runs), False


def _on_wall(z: complex, frame: Frame, reach: float) -> bool:
    return any(float(wall.distance(np.asarray(z))) <= reach for wall in frame.walls)

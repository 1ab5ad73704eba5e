"""Rings of surveyed water and outlines on the map: their lines, and lines of the net led up to them."""

from collections.abc import Sequence

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Layout, OpenEdge, Surveyed

NO_LINE = np.zeros(0, dtype=np.complex128)


def closed(points: Sequence[complex]) -> ComplexArray:
    """A ring with its first vertex repeated at the end [m]."""
    return np.array([*points, points[0]], dtype=np.complex128)


def ring_lines(layout: Layout) -> list[ComplexArray]:
    """Every ring and outline of a layout as a closed line, open edges included [m]."""
    lines = [closed(outline.points) for outline in layout.outlines]
    if isinstance(layout.shore, Surveyed):
        lines += [closed(layout.shore.outer), *(closed(island.points) for island in layout.shore.islands)]
    return lines


def bank_lines(layout: Layout) -> list[ComplexArray]:
    """Parts of the outer ring that are land, and the islands [m]."""
    if not isinstance(layout.shore, Surveyed):
        return []
    outer = layout.shore.outer
    opened = {(edge.first + step) % len(outer) for edge in layout.shore.edges for step in range(edge.count)}
    islands = [closed(island.points) for island in layout.shore.islands]
    if not opened:
        return [closed(outer), *islands]
    starts = [k for k in range(len(outer)) if k not in opened and (k - 1) % len(outer) in opened]
    return [_run(outer, start, _length_of_run(start, opened, len(outer))) for start in starts] + islands


def _length_of_run(start: int, opened: set[int], size: int) -> int:
    return next(count for count in range(1, size + 1) if (start + count) % size in opened)


def opening_line(shore: Surveyed, edge: OpenEdge) -> ComplexArray:
    """An open edge as a line [m]."""
    return _run(shore.outer, edge.first, edge.count)


def opening_lines(layout: Layout) -> list[ComplexArray]:
    """Every open edge as a line [m]."""
    shore = layout.shore
    return [opening_line(shore, edge) for edge in shore.edges] if isinstance(shore, Surveyed) else []


def _run(ring: Sequence[complex], first: int, count: int) -> ComplexArray:
    return np.array([ring[(first + step) % len(ring)] for step in range(count + 1)], dtype=np.complex128)


def middle_of(line: ComplexArray) -> complex:
    """Place half way along a line [m]."""
    lengths = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(line)))])
    half = 0.5 * lengths[-1]
    return complex(np.interp(half, lengths, line.real), np.interp(half, lengths, line.imag))


def led_up(lines: Sequence[ComplexArray], walls: Sequence[ComplexArray], reach: float) -> list[ComplexArray]:
    """Lines whose ends are led straight on to a wall that they would meet within `reach` [m]."""
    if not walls:
        return list(lines)
    starts = np.concatenate([wall[:-1] for wall in walls])
    spans = np.concatenate([np.diff(wall) for wall in walls])
    done = []
    for line in lines:
        head = _meeting(line[0], line[0] - line[1], (starts, spans), reach)
        tail = _meeting(line[-1], line[-1] - line[-2], (starts, spans), reach)
        done.append(np.concatenate([head, line, tail]))
    return done


def _meeting(
    place: complex, heading: complex, walls: tuple[ComplexArray, ComplexArray], reach: float
) -> ComplexArray:
    """The nearest point of walls (starts, spans) ahead within `reach`, if there is one."""
    if heading == 0:
        return NO_LINE
    starts, spans = walls
    unit = heading / abs(heading)
    across = (np.conj(unit) * spans).imag
    offset = np.conj(unit) * (starts - place)
    with np.errstate(divide="ignore", invalid="ignore"):
        share: FloatArray = -offset.imag / across
        ahead = offset.real + share * (np.conj(unit) * spans).real
    met = (share >= 0.0) & (share <= 1.0) & (ahead > 0.0) & (ahead <= reach)
    if not met.any():
        return NO_LINE
    return np.array([place + unit * float(ahead[met].min())], dtype=np.complex128)

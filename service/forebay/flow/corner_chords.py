"""Chords of a corner: straight in the water, curved in the mapped plane.

A path integral of poles needs to know at which height the path passes each pole, and needs Re tau to be
monotone. Re tau grows with the distance from the vertex, so chords are cut where they come nearest to it, and
the heights are those of the places at the pole's distance from the vertex.
"""

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.maps import LogarithmMap
from forebay.flow.poles import PoleField


def corner_chords(
    corner: LogarithmMap, field: PoleField, start: ComplexArray, end: ComplexArray, columns: int
) -> ComplexArray:
    """Integrals of W dz of the poles along straight chords of a corner.

    corner, field : map and poles;  start, end : shape (n,), ends of the chords [m]
    Returns shape (n, columns) [m2/s], see `PoleField.chords`.
    """
    a, span = start - corner.vertex, end - start
    square = np.abs(span) ** 2
    part = np.clip(-(a.conj() * span).real / np.where(square > 0.0, square, 1.0), 0.0, 1.0)
    foot = start + part * span
    halves = ((start, foot), (foot, end))
    return sum(
        (_monotone(corner, field, p, q, columns) for p, q in halves),
        np.zeros((start.size, columns), np.complex128),
    )


def _monotone(
    corner: LogarithmMap, field: PoleField, start: ComplexArray, end: ComplexArray, columns: int
) -> ComplexArray:
    """The same for chords along which the distance from the vertex only grows or only falls."""
    radius = np.abs(corner.inverse(field.poles) - corner.vertex)
    a, span = (start - corner.vertex)[:, None], (end - start)[:, None]
    square, half = np.abs(span) ** 2, (a.conj() * span).real
    root = np.sqrt(np.maximum(half**2 - square * (np.abs(a) ** 2 - radius**2), 0.0))
    outwards = np.abs(end - corner.vertex) >= np.abs(start - corner.vertex)
    part = np.where(outwards[:, None], root - half, -root - half) / np.where(square > 0.0, square, 1.0)
    height = corner.forward(a + corner.vertex + np.clip(part, 0.0, 1.0) * span).imag
    crossing = np.ascontiguousarray(height)  # one layout, for which the kernel is compiled beforehand
    return field.chords(corner.forward(start), corner.forward(end), owner_count=columns, crossing=crossing)

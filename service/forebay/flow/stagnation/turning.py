"""Turning of W_tau along a path, proven: no step in which the direction could turn round unseen."""

from collections.abc import Callable

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.poles import PoleField
from forebay.flow.stagnation.certificate import EPS, TERM_ROUNDING
from forebay.flow.stagnation.kernels import sensitivity, variation

Disc = Callable[[ComplexArray, FloatArray], tuple[ComplexArray, BoolArray]]
"""(centres, radii) -> W at the centres, and whether W is proven to stay in a half-plane over each disc."""


class UnprovenTurningError(ArithmeticError):
    """The path passes too near a zero or a pole for its turning to be proven."""


def rational_disc(field: PoleField) -> Disc:
    """Proof for discs about points of the mapped plane, W_tau a sum of poles only."""
    parts = (field.kappa, field.poles, field.strengths, field.centres, field.moments)

    def disc(at: ComplexArray, radius: FloatArray) -> tuple[ComplexArray, BoolArray]:
        velocity, slope = field.jet(at)
        moved, _, _ = sensitivity(at, *parts)
        error = EPS * (TERM_ROUNDING * field.magnitude(at) + 2.0 * moved)
        spread = np.abs(slope) * radius + variation(at, radius, *parts)[0] + error
        return velocity, np.abs(velocity) > 1.02 * spread

    return disc


def turning(disc: Disc, path: ComplexArray, *, halvings: int = 30) -> float:
    """Change of arg W along a polyline [rad].

    Parameters
    ----------
    disc : the proof for single discs
    path : shape (n,), corners of the polyline [-]

    Raises
    ------
    UnprovenTurningError : if some piece is not proven after `halvings` halvings

    Notes
    -----
    A piece counts when W stays in a half-plane over the disc on it, so that the principal angle between
    its ends is the turning.
    """
    start, end = path[:-1], path[1:]
    total = 0.0
    for _ in range(halvings):
        if start.size == 0:
            return total
        middle = 0.5 * (start + end)
        velocity, proven = disc(
            middle, 0.5 * np.abs(end - start) * (1.0 + 4.0 * EPS) + 4.0 * EPS * np.abs(middle)
        )
        done = np.flatnonzero(proven)
        none = np.zeros(done.size)
        first = disc(start[done], none)[0]
        last = disc(end[done], none)[0]
        total += float(np.sum(np.angle(velocity[done] / first) + np.angle(last / velocity[done])))
        left = ~proven
        start, middle, end = start[left], middle[left], end[left]
        start, end = np.concatenate([start, middle]), np.concatenate([middle, end])
    raise UnprovenTurningError("the path passes too near a zero or a pole")


def winding(disc: Disc, centre: complex, radius: float) -> int:
    """Zeros less poles of W inside a circle (of a 64-gon in it and the circle alike).

    Raises
    ------
    UnprovenTurningError
    """
    corners = centre + radius * np.exp(2j * np.pi * np.arange(65) / 64)
    corners[-1] = corners[0]
    return round(turning(disc, corners, halvings=6) / (2.0 * np.pi))

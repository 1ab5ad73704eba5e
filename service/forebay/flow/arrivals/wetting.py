"""Which parts of a curve lie in the water, and how much of a patch does."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.arrivals.curves import Arc, Part, Straight
from forebay.flow.model import FlowModel

_FINEST = 1e-9
"""Length over the scale at which the search for a wall's place ends [-]."""
_MOST = 4096
"""Pieces under way at once: more only where the curve runs along a wall, all of which counts as water."""


def wet_parts(model: FlowModel, curves: Sequence[Straight | Arc]) -> list[list[Part]]:
    """Parts of each curve in the water, as pairs of s, ascending.

    A piece is wet or dry as a whole if its middle is farther from every wall than from its own ends; others
    are halved.
    """
    owner = np.arange(len(curves))
    low, high = np.zeros(owner.size), np.ones(owner.size)
    lengths = np.array([curve.length for curve in curves])
    rows: list[tuple[IntArray, FloatArray, FloatArray, BoolArray]] = []
    while low.size:
        middle = _places(curves, owner, 0.5 * (low + high))
        half = 0.5 * (high - low) * lengths[owner]
        done = np.abs(model.distance_to_wall(middle)) >= half
        done |= (half <= _FINEST * model.scale) | np.bool_(low.size > _MOST * len(curves))
        rows.append((owner[done], low[done], high[done], model.wet(middle[done])))
        centre, owner = 0.5 * (low + high)[~done], np.tile(owner[~done], 2)
        low, high = np.concatenate([low[~done], centre]), np.concatenate([centre, high[~done]])
    owners, starts, ends, wet = (np.concatenate([row[k] for row in rows]) for k in range(4))
    order = np.lexsort((starts, owners))
    order = order[wet[order].astype(np.bool_)]
    cuts = np.searchsorted(owners[order], np.arange(1, len(curves)))
    pairs = zip(np.split(starts[order], cuts), np.split(ends[order], cuts), strict=True)
    return [_joined(one, other) for one, other in pairs]


def _places(curves: Sequence[Straight | Arc], owner: IntArray, s: FloatArray) -> ComplexArray:
    places = np.empty(owner.size, dtype=np.complex128)
    for k in np.unique(owner):
        places[owner == k] = curves[k].place(s[owner == k])
    return places


def _joined(starts: FloatArray, ends: FloatArray) -> list[Part]:
    joined: list[Part] = []
    for a, b in zip(starts, ends, strict=True):
        if joined and joined[-1][1] == a:
            joined[-1] = (joined[-1][0], float(b))
        else:
            joined.append((float(a), float(b)))
    return joined


@dataclass(frozen=True, slots=True)
class Amount:
    """A quadrature's value and its estimated error."""

    value: float
    error: float

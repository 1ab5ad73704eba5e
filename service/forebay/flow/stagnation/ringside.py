"""The strip of water along polygonal walls, where no disc is free of wall and so none can be proved empty.

Zeros in the strip are looked for by Newton's iteration from every box of it; that none is missing is not
proved there but follows from the count: where the flow is irrotational all zeros count the same way, so that
found ones that make up the count are all there are.
"""

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.model import FlowModel

FINENESS = 1.0 / 1000.0
"""Size of the boxes in the strip over that of the region [-]."""

_ITERATIONS = 12
_WANDER = 8.0
"""How far an iteration may go from its box, in radii of the box [-]."""


def beside_rings(model: FlowModel, z: ComplexArray, radius: FloatArray) -> tuple[BoolArray, BoolArray]:
    """Which discs touch a ring, and which lie on land behind one, shape (n,)."""
    distance = model.rings_distance(z)
    touches = np.abs(distance) <= 1.5 * radius
    return touches, ~touches & (distance < 0.0)


def ring_distance(model: FlowModel, z: ComplexArray) -> FloatArray:
    """Distance to the nearest edge of any ring, shape (n,) [m]."""
    return np.abs(model.rings_distance(z))


def is_still(model: FlowModel, z: ComplexArray, most: FloatArray) -> BoolArray:
    """Where speeds up to `most` [m/s] are below the error that the boundary leaves in them, shape (n,).

    Nothing can be told there about zeros; if the count closes there are none.
    """
    if model.bound is None:
        return np.zeros(z.shape, dtype=np.bool_)
    return np.asarray(most < model.bound.velocity(ring_distance(model, z)), dtype=np.bool_)


def strip_zeros(model: FlowModel, z: ComplexArray, radius: FloatArray) -> ComplexArray:
    """Places in the water where Newton's iteration from the strip's boxes ends, each once, shape (k,)."""
    jet = model.jet(z)
    with np.errstate(invalid="ignore"):
        ready = model.wet(z) & (np.abs(jet.velocity) < 2.0 * _WANDER * np.abs(jet.slope) * radius)
    start, reach = z[ready], _WANDER * radius[ready]
    at, settled = start.copy(), np.zeros(start.shape, dtype=np.bool_)
    for _ in range(_ITERATIONS):
        going = ~settled
        if not going.any():
            break
        jet = model.jet(at[going])
        with np.errstate(divide="ignore", invalid="ignore"):
            step = -jet.velocity / jet.slope
        step = np.where(np.isfinite(step), step, 2.0 * reach[going])
        moved = at[going] + step
        lost = np.abs(moved - start[going]) > reach[going]
        at[going] = np.where(lost, complex(np.nan, np.nan), moved)
        settled[going] = lost | (np.abs(step) < 1e-11 * model.scale)
    found = at[settled & np.isfinite(at.real)]
    found = found[model.wet(found)]
    return _distinct(found, 1e-8 * model.scale)


def _distinct(z: ComplexArray, reach: float) -> ComplexArray:
    """Places farther apart than a reach."""
    kept: list[complex] = []
    for place in z[np.lexsort((z.imag, z.real))]:
        if not any(abs(place - other) <= reach for other in kept):
            kept.append(complex(place))
    return np.array(kept, dtype=np.complex128)

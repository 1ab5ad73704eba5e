"""What the sheets on outlines and surveyed shores can do over a disc: a bound of their Taylor remainder.

The nodes of an element, with their images, are poles of the mapped plane and are bounded like all poles. Next
to an element its nodes understate it, so that the element as a whole is added: with f its density,
W = 1/(2 pi i) integral of f' dt / (t - z), and no part of it is nearer than the element itself.
"""

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.sheets.term import SheetTerm
from forebay.flow.stagnation.kernels import variation

_NEAR = 8.0
"""Distance over an element's half-length within which it is bounded as a whole [-]."""

_NOTHING = np.empty(0, dtype=np.complex128), np.empty((0, 0), dtype=np.complex128)


def mapped_bound(term: SheetTerm, z: ComplexArray, reach: FloatArray) -> FloatArray:
    """Remainder of W_tau of the nodes, shape (n,) [m2/s]; inf at a node.

    z : centres [m];  reach : radii of the discs about them in the mapped plane [-]
    """
    panels = term.field.panels
    tau = panels.frame.map.forward(term.local(z))
    parts = (panels.frame.kappa, panels.poles.ravel(), term.field.strengths, *_NOTHING)
    return np.asarray(variation(tau, reach, *parts)[0], dtype=np.float64)


def near_bound(term: SheetTerm, z: ComplexArray, radius: FloatArray) -> FloatArray:
    """Remainder of W of the elements next to discs and of their mirror images, shape (n,) [m/s]."""
    panels, local = term.field.panels, term.local(z)
    weight = np.abs(term.field.slope).sum(axis=1) / np.pi
    total = np.zeros(z.shape)
    for rule in panels.mirrors.rules:
        seen = np.where(rule.allowed, weight, 0.0)
        total += _element_bounds(rule.image(local), radius, panels.middle, panels.half, seen)
    return total


@njit(cache=True, error_model="numpy")
def _element_bounds(
    z: ComplexArray, radius: FloatArray, middle: ComplexArray, half: ComplexArray, weight: FloatArray
) -> FloatArray:
    total = np.zeros(z.size)
    for i in range(z.size):
        for k in range(middle.size):
            away = z[i] - middle[k]
            size = abs(half[k])
            if weight[k] == 0.0 or abs(away) > (_NEAR + 1.0) * size + radius[i]:
                continue
            local = away / half[k]
            part = min(max(local.real, -1.0), 1.0)
            distance = abs(local - part) * size
            if distance <= radius[i]:
                total[i] = np.inf
                break
            q = radius[i] / distance
            total[i] += weight[k] * q * q / (distance * (1.0 - q))
    return total

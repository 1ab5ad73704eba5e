"""How many zeros the velocity must have: the count that a search is held against.

dF = W dz is a differential on the water closed by its mirror image along all walls, a closed surface of
b - 1 handles for b boundaries; it has 2 (b - 1) - 2 more zeros than poles. A zero in the water stands twice
on
that surface, one on a wall once, and so do poles; each pier adds a handle, hence 2. What is left is the far
field:

    open water      D = p + 2P - 2k     k = 0 with a current, else the first moment of the field that is not
    zero straight bank   D = p + 2P - k
    channel, corner D = p + 2P - k' - k"   k = 0 at an end where water moves, else W_tau ~ exp(-k |tau|) there
    dead end        D = p + 2P - 1 - k
    basin           D = p + 2P - 2

with p = sum of pole orders, 2 per order in the water and 1 on a wall, and P piers.

References
----------
O. Forster, Lectures on Riemann Surfaces, Springer, 1981, section 17 (degree of the canonical divisor).
"""

import math
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.poles import PoleField
from forebay.flow.shores import Frame

EPS = float(np.finfo(np.float64).eps)

VANISHING = 64.0
"""A far-field coefficient counts as zero below this many eps of the sum of its absolute parts [-]."""

_MOST_ORDERS = 40
"""Highest far-field coefficient looked at."""


class UncountableFieldError(ArithmeticError):
    """The field vanishes to rounding in all far-field orders looked at: it has no isolated zeros to count."""


@dataclass(frozen=True, slots=True)
class FarField:
    """Orders of the zeros of W_tau at the ends of the mapped plane.

    left, right : k at Re tau = -inf and +inf (periodic kernel); 0 where water moves
    infinity : k at infinity (rational kernel); 0 with a current
    vertex : real coefficient a_k of W_tau ~ a_k exp(k Re tau) at the left end [m2/s]
    """

    left: int = 0
    right: int = 0
    infinity: int = 0
    vertex: float = 0.0

    @property
    def total(self) -> int:
        """Zeros lost to the ends in one period."""
        return self.left + self.right + self.infinity


def far_field(field: PoleField) -> FarField:
    """Orders of W_tau at the ends of the mapped plane.

    Raises
    ------
    UncountableFieldError : if W_tau vanishes in every order looked at
    """
    if field.kappa == 0.0:
        return FarField(infinity=_first(*_moments(field), first=0)[0])
    left, coefficient = _first(*_end_series(field, -1.0), first=0)
    right, _ = _first(*_end_series(field, 1.0), first=0)
    return FarField(left=left, right=right, vertex=coefficient.real)


def _first(coefficients: ComplexArray, sizes: FloatArray, first: int) -> tuple[int, complex]:
    present = np.flatnonzero(np.abs(coefficients) > VANISHING * EPS * sizes)
    if present.size == 0:
        raise UncountableFieldError("the field vanishes at the far end in every order looked at")
    return int(present[0]) + first, complex(coefficients[present[0]])


def _moments(field: PoleField) -> tuple[ComplexArray, FloatArray]:
    """Coefficients of t^-k of W_tau about the middle of the poles, and the sums of absolute parts."""
    everything = np.concatenate([field.poles, field.centres])
    middle = np.mean(everything) if everything.size else 0j
    scale = float(np.max(np.abs(everything - middle), initial=0.0)) or 1.0
    orders = np.arange(_MOST_ORDERS)
    powers = ((field.poles - middle) / scale)[:, None] ** orders
    coefficients = np.concatenate([[field.constant], field.strengths @ powers / scale])
    sizes = np.concatenate(
        [[abs(field.constant)], np.abs(field.strengths) @ np.ones_like(powers, dtype=float) / scale]
    )
    for centre, moments in zip(field.centres, field.moments, strict=True):
        away = (centre - middle) / scale
        for n in range(1, min(moments.size, _MOST_ORDERS - 1) + 1):
            j = np.arange(_MOST_ORDERS - n)
            binomials = np.array([math.comb(n + int(i), n) for i in j], dtype=float)
            part = -n * moments[n - 1] / scale ** (n + 1) * binomials
            coefficients[n + 1 :] += part * away**j
            sizes[n + 1 :] += np.abs(part)
    return coefficients, sizes


def _end_series(field: PoleField, side: float) -> tuple[ComplexArray, FloatArray]:
    """Coefficients a_k of exp(-k side (tau - edge)) in W_tau at one end, and the sums of absolute parts.

    With E = exp(-side (tau - p)), side X = 1/2 + E + E^2 + ...
    """
    everything = np.concatenate([field.poles, field.centres])
    edge = float(np.max(side * everything.real, initial=-np.inf))
    if not math.isfinite(edge):
        return np.array([field.constant]), np.array([abs(field.constant)])
    decay = np.exp(side * field.poles - edge)
    powers = decay[:, None] ** np.arange(1, _MOST_ORDERS)
    start = side * 0.5 + field.offset
    coefficients = np.concatenate(
        [[field.constant + start * field.strengths.sum()], side * (field.strengths @ powers)]
    )
    sizes = np.concatenate(
        [
            [abs(field.constant) + abs(start) * np.abs(field.strengths).sum()],
            np.abs(field.strengths) @ np.abs(powers),
        ]
    )
    series = np.concatenate([[0.5], np.ones(_MOST_ORDERS - 1)])
    ranks = np.arange(_MOST_ORDERS)
    for centre, moments in zip(field.centres, field.moments, strict=True):
        shift = np.exp(ranks * (side * centre - edge))
        power = np.concatenate([[1.0], np.zeros(_MOST_ORDERS - 1)])
        for n, moment in enumerate(moments, start=1):
            power = np.convolve(power, side * series)[:_MOST_ORDERS]
            part = -side * ranks * moment * power * shift
            coefficients = coefficients + part
            sizes = sizes + np.abs(part)
            del n
    return coefficients, sizes


def degree(*, weight: int, piers: int, frame: Frame, far: FarField) -> int:
    """D, the zeros of dF on the mirror-closed water in finite places.

    weight : p, the sum of pole orders, 2 per order in the water and 1 on a wall;  piers : their number
    """
    total = weight + 2 * piers
    if frame.closed:
        return total - 2 if math.isfinite(frame.length) else total - 1 - far.right
    if not frame.mirrored:
        return total - 2 * far.infinity
    return total - far.total

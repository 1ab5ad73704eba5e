"""Adaptive Gauss-Kronrod quadrature along a path: the independent route beside the exact integral."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.strands import Strand

_HALF_NODES = np.array(
    [
        0.991455371120812639206854697526329,
        0.949107912342758524526189684047851,
        0.864864423359769072789712788640926,
        0.741531185599394439863864773280788,
        0.586087235467691130294144838258730,
        0.405845151377397166906606412076961,
        0.207784955007898467600689403773245,
    ]
)
_HALF_WEIGHTS = np.array(
    [
        0.022935322010529224963732008058970,
        0.063092092629978553290700663189204,
        0.104790010322250183839876322541518,
        0.140653259715525918745189590510238,
        0.169004726639267902826583426598550,
        0.190350578064785409913256402421014,
        0.204432940075298892414161999234649,
    ]
)
_NODES = np.concatenate([-_HALF_NODES, [0.0], _HALF_NODES[::-1]])
_KRONROD = np.concatenate([_HALF_WEIGHTS, [0.209482141084727828012999174891714], _HALF_WEIGHTS[::-1]])
"""15 nodes of Kronrod and their weights; every second one is a node of Gauss."""

_GAUSS = np.zeros(15)
_GAUSS[1::2] = np.polynomial.legendre.leggauss(7)[1]

_TOLERANCE = 1e-12
"""Error left in one interval, relative to the integral of |W| along the path [-]."""

_ROUNDS = 45
"""Halvings of an interval before its error is accepted as it is."""

_LARGEST = 200_000
"""Intervals of one round beyond which the errors are accepted as they are."""

Velocity = Callable[[ComplexArray], ComplexArray]


@dataclass(frozen=True, slots=True)
class Quadrature:
    """Circulation and flux by quadrature [m2/s] and the sum of the intervals' error estimates."""

    circulation: float
    flux: float
    error_estimate: float


def integrate_numerically(velocity: Velocity, strand: Strand, breaks: FloatArray) -> Quadrature:
    """Integral of W dz along a path by adaptive Gauss-Kronrod quadrature (7, 15 nodes).

    Parameters
    ----------
    velocity : W = u - iv at places of shape (n,) [m/s]
    strand : the path;  breaks : shape (k, j), shares of the pieces at which W is not smooth, nan for none

    Returns
    -------
    Quadrature; its error estimate, the sum of |Kronrod - Gauss|, is pessimistic by orders of magnitude
    where W is smooth and a fair guess where it is not. A node that falls on the end of a line element, where
    W is infinite but integrable, counts as zero.

    References
    ----------
    Piessens, de Doncker-Kapenga, Ueberhuber, Kahaner: QUADPACK, Springer 1983, section 2.2.
    """
    index, low, high = _intervals(breaks)
    total, error, scale, rounds = 0j, 0.0, 0.0, 0
    while index.size > 0:
        kronrod, gauss, size = _both(velocity, strand.taken(index), low, high)
        scale = scale or float(size.sum())
        gap = np.abs(kronrod - gauss)
        last = rounds >= _ROUNDS or index.size > _LARGEST
        done = (gap <= _TOLERANCE * scale) | last
        total += complex(kronrod[done].sum())
        error += float(gap[done].sum())
        index, low, high = _halved(index[~done], low[~done], high[~done])
        rounds += 1
    return Quadrature(total.real, total.imag, error + float(np.finfo(np.float64).eps) * scale)


def _intervals(breaks: FloatArray) -> tuple[IntArray, FloatArray, FloatArray]:
    """Pieces cut at their breaks: index of the piece and both ends of every interval."""
    ends = np.zeros((breaks.shape[0], 1))
    shares = np.sort(
        np.concatenate([ends, np.where(np.isnan(breaks), 1.0, breaks), ends + 1.0], axis=1), axis=1
    )
    index = np.repeat(np.arange(breaks.shape[0]), shares.shape[1] - 1)
    low, high = shares[:, :-1].ravel(), shares[:, 1:].ravel()
    kept = high > low
    return index[kept], low[kept], high[kept]


def _halved(index: IntArray, low: FloatArray, high: FloatArray) -> tuple[IntArray, FloatArray, FloatArray]:
    middle = 0.5 * (low + high)
    return np.tile(index, 2), np.concatenate([low, middle]), np.concatenate([middle, high])


def _both(
    velocity: Velocity, strand: Strand, low: FloatArray, high: FloatArray
) -> tuple[ComplexArray, ComplexArray, FloatArray]:
    """Kronrod's and Gauss's sums, and that of the absolute values, of every interval."""
    half = 0.5 * (high - low)[:, None]
    shares = 0.5 * (high + low)[:, None] + half * _NODES
    places = strand.at(shares)
    values = velocity(places.ravel()).reshape(places.shape) * strand.rate(shares) * half
    values = np.where(np.isfinite(values), values, 0.0)
    return values @ _KRONROD, values @ _GAUSS, np.abs(values) @ _KRONROD

"""All zeros of a `PoleField` at once, by Aberth's iteration written with the kernel itself.

With zeros z and poles p of order m, W'/W = alpha + sum K(tau - z) - sum m K(tau - p), K = X. Moving one zero
so that this holds at its present place, the others kept, gives X(step) = W'/W + sum m K - alpha - sum' K; for
X = coth(d/2)/2 this is Aberth's iteration in exp(tau), yet nothing overflows however long the channel.

References
----------
O. Aberth, Iteration methods for finding all zeros of a polynomial simultaneously, Math. Comp. 27 (1973)
339-344.
"""

import math
from dataclasses import dataclass

import numpy as np
from numba import njit

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.poles import PoleField
from forebay.flow.stagnation.kernels import kernel

SWEEPS = 80
"""Sweeps before the iteration gives up; 8 to 25 are usual."""

_ROUNDING = 16.0 * float(np.finfo(np.float64).eps)


@dataclass(frozen=True, slots=True)
class PoleOrders:
    """Distinct poles of a field.

    at : shape (m,) [-];  orders : shape (m,), order of each
    strengths : shape (m,), summed g of the simple poles there [m2/s];  rows : shape (m,), index into the
        multipoles of the field, -1 for a simple pole
    tilt : alpha = (order of the zero at the left end - that at the right end) / 2
    zero_count : number of zeros in one period
    """

    at: ComplexArray
    orders: FloatArray
    strengths: ComplexArray
    rows: IntArray
    tilt: float
    zero_count: int
    cell: float = 0.0


@njit(cache=True, error_model="numpy", inline="always")
def _velocity(  # noqa: PLR0913, PLR0917 - compiled, so that the parts of a field are passed one by one
    t: complex,
    kappa: float,
    offset: float,
    constant: complex,
    poles: ComplexArray,
    strengths: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
) -> tuple[complex, complex, float]:
    """W_tau, its derivative, and the sum of the absolute parts."""
    w = constant
    slope = 0j
    size = abs(constant)
    for j in range(poles.shape[0]):
        x = kernel(t - poles[j], kappa)
        g = strengths[j]
        w += g * (x + offset)
        slope -= g * (x * x - kappa)
        size += abs(g.real * x.real) + abs(g.imag * x.imag) + abs(g.real * x.imag) + abs(g.imag * x.real)
    for k in range(centres.shape[0]):
        x = kernel(t - centres[k], kappa)
        p = 0j
        dp = 0j
        for n in range(moments.shape[1] - 1, -1, -1):
            dp = dp * x + p
            p = p * x + (n + 1.0) * moments[k, n]
        first = kappa - x * x
        w += first * p
        slope += first * (first * dp - 2.0 * x * p)
        size += abs(first * p)
    return w, slope, size


@njit(cache=True, error_model="numpy", inline="always")
def _copies(d: complex, kappa: float, cell: float) -> complex:
    """K(d), or with a cell (closed basin) the sum over its nearest copies along the basin."""
    total = kernel(d, kappa)
    if cell > 0.0:
        for m in range(1, 4):
            total += kernel(d - m * cell, kappa) + kernel(d + m * cell, kappa)
    return total


@njit(cache=True, error_model="numpy")
def _iterate(  # noqa: PLR0913, PLR0917, PLR0912, C901 - as _velocity; one compiled loop
    z: ComplexArray,
    kappa: float,
    offset: float,
    constant: complex,
    poles: ComplexArray,
    strengths: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
    at: ComplexArray,
    orders: FloatArray,
    tilt: float,
    cell: float,
    extent: float,
    sweeps: int,
) -> tuple[BoolArray, int]:
    """Sweeps over all zeros, each moved with the others kept; changes `z`, says which still move."""
    n = z.shape[0]
    active = np.ones(n, np.bool_)
    for sweep in range(sweeps):
        left = 0
        alpha = tilt
        if cell > 0.0:
            alpha = np.rint((z.real.sum() - (at.real * orders).sum()) / cell)
        for i in range(n):
            if not active[i]:
                continue
            t = z[i]
            w, slope, size = _velocity(t, kappa, offset, constant, poles, strengths, centres, moments)
            if not abs(w) > _ROUNDING * size:
                active[i] = not math.isfinite(abs(w))
                if not active[i]:
                    continue
                z[i] = t + 1e-3 * extent * complex(math.cos(i + sweep), math.sin(i + sweep))
                left += 1
                continue
            r = slope / w - alpha
            near = np.inf
            for j in range(at.shape[0]):
                r += orders[j] * _copies(t - at[j], kappa, cell)
                near = min(near, abs(t - at[j]))
            for j in range(n):
                if j != i:
                    r -= _copies(t - z[j], kappa, cell)
            step = 1.0 / r if kappa == 0.0 else np.log((r + 0.5) / (r - 0.5))
            if not math.isfinite(abs(step)):
                step = 1e-3 * extent * complex(math.cos(i + sweep), math.sin(i + sweep))
            if abs(step) > extent:
                step *= extent / abs(step)
            new = t - step
            if kappa > 0.0:
                new = complex(new.real, new.imag - 2.0 * math.pi * np.rint(new.imag / (2.0 * math.pi)))
                if cell > 0.0:
                    new = complex(new.real - cell * np.rint(new.real / cell), new.imag)
            z[i] = new
            if abs(step) <= 1e-12 * near:
                active[i] = False
            else:
                left += 1
        if left == 0:
            break
    return active, sweep + 1


def _starts(field: PoleField, orders: PoleOrders, extent: float) -> ComplexArray:
    """As many starts as zeros: about each pole the zeros it would have in the current of all others."""
    starts: list[ComplexArray] = []
    for place, order, strength, row in zip(
        orders.at, orders.orders, orders.strengths, orders.rows, strict=True
    ):
        rest = _rest(field, place)
        count = int(order)
        if row < 0:
            x = np.array([-rest / strength])
        else:
            leading = (count - 1) * field.moments[row, count - 2]
            x = (rest / leading) ** (1.0 / count) * np.exp(2j * np.pi * np.arange(count) / count)
        starts.append(place + _inverse(x, field.kappa, extent))
    found = np.concatenate(starts)
    distance = np.abs(found - np.repeat(orders.at, orders.orders.astype(int)))
    kept = np.sort(np.argsort(distance, kind="stable")[: orders.zero_count])
    angles = np.arange(kept.size) * 2.399963
    moved: ComplexArray = found[kept] + (1e-3 * distance[kept] + 1e-9 * extent) * np.exp(1j * angles)
    return moved


def _rest(field: PoleField, place: complex) -> complex:
    """W_tau of everything but the pole at `place`, there."""
    others = np.abs(field.poles - place) > 0.0
    total = field.constant + np.sum(field.strengths[~others]) * field.offset
    total += np.sum(field.strengths[others] * (field.kernel(place - field.poles[others]) + field.offset))
    for centre, moments in zip(field.centres, field.moments, strict=True):
        if abs(centre - place) > 0.0:
            x = complex(field.kernel(np.array([place - centre]))[0])
            total += (field.kappa - x * x) * np.polynomial.polynomial.polyval(
                x, np.arange(1, moments.size + 1) * moments
            )
    return complex(total)


def _inverse(x: ComplexArray, kappa: float, extent: float) -> ComplexArray:
    """d with X(d) = x, no longer than the extent."""
    with np.errstate(divide="ignore", invalid="ignore"):
        d = 1.0 / x if kappa == 0.0 else np.log((x + 0.5) / (x - 0.5))
    d = np.where(np.isfinite(d), d, extent)
    size = np.abs(d)
    return np.asarray(d * np.minimum(1.0, extent / np.maximum(size, 1e-300)), dtype=np.complex128)


def _extent(field: PoleField, orders: PoleOrders) -> float:
    """Longest step [-]: twice the spread of the poles, or as far as they match the current."""
    spread = 2.0 * max(float(np.ptp(orders.at.real)), float(np.ptp(orders.at.imag)))
    if field.kappa > 0.0:
        return 2.0 * math.pi
    if field.constant != 0:
        matched = [4.0 * float(np.sum(np.abs(orders.strengths))) / abs(field.constant)]
        for row in field.moments:
            n = np.arange(1, row.size + 1)
            matched.append(4.0 * float(np.max((n * np.abs(row) / abs(field.constant)) ** (1.0 / (n + 1)))))
        spread = max(spread, *matched)
    return spread or 1.0


def all_zeros(field: PoleField, orders: PoleOrders) -> tuple[ComplexArray, BoolArray]:
    """Approximate zeros of W_tau in one period, and whether each has settled; shape (zero_count,)."""
    extent = _extent(field, orders)
    zeros = _starts(field, orders, extent)
    active, _ = _iterate(
        zeros,
        field.kappa,
        field.offset,
        field.constant,
        field.poles,
        field.strengths,
        field.centres,
        field.moments,
        orders.at,
        orders.orders,
        orders.tilt,
        orders.cell,
        extent,
        SWEEPS,
    )
    return zeros, ~active

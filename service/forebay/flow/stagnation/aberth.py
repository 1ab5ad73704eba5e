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


_FAR = 60.0
"""Beyond this distance along a strip coth(d/2)/2 is +-1/2 to rounding [-]."""

_LOST = 20.0
"""Distance from all poles along a strip beyond which no zero is believed, only still water [-]."""

_RE, _IM, _GROWTH, _DECAY, _SINE, _COSINE = range(6)


@njit(cache=True, error_model="numpy", inline="always")
def _place(table: FloatArray, row: int, tau: complex, middle: float) -> None:
    """Write Re, Im, exp(+-(Re - middle)/2), sin and cos of Im/2: what a pair needs no exponentials for."""
    table[row, _RE] = tau.real
    table[row, _IM] = tau.imag
    table[row, _GROWTH] = math.exp(0.5 * (tau.real - middle))
    table[row, _DECAY] = math.exp(-0.5 * (tau.real - middle))
    table[row, _SINE] = math.sin(0.5 * tau.imag)
    table[row, _COSINE] = math.cos(0.5 * tau.imag)


@njit(cache=True, error_model="numpy", inline="always")
def _pair(p: FloatArray, q: FloatArray, kappa: float, shift: float, growth: float) -> complex:
    """X(p - q - shift) of two rows of tables, growth = exp(shift / 2); for iterations."""
    dx = p[_RE] - q[_RE] - shift
    if kappa == 0.0:
        dy = p[_IM] - q[_IM]
        w = 1.0 / (dx * dx + dy * dy)
        return complex(dx * w, -dy * w)
    if abs(dx) > _FAR:
        return complex(math.copysign(0.5, dx), 0.0)
    up = p[_GROWTH] * q[_DECAY] / growth
    down = p[_DECAY] * q[_GROWTH] * growth
    if not (0.0 < up < math.inf and 0.0 < down < math.inf):  # hundreds of widths from the middle
        up = math.exp(0.5 * dx)
        down = 1.0 / up
    h = 0.5 * (up - down)
    s = p[_SINE] * q[_COSINE] - p[_COSINE] * q[_SINE]
    c = p[_COSINE] * q[_COSINE] + p[_SINE] * q[_SINE]
    w = 0.5 / (h * h + s * s)
    return complex(0.5 * (up + down) * h * w, -s * c * w)


@njit(cache=True, error_model="numpy", inline="always")
def _copies(p: FloatArray, q: FloatArray, kappa: float, cell: float) -> complex:
    """X(p - q), or with a cell (closed basin) the sum over its nearest copies along the basin."""
    total = _pair(p, q, kappa, 0.0, 1.0)
    if cell > 0.0:
        for m in range(1, 4):
            growth = math.exp(0.5 * m * cell)
            total += _pair(p, q, kappa, m * cell, growth) + _pair(p, q, kappa, -m * cell, 1.0 / growth)
    return total


@njit(cache=True, error_model="numpy", inline="always")
def _velocity(
    t: FloatArray,
    field: tuple[float, float, complex],
    poles: FloatArray,
    strengths: ComplexArray,
    moments: ComplexArray,
) -> tuple[complex, complex, float]:
    """W_tau, its derivative, and the sum of the absolute parts; the rows of `poles` end with the centres."""
    kappa, offset, constant = field
    w = constant
    slope = 0j
    size = abs(constant)
    for j in range(strengths.shape[0]):
        x = _pair(t, poles[j], kappa, 0.0, 1.0)
        g = strengths[j]
        w += g * (x + offset)
        slope -= g * (x * x - kappa)
        size += abs(g.real * x.real) + abs(g.imag * x.imag) + abs(g.real * x.imag) + abs(g.imag * x.real)
    for k in range(moments.shape[0]):
        x = _pair(t, poles[strengths.shape[0] + k], kappa, 0.0, 1.0)
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
def _within(tau: complex, kappa: float, cell: float) -> complex:
    """The same zero in the period (and the cell) about 0."""
    if kappa == 0.0:
        return tau
    real = tau.real - cell * np.rint(tau.real / cell) if cell > 0.0 else tau.real
    return complex(real, tau.imag - 2.0 * math.pi * np.rint(tau.imag / (2.0 * math.pi)))


@njit(cache=True, error_model="numpy", inline="always")
def _jolt(extent: float, angle: float) -> complex:
    """A small step in a direction of its own, off a place where the iteration has no step."""
    return 1e-3 * extent * complex(math.cos(angle), math.sin(angle))


@njit(cache=True, error_model="numpy", inline="always")
def _step(r: complex, kappa: float, extent: float) -> complex:
    """d with X(d) = r, no longer than `extent`; along the strip where X is +-1/2, with no end in sight."""
    if kappa > 0.0:
        ahead, behind = abs(r - 0.5), abs(r + 0.5)
        if min(ahead, behind) < 1e-12:
            return complex(extent if ahead < behind else -extent, 0.0)
    step: complex = 1.0 / r if kappa == 0.0 else np.log((r + 0.5) / (r - 0.5))
    return step * min(1.0, extent / abs(step))


@njit(cache=True, error_model="numpy", inline="always")
def _is_lost(t: FloatArray, poles: FloatArray) -> bool:
    """Whether a place in a strip is so far from all poles that still water there vanishes to rounding."""
    nearest = np.inf
    for j in range(poles.shape[0]):
        nearest = min(nearest, abs(t[_RE] - poles[j, _RE]))
    return nearest > _LOST


@njit(cache=True, error_model="numpy")
def _iterate(  # noqa: PLR0913, PLR0917, PLR0912, C901 - compiled: the parts of fields are passed one by one
    z: ComplexArray,
    field: tuple[float, float, complex],
    poles: ComplexArray,
    strengths: ComplexArray,
    moments: ComplexArray,
    at: ComplexArray,
    orders: FloatArray,
    period: tuple[float, float],
    extent: float,
    middle: float,
) -> BoolArray:
    """Sweeps over all zeros, each moved with the others kept; changes `z`, says which still move."""
    kappa = field[0]
    tilt, cell = period
    n = z.shape[0]
    zeros, singular, known = np.empty((n, 6)), np.empty((poles.shape[0], 6)), np.empty((at.shape[0], 6))
    for table, places in ((zeros, z), (singular, poles), (known, at)):
        for row in range(places.shape[0]):
            _place(table, row, places[row], middle)
    active = np.ones(n, np.bool_)
    for sweep in range(SWEEPS):
        alpha = tilt
        if cell > 0.0:
            alpha = np.rint((z.real.sum() - (at.real * orders).sum()) / cell)
        for i in range(n):
            if not active[i]:
                continue
            t = zeros[i]
            w, slope, size = _velocity(t, field, singular, strengths, moments)
            if abs(w) <= _ROUNDING * size:
                lost = kappa > 0.0 and _is_lost(t, known)
                if lost:  # back to a pole
                    z[i] = at[(i + sweep) % at.shape[0]] + 1e3 / extent * _jolt(extent, float(i + sweep))
                    _place(zeros, i, z[i], middle)
                active[i] = lost
                continue
            r = slope / w - alpha
            near = np.inf
            for j in range(at.shape[0]):
                r += orders[j] * _copies(t, known[j], kappa, cell)
                near = min(near, abs(z[i] - at[j]))
            for j in range(n):
                if j != i:
                    r -= _copies(t, zeros[j], kappa, cell)
            step = _step(r, kappa, extent)
            if not math.isfinite(abs(step)):
                step = _jolt(extent, float(i + sweep))
            z[i] = _within(z[i] - step, kappa, cell)
            _place(zeros, i, z[i], middle)
            active[i] = abs(step) > 1e-12 * near
        if not active.any():
            break
    return active


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
    places = np.concatenate([field.poles, field.centres])
    active = _iterate(
        zeros,
        (field.kappa, field.offset, complex(field.constant)),
        places,
        field.strengths,
        field.moments,
        orders.at,
        orders.orders,
        (orders.tilt, orders.cell),
        extent,
        float(0.5 * (places.real.min() + places.real.max())),
    )
    return zeros, ~active

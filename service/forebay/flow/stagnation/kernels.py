"""Compiled loops of the stagnation search over (point, pole) pairs of a `PoleField`.

Every term of W_tau has a majorant about a point at distance rho of its nearest copy: with X the kernel and
S the sum of |d - copies|^-2, the Taylor coefficients of X obey |X_k| <= S rho^(1-k) for k >= 1, so that
|X(d + t)| is bounded, coefficient by coefficient, by M(t) = |X| + S t / (1 - t/rho). For X = 1/d this is
exact.
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray

_TURN = 2.0 * math.pi
_FAR = 3.0
_BLOCK = 64
"""Points in one block: 64 doubles a column stay in the first-level cache."""


@njit(cache=True, error_model="numpy", inline="always")
def kernel(d: complex, kappa: float) -> complex:
    """X(d) = 1/d for kappa = 0, coth(d/2)/2 for kappa = 1/4, for iterations: X' = -(X^2 - kappa)."""
    if kappa == 0.0:
        q = 1.0 / (d.real * d.real + d.imag * d.imag)
        return complex(d.real * q, -d.imag * q)
    sign = 1.0 if d.real >= 0.0 else -1.0
    e = math.exp(-abs(d.real))
    m = -math.expm1(-abs(d.real)) if abs(d.real) < 1.0 else 1.0 - e
    s = math.sin(0.5 * d.imag)
    c = math.cos(0.5 * d.imag)
    q = 0.5 / (m * m + 4.0 * e * s * s)
    return complex(sign * m * (1.0 + e) * q, -4.0 * e * s * c * q)


@njit(cache=True, error_model="numpy", inline="always")
def reach(d: complex, kappa: float) -> tuple[float, float]:
    """Distance rho to the nearest copy of the pole, and S, the sum over copies of distance^-2."""
    if kappa == 0.0:
        r2 = d.real * d.real + d.imag * d.imag
        return math.sqrt(r2), 1.0 / r2
    x = abs(d.real)
    y = d.imag - _TURN * np.rint(d.imag / _TURN)
    rho = math.hypot(x, y)
    if x < 1e-8:
        s = math.sin(0.5 * y)
        return rho, 0.25 / (s * s + 0.25 * x * x)
    e = math.exp(-x)
    s = math.sin(0.5 * y)
    m = -math.expm1(-x)
    return rho, 0.5 / x * m * (1.0 + e) / (m * m + 4.0 * e * s * s)


@njit(cache=True, error_model="numpy", inline="always")
def simple_bounds(d: complex, radius: float, kappa: float) -> tuple[float, float]:
    """Bounds on |t| <= radius of X(d+t) - X - X' t and of X'(d+t) - X'; inf if a copy is that near."""
    rho, s = reach(d, kappa)
    q = radius / rho
    if q >= 1.0:
        return np.inf, np.inf
    p = 1.0 / (1.0 - q)
    value = s * rho * q * q * p
    slope = s * q * (2.0 - q) * p * p
    x = abs(d.real) - radius
    if kappa > 0.0 and x > _FAR:
        e = math.exp(-x)
        second = e * (1.0 + e) / (1.0 - e) ** 3
        value = min(value, 0.5 * second * radius * radius)
        slope = min(slope, second * radius)
    return value, slope


@njit(cache=True, error_model="numpy")
def _far_multipole(x: float, moments: ComplexArray) -> float:
    """Bound for the third derivative of sum c X^n, X = coth(d/2)/2, |Re d| >= x: it decays like exp(-x)."""
    e = math.exp(-x)
    p = 1.0 / (1.0 - e)
    m, u = 0.5 + e * p, e * p * p
    v, w = e * (1.0 + e) * p**3, e * (1.0 + 4.0 * e + e * e) * p**4
    total = 0.0
    for k in range(moments.shape[0]):
        n = k + 1.0
        part = w * m**k
        if k > 0:
            part += 3.0 * (n - 1.0) * m ** (k - 1) * u * v
        if k > 1:
            part += (n - 1.0) * (n - 2.0) * m ** (k - 2) * u**3
        total += abs(moments[k]) * n * part
    return total


@njit(cache=True, error_model="numpy")
def multipole_bounds(d: complex, radius: float, kappa: float, moments: ComplexArray) -> tuple[float, float]:
    """The same bounds for d/dt sum_n c_n X^n, from the majorant M(t): derivatives of sum |c_n| M^n."""
    rho, s = reach(d, kappa)
    q = radius / rho
    if q >= 1.0:
        return np.inf, np.inf
    p = 1.0 / (1.0 - q)
    m0 = abs(kernel(d, kappa))
    m = m0 + s * radius * p
    u0, v0, u, v = s, 2.0 * s / rho, s * p * p, 2.0 * s / rho * p * p * p
    value = 0.0
    slope = 0.0
    power0 = 1.0  # M^(n-2) at 0 and at the radius
    power = 1.0
    for k in range(moments.shape[0]):
        n = k + 1.0
        c = abs(moments[k])
        if k == 0:
            first0, second0, first, second = u0, v0, u, v
        else:
            first0 = n * power0 * m0 * u0
            second0 = n * power0 * ((n - 1.0) * u0 * u0 + m0 * v0)
            first = n * power * m * u
            second = n * power * ((n - 1.0) * u * u + m * v)
            power0 *= m0
            power *= m
        value += c * max(first - first0 - second0 * radius, 0.0)
        slope += c * max(second - second0, 0.0)
    if kappa > 0.0 and abs(d.real) - radius > _FAR:
        second = _far_multipole(abs(d.real) - radius, moments)
        value = min(value, 0.5 * second * radius * radius)
        slope = min(slope, second * radius)
    return value, slope


@njit(cache=True, error_model="numpy")
def plain_variation(
    tau: ComplexArray,
    radius: FloatArray,
    poles: ComplexArray,
    sizes: FloatArray,
    sums: tuple[FloatArray, FloatArray],
) -> None:
    """Adds `simple_bounds` of X = 1/d times the sizes to both sums, many points at once.

    With rho = |d| they are R^2 / (rho^2 (rho - R)) and R (2 rho - R) / (rho (rho - R))^2.
    """
    x = np.zeros(_BLOCK)
    y = np.zeros(_BLOCK)
    r = np.zeros(_BLOCK)
    first = np.zeros(_BLOCK)
    second = np.zeros(_BLOCK)
    least = np.zeros(_BLOCK)
    for start in range(0, tau.shape[0], _BLOCK):
        count = min(_BLOCK, tau.shape[0] - start)
        for k in range(count):
            x[k] = tau[start + k].real
            y[k] = tau[start + k].imag
            r[k] = radius[start + k]
        first[:] = 0.0
        second[:] = 0.0
        least[:] = np.inf
        for j in range(poles.shape[0]):
            px = poles[j].real
            py = poles[j].imag
            g = sizes[j]
            for k in range(count):
                dx = x[k] - px
                dy = y[k] - py
                square = dx * dx + dy * dy
                rho = math.sqrt(square)
                gap = rho - r[k]
                q = 1.0 / (square * gap)
                first[k] += g * q
                second[k] += g * (rho + gap) * q / gap
                least[k] = min(least[k], gap)
        for k in range(count):
            is_free = least[k] > 0.0
            sums[0][start + k] += r[k] * r[k] * first[k] if is_free else np.inf
            sums[1][start + k] += r[k] * second[k] if is_free else np.inf


@njit(cache=True, error_model="numpy")
def variation(  # noqa: PLR0913, PLR0917 - compiled, so that the parts of a field are passed one by one
    tau: ComplexArray,
    radius: FloatArray,
    kappa: float,
    poles: ComplexArray,
    strengths: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
) -> tuple[FloatArray, FloatArray]:
    """Bounds on |t| <= radius of |W(tau+t) - W - W' t| and |W'(tau+t) - W'|; inf around a pole."""
    n = tau.shape[0]
    value = np.zeros(n)
    slope = np.zeros(n)
    sizes = np.abs(strengths)
    if kappa == 0.0:
        plain_variation(tau, radius, poles, sizes, (value, slope))
    for i in range(n):
        for j in range(poles.shape[0] if kappa > 0.0 else 0):
            v, s = simple_bounds(tau[i] - poles[j], radius[i], kappa)
            value[i] += sizes[j] * v
            slope[i] += sizes[j] * s
        for k in range(centres.shape[0]):
            v, s = multipole_bounds(tau[i] - centres[k], radius[i], kappa, moments[k])
            value[i] += v
            slope[i] += s
    return value, slope


@njit(cache=True, error_model="numpy")
def sensitivity(
    tau: ComplexArray,
    kappa: float,
    poles: ComplexArray,
    strengths: ComplexArray,
    centres: ComplexArray,
    moments: ComplexArray,
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """For each point: sum |W_j'| (|tau| + |p_j|), sum |W_j'|, and the distance to the nearest pole.

    The first bounds what a relative change of all positions can do to W, the second what rounding adds to W'.
    """
    n = tau.shape[0]
    moved = np.zeros(n)
    slope = np.zeros(n)
    near = np.full(n, np.inf)
    for i in range(n):
        size = abs(tau[i])
        for j in range(poles.shape[0]):
            rho, s = reach(tau[i] - poles[j], kappa)
            s *= abs(strengths[j])
            slope[i] += s
            moved[i] += s * (size + abs(poles[j]))
            near[i] = min(near[i], rho)
        for k in range(centres.shape[0]):
            d = tau[i] - centres[k]
            rho, s = reach(d, kappa)
            m0 = abs(kernel(d, kappa))
            near[i] = min(near[i], rho)
            power = 1.0
            total = abs(moments[k, 0]) * 2.0 * s / rho
            for n_ in range(2, moments.shape[1] + 1):
                c = abs(moments[k, n_ - 1]) * n_
                total += c * power * ((n_ - 1.0) * s * s + m0 * 2.0 * s / rho)
                power *= m0
            slope[i] += total
            moved[i] += total * (size + abs(centres[k]))
    return moved, slope, near

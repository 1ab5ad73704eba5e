"""What the parts of a flow that are no sums of poles can do over a disc: bounds for each kind of term.

For a disc of radius R about z every function here bounds the remainder |T(z+d) - T(z) - T_z d - T_zbar
conj(d)|,
|d| <= R. A line element c [log(z - a) - log(z - b)] may be continued across itself, so that only its ends
count;
farther away the mean over the line of 1/(z - s) is the sharper bound. In a strip the copies of a line other
than the nearest are smooth: with R(d) = coth(d/2)/2 - 1/d, |R_k| <= S rho^(1-k), S <= 1/2, rho >= 2.1.
"""

import math

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.features import CoredVortex
from forebay.flow.layout import CoreModel
from forebay.flow.lines import LineTerm
from forebay.flow.shores import Frame

_REST_SUM, _REST_REACH = 0.5, 2.1
_NEAR = 1.4
"""Distance in the plane of logarithms within which a wedge's remainders are bounded this way [-]."""


def mean_bound(distance: FloatArray, radius: FloatArray) -> FloatArray:
    """For the mean of 1/(z - s) over sources no nearer than `distance`; inf if the disc meets them."""
    with np.errstate(divide="ignore", invalid="ignore"):
        q = radius / distance
        bound = q * q / (distance * (1.0 - q))
    return np.where((q < 1.0) & (distance > 0.0), bound, np.inf)


def end_bound(to_end: FloatArray, radius: FloatArray) -> FloatArray:
    """For log(z - a): -log(1 - q) - q, q = R / |z - a|; inf if the disc holds the end."""
    with np.errstate(divide="ignore", invalid="ignore"):
        q = radius / to_end
        bound = np.where(q < 1e-4, 0.5 * q * q * (1.0 + q), -np.log1p(-np.minimum(q, 1.0)) - q)
    return np.where(q < 1.0, bound, np.inf)


def smooth_bound(radius: FloatArray) -> FloatArray:
    """For R(d) = coth(d/2)/2 - 1/d with |Im d| <= pi + 1: the copies of a source other than the nearest."""
    q = radius / _REST_REACH
    with np.errstate(divide="ignore", invalid="ignore"):
        bound = _REST_SUM * _REST_REACH * q * q / (1.0 - q)
    return np.where(q < 1.0, bound, np.inf)


def segment_distance(z: ComplexArray, start: complex, end: complex) -> FloatArray:
    """Distance from a straight segment, shape of z."""
    run = end - start
    part = np.clip(((z - start) * np.conj(run)).real / abs(run) ** 2, 0.0, 1.0)
    return np.asarray(np.abs(z - start - part * run), dtype=np.float64)


def _segment_bound(z: ComplexArray, radius: FloatArray, start: complex, end: complex) -> FloatArray:
    """For the mean of 1/(z - s) over a segment, continued across it if need be."""
    ends = end_bound(np.abs(z - start), radius) + end_bound(np.abs(z - end), radius)
    return np.minimum(ends / abs(end - start), mean_bound(segment_distance(z, start, end), radius))


def line_bound(term: LineTerm, frame: Frame, z: ComplexArray, radius: FloatArray) -> FloatArray:
    """Remainder of a line element's W over discs, affine maps only, shape (n,) [m/s].

    term : the line with its panels;  z : shape (n,), centres [m];  radius : shape (n,) [m]
    """
    rate = abs(complex(term.frame.rate))
    w, reach = term.frame.forward(z), radius * rate
    total = np.zeros(z.shape)
    for panel, share in zip(term.panels, term.shares, strict=True):
        images = zip(frame.images(panel.start).positions, frame.images(panel.end).positions, strict=True)
        for start, end in images:
            if frame.kappa == 0.0:
                total += abs(share) * _segment_bound(w, reach, start, end)
            else:
                total += abs(share) * _strip_bound(w, reach, start, end)
    return total * rate


def _strip_bound(w: ComplexArray, reach: FloatArray, start: complex, end: complex) -> FloatArray:
    """For the mean of coth((w - s)/2)/2 over a segment and all its copies."""
    turns = np.round((w - 0.5 * (start + end)).imag / (2.0 * math.pi))
    near = w - 2j * math.pi * turns
    close = _segment_bound(near, reach, start, end) + smooth_bound(reach)
    gap = (
        np.maximum(np.maximum(min(start.real, end.real) - w.real, w.real - max(start.real, end.real)), 0.0)
        - reach
    )
    e = np.exp(-np.maximum(gap, 0.5))
    return np.where(gap > 0.5, np.minimum(close, 0.5 * e * (1.0 + e) / (1.0 - e) ** 3 * reach**2), close)


def wedge_line_bounds(
    term: LineTerm, frame: Frame, z: ComplexArray, radius: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Remainders of a line element in a corner: as poles of the mapped plane [m2/s], and in the site [m/s].

    Either bound holds for the whole of the line; the first is finite away from it, the second near it.
    """
    n = exponent_of(frame)
    rate = abs(complex(term.frame.rate))
    w, reach, tau = term.frame.forward(z), radius * rate, frame.map.forward(z)
    size = np.abs(w)
    log_reach = log_radius(reach, size)
    mapped, site = np.zeros(z.shape), np.zeros(z.shape)
    for panel, share in zip(term.panels, term.shares, strict=True):
        middle = complex(frame.map.forward(term.frame.inverse(np.array([panel.middle])))[0])
        stretch = -n * math.log1p(-min(0.5 * abs(panel.run) / abs(panel.middle), 0.9))
        for image in (0, 1, 2):
            place = middle if image == 0 else middle.conjugate() + (2j * math.pi if image == 2 else 0.0)
            turn = complex(np.exp(2j * math.pi / n)) if image == 2 else 1.0
            start = panel.start if image == 0 else np.conj(panel.start) * turn
            end = panel.end if image == 0 else np.conj(panel.end) * turn
            d = tau - place
            seen = np.abs(d.imag) <= math.pi if image else np.ones(z.shape, dtype=np.bool_)
            far = abs(share) * pole_bound(d, stretch, n * log_reach)
            near = _segment_bound(w, reach, start, end) + wedge_rest_bound(n, size, log_reach)
            near = np.where(np.abs(d) + stretch + n * log_reach < min(4.0, _NEAR * n), near, np.inf)
            away = np.abs(d) - stretch > 2.0 * n * log_reach
            with np.errstate(over="ignore", invalid="ignore"):
                site_far = n / size * np.exp(log_reach) * _site_level(d, stretch, n, log_reach)
            site_far = np.where(away & np.isfinite(site_far), site_far, np.inf)
            mapped += np.where(seen, far, 0.0)
            site += np.where(seen, abs(share) * np.minimum(near, site_far), 0.0)
    return mapped, site * rate


def _site_level(d: ComplexArray, stretch: float, n: float, log_reach: FloatArray) -> FloatArray:
    """For X + 1/2 of far poles, pulled back to the site, in units of n / (|z| (1 - q))."""
    distance = np.maximum(np.abs(d) - stretch, 1e-300)
    q = -np.expm1(-log_reach)
    bound = pole_bound(d, stretch, n * log_reach)
    with np.errstate(over="ignore", divide="ignore", invalid="ignore"):
        slope = 1.0 / distance**2 + 0.25
        return bound + (1.0 / distance + 1.0) * q * q + n * slope * (q * q + log_reach - q)


def exponent_of(frame: Frame) -> float:
    """n = pi / interior angle of a corner, 1 elsewhere [-]."""
    return float(getattr(frame.map, "exponent", 1.0))


def log_radius(radius: FloatArray, size: FloatArray) -> FloatArray:
    """Radius in the plane of logarithms of a disc at distance `size` from the vertex; inf if it holds it."""
    q = radius / size
    return np.where(q < 1.0, -np.log1p(-np.minimum(q, 0.999999)), np.inf)


def pole_bound(d: ComplexArray, stretch: float, reach: FloatArray) -> FloatArray:
    """For the mean of X(tau - p) over poles within `stretch` of a middle, X = coth/2, d = tau - middle."""
    near = np.abs(d) - stretch
    gap = np.abs(d.real) - stretch - reach
    distance = np.where(near > 0.0, near, 0.0)
    with np.errstate(over="ignore", invalid="ignore"):
        bound = mean_bound(distance, reach) * (1.0 + 0.5 * distance * distance)
        e = np.exp(-np.maximum(gap, 0.5))
        decayed = 0.5 * e * (1.0 + e) / (1.0 - e) ** 3 * reach**2
    bound = np.where(np.isnan(bound), np.inf, bound)
    return np.where(gap > 0.5, np.minimum(bound, decayed), bound)


def wedge_rest_bound(n: float, size: FloatArray, log_reach: FloatArray) -> FloatArray:
    """For h(log(z/s)) / z, h(u) = n R(n u) - R(u) + (n - 1)/2: what a corner adds to 1/(z - s) near s."""
    with np.errstate(invalid="ignore", over="ignore"):
        inner = n * smooth_bound(n * log_reach) + smooth_bound(log_reach)
        level = max(n + 0.2 + 0.5 * abs(n - 1.0), 0.25 * n * n + 0.25)
        total = np.exp(log_reach) / size * (inner + 3.0 * level * np.expm1(log_reach) ** 2)
    return np.where(np.isfinite(total), total, np.inf)


def core_bound(vortex: CoredVortex, z: ComplexArray, radius: FloatArray) -> FloatArray:
    """Remainder of a cored vortex's own W over discs, shape (n,) [m/s].

    Rankine: 0 inside, as a point vortex outside, 2 G R / a^2 across the rim. Lamb-Oseen: half the largest
    second derivative on the disc times R^2.
    """
    strength = abs(vortex.circulation) / (2.0 * math.pi)
    a = vortex.core.radius
    d = np.abs(z - vortex.at)
    point = strength * mean_bound(d, radius)
    if vortex.core.model is CoreModel.RANKINE:
        across = 2.0 * strength * radius / a**2
        return np.where(d + radius < a, 0.0, np.where(d - radius > a, np.minimum(point, across), across))
    nearest = np.maximum(d - radius, 0.0) / a
    return 0.5 * strength / a**3 * lamb_oseen_second(nearest) * radius**2


def core_tail_bound(vortex: CoredVortex, at: complex, z: ComplexArray, radius: FloatArray) -> FloatArray:
    """For what a core changes in a point vortex: nothing beyond a Rankine core, else exp(-r^2/a^2)."""
    a = vortex.core.radius
    nearest = np.maximum(np.abs(z - at) - radius, 0.0) / a
    if vortex.core.model is CoreModel.RANKINE:
        return np.where(nearest > 1.0, 0.0, np.inf)
    r = np.maximum(nearest, 0.5)
    second = np.exp(-r * r) * (2.0 / r**3 + 2.0 / r + 4.0 * r)
    strength = abs(vortex.circulation) / (2.0 * math.pi)
    return np.where(nearest > 1.0, 0.5 * strength / a**3 * second * radius**2, np.inf)


_R = np.linspace(1e-3, 12.0, 24001)
_E = np.exp(-_R * _R)
_SECOND = np.abs(2.0 * np.expm1(-_R * _R) / _R**3 + 2.0 * _E / _R + _R * _E) + 3.0 * _R * _E
_FALLING = np.maximum.accumulate(_SECOND[::-1])[::-1] * 1.01


def lamb_oseen_second(nearest: FloatArray) -> FloatArray:
    """Bound for the second derivatives of (1 - exp(-r^2)) / d beyond a distance, in units of the core radius.

    Sum of the absolute second derivatives by z z, twice z zbar and zbar zbar, tabulated and made monotone.
    """
    inner = np.interp(nearest - 6e-4, _R, _FALLING)
    return np.where(nearest > 11.9, 2.02 / np.maximum(nearest, 1.0) ** 3, inner)

"""Cauchy integrals over straight elements next to a point: the integral in place of the sum over nodes.

An element carries a polynomial density; zeta = (z - middle) / half. The integral is
(i / pi) sum f_n Q_n(zeta) with the Legendre functions of the second kind, Q_0 = log((zeta + 1)/(zeta - 1))/2,
Q_1 = zeta Q_0 - 1. Beyond `NEAR` half-lengths the sum of poles at Gauss nodes is as good; inside, that sum is
taken away with the same roundings that put it there, since z less a node loses digits on a short element,
and the integral is added, with the sum over the nodes of what the shore's kernel has beyond 1/(z - t).
"""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.kernels.elementary import decay, sine_cosine

NODES = 6
"""Gauss nodes of an element [-]."""
NEAR = 5.0
"""Half-lengths beyond which the sum over the nodes is exact to (5 + sqrt 24)^-12 = 1e-12 [-]."""
LEAF = 4
"""Elements in a leaf of the tree of circles."""
PLAIN, STRIP, WEDGE = 0, 1, 2
"""Charts: the kernel is 1/d; coth(d/2)/2 of a multiple of z; the same of a multiple of log(z - vertex)."""
_SMALLEST = 1e-60
"""Squared distance from an element's end, in half-lengths, at which logarithms are cut off [-]."""
_STACK = 64
"""Deepest tree [-]."""

Chart = tuple[int, complex, complex]
"""Kind, rate (multiple of z or of the logarithm), vertex [m]."""
Kernel = tuple[Chart, bool]
"""Chart, and whether it is W that is asked for: then X stands beside the slope of the chart."""
Elements = tuple[ComplexArray, ComplexArray, FloatArray]
"""Middles [m] and 1 / half [1/m] of elements, shape (m,), and nodes in [-1, 1], shape (q,)."""
Density = tuple[ComplexArray, ComplexArray, ComplexArray]
"""Legendre coefficients (m, d); values at the nodes times half the weights, and coefficients of the kernel
there, (m, q) each."""
Tree = tuple[ComplexArray, FloatArray]
"""Centres [m] and squared radii [m2] of circles round the near regions of runs of elements, a binary heap."""
Image = tuple[ComplexArray, ComplexArray, BoolArray]
"""Poles of one image of the elements in the mapped plane and their coefficients (m, q); which count (m,)."""


@njit(cache=True, error_model="numpy")
def inverse(u: complex) -> complex:
    """1/u; huge at 0."""
    square = max(u.real * u.real + u.imag * u.imag, _SMALLEST)
    return complex(u.real / square, -u.imag / square)


@njit(cache=True, error_model="numpy")
def periodic_kernel(d: complex) -> complex:
    """coth(d/2)/2."""
    e, m = decay(abs(d.real))
    sine, cosine = sine_cosine(0.5 * d.imag)
    sign = 1.0 if d.real >= 0.0 else -1.0
    q = 1.0 / max(m * m + 4.0 * e * sine * sine, _SMALLEST)
    return complex(0.5 * sign * m * (1.0 + e) * q, -2.0 * e * sine * cosine * q)


@njit(cache=True, error_model="numpy")
def legendre_q0(zeta: complex) -> complex:
    """Q_0, cut on [-1, 1], where it has the value of the upper side; cut off at the ends."""
    a = zeta.real + 1.0
    b = zeta.real - 1.0
    square = zeta.imag * zeta.imag
    above = max(a * a + square, _SMALLEST)
    below = max(b * b + square, _SMALLEST)
    return complex(0.25 * math.log(above / below), 0.5 * math.atan2(-2.0 * zeta.imag, a * b + square))


@njit(cache=True, error_model="numpy")
def place_of(offset: complex, rate: complex, lip: float) -> complex:
    """Zeta of a point `offset` from the middle; on the left side of an element within `lip` [m] of it."""
    zeta = offset * rate
    if abs(zeta.real) <= 1.0 and abs(zeta.imag) <= lip * abs(rate):
        return complex(zeta.real, 1e-300)
    return zeta


@njit(cache=True, error_model="numpy")
def legendre_values(zeta: complex, q: ComplexArray, dq: ComplexArray) -> None:
    """Q_n and dQ_n/dzeta, n = 0 ... q.size - 1."""
    q[0] = legendre_q0(zeta)
    dq[0] = -inverse((zeta - 1.0) * (zeta + 1.0))
    if q.shape[0] > 1:
        q[1] = zeta * q[0] - 1.0
        dq[1] = q[0] + zeta * dq[0]
    for n in range(1, q.shape[0] - 1):
        q[n + 1] = ((2 * n + 1) * zeta * q[n] - n * q[n - 1]) / (n + 1)
        dq[n + 1] = dq[n - 1] + (2 * n + 1) * q[n]


@njit(cache=True, error_model="numpy")
def charted(z: complex, step: complex, chart: Chart) -> tuple[complex, complex, complex]:
    """Distance in the mapped plane from a node at z - step to z, and its derivatives with respect to z."""
    kind, rate, vertex = chart
    if kind != WEDGE:
        return rate * step, rate, 0j
    arm = inverse(z - vertex)
    ratio = step * inverse(z - step - vertex)
    square = ratio.real * (2.0 + ratio.real) + ratio.imag * ratio.imag
    angle = math.atan2(ratio.imag, 1.0 + ratio.real)
    return rate * complex(0.5 * math.log1p(square), angle), rate * arm, -rate * arm * arm


@njit(cache=True, error_model="numpy")
def element_integral(
    z: complex, zeta: complex, e: int, elements: Elements, density: Density, kernel: Kernel
) -> tuple[complex, complex, complex, complex]:
    """Integral of a density less 1/(z - t) at the nodes, without (i / pi), and its derivative.

    Then the sum over the nodes of the shore's kernel, X or X dtau/dz, and of the derivative of the latter. In
    a plain chart nothing is taken out of the integral, and those sums are zero.
    """
    _, rate, nodes = elements
    chart, of_velocity = kernel
    coefficients, nodal, weights = density
    degree = coefficients.shape[1]
    q = np.empty(degree, np.complex128)
    dq = np.empty(degree, np.complex128)
    legendre_values(zeta, q, dq)
    part = 0j
    bend = 0j
    for n in range(degree):
        part += coefficients[e, n] * q[n]
        bend += coefficients[e, n] * dq[n]
    whole = 0j
    curve = 0j
    if chart[0] != PLAIN:
        for j in range(nodes.shape[0]):
            u = inverse(zeta - nodes[j])
            part -= nodal[e, j] * u
            bend += nodal[e, j] * u * u
            d, first, second = charted(z, (zeta - nodes[j]) / rate[e], chart)
            x = periodic_kernel(d)
            whole += weights[e, j] * (x * first if of_velocity else x)
            curve += weights[e, j] * ((0.25 - x * x) * first * first + x * second)
    return part, bend * rate[e], whole, curve


@njit(cache=True, error_model="numpy")
def near_sums(
    seen: tuple[ComplexArray, ComplexArray, IntArray, float],
    elements: Elements,
    density: Density,
    kernel: Kernel,
    image: Image,
    tree: Tree,
) -> tuple[ComplexArray, ComplexArray, ComplexArray, ComplexArray]:
    """What is to be put in place of the nodes of near elements, for one image of them.

    seen : places from which the points see the elements [m], the points in the mapped plane, the element
        that each lies on (-1 unknown, -2 none), and the distance within which it then is taken to lie on one

    Returns
    -------
    shape (n,) each: integrals and their derivatives; sums of the image's poles and of their derivatives, to
    be taken away. Of a density of W the first are W and dW/dz.
    """
    z, tau, own, lip = seen
    poles, weights, allowed = image
    middle, rate, _ = elements
    centres, squares = tree
    leaves = (centres.shape[0] + 1) // 2
    results = np.zeros((4, z.shape[0]), np.complex128)
    stack = np.empty(_STACK, np.int64)
    for i in range(z.shape[0]):
        stack[0] = 0
        depth = 1
        while depth > 0:
            depth -= 1
            k = stack[depth]
            dx = z[i].real - centres[k].real
            dy = z[i].imag - centres[k].imag
            if not dx * dx + dy * dy <= squares[k]:
                continue
            if k < leaves - 1:
                stack[depth] = 2 * k + 1
                stack[depth + 1] = 2 * k + 2
                depth += 2
                continue
            first = (k - leaves + 1) * LEAF
            for e in range(first, min(first + LEAF, middle.shape[0])):
                reach = lip if own[i] == -1 else (np.inf if own[i] == e else -1.0)
                zeta = place_of(z[i] - middle[e], rate[e], reach)
                if zeta.real * zeta.real + zeta.imag * zeta.imag > NEAR * NEAR or not allowed[e]:
                    continue
                part, bend, whole, curve = element_integral(z[i], zeta, e, elements, density, kernel)
                results[0, i] += complex(-part.imag, part.real) / math.pi + whole
                results[1, i] += complex(-bend.imag, bend.real) / math.pi + curve
                taken, bent = image_sum(tau[i], e, poles, weights, kernel[0][0] == PLAIN)
                results[2, i] += taken
                results[3, i] += bent
    return results[0], results[1], results[2], results[3]


@njit(cache=True, error_model="numpy")
def image_sum(
    tau: complex,
    e: int,
    poles: ComplexArray,
    weights: ComplexArray,
    plain: bool,  # noqa: FBT001
) -> tuple[complex, complex]:
    """Sum of the poles of an element, and its derivative."""
    total = 0j
    slope = 0j
    for j in range(poles.shape[1]):
        d = tau - poles[e, j]
        if plain:
            x = inverse(d)
            slope -= weights[e, j] * x * x
        else:
            x = periodic_kernel(d)
            slope += weights[e, j] * (0.25 - x * x)
        total += weights[e, j] * x
    return total, slope


@njit(cache=True, error_model="numpy")
def off_nodes(
    z: ComplexArray, ends: tuple[ComplexArray, ComplexArray], steps: ComplexArray, tree: Tree, reach: float
) -> ComplexArray:
    """Points that lie on an end of an element to rounding, moved into the water; all others as they are.

    There each element would be seen from a side of its own. ends : first and second, shape (m,) [m]
    steps : shape (m, 2), moves at both;  reach : distance that is rounding [m]
    """
    centres, squares = tree
    leaves = (centres.shape[0] + 1) // 2
    moved = z.copy()
    stack = np.empty(_STACK, np.int64)
    for i in range(z.shape[0]):
        stack[0] = 0
        depth = 1
        while depth > 0:
            depth -= 1
            k = stack[depth]
            dx = z[i].real - centres[k].real
            dy = z[i].imag - centres[k].imag
            if not dx * dx + dy * dy <= squares[k]:
                continue
            if k < leaves - 1:
                stack[depth] = 2 * k + 1
                stack[depth + 1] = 2 * k + 2
                depth += 2
                continue
            first = (k - leaves + 1) * LEAF
            for e in range(first, min(first + LEAF, steps.shape[0])):
                if abs(z[i] - ends[0][e]) <= reach:
                    moved[i] = z[i] + steps[e, 0]
                elif abs(z[i] - ends[1][e]) <= reach:
                    moved[i] = z[i] + steps[e, 1]
    return moved

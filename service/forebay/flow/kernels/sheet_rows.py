"""Rows of the equations that densities on straight elements obey: influence of every unknown at a point."""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.kernels.sheet_near import (
    NEAR,
    PLAIN,
    Chart,
    Elements,
    charted,
    inverse,
    legendre_values,
    periodic_kernel,
    place_of,
)

Points = tuple[ComplexArray, IntArray, ComplexArray, ComplexArray, ComplexArray]
"""Points [m], element that each lies on or -2, the mapped points, dtau/dz, and a factor; shape (n,) each."""
Basis = tuple[ComplexArray, ComplexArray, ComplexArray, FloatArray]
"""Poles (m, r q) of the mapped plane with all images, coefficients of the kernel (d, m, r q) for every
Legendre polynomial or its derivative, those of the elements themselves (d, m, q), and Legendre values at the
nodes times half the weights (d, q)."""
Mirrors = tuple[ComplexArray, ComplexArray, BoolArray, IntArray, BoolArray]
"""Turns, shifts, which reflect, which image of the poles each belongs to, and which elements count (r, m)."""
Columns = tuple[IntArray, IntArray, IntArray, IntArray, IntArray, BoolArray]
"""First and last node of every element, columns of the real and imaginary part at the nodes (-1 for none),
first bubble column of every element and whether its bubbles are real."""


@njit(cache=True, error_model="numpy")
def influence_rows(
    points: Points,
    elements: Elements,
    basis: Basis,
    mirrors: Mirrors,
    columns: Columns,
    kernel: tuple[Chart, float, bool],
) -> FloatArray:
    """Influence of every unknown on Re(factor F), or Re(factor W), at points, shape (n, unknowns).

    kernel : chart, offset added to the kernel, and whether W is wanted
    """
    z, own, tau, slope, factor = points
    turns, shifts, reflects, _, _ = mirrors
    chart, offset, of_velocity = kernel
    poles, weights, _, _ = basis
    degree = weights.shape[0]
    bubble = columns[4]
    parts = np.zeros((poles.shape[0], degree), np.complex128)
    rows = np.zeros((z.shape[0], bubble[-1] + degree - 2))
    for i in range(z.shape[0]):
        parts[:] = 0.0
        far_parts(tau[i], poles, weights, (chart[0] == PLAIN, offset), parts)
        if of_velocity:
            parts *= slope[i]
        for r in range(turns.shape[0]):
            at = shifts[r] + turns[r] * (z[i].conjugate() if reflects[r] else z[i])
            mine = own[i] if r == 0 else -2
            near_parts((at, mine, tau[i], slope[i]), r, elements, basis, mirrors, (chart, of_velocity, parts))
        scatter(parts, factor[i], columns, rows[i])
    return rows


@njit(cache=True, error_model="numpy")
def far_parts(
    tau: complex,
    poles: ComplexArray,
    weights: ComplexArray,
    kernel: tuple[bool, float],
    parts: ComplexArray,
) -> None:
    """Adds to parts[e, n] the sum over all poles of weights[n, e, j] (X(tau - poles[e, j]) + offset)."""
    plain, offset = kernel
    degree = weights.shape[0]
    for e in range(poles.shape[0]):
        for j in range(poles.shape[1]):
            d = tau - poles[e, j]
            x = inverse(d) if plain else periodic_kernel(d) + offset
            for n in range(degree):
                parts[e, n] += weights[n, e, j] * x


@njit(cache=True, error_model="numpy")
def near_parts(
    seen: tuple[complex, int, complex, complex],
    r: int,
    elements: Elements,
    basis: Basis,
    mirrors: Mirrors,
    kernel: tuple[Chart, bool, ComplexArray],
) -> None:
    """Puts integrals over near elements, seen through mirror r, in the place of their nodes.

    seen : place from which they are seen [m], element that it lies on, the mapped point and dtau/dz
    """
    at, own, tau, slope = seen
    middle, rate, _ = elements
    poles, weights, _, vander = basis
    turns, _, reflects, images, allowed = mirrors
    chart, of_velocity, parts = kernel
    degree, count = weights.shape[0], vander.shape[1]
    first = images[r] * count
    turn = turns[r].conjugate() if reflects[r] else turns[r]
    whole = np.empty(degree, np.complex128)
    for e in range(middle.shape[0]):
        zeta = place_of(at - middle[e], rate[e], np.inf if own == e else -1.0)
        if zeta.real * zeta.real + zeta.imag * zeta.imag > NEAR * NEAR or not allowed[r, e]:
            continue
        basis_integrals(at, zeta, e, elements, basis, (chart, of_velocity, whole))
        for n in range(degree):
            value = whole[n].conjugate() if reflects[r] else whole[n]
            parts[e, n] += value * turn if of_velocity else value
        for j in range(count):
            d = tau - poles[e, first + j]
            x = inverse(d) if chart[0] == PLAIN else periodic_kernel(d)
            x = x * slope if of_velocity else x
            for n in range(degree):
                parts[e, n] -= weights[n, e, first + j] * x


@njit(cache=True, error_model="numpy")
def basis_integrals(
    z: complex,
    zeta: complex,
    e: int,
    elements: Elements,
    basis: Basis,
    kernel: tuple[Chart, bool, ComplexArray],
) -> None:
    """Integrals of every Legendre polynomial, or its derivative, over an element, into the last of `kernel`.

    P_n' = sum (2k + 1) P_k over k = n-1, n-3, ...
    """
    _, rate, nodes = elements
    _, _, own_weights, vander = basis
    chart, of_velocity, whole = kernel
    degree = whole.shape[0]
    q = np.empty(degree, np.complex128)
    dq = np.empty(degree, np.complex128)
    legendre_values(zeta, q, dq)
    if chart[0] != PLAIN:
        for j in range(nodes.shape[0]):
            u = inverse(zeta - nodes[j])
            for n in range(degree):
                q[n] -= vander[n, j] * u
    turn = complex(0.0, 1.0 / math.pi)
    for n in range(degree):
        total = 0j
        if of_velocity:
            for k in range(n - 1, -1, -2):
                total += (2 * k + 1) * q[k]
            total *= rate[e]
        else:
            total = q[n]
        whole[n] = turn * total
    if chart[0] != PLAIN:
        for j in range(nodes.shape[0]):
            d, first, _ = charted(z, (zeta - nodes[j]) / rate[e], chart)
            x = periodic_kernel(d)
            x = x * first if of_velocity else x
            for n in range(degree):
                whole[n] += own_weights[n, e, j] * x


@njit(cache=True, error_model="numpy")
def scatter(parts: ComplexArray, factor: complex, columns: Columns, row: FloatArray) -> None:
    """From Legendre coefficients to nodal values (1 - x)/2, (1 + x)/2 and bubbles P_n - P_(n-2)."""
    first, last, real_column, imag_column, bubble, is_real = columns
    degree = parts.shape[1]
    for e in range(parts.shape[0]):
        for side in range(2):
            sign = 1.0 if side else -1.0
            node = last[e] if side else first[e]
            v = 0.5 * factor * (parts[e, 0] + sign * parts[e, 1])
            if real_column[node] >= 0:
                row[real_column[node]] += v.real
            if imag_column[node] >= 0:
                row[imag_column[node]] -= v.imag
        for n in range(2, degree):
            v = factor * (parts[e, n] - parts[e, n - 2])
            row[bubble[e] + n - 2] += v.real if is_real[e] else -v.imag

"""Points against rings of straight edges: which is nearest, on which side, and which edges meet."""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray


@njit(cache=True, error_model="numpy")
def nearest_edges(z: ComplexArray, starts: ComplexArray, ends: ComplexArray) -> tuple[FloatArray, IntArray]:
    """Distance to the nearest of m edges and its index.

    z : shape (n,) [m];  starts, ends : shape (m,) [m]
    Returns distances, shape (n,) [m] (inf without edges), and indices, shape (n,) (-1 without).
    """
    distance = np.empty(z.shape[0])
    index = np.empty(z.shape[0], np.int64)
    for i in range(z.shape[0]):
        best = np.inf
        found = -1
        for e in range(starts.shape[0]):
            dx = ends[e].real - starts[e].real
            dy = ends[e].imag - starts[e].imag
            px = z[i].real - starts[e].real
            py = z[i].imag - starts[e].imag
            share = (px * dx + py * dy) / (dx * dx + dy * dy)
            share = min(max(share, 0.0), 1.0)
            px -= share * dx
            py -= share * dy
            square = px * px + py * py
            if square < best:
                best = square
                found = e
        distance[i] = math.sqrt(best)
        index[i] = found
    return distance, index


@njit(cache=True, error_model="numpy")
def rings_around(z: ComplexArray, starts: ComplexArray, ends: ComplexArray, bounds: IntArray) -> IntArray:
    """The first of several closed rings that a point lies inside of, -1 for none; by crossings of a ray.

    starts, ends : edges of all rings in a row [m];  bounds : shape (k + 1,), first edge of each ring
    """
    found = np.full(z.shape[0], -1, np.int64)
    for i in range(z.shape[0]):
        x = z[i].real
        y = z[i].imag
        for k in range(bounds.shape[0] - 1):
            inside = False
            for e in range(bounds[k], bounds[k + 1]):
                ay = starts[e].imag
                by = ends[e].imag
                if (ay > y) != (by > y):
                    ax = starts[e].real
                    inside ^= x < ax + (y - ay) / (by - ay) * (ends[e].real - ax)
            if inside:
                found[i] = k
                break
    return found


@njit(cache=True, error_model="numpy")
def first_contact(starts: ComplexArray, ends: ComplexArray, linked: IntArray, gap: float) -> tuple[int, int]:
    """The first two edges that cross or come within `gap` [m] of each other, (-1, -1) for none.

    linked : shape (m, 2), the edges before and after each along its ring, which may touch it; -1 for none
    """
    for e in range(starts.shape[0]):
        left = min(starts[e].real, ends[e].real) - gap
        right = max(starts[e].real, ends[e].real) + gap
        low = min(starts[e].imag, ends[e].imag) - gap
        high = max(starts[e].imag, ends[e].imag) + gap
        for k in range(e + 1, starts.shape[0]):
            if linked[e, 0] == k or linked[e, 1] == k:
                continue
            if max(starts[k].real, ends[k].real) < left or min(starts[k].real, ends[k].real) > right:
                continue
            if max(starts[k].imag, ends[k].imag) < low or min(starts[k].imag, ends[k].imag) > high:
                continue
            if edge_gap(starts[e], ends[e], starts[k], ends[k]) <= gap:
                return e, k
    return -1, -1


@njit(cache=True, error_model="numpy")
def edge_gap(a: complex, b: complex, c: complex, d: complex) -> float:
    """Distance between the segments a - b and c - d [m]."""
    if (_side(a, b, c) > 0.0) != (_side(a, b, d) > 0.0) and (_side(c, d, a) > 0.0) != (_side(c, d, b) > 0.0):
        return 0.0
    return min(_gap(a, c, d), _gap(b, c, d), _gap(c, a, b), _gap(d, a, b))


@njit(cache=True, error_model="numpy")
def _side(a: complex, b: complex, z: complex) -> float:
    return (b.real - a.real) * (z.imag - a.imag) - (b.imag - a.imag) * (z.real - a.real)


@njit(cache=True, error_model="numpy")
def _gap(z: complex, a: complex, b: complex) -> float:
    dx = b.real - a.real
    dy = b.imag - a.imag
    px = z.real - a.real
    py = z.imag - a.imag
    share = min(max((px * dx + py * dy) / (dx * dx + dy * dy), 0.0), 1.0)
    return math.hypot(px - share * dx, py - share * dy)

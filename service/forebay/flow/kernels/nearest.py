"""Sites near each of n points: the nearest bounds a streamline's step; at some there is no velocity."""

import math

import numpy as np
from numba import njit

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray


@njit(cache=True, error_model="numpy")
def nearest_sites(z: ComplexArray, sites: ComplexArray) -> tuple[FloatArray, IntArray]:
    """Distance to the nearest site and its index.

    z : shape (n,), points [m];  sites : shape (m,) [m]
    Returns distances, shape (n,) [m] (inf where there is no site), and indices, shape (n,) (-1 there).
    """
    n = z.shape[0]
    distance = np.empty(n)
    index = np.empty(n, np.int64)
    for i in range(n):
        best = np.inf
        found = -1
        for j in range(sites.shape[0]):
            dx = z[i].real - sites[j].real
            dy = z[i].imag - sites[j].imag
            square = dx * dx + dy * dy
            if square < best:
                best = square
                found = j
        distance[i] = math.sqrt(best)
        index[i] = found
    return distance, index


@njit(cache=True, error_model="numpy")
def first_within(z: ComplexArray, sites: ComplexArray, order: IntArray, reach: float) -> IntArray:
    """Lowest index of a site within `reach` of each point, -1 where there is none.

    z : shape (n,), points [m];  sites : shape (m,), nan for none [m];  reach : [m]
    order : shape (m,), indices of the sites by rising x, nan last; only those near in x are looked at
    Returns indices, shape (n,).
    """
    n, m = z.shape[0], sites.shape[0]
    index = np.empty(n, np.int64)
    for i in range(n):
        low, high = 0, m
        while low < high:
            middle = (low + high) // 2
            if sites[order[middle]].real < z[i].real - reach:
                low = middle + 1
            else:
                high = middle
        found = m
        while low < m and sites[order[low]].real <= z[i].real + reach:
            j = order[low]
            if j < found and abs(z[i] - sites[j]) <= reach:
                found = j
            low += 1
        index[i] = found if found < m else -1
    return index

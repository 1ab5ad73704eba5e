"""Nearest of m sites to each of n points: bounds the step of a streamline."""

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

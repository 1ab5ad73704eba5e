"""A known flow along the rings: its potential at places of every element, without leaving the wall."""

from collections.abc import Callable

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.sheets.mesh import Mesh
from forebay.flow.sheets.ring import Ring

Chord = Callable[[ComplexArray, ComplexArray], ComplexArray]
"""Integral of W dz along straight chords, shape (n,), (n,) -> (n,) [m2/s]."""

_ON = 1e-7
"""Distance from a piece of wall over its length within which an element stands on it [-]."""
_MEETING = 1e-7
"""Distance of an element on the wall from a place, over the way to the next, at which they are one [-]."""
_BESIDE = 1e-4
"""How far before and behind such an element psi is taken, over the way to the next place: 1e-8 off [-]."""
_DETOUR = 0.1
"""Width of the way round an element on the wall over its distance from the nearer end of the piece [-]."""


def along_rings(
    mesh: Mesh, abscissae: FloatArray, chord: Chord, pinned: tuple[complex, ...] = ()
) -> ComplexArray:
    """Potential of a flow along every ring, from the ring's beginning.

    Parameters
    ----------
    mesh : the elements
    abscissae : increasing places on an element, within (-1, 1)
    chord : of the flow
    pinned : elements that stand on the rings [m]; psi is taken as the mean of passing them left and right

    Returns
    -------
    shape (m, p) [m2/s]: zero at the start of an open ring, and in the middle of a closed one's first element.
    """
    values = np.empty((mesh.count, abscissae.size), dtype=np.complex128)
    for k, ring in enumerate(mesh.rings):
        chosen = slice(int(mesh.bounds[k]), int(mesh.bounds[k + 1]))
        path, wanted, origin = _path(mesh, ring, chosen, abscissae)
        sums = _sums(path, chord, pinned)
        values[chosen] = (sums - sums[origin])[wanted].reshape(-1, abscissae.size)
    return values


def _sums(path: ComplexArray, chord: Chord, pinned: tuple[complex, ...]) -> ComplexArray:
    """Potential along a path; at an element on the wall the mean of just before and just behind."""
    parted, before, behind = path, np.arange(path.size), np.arange(path.size)
    ways = np.abs(np.diff(path))
    ways[ways == 0.0] = np.inf
    near = np.minimum(np.append(ways, np.inf), np.insert(ways, 0, np.inf))
    for at in pinned:
        for k in np.flatnonzero(np.abs(path - at) <= _MEETING * near):
            aside = _BESIDE * near[k] * _heading(path, int(k))
            place = int(before[k])
            parted = np.insert(parted, place, at - aside)
            parted[place + 1] = at + aside
            before[k + 1 :] += 1
            behind[k:] += 1
    sums = np.concatenate(([0j], np.cumsum(_steps(parted, chord, pinned))))
    return np.asarray(0.5 * (sums[before] + sums[behind]), dtype=np.complex128)


def _heading(path: ComplexArray, k: int) -> complex:
    """Unit vector along a path at one of its points, which is no bend."""
    steps = np.concatenate((path[k] - path[:k][::-1], path[k + 1 :] - path[k]))
    step = complex(steps[np.flatnonzero(steps)[0]])
    return step / abs(step)


def _path(
    mesh: Mesh, ring: Ring, chosen: slice, abscissae: FloatArray
) -> tuple[ComplexArray, BoolArray, int]:
    """Points along a ring with its nodes, which of them are wanted, and where the potential is zero."""
    z = mesh.middle[chosen, None] + mesh.half[chosen, None] * abscissae
    path = np.column_stack((mesh.start[chosen], z)).ravel()
    wanted = np.tile(np.append(False, np.ones(abscissae.size, dtype=np.bool_)), z.shape[0])
    if not ring.closed:
        return path, wanted, 0
    first = int(np.searchsorted(abscissae, 0.0))
    path = np.insert(path[1:], first, mesh.middle[chosen][0])
    return path, np.insert(wanted[1:], first, False), first


def _steps(path: ComplexArray, chord: Chord, pinned: tuple[complex, ...]) -> ComplexArray:
    """Integrals from each point to the next."""
    a, b = path[:-1], path[1:]
    steps = np.zeros(a.size, dtype=np.complex128)
    passing = _passing(a, b, pinned)
    plain = (a != b) & (passing < 0)
    steps[plain] = chord(a[plain], b[plain])
    for k in np.flatnonzero(passing >= 0):
        at = pinned[passing[k]]
        side = 1j * _DETOUR * min(abs(at - a[k]), abs(b[k] - at)) * (b[k] - a[k]) / abs(b[k] - a[k])
        vias = np.array([at + side, at - side])
        steps[k] = 0.5 * np.sum(chord(np.full(2, a[k]), vias) + chord(vias, np.full(2, b[k])))
    return steps


def _passing(a: ComplexArray, b: ComplexArray, pinned: tuple[complex, ...]) -> IntArray:
    """Index of the element on the wall that each piece passes, -1 for none."""
    found = np.full(a.size, -1, dtype=np.int64)
    with np.errstate(divide="ignore", invalid="ignore"):
        for j, at in enumerate(pinned):
            share = (at - a) / (b - a)
            found[(share.real > 0.0) & (share.real < 1.0) & (np.abs(share.imag) < _ON)] = j
    return found

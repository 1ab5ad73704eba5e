"""Proof that a disc holds exactly one zero of W_tau, by the size of W and the change of W' over the disc.

If |W'(tau+t) - W'| <= V for |t| <= r and |W| <= (|W'| - V) r, Newton's map with the frozen slope sends the
disc
into itself and contracts, so that the disc holds one simple zero; wherever V < |W'| there is at most one.

References
----------
L. V. Kantorovich and G. P. Akilov, Functional Analysis, 2nd ed., Pergamon, 1982, chapter XVIII.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.poles import PoleField
from forebay.flow.stagnation.kernels import sensitivity, variation

EPS = float(np.finfo(np.float64).eps)

TERM_ROUNDING = 8.0
"""Rounding of a sum of terms, in units of eps times the sum of their absolute values [-]."""

_LADDER = (1.0, 0.6, 0.3, 0.1, 0.02)


@dataclass(frozen=True, slots=True)
class Certificates:
    """Discs about candidate zeros, arrays of shape (n,).

    at : centres [-];  slope : W_tau' there [m2/s]
    radius : a disc of this radius holds exactly one zero; nan where that could not be shown
    unique : a disc of this radius holds at most one zero; 0 where nothing could be shown
    """

    at: ComplexArray
    slope: ComplexArray
    radius: FloatArray
    unique: FloatArray

    @property
    def granted(self) -> BoolArray:
        """Whether the disc holds exactly one zero."""
        return np.isfinite(self.radius)

    def where(self, chosen: BoolArray) -> "Certificates":
        """The chosen ones."""
        return Certificates(self.at[chosen], self.slope[chosen], self.radius[chosen], self.unique[chosen])


def polish(field: PoleField, at: ComplexArray, steps: int = 4) -> ComplexArray:
    """Newton's steps towards the zeros of W_tau, each kept only where it lowers |W|, shape (n,) [-]."""
    velocity, slope = field.jet(at)
    for _ in range(steps):
        with np.errstate(divide="ignore", invalid="ignore"):
            moved = at - velocity / slope
        moved = np.where(np.isfinite(moved), moved, at)
        new_velocity, new_slope = field.jet(moved)
        better = np.abs(new_velocity) < np.abs(velocity)
        if not better.any():
            break
        at = np.where(better, moved, at)
        velocity = np.where(better, new_velocity, velocity)
        slope = np.where(better, new_slope, slope)
    return at


def certify(field: PoleField, at: ComplexArray) -> Certificates:
    """Certificates for candidate zeros of W_tau.

    Parameters
    ----------
    field : poles of the mapped plane
    at : complex array, shape (n,)
        Candidates, best after `polish` [-].

    Notes
    -----
    Allowed for: rounding of the sum (8 eps of the sum of absolute terms) and eps in every position, also
    those of the poles, so that the disc holds the zero of the site as given, not of its rounded image.
    Cost O(n m), three to five passes.
    """
    velocity, slope = field.jet(at)
    parts = (field.kappa, field.poles, field.strengths, field.centres, field.moments)
    moved, rounding, near = sensitivity(at, *parts)
    error = EPS * (TERM_ROUNDING * field.magnitude(at) + 2.0 * moved)
    size = np.abs(slope) - TERM_ROUNDING * EPS * rounding
    with np.errstate(divide="ignore", invalid="ignore"):
        radius = 2.0 * (np.abs(velocity) + error) / size
    radius = np.where((size > 0.0) & (radius < near), radius, np.inf)
    change = variation(at, np.where(np.isfinite(radius), radius, 0.0), *parts)[1]
    granted = np.isfinite(radius) & (change < 0.5 * size)
    unique = _unique_radius(at, size, near, parts)
    return Certificates(
        at, slope, np.where(granted, radius, np.nan), np.maximum(unique, np.where(granted, radius, 0))
    )


def _unique_radius(
    at: ComplexArray,
    size: FloatArray,
    near: FloatArray,
    parts: tuple[float, ComplexArray, ComplexArray, ComplexArray, ComplexArray],
) -> FloatArray:
    """Largest radius tried over which W' is known to keep within |W'| of its value: at most one zero."""
    probe = 1e-3 * near
    second = variation(at, probe, *parts)[1] / probe
    with np.errstate(divide="ignore", invalid="ignore"):
        guess = np.minimum(0.5 * near, np.where(second > 0.0, 0.8 * size / second, 0.5 * near))
    unique = np.zeros(at.size)
    left = np.flatnonzero(size > 0.0)
    for factor in _LADDER:
        trial = factor * guess[left]
        fits = variation(at[left], trial, *parts)[1] < 0.98 * size[left]
        unique[left[fits]] = trial[fits]
        left = left[~fits]
        if left.size == 0:
            break
    return unique

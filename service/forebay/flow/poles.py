"""Sums of poles in the mapped plane: everything that is rational there.

W_tau = constant + sum_j g_j (X(tau - p_j) + offset) + d/dtau sum_k sum_n c_kn X(tau - t_k)^n

with X(d) = 1/d (rational kernel) or X(d) = coth(d/2)/2 (periodic kernel), both of which obey
X' = -(X^2 - kappa). Banks, images, doublets and piers are all in these two sums, so that no
algorithm on top needs to know what a bank is.
"""

from dataclasses import dataclass
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.kernels import multipoles, periodic, rational

RATIONAL = 0.0
PERIODIC = 0.25
"""Values of kappa: the two kernels."""

_NO_CROSSING: FloatArray = np.empty((0, 0))


@dataclass(frozen=True, slots=True)
class PoleField:
    """Poles of the mapped plane with their owners.

    kappa : 0 for X = 1/d, 1/4 for X = coth(d/2)/2
    offset : 0, 1/2 or -1/2, added to X so that a pole's flux leaves by both ends, the right or the left
    constant : current of the ambient, W_tau [m2/s]
    poles, strengths, owners : shape (m,), positions [-], g = (q - i Gamma)/(2 pi) [m2/s], owner index
    centres, moment_owners : shape (k,), positions [-], owner index
    moments : shape (k, n), coefficients c of X, X^2, ... X^n in the potential [m2/s]
    length : Re tau of the far wall: poles beyond it are images, whose branch cuts leave the water alone [-]
    """

    kappa: float
    offset: float
    constant: complex
    poles: ComplexArray
    strengths: ComplexArray
    owners: IntArray
    centres: ComplexArray
    moments: ComplexArray
    moment_owners: IntArray
    length: float = inf

    @property
    def is_periodic(self) -> bool:
        """Whether the kernel is coth(d/2)/2."""
        return self.kappa != RATIONAL

    def kernel(self, d: ComplexArray) -> ComplexArray:
        """X(d), any shape [-]; not finite at d = 0."""
        with np.errstate(divide="ignore", invalid="ignore"):
            if not self.is_periodic:
                return np.asarray(1.0 / d, dtype=np.complex128)
            sign = np.where(d.real < 0.0, -1.0, 1.0)
            lost = -np.expm1(-sign * d)
            return np.asarray(sign * (2.0 - lost) / (2.0 * lost), dtype=np.complex128)

    def kernel_slope(self, d: ComplexArray) -> ComplexArray:
        """X'(d) = kappa - X^2, without the cancellation far from d = 0, any shape [-]."""
        with np.errstate(divide="ignore", invalid="ignore"):
            if not self.is_periodic:
                return np.asarray(-1.0 / (d * d), dtype=np.complex128)
            folded = np.where(d.real < 0.0, -d, d)
            return np.asarray(-np.exp(-folded) / np.expm1(-folded) ** 2, dtype=np.complex128)

    def velocity(self, tau: ComplexArray) -> ComplexArray:
        """W_tau at tau, shape (n,) [m2/s]; nan at a pole."""
        if self.is_periodic:
            sums = periodic.velocity_sums(tau, self.poles, self.strengths, self.offset)
        else:
            sums = rational.velocity_sums(tau, self.poles, self.strengths)
        return np.asarray(self.constant + sums + self._multipole_jet(tau)[0], dtype=np.complex128)

    def jet(self, tau: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        """W_tau and its derivative at tau, shape (n,) each [m2/s]; nan at a pole."""
        if self.is_periodic:
            velocity, slope = periodic.pole_sums(tau, self.poles, self.strengths, self.offset)
        else:
            velocity, slope = rational.pole_sums(tau, self.poles, self.strengths)
        first, second = self._multipole_jet(tau)
        return self.constant + velocity + first, slope + second

    def _multipole_jet(self, tau: ComplexArray) -> tuple[ComplexArray, ComplexArray]:
        return multipoles.multipole_jets(tau, self.centres, self.moments, self.kappa)

    def chords(
        self, start: ComplexArray, end: ComplexArray, *, owner_count: int, crossing: FloatArray = _NO_CROSSING
    ) -> ComplexArray:
        """Integrals of W_tau dtau along paths, owner by owner; the ambient's constant is owner 0.

        Parameters
        ----------
        start, end : shape (n,), ends [-]; neither is a pole
        owner_count : number of columns of the answer
        crossing : see `kernels.periodic.path_integrals`; empty for straight paths

        Returns
        -------
        shape (n, owner_count) [m2/s]: circulation + i flux of each owner.
        """
        if self.is_periodic:
            integrals = periodic.path_integrals(start, end, self.poles, self.offset, crossing)
        else:
            integrals = rational.path_integrals(start, end, self.poles)
        shares = np.zeros((self.poles.size, owner_count), dtype=np.complex128)
        shares[np.arange(self.poles.size), self.owners] = self.strengths
        sums = integrals @ shares
        sums[:, 0] += self.constant * (end - start)
        if self.centres.size:
            passed = self._multipoles(end) - self._multipoles(start)
            np.add.at(sums.T, self.moment_owners, passed.T)
        return np.asarray(sums, dtype=np.complex128)

    def _multipoles(self, tau: ComplexArray) -> ComplexArray:
        return multipoles.multipole_potentials(tau, self.centres, self.moments, self.kappa)

    def potential(self, tau: ComplexArray) -> ComplexArray:
        """Complex potential phi + i psi [m2/s] with principal logarithms, shape (n,)."""
        total = self.constant * tau
        if self.is_periodic:
            total += periodic.potential_sums(tau, self.poles, self.strengths, self.offset, self.length)
        else:
            total += rational.potential_sums(tau, self.poles, self.strengths)
        return np.asarray(total + self._multipoles(tau).sum(axis=1), dtype=np.complex128)

    def logarithm(self, d: ComplexArray) -> ComplexArray:
        """Antiderivative of X: log d, or log(2 sinh(d/2)), on a branch of its own; any shape [-]."""
        with np.errstate(divide="ignore", invalid="ignore"):
            if not self.is_periodic:
                return np.log(d)
            sign = np.where(d.real < 0.0, -1.0, 1.0)
            flip = np.where(d.real < 0.0, np.where(d.imag < 0.0, -1j * np.pi, 1j * np.pi), 0.0)
            return np.asarray(0.5 * sign * d + np.log(-np.expm1(-sign * d)) + flip, dtype=np.complex128)

    def magnitude(self, tau: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W_tau, shape (n,) [m2/s]."""
        if self.is_periodic:
            sums = periodic.magnitude_sums(tau, self.poles, self.strengths, self.offset)
        else:
            sums = rational.magnitude_sums(tau, self.poles, self.strengths)
        sums += multipoles.multipole_magnitudes(tau, self.centres, self.moments, self.kappa)
        return np.asarray(abs(self.constant) + sums, dtype=np.float64)

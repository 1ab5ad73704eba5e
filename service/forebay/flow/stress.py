"""Newtonian stress at points: strain rate, stress, Mohr's circles, dissipation, tractions.

Tensors have shape (..., 3, 3); a plane field has a zero third row and column of gradients. Nothing is checked
here: values that overflow give infinities, which `stress_state` turns into a status.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from forebay.flow.arrays import FloatArray


@dataclass(frozen=True, slots=True)
class Fluid:
    """Newtonian fluid: dynamic viscosity mu [Pa.s], density [kg/m3], second viscosity lambda [Pa.s] or None.

    None stands for Stokes' hypothesis, lambda = -2 mu / 3 (no bulk viscosity).
    """

    dynamic_viscosity: float
    density: float
    second_viscosity: float | None = None

    @property
    def dilatational_viscosity(self) -> float:
        """Lambda of tau = 2 mu D + lambda (div u) I [Pa.s]."""
        if self.second_viscosity is None:
            return -2.0 * self.dynamic_viscosity / 3.0
        return self.second_viscosity

    @property
    def bulk_viscosity(self) -> float:
        """Lambda + 2 mu / 3 [Pa.s]: exactly zero under Stokes' hypothesis, never negative in nature."""
        if self.second_viscosity is None:
            return 0.0
        return self.second_viscosity + 2.0 * self.dynamic_viscosity / 3.0


@dataclass(frozen=True, slots=True)
class Circles:
    """Mohr's circles: `centre` on the normal-stress axis and `radius`, both [Pa], of equal shape."""

    centre: FloatArray
    radius: FloatArray


def padded(tensor: ArrayLike) -> FloatArray:
    """Tensor of shape (..., 3, 3) from one of (..., 2, 2) or (..., 3, 3); the rest is zero."""
    given = np.asarray(tensor, dtype=np.float64)
    full = np.zeros((*given.shape[:-2], 3, 3))
    full[..., : given.shape[-2], : given.shape[-1]] = given
    return full


def gradient_from_jet(slope: ArrayLike, skew: ArrayLike) -> FloatArray:
    """Velocity gradient of a plane field from the derivatives of W = u - iv.

    With d/dz = (d/dx - i d/dy) / 2 and d/dzbar = (d/dx + i d/dy) / 2,

        S = dW/dz    = ((u_x - v_y) - i (v_x + u_y)) / 2
        K = dW/dzbar = ((u_x + v_y) - i (v_x - u_y)) / 2

    so that u_x = Re(S + K), u_y = -Im(S - K), v_x = -Im(S + K), v_y = -Re(S - K). K vanishes where the flow
    is irrotational and free of sources; then u_x = -v_y and u_y = v_x exactly.

    Parameters
    ----------
    slope : complex array, shape (n,)
        dW/dz [1/s].
    skew : complex array, shape (n,)
        dW/dzbar [1/s].

    Returns
    -------
    float array, shape (n, 3, 3)
        [i][j] = d u_i / d x_j [1/s], third row and column zero.
    """
    s, k = np.asarray(slope, dtype=np.complex128), np.asarray(skew, dtype=np.complex128)
    gradient = np.zeros((*s.shape, 3, 3))
    gradient[..., 0, 0] = s.real + k.real
    gradient[..., 0, 1] = k.imag - s.imag
    gradient[..., 1, 0] = -s.imag - k.imag
    gradient[..., 1, 1] = k.real - s.real
    return gradient


def strain_rate(gradient: FloatArray) -> FloatArray:
    """Symmetric part D = (grad u + grad u^T) / 2 [1/s]; exactly zero for a rigid rotation."""
    return 0.5 * (gradient + np.swapaxes(gradient, -1, -2))


def vorticity(gradient: FloatArray) -> FloatArray:
    """Vorticity vector (w_y - v_z, u_z - w_x, v_x - u_y) [1/s], shape (..., 3); anticlockwise positive."""
    antisymmetric = np.swapaxes(gradient, -1, -2) - gradient
    return np.stack([antisymmetric[..., 1, 2], antisymmetric[..., 2, 0], antisymmetric[..., 0, 1]], axis=-1)


def dilatation(rate: FloatArray) -> FloatArray:
    """Divergence of the velocity, the trace of the strain rate (or of the gradient) [1/s]."""
    trace: FloatArray = np.trace(rate, axis1=-2, axis2=-1)
    return trace


def viscous_stress(rate: FloatArray, fluid: Fluid) -> FloatArray:
    """Viscous stress tau = 2 mu D + lambda (div u) I [Pa], lambda = -2 mu / 3 under Stokes' hypothesis.

    Parameters
    ----------
    rate : float array, shape (..., 3, 3)
        Strain rate D [1/s].
    fluid : Fluid
        Viscosities.

    Returns
    -------
    float array, shape (..., 3, 3)
        tau, tension positive; a plane field with a divergence has tau_zz != 0.

    References
    ----------
    Batchelor, An Introduction to Fluid Dynamics, 1967, section 3.3.
    """
    isotropic = fluid.dilatational_viscosity * dilatation(rate)
    return 2.0 * fluid.dynamic_viscosity * rate + isotropic[..., None, None] * np.eye(3)


def stress(viscous: FloatArray, pressure: ArrayLike) -> FloatArray:
    """Stress sigma = -p I + tau [Pa], tension positive; `pressure` p [Pa] is shaped as the leading axes."""
    return viscous - np.asarray(pressure, dtype=np.float64)[..., None, None] * np.eye(3)


def dissipation(rate: FloatArray, fluid: Fluid) -> FloatArray:
    """Rate of viscous dissipation Phi = tau : D [W/m3], never negative.

    Phi = 2 mu D' : D' + (lambda + 2 mu / 3) (div u)^2 with D' = D - (div u) I / 3, a sum of squares.

    Parameters
    ----------
    rate : float array, shape (..., 3, 3)
        Strain rate D [1/s].
    fluid : Fluid
        Viscosities; a bulk viscosity below zero counts as zero.

    Returns
    -------
    float array, shape (...)
        Phi; exactly zero for a rigid rotation.

    References
    ----------
    Batchelor, An Introduction to Fluid Dynamics, 1967, equation 3.4.5.
    """
    divergence = dilatation(rate)
    deviator = rate - divergence[..., None, None] * np.eye(3) / 3.0
    sheared: FloatArray = 2.0 * fluid.dynamic_viscosity * np.sum(deviator * deviator, axis=(-2, -1))
    return sheared + max(fluid.bulk_viscosity, 0.0) * divergence**2


def mean_velocity_gradient(dissipated: FloatArray, fluid: Fluid) -> FloatArray:
    """Camp-Stein velocity gradient G = sqrt(Phi / mu) [1/s].

    References
    ----------
    Camp and Stein, Velocity gradients and internal work in fluid motion, J. Boston Soc. Civ. Eng. 30, 1943,
    203-221.
    """
    return np.asarray(np.sqrt(dissipated / fluid.dynamic_viscosity), dtype=np.float64)


def plane_circle(tensor: FloatArray) -> Circles:
    """Mohr's circle of the directions in the plan: centre (xx + yy) / 2, radius hypot((xx - yy) / 2, xy)."""
    half_difference = 0.5 * tensor[..., 0, 0] - 0.5 * tensor[..., 1, 1]
    centre = 0.5 * tensor[..., 0, 0] + 0.5 * tensor[..., 1, 1]
    return Circles(centre, np.hypot(half_difference, tensor[..., 0, 1]))


def three_circles(principal: FloatArray) -> Circles:
    """Circles (s1, s3), (s1, s2), (s2, s3) of descending principal stresses s [Pa], shape (..., 3)."""
    upper, lower = principal[..., [0, 0, 1]], principal[..., [2, 1, 2]]
    return Circles(0.5 * upper + 0.5 * lower, 0.5 * upper - 0.5 * lower)


def max_shear(principal: FloatArray) -> FloatArray:
    """Largest shear stress on any plane, (s1 - s3) / 2 [Pa], of descending principal stresses (..., 3)."""
    return 0.5 * principal[..., 0] - 0.5 * principal[..., 2]


@dataclass(frozen=True, slots=True)
class Tractions:
    """Traction on planes.

    traction : stress vector sigma n [Pa], shape (k, 3)
    normal_stress : n . sigma n [Pa], tension positive, shape (k,)
    shear_stress : length of the part along the plane [Pa], shape (k,)
    """

    traction: FloatArray
    normal_stress: FloatArray
    shear_stress: FloatArray


def tractions(viscous: FloatArray, pressure: float, normals: FloatArray) -> Tractions:
    """Traction of one stress state on k planes, t = sigma n, on the side towards which n points.

    Parameters
    ----------
    viscous : float array, shape (3, 3)
        Viscous stress [Pa].
    pressure : float
        p [Pa].
    normals : float array, shape (k, 3)
        Unit normals [-].

    Returns
    -------
    Tractions
        The shear is taken from the viscous part alone, so that a large pressure costs it no digits.
    """
    viscous_part = normals @ viscous.T
    along_normal = np.sum(viscous_part * normals, axis=-1)
    shear = np.linalg.norm(viscous_part - along_normal[:, None] * normals, axis=-1)
    return Tractions(viscous_part - pressure * normals, along_normal - pressure, shear)

"""Velocity gradient from velocities measured at three or more places: least squares with errors."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.errors import FlowError
from forebay.flow.stress import (
    Fluid,
    dissipation,
    mean_velocity_gradient,
    padded,
    strain_rate,
    viscous_stress,
)

COLLINEAR_RATIO = 1e-8
"""Places that spread less than this across their best line, per spread along it, are in a line [-]."""


class TooFewSamplesError(FlowError):
    """Fewer than three velocity samples, which cannot determine a gradient."""

    code = "too-few-samples"
    title = "A velocity gradient needs at least three samples"


class UnevenSamplesError(FlowError):
    """Columns of velocity samples differ in length."""

    code = "uneven-samples"
    title = "Columns of velocity samples must be equally long"


class CollinearSamplesError(FlowError):
    """All velocity samples lie in one line, so that the gradient across it is unknown."""

    code = "collinear-samples"
    title = "Velocity samples must not lie in a line"


@dataclass(frozen=True, slots=True)
class VelocitySamples:
    """Velocities u, v [m/s] measured at places x, y [m]; four arrays of shape (n,)."""

    x: FloatArray
    y: FloatArray
    u: FloatArray
    v: FloatArray


@dataclass(frozen=True, slots=True)
class GradientFit:
    """Least-squares plane gradient.

    velocity_gradient : [[u_x, u_y], [v_x, v_y]] [1/s], shape (2, 2)
    covariance : of (u_x, u_y, v_x, v_y) [1/s2], shape (4, 4); nan without degrees of freedom
    degrees_of_freedom : n - 3 for each component [-]
    residual_rms : root mean square length of the residual velocity [m/s]
    spread_ratio : spread of the places across their best line over that along it, 0..1 [-]
    """

    velocity_gradient: FloatArray
    covariance: FloatArray
    degrees_of_freedom: int
    residual_rms: float
    spread_ratio: float


@dataclass(frozen=True, slots=True)
class StandardErrors:
    """One standard error of each derived quantity, nan where there is none to give.

    velocity_gradient, strain_rate : [1/s], shape (3, 3)
    vorticity, dilatation : [1/s]
    viscous_stress : [Pa], shape (3, 3)
    dissipation : [W/m3], nan where the strain rate is zero (no first derivative)
    mean_velocity_gradient : [1/s], nan likewise
    """

    velocity_gradient: FloatArray
    strain_rate: FloatArray
    vorticity: float
    dilatation: float
    viscous_stress: FloatArray
    dissipation: float
    mean_velocity_gradient: float


def fit_gradient(samples: VelocitySamples) -> GradientFit:
    """Gradient of the linear field u = u_0 + G (x - x_m) nearest to the samples.

    With B the centred places, shape (n, 2), G^T = (B^T B)^-1 B^T U. The residuals' covariance
    S = R^T R / (n - 3), shape (2, 2), gives cov(G_ik, G_jl) = S_ij (B^T B)^-1_kl: errors of different places
    are taken as independent and equally large, those of u and v at one place as correlated as residuals are.

    Parameters
    ----------
    samples : VelocitySamples
        At least three places that do not lie in a line.

    Returns
    -------
    GradientFit
        With exactly three samples the fit is exact and every error nan.

    Raises
    ------
    UnevenSamplesError, TooFewSamplesError, CollinearSamplesError
        With the path ("velocity_samples",).

    Notes
    -----
    Singular values of the centred places: map-grid coordinates cost no more than their own rounding.

    References
    ----------
    Seber, Multivariate Observations, 1984, section 8.2.
    """
    places, velocities = _columns(samples)
    centred = places - places.mean(axis=0)
    left, spread, right = np.linalg.svd(centred, full_matrices=False)
    _refuse_line(places, spread)
    deviation = velocities - velocities.mean(axis=0)
    pseudo_inverse = (right.T / spread) @ left.T
    transposed = pseudo_inverse @ deviation
    residual = deviation - centred @ transposed
    freedom = len(places) - 3
    return GradientFit(
        velocity_gradient=transposed.T,
        covariance=_covariance(residual, pseudo_inverse @ pseudo_inverse.T, freedom),
        degrees_of_freedom=freedom,
        residual_rms=float(np.sqrt(np.mean(np.sum(residual**2, axis=1)))),
        spread_ratio=float(spread[1] / spread[0]),
    )


def _columns(samples: VelocitySamples) -> tuple[FloatArray, FloatArray]:
    """Places and velocities, each of shape (n, 2), n >= 3."""
    columns = [np.asarray(c, dtype=np.float64) for c in (samples.x, samples.y, samples.u, samples.v)]
    lengths = [len(column) for column in columns]
    if len(set(lengths)) > 1:
        raise UnevenSamplesError(f"x, y, u, v hold {lengths} values", ("velocity_samples",))
    if lengths[0] < 3:
        raise TooFewSamplesError(f"{lengths[0]} samples given", ("velocity_samples",))
    return np.stack(columns[:2], axis=1), np.stack(columns[2:], axis=1)


def _refuse_line(places: FloatArray, spread: FloatArray) -> None:
    rounding = 4.0 * np.finfo(np.float64).eps * float(np.max(np.abs(places))) * np.sqrt(len(places))
    if spread[1] <= max(COLLINEAR_RATIO * float(spread[0]), rounding):
        raise CollinearSamplesError(
            f"the {len(places)} places spread {spread[0]:.3g} m along a line and {spread[1]:.3g} m across it "
            "(root sum of squares)",
            ("velocity_samples",),
        )


def _covariance(residual: FloatArray, inverse_normal: FloatArray, freedom: int) -> FloatArray:
    """Covariance of (u_x, u_y, v_x, v_y), nan where there are no degrees of freedom."""
    if freedom == 0:
        return np.full((4, 4), np.nan)
    residual_covariance: FloatArray = residual.T @ residual / freedom
    blocks = residual_covariance[:, None, :, None] * inverse_normal[None, :, None, :]
    return blocks.reshape(4, 4)


def propagate_errors(fit: GradientFit, fluid: Fluid) -> StandardErrors:
    """Standard errors of what follows from a fitted gradient, by linear propagation.

    se(f)^2 = (df/dg) C (df/dg)^T with C the covariance of g = (u_x, u_y, v_x, v_y); in particular
    dPhi = 2 tau : dD and dG = tau : dD / (mu G).

    Parameters
    ----------
    fit : GradientFit
        Gradient and covariance.
    fluid : Fluid
        Viscosities, taken as exact.

    Returns
    -------
    StandardErrors
        All nan without degrees of freedom.

    Notes
    -----
    First order: near zero strain, where the errors are as large as the gradient, G is biased upwards and its
    error only an order of magnitude.
    """
    unit = padded(np.eye(4).reshape(4, 2, 2))
    rate = strain_rate(padded(fit.velocity_gradient))
    dissipated = dissipation(rate, fluid)
    shear_rate = float(mean_velocity_gradient(dissipated, fluid))
    slope = 2.0 * np.sum(viscous_stress(rate, fluid) * strain_rate(unit), axis=(1, 2))
    dissipated_error = float(_errors(slope, fit)) if shear_rate > 0.0 else float("nan")
    scale = 2.0 * fluid.dynamic_viscosity * shear_rate
    return StandardErrors(
        velocity_gradient=_errors(unit, fit),
        strain_rate=_errors(strain_rate(unit), fit),
        vorticity=float(_errors(np.array([0.0, -1.0, 1.0, 0.0]), fit)),
        dilatation=float(_errors(np.array([1.0, 0.0, 0.0, 1.0]), fit)),
        viscous_stress=_errors(viscous_stress(strain_rate(unit), fluid), fit),
        dissipation=dissipated_error,
        mean_velocity_gradient=dissipated_error / scale if shear_rate > 0.0 else float("nan"),
    )


def _errors(derivatives: FloatArray, fit: GradientFit) -> FloatArray:
    """Standard errors of quantities whose derivatives by the four entries lie along the first axis."""
    variance = np.einsum("a...,ab,b...->...", derivatives, fit.covariance, derivatives)
    errors: FloatArray = np.sqrt(np.maximum(variance, 0.0))
    return errors

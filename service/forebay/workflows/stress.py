"""Stress from velocity gradients, strain rates or measured velocities."""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.errors import FlowError
from forebay.flow.gradient_fit import VelocitySamples, fit_gradient, propagate_errors
from forebay.flow.rheology import GeneralisedFluid
from forebay.flow.stress import Fluid, padded, strain_rate, vorticity
from forebay.flow.stress_state import StrainedPlace, StressState, stress_states
from forebay.trade.fluids import AnyFluid, known_fluid

SYMMETRY = 1e-9
"""Largest difference of mirrored entries of a strain rate, as a share of its largest entry [-]."""


class TensorShapeError(FlowError):
    """A tensor is neither 2x2 nor 3x3."""

    code = "tensor-shape"
    title = "A tensor must be 2x2 or 3x3"


class AsymmetricStrainRateError(FlowError):
    """A strain rate is not symmetric, so it is not one."""

    code = "asymmetric-strain-rate"
    title = "A strain rate must be symmetric"


class ZeroNormalError(FlowError):
    """The normal of a plane has no length or not as many components as there are dimensions."""

    code = "zero-normal"
    title = "The normal of a plane must have a direction"


@dataclass(frozen=True, slots=True)
class GradientState:
    """State with a known velocity gradient [i][j] = d u_i / d x_j [1/s], shape (2, 2) or (3, 3).

    pressure : p [Pa]; 0 leaves the stress relative to the pressure
    normals : of planes whose traction is asked for, any length, two or three components
    """

    name: str
    velocity_gradient: FloatArray
    pressure: float = 0.0
    normals: tuple[tuple[float, ...], ...] = ()


@dataclass(frozen=True, slots=True)
class StrainRateState:
    """State with a known strain rate D [1/s], symmetric, shape (2, 2) or (3, 3); its vorticity is unknown."""

    name: str
    strain_rate: FloatArray
    pressure: float = 0.0
    normals: tuple[tuple[float, ...], ...] = ()


@dataclass(frozen=True, slots=True)
class SampledState:
    """State with velocities measured at three or more places that do not lie in a line."""

    name: str
    samples: VelocitySamples
    pressure: float = 0.0
    normals: tuple[tuple[float, ...], ...] = ()


State = GradientState | StrainRateState | SampledState


def compute_stress(fluid: AnyFluid, states: tuple[State, ...]) -> tuple[StressState, ...]:
    """Strain rate, stress, principal values, dissipation, G and tractions of given states.

    Parameters
    ----------
    fluid : Water, Fluid or GeneralisedFluid
        Water by temperature [degC] and salinity [g/kg], viscosities [Pa.s] and density [kg/m3], or a sludge.
    states : tuple of GradientState, StrainRateState or SampledState
        Each with its pressure [Pa] and the planes whose traction is asked for.

    Returns
    -------
    tuple of StressState
        In order; measured states carry their fit and standard errors, nan for exactly three samples. Those
        of stress and dissipation are nan in a generalised fluid, whose viscosity has an error of its own.

    Raises
    ------
    UnphysicalFluidError, WaterRangeError
        Path ("fluid", ...).
    TensorShapeError, AsymmetricStrainRateError, ZeroNormalError, TooFewSamplesError, UnevenSamplesError,
    CollinearSamplesError
        Path ("states", i, ...).
    """
    known = known_fluid(fluid)
    places = tuple(_place(known, state, index) for index, state in enumerate(states))
    return stress_states(known, places)


def _place(fluid: Fluid | GeneralisedFluid, state: State, index: int) -> StrainedPlace:
    try:
        normals = _unit_normals(state.normals)
        match state:
            case GradientState():
                return _known_place(state, normals)
            case StrainRateState():
                return _strained_place(state, normals)
            case SampledState():
                return _sampled_place(fluid, state, normals)
    except FlowError as error:
        error.path = ("states", index, *error.path)
        raise


def _known_place(state: GradientState, normals: FloatArray) -> StrainedPlace:
    gradient = _full_tensor(state.velocity_gradient, "velocity_gradient")
    is_plane = np.shape(state.velocity_gradient) == (2, 2)
    rate, spin = strain_rate(gradient), vorticity(gradient)
    return StrainedPlace(state.name, rate, spin, state.pressure, normals=normals, is_plane=is_plane)


def _strained_place(state: StrainRateState, normals: FloatArray) -> StrainedPlace:
    rate = _full_tensor(state.strain_rate, "strain_rate")
    difference, largest = float(np.max(np.abs(rate - rate.T))), float(np.max(np.abs(rate)))
    if difference > SYMMETRY * largest:
        raise AsymmetricStrainRateError(f"mirrored entries differ by {difference:.3g} 1/s", ("strain_rate",))
    is_plane = np.shape(state.strain_rate) == (2, 2)
    unknown = np.full(3, np.nan)
    return StrainedPlace(
        state.name, strain_rate(rate), unknown, state.pressure, normals=normals, is_plane=is_plane
    )


def _sampled_place(
    fluid: Fluid | GeneralisedFluid, state: SampledState, normals: FloatArray
) -> StrainedPlace:
    fit = fit_gradient(state.samples)
    gradient = padded(fit.velocity_gradient)
    rate, spin = strain_rate(gradient), vorticity(gradient)
    if isinstance(fluid, Fluid):
        errors = propagate_errors(fit, fluid)
    else:
        errors = propagate_errors(fit, Fluid(1.0, fluid.density))
        errors = replace(errors, viscous_stress=np.full((3, 3), np.nan), dissipation=float("nan"))
    return StrainedPlace(
        state.name, rate, spin, state.pressure, normals=normals, fit=fit, standard_errors=errors
    )


def _full_tensor(tensor: FloatArray, field: str) -> FloatArray:
    if np.shape(tensor) not in {(2, 2), (3, 3)}:
        raise TensorShapeError(f"{field} must have as many columns as rows, two or three of each", (field,))
    return padded(tensor)


def _unit_normals(normals: tuple[tuple[float, ...], ...]) -> FloatArray:
    """Unit normals, shape (k, 3), of vectors of two or three components."""
    units = np.zeros((len(normals), 3))
    for k, normal in enumerate(normals):
        largest = max((abs(component) for component in normal), default=0.0)
        if len(normal) not in {2, 3} or largest == 0.0:
            raise ZeroNormalError(
                "a normal has two or three components, not all of them zero", ("planes", k, "normal")
            )
        scaled = np.array(normal) / largest
        units[k, : len(normal)] = scaled / np.linalg.norm(scaled)
    return units

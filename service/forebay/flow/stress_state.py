"""Stress states: everything that is asked about the stress at one place, for many places at once."""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.gradient_fit import GradientFit, StandardErrors
from forebay.flow.principal import principal_axes
from forebay.flow.rheology import GeneralisedFluid, shear_rate
from forebay.flow.stress import (
    Circles,
    Fluid,
    Tractions,
    dilatation,
    dissipation,
    max_shear,
    mean_velocity_gradient,
    plane_circle,
    three_circles,
    tractions,
    viscous_stress,
)


class StressStatus(StrEnum):
    """Whether a state has values, and if not, why."""

    COMPUTED = "computed"
    OUT_OF_RANGE = "out-of-range"
    ON_SINGULARITY = "on-singularity"
    INSIDE_OPENING = "inside-opening"
    ON_LAND = "on-land"


@dataclass(frozen=True, slots=True)
class Circle:
    """Mohr's circle: `centre` and `radius` [Pa]."""

    centre: float
    radius: float


@dataclass(frozen=True, slots=True)
class StressState:
    """Stress at one place; all numbers are nan unless `status` is computed.

    is_plane : whether the input was plane (2x2, samples or a layout)
    at : place x + iy [m] in a layout, else None
    strain_rate : D [1/s], shape (3, 3)
    vorticity : vector [1/s], shape (3,); nan if only the strain rate was given
    dilatation : div u [1/s]
    viscous_stress, stress : tau and -p I + tau [Pa], shape (3, 3)
    principal_stresses : of `stress`, descending [Pa], shape (3,)
    principal_directions : one unit vector per row, shape (3, 3)
    max_shear : (s1 - s3) / 2 [Pa]
    mohr_circle : of the directions in the plan
    mohr_circles : of the planes of (s1, s3), (s1, s2), (s2, s3)
    dissipation : Phi [W/m3]
    mean_velocity_gradient : G = sqrt(Phi / mu) [1/s]
    apparent_viscosity : mu at this strain rate [Pa.s]; inf at rest in a shear-thinning fluid
    tractions : on the planes asked for, in order
    fit, standard_errors : of measured samples, else None
    """

    name: str
    status: StressStatus
    is_plane: bool
    at: complex | None
    strain_rate: FloatArray
    vorticity: FloatArray
    dilatation: float
    viscous_stress: FloatArray
    stress: FloatArray
    principal_stresses: FloatArray
    principal_directions: FloatArray
    max_shear: float
    mohr_circle: Circle
    mohr_circles: tuple[Circle, Circle, Circle]
    dissipation: float
    mean_velocity_gradient: float
    tractions: Tractions
    fit: GradientFit | None = None
    standard_errors: StandardErrors | None = None
    apparent_viscosity: float = np.nan

    @property
    def plane_vorticity(self) -> float:
        """Vorticity about the vertical, v_x - u_y [1/s], anticlockwise positive."""
        return float(self.vorticity[2])


@dataclass(frozen=True, slots=True)
class StrainedPlace:
    """What is known of one place before its stress is computed.

    strain_rate : [1/s], shape (3, 3); nan where `status` is not computed
    vorticity : [1/s], shape (3,); nan if unknown
    pressure : [Pa]
    normals : unit normals of planes, shape (k, 3)
    """

    name: str
    strain_rate: FloatArray
    vorticity: FloatArray
    pressure: float = 0.0
    normals: FloatArray | None = None
    is_plane: bool = True
    at: complex | None = None
    status: StressStatus = StressStatus.COMPUTED
    fit: GradientFit | None = None
    standard_errors: StandardErrors | None = None


NO_PLANES = Tractions(np.empty((0, 3)), np.empty(0), np.empty(0))
"""Tractions of a state of which none were asked for."""


@dataclass(frozen=True, slots=True)
class _Columns:
    """Values of n places, nan where there are none; scalars as lists, which are taken apart faster."""

    viscous: FloatArray
    stress: FloatArray
    principal: FloatArray
    directions: FloatArray
    plane: list[Circle]
    three: list[tuple[Circle, Circle, Circle]]
    shear: list[float]
    dilatation: list[float]
    dissipation: list[float]
    gradient: list[float]
    viscosity: list[float]
    sound: list[bool]


def stress_states(
    fluid: Fluid | GeneralisedFluid, places: tuple[StrainedPlace, ...]
) -> tuple[StressState, ...]:
    """Stress, principal values, circles, dissipation, G and tractions of n places.

    Parameters
    ----------
    fluid : Fluid or GeneralisedFluid
        Viscosities; a generalised fluid has no bulk viscosity.
    places : tuple of StrainedPlace, length n
        Strain rates and pressures.

    Returns
    -------
    tuple of StressState, length n
        In order. A state whose stress or dissipation overflows is out-of-range and has nan throughout.

    Notes
    -----
    Everything is computed from tau and the pressure subtracted last: shear, radii and directions keep their
    digits under any pressure. O(n).
    """
    if not places:
        return ()
    rates = np.stack([place.strain_rate for place in places])
    pressures = np.array([place.pressure for place in places])
    with np.errstate(over="ignore", invalid="ignore"):
        columns = _columns(fluid, rates, pressures)
    return tuple(_state(place, columns, index) for index, place in enumerate(places))


def _columns(fluid: Fluid | GeneralisedFluid, rates: FloatArray, pressures: FloatArray) -> _Columns:
    viscosity, viscous, dissipated, gradient = _responses(fluid, rates)
    sound = np.isfinite(dissipated) & np.isfinite(viscous).all(axis=(1, 2))
    viscous[~sound], dissipated[~sound] = np.nan, np.nan
    axes = principal_axes(np.where(sound[:, None, None], viscous, 0.0))
    own = np.where(sound[:, None], axes.values, np.nan)
    plane, three = plane_circle(viscous), three_circles(own)
    first, second, third = (_circles(three, pressures, k) for k in range(3))
    return _Columns(
        viscous=viscous,
        stress=viscous - pressures[:, None, None] * np.eye(3),
        principal=own - pressures[:, None],
        directions=np.where(sound[:, None, None], axes.directions, np.nan),
        plane=_circles(plane, pressures),
        three=list(zip(first, second, third, strict=True)),
        shear=max_shear(own).tolist(),
        dilatation=np.where(sound, dilatation(rates), np.nan).tolist(),
        dissipation=dissipated.tolist(),
        gradient=np.where(sound, gradient, np.nan).tolist(),
        viscosity=np.where(sound, viscosity, np.nan).tolist(),
        sound=sound.tolist(),
    )


def _responses(
    fluid: Fluid | GeneralisedFluid, rates: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """Apparent viscosity, viscous stress, dissipation and G of n strain rates."""
    if isinstance(fluid, Fluid):
        dissipated = dissipation(rates, fluid)
        viscosity = np.full(dissipated.shape, fluid.dynamic_viscosity)
        gradient = mean_velocity_gradient(dissipated, fluid)
        return viscosity, viscous_stress(rates, fluid), dissipated, gradient
    unit = Fluid(1.0, fluid.density)
    rate = shear_rate(rates)
    viscosity = fluid.apparent_viscosity(rate)
    acting = np.where(rate == 0.0, 0.0, viscosity)  # at rest there is no viscous stress, whatever mu is
    viscous = acting[:, None, None] * viscous_stress(rates, unit)
    return viscosity, viscous, acting * rate**2, rate


def _circles(circles: Circles, pressures: FloatArray, k: int | None = None) -> list[Circle]:
    """Circles of n places, or the k-th of their three, shifted by the pressure."""
    column = slice(None) if k is None else (slice(None), k)
    centre, radius = circles.centre[column] - pressures, circles.radius[column]
    return [Circle(c, r) for c, r in zip(centre.tolist(), radius.tolist(), strict=True)]


def _state(place: StrainedPlace, columns: _Columns, n: int) -> StressState:
    sound, normals = columns.sound[n], place.normals
    status = (
        StressStatus.OUT_OF_RANGE if place.status is StressStatus.COMPUTED and not sound else place.status
    )
    return StressState(
        name=place.name,
        status=status,
        is_plane=place.is_plane,
        at=place.at,
        strain_rate=place.strain_rate if sound else np.full((3, 3), np.nan),
        vorticity=place.vorticity if sound else np.full(3, np.nan),
        dilatation=columns.dilatation[n],
        viscous_stress=columns.viscous[n],
        stress=columns.stress[n],
        principal_stresses=columns.principal[n],
        principal_directions=columns.directions[n],
        max_shear=columns.shear[n],
        mohr_circle=columns.plane[n],
        mohr_circles=columns.three[n],
        dissipation=columns.dissipation[n],
        mean_velocity_gradient=columns.gradient[n],
        tractions=NO_PLANES if normals is None else tractions(columns.viscous[n], place.pressure, normals),
        fit=place.fit if sound else None,
        standard_errors=place.standard_errors if sound else None,
        apparent_viscosity=columns.viscosity[n],
    )

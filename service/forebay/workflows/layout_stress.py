"""Stress in the flow of a layout, from its exact velocity gradient."""

from typing import Protocol

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, IntArray
from forebay.flow.errors import FlowError
from forebay.flow.layout import Layout, Water
from forebay.flow.model import compile_layout
from forebay.flow.stress import Fluid, gradient_from_jet, strain_rate, vorticity
from forebay.flow.stress_state import StrainedPlace, StressState, StressStatus, stress_states
from forebay.flow.terms import Jet
from forebay.trade.fluids import newtonian_fluid


class Field(Protocol):
    """The part of a compiled layout that stresses need."""

    def wet(self, z: ComplexArray) -> BoolArray:
        """Whether each place is in the water, walls included."""
        ...

    def singular(self, z: ComplexArray) -> IntArray:
        """Index of the singularity at each place, -1 where there is none."""
        ...

    def jet(self, z: ComplexArray) -> Jet:
        """Velocity W = u - iv with its derivatives dW/dz and dW/dzbar."""
        ...


def compute_layout_stress(
    fluid: Water | Fluid, layout: Layout, points: ComplexArray
) -> tuple[StressState, ...]:
    """Strain rate, stress, principal values, dissipation and G of the flow at points of a layout.

    The stress is given relative to the pressure (p = 0), which the flow knows only up to a constant.

    Parameters
    ----------
    fluid : Water or Fluid
        Often `layout.water`.
    layout : Layout
        The site.
    points : complex array, shape (n,)
        Places x + iy [m].

    Returns
    -------
    tuple of StressState, length n
        Named "0", "1", ... by index; where there is no flow, nan and the status on-singularity or on-land.

    Raises
    ------
    UnphysicalFluidError, WaterRangeError
        Path ("fluid", ...).
    LayoutError
        As `compile_layout`.

    Notes
    -----
    G of the mean flow alone: turbulence, which dissipates far more in rivers, is not in it.
    """
    try:
        newtonian = newtonian_fluid(fluid)
    except FlowError as error:
        error.path = ("fluid", *error.path)
        raise
    return stress_states(newtonian, _strained_places(compile_layout(layout), points))


def _strained_places(field: Field, points: ComplexArray) -> tuple[StrainedPlace, ...]:
    jet = field.jet(points)
    gradient = gradient_from_jet(jet.slope, jet.skew)
    on_singularity, on_land = field.singular(points) >= 0, ~field.wet(points)
    gradient[on_singularity | on_land] = np.nan
    rates, spins = strain_rate(gradient), vorticity(gradient)
    return tuple(
        StrainedPlace(
            name=str(n),
            strain_rate=rates[n],
            vorticity=spins[n],
            at=complex(point),
            status=_status(on_singularity=bool(on_singularity[n]), on_land=bool(on_land[n])),
        )
        for n, point in enumerate(points)
    )


def _status(*, on_singularity: bool, on_land: bool) -> StressStatus:
    if on_land:
        return StressStatus.ON_LAND
    return StressStatus.ON_SINGULARITY if on_singularity else StressStatus.COMPUTED

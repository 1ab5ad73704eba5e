"""Stress in the flow of a layout, from its exact velocity gradient."""

from collections.abc import Mapping
from types import MappingProxyType
from typing import Protocol

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, IntArray
from forebay.flow.layout import Layout, Sink, Source
from forebay.flow.model import compile_layout
from forebay.flow.stress import gradient_from_jet, strain_rate, vorticity
from forebay.flow.stress_state import StrainedPlace, StressState, StressStatus, stress_states
from forebay.flow.terms import Jet
from forebay.trade.fluids import AnyFluid, known_fluid

UNKNOWN: Mapping[str, float] = MappingProxyType({})
"""No opening has a known radius."""

_STATUSES = (
    StressStatus.COMPUTED,
    StressStatus.ON_LAND,
    StressStatus.ON_SINGULARITY,
    StressStatus.INSIDE_OPENING,
)


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
    fluid: AnyFluid, layout: Layout, points: ComplexArray, opening_radii: Mapping[str, float] = UNKNOWN
) -> tuple[StressState, ...]:
    """Strain rate, stress, principal values, dissipation and G of the flow at points of a layout.

    The stress is given relative to the pressure (p = 0), which the flow knows only up to a constant.

    Parameters
    ----------
    fluid : Water, Fluid or GeneralisedFluid
        Often `layout.water`.
    layout : Layout
        The site.
    points : complex array, shape (n,)
        Places x + iy [m].
    opening_radii : mapping
        Radius in plan of point sources and sinks by name [m]; inside there is a structure and no water.

    Returns
    -------
    tuple of StressState, length n
        Named "0", "1", ... by index; where there is no flow, nan and the status on-singularity,
        inside-opening or on-land.

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
    known, field = known_fluid(fluid), compile_layout(layout)
    radii = [
        (e.at, opening_radii[e.name])
        for e in layout.elements
        if isinstance(e, Source | Sink) and e.name in opening_radii
    ]
    return stress_states(known, _strained_places(field, points, radii))


def _strained_places(
    field: Field, points: ComplexArray, openings: list[tuple[complex, float]]
) -> tuple[StrainedPlace, ...]:
    jet = field.jet(points)
    gradient = gradient_from_jet(jet.slope, jet.skew)
    inside = np.zeros(points.shape, dtype=np.bool_)
    for at, radius in openings:
        inside |= np.abs(points - at) < radius
    reasons = (~field.wet(points), field.singular(points) >= 0, inside)
    status = np.select(reasons, (1, 2, 3), 0)
    gradient[status > 0] = np.nan
    rates, spins = strain_rate(gradient), vorticity(gradient)
    return tuple(
        StrainedPlace(str(n), rates[n], spins[n], at=complex(point), status=_STATUSES[status[n]])
        for n, point in enumerate(points)
    )

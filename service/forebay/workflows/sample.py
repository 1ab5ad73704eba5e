"""Sample the field: velocity and what follows from it, at points."""

from collections.abc import Collection
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from forebay.flow import derived
from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.features import WATER
from forebay.flow.layout import Layout
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.terms import Jet
from forebay.trade.water import STANDARD_GRAVITY, water_properties

STILL = 1e-9
"""Vorticity below this part of speed over the layout's scale is rounding: the point is irrotational [-]."""

ON_LINE = 4.0 * float(np.finfo(np.float64).eps)
"""Distance from a line element, over the size of the coordinates, within which a point lies on it [-]."""


class Quantity(StrEnum):
    """What can be asked for besides the velocity."""

    DIRECTION = "direction_deg"
    POTENTIAL = "potential"
    STREAM_FUNCTION = "stream_function"
    PRESSURE_COEFFICIENT = "pressure_coefficient"
    HEAD_CHANGE = "head_change"
    PRESSURE_GRADIENT_ALONG = "pressure_gradient_along"
    PRESSURE_GRADIENT_ACROSS = "pressure_gradient_across"
    STREAMLINE_CURVATURE = "streamline_curvature"
    VORTICITY = "vorticity"
    STRAIN_RATE_XX = "strain_rate_xx"
    STRAIN_RATE_XY = "strain_rate_xy"
    STRAIN_RATE_YY = "strain_rate_yy"
    ACCELERATION_X = "acceleration_x"
    ACCELERATION_Y = "acceleration_y"
    VELOCITY_BOUND = "velocity_bound"


IRROTATIONAL_ONLY = frozenset({Quantity.POTENTIAL, Quantity.PRESSURE_COEFFICIENT, Quantity.HEAD_CHANGE})
"""What has no meaning where the flow is rotational: Bernoulli's constant differs between streamlines."""


class PointStatus(StrEnum):
    """Why a point has no value; or has one that is the mean of both sides of a line element."""

    ON_SINGULARITY = "on-singularity"
    ON_LAND = "on-land"
    ON_LINE_ELEMENT = "on-line-element"


@dataclass(frozen=True, slots=True)
class Flagged:
    """A point without a value, or on a line element: its index and the reason."""

    index: int
    status: PointStatus


@dataclass(frozen=True, slots=True)
class FieldSamples:
    """Columns of one length; nan where a point has no value.

    points : shape (n,), x + iy [m]
    columns : x, y [m], u, v, speed [m/s] and what was asked for, SI
    flagged : points on land, on a singularity or on a line element in the water, by index
    """

    points: ComplexArray
    columns: dict[str, FloatArray]
    flagged: tuple[Flagged, ...]


def sample_field(layout: Layout, points: ComplexArray, quantities: Collection[str] = ()) -> FieldSamples:
    """Velocity and derived quantities at points.

    Parameters
    ----------
    layout : the site
    points : shape (n,), x + iy [m]
    quantities : values of `Quantity`

    Returns
    -------
    FieldSamples. `potential` and `stream_function` are on the branch of `FlowModel.potential`: differences
    between two points have a meaning only if no branch cut lies between them (contours have none).
    Undefined values are nan: direction and what refers to it where the water stands still; potential, head
    and pressure coefficient where the flow is rotational; pressure coefficient without ambient current; the
    bound of the velocity on walls, and where no wall had to be solved.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    """
    model = compile_layout(layout)
    wanted = [Quantity(name) for name in quantities]
    wet, free = model.wet(points), model.singular(points) < 0
    fine = wet & free
    z = points[fine]
    columns = {"x": points.real.copy(), "y": points.imag.copy()}
    for name, values in _columns(model, z, wanted).items():
        column = np.full(points.shape, np.nan)
        column[fine] = values
        columns[name] = column
    return FieldSamples(points, columns, _flags(wet, free, fine & _on_lines(model, points)))


def _flags(wet: BoolArray, free: BoolArray, on_line: BoolArray) -> tuple[Flagged, ...]:
    return tuple(
        Flagged(int(index), _status(wet=bool(wet[index]), on_line=bool(on_line[index])))
        for index in np.flatnonzero(~(wet & free) | on_line)
    )


def _status(*, wet: bool, on_line: bool) -> PointStatus:
    if on_line:
        return PointStatus.ON_LINE_ELEMENT
    return PointStatus.ON_SINGULARITY if wet else PointStatus.ON_LAND


def _on_lines(model: FlowModel, points: ComplexArray) -> BoolArray:
    """Which points lie on a line element in the water, where the velocity across it jumps."""
    on_line, reach = np.zeros(points.shape, dtype=np.bool_), ON_LINE * (np.abs(points) + model.scale)
    for line in model.lines:
        if line.on == WATER:
            chord = line.end - line.start
            share = np.clip(((points - line.start) / chord).real, 0.0, 1.0)
            on_line |= np.abs(points - line.start - share * chord) <= reach
    return on_line


def _columns(model: FlowModel, z: ComplexArray, wanted: list[Quantity]) -> dict[str, FloatArray]:
    jet = model.jet(z) if wanted else Jet(model.velocity(z), z, z)
    columns = {"u": jet.velocity.real, "v": -jet.velocity.imag, "speed": np.abs(jet.velocity)}
    values = _derived(model, jet, z, wanted)
    rotational = _rotational(model, jet) if IRROTATIONAL_ONLY & set(wanted) else None
    for quantity in wanted:
        column = values[quantity]
        if rotational is not None and quantity in IRROTATIONAL_ONLY:
            column = np.where(rotational, np.nan, column)
        columns[quantity.value] = column
    return columns


def _rotational(model: FlowModel, jet: Jet) -> BoolArray:
    if model.has_potential:
        return np.zeros(jet.velocity.shape, dtype=np.bool_)
    limit = STILL * np.abs(jet.velocity) / model.scale
    return np.asarray(np.abs(derived.vorticity(jet)) > limit, dtype=np.bool_)


def _derived(
    model: FlowModel, jet: Jet, z: ComplexArray, wanted: list[Quantity]
) -> dict[Quantity, FloatArray]:
    """Everything asked for, and what comes with it at no cost."""
    asked = set(wanted)
    values: dict[Quantity, FloatArray] = {}
    if asked & {Quantity.POTENTIAL, Quantity.STREAM_FUNCTION}:
        potential = model.potential(z)
        values |= {Quantity.POTENTIAL: potential.real, Quantity.STREAM_FUNCTION: potential.imag}
    if Quantity.VELOCITY_BOUND in asked:
        values[Quantity.VELOCITY_BOUND] = _velocity_bound(model, z)
    if asked & _CHEAP:
        values |= _kinematic(jet)
    speed = abs(model.layout.ambient.velocity)
    if Quantity.PRESSURE_COEFFICIENT in asked:
        values[Quantity.PRESSURE_COEFFICIENT] = derived.pressure_coefficient(jet.velocity, speed)
    if Quantity.HEAD_CHANGE in asked:
        values[Quantity.HEAD_CHANGE] = derived.head_change(jet.velocity, speed, gravity=STANDARD_GRAVITY)
    if asked & {Quantity.PRESSURE_GRADIENT_ALONG, Quantity.PRESSURE_GRADIENT_ACROSS}:
        water = model.layout.water
        density = water_properties(water.temperature, water.salinity).density
        along, across = derived.pressure_gradient(jet, density)
        values |= {Quantity.PRESSURE_GRADIENT_ALONG: along, Quantity.PRESSURE_GRADIENT_ACROSS: across}
    return values


def _velocity_bound(model: FlowModel, z: ComplexArray) -> FloatArray:
    """Largest error of the velocity that solved walls leave [m/s]; nan on them, and where none was solved."""
    if model.bound is None:
        return np.full(z.shape, np.nan)
    bound = model.bound.velocity(model.distance_to_wall(z))
    return np.where(np.isfinite(bound), bound, np.nan)


_CHEAP = frozenset(Quantity) - {
    Quantity.POTENTIAL,
    Quantity.STREAM_FUNCTION,
    Quantity.PRESSURE_COEFFICIENT,
    Quantity.HEAD_CHANGE,
    Quantity.PRESSURE_GRADIENT_ALONG,
    Quantity.PRESSURE_GRADIENT_ACROSS,
    Quantity.VELOCITY_BOUND,
}
"""What `_kinematic` gives."""


def _kinematic(jet: Jet) -> dict[Quantity, FloatArray]:
    xx, xy, yy = derived.strain_rates(jet)
    change = derived.acceleration(jet)
    return {
        Quantity.DIRECTION: derived.direction_deg(jet.velocity),
        Quantity.STREAMLINE_CURVATURE: derived.streamline_curvature(jet),
        Quantity.VORTICITY: derived.vorticity(jet),
        Quantity.STRAIN_RATE_XX: xx,
        Quantity.STRAIN_RATE_XY: xy,
        Quantity.STRAIN_RATE_YY: yy,
        Quantity.ACCELERATION_X: change.real,
        Quantity.ACCELERATION_Y: -change.imag,
    }

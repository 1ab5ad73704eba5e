"""Sample the flow in three dimensions about openings of known elevation."""

from collections.abc import Collection, Mapping
from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from forebay.flow import derived
from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.errors import FlowError
from forebay.flow.layout import Layout
from forebay.flow.model import compile_layout
from forebay.flow.point_intake.field import NearField, near_field
from forebay.trade.water import STANDARD_GRAVITY
from forebay.workflows.sample import Quantity

GIVEN = frozenset({Quantity.DIRECTION, Quantity.PRESSURE_COEFFICIENT, Quantity.HEAD_CHANGE})
"""What follows from the velocity alone: the other quantities are those of a plane flow."""


class PlaneQuantityError(FlowError):
    """A quantity of plane flow was asked for in three dimensions."""

    code = "plane-quantity"
    title = "The quantity belongs to the depth-mean flow"


class PlaceStatus(StrEnum):
    """Why a place has no value."""

    ON_SINGULARITY = "on-singularity"
    ON_LAND = "on-land"
    OUTSIDE_DEPTH = "outside-depth"


@dataclass(frozen=True, slots=True)
class FlaggedPlace:
    """A place without a value: its index and the reason."""

    index: int
    status: PlaceStatus


@dataclass(frozen=True, slots=True)
class NearFieldSamples:
    """Columns of one length; nan where a place has no value.

    columns : x, y, z [m], u, v, w, speed [m/s] and what was asked for, SI
    flagged : places without a value, by index
    wall_leak : largest velocity through banks and piers that the images leave, an estimate of the error [m/s]
    """

    points: ComplexArray
    columns: dict[str, FloatArray]
    flagged: tuple[FlaggedPlace, ...]
    wall_leak: float


def sample_near_field(
    layout: Layout,
    elevations: Mapping[str, float],
    at: tuple[ComplexArray, FloatArray],
    quantities: Collection[str] = (),
) -> NearFieldSamples:
    """Velocity in three dimensions: openings of known elevation as points, everything else over the depth.

    Parameters
    ----------
    layout : the site
    elevations : of point sources and sinks above the bed, by name [m]
    at : places x + iy and heights above the bed, shape (n,) each [m]
    quantities : of `GIVEN`

    Returns
    -------
    NearFieldSamples. Head and pressure coefficient are Bernoulli against the ambient speed.

    Raises
    ------
    LayoutError : the layout describes something that cannot be
    ElevationMissingError : no opening has an elevation
    PlaneQuantityError : a quantity that only the depth-mean flow has; path ("quantities", i)
    """
    wanted = _given([Quantity(name) for name in quantities])
    points, heights = at
    field = near_field(compile_layout(layout), elevations)
    status = _statuses(field, points, heights)
    fine = np.array([found is None for found in status], dtype=np.bool_)
    columns = {"x": points.real.copy(), "y": points.imag.copy(), "z": heights.copy()}
    for name, values in _columns(field, points[fine], heights[fine], wanted).items():
        columns[name] = np.full(points.shape, np.nan)
        columns[name][fine] = values
    flagged = tuple(FlaggedPlace(n, found) for n, found in enumerate(status) if found is not None)
    return NearFieldSamples(points, columns, flagged, field.leak)


def _given(wanted: list[Quantity]) -> list[Quantity]:
    for index, quantity in enumerate(wanted):
        if quantity not in GIVEN:
            raise PlaneQuantityError(
                f"{quantity} is not given in three dimensions; {', '.join(sorted(GIVEN))} are",
                ("quantities", index),
            )
    return wanted


def _statuses(field: NearField, points: ComplexArray, heights: FloatArray) -> list[PlaceStatus | None]:
    outside = (heights < 0.0) | (heights > field.depth)
    land = ~field.model.wet(points)
    singular = field.at_opening(points, heights) | (
        (field.model.singular(points) >= 0) & ~field.on_axis(points)
    )
    reasons = ((singular, PlaceStatus.ON_SINGULARITY), (land, PlaceStatus.ON_LAND))
    status: list[PlaceStatus | None] = [None] * points.size
    for met, reason in (*reasons, (outside, PlaceStatus.OUTSIDE_DEPTH)):
        for index in np.flatnonzero(met):
            status[index] = reason
    return status


def _columns(
    field: NearField, at: ComplexArray, heights: FloatArray, wanted: list[Quantity]
) -> dict[str, FloatArray]:
    horizontal, upward = field.velocity(at, heights)
    speed = np.hypot(np.abs(horizontal), upward)
    columns = {"u": horizontal.real, "v": -horizontal.imag, "w": upward, "speed": speed}
    ambient, whole = abs(field.model.layout.ambient.velocity), speed.astype(np.complex128)
    values = {
        Quantity.DIRECTION: lambda: derived.direction_deg(horizontal),
        Quantity.PRESSURE_COEFFICIENT: lambda: derived.pressure_coefficient(whole, ambient),
        Quantity.HEAD_CHANGE: lambda: derived.head_change(whole, ambient, gravity=STANDARD_GRAVITY),
    }
    rotational = not field.model.has_potential
    for quantity in wanted:
        column = values[quantity]()
        hidden = rotational and quantity is not Quantity.DIRECTION
        columns[quantity.value] = np.full(at.shape, np.nan) if hidden else column
    return columns

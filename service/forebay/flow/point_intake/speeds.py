"""Speeds over boxes of the water, for zones: certified in the plane, sampled in three dimensions."""

from itertools import product

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.model import FlowModel
from forebay.flow.point_intake.field import NearField
from forebay.flow.point_intake.zone import Look, Speeds
from forebay.flow.stagnation.field import BoundedField

MARGIN = 1.5
"""Factor on the largest difference from the centre among a box's corners [-]."""
_CLEAR = 3.0
"""Distance to a place without a velocity, over a box's radius, at which corners tell the box [-]."""


def plane_speeds(model: FlowModel, without: FlowModel | None = None) -> Look:
    """Speeds of a depth-mean flow over boxes, with proven bounds but for boxes across solved walls.

    Nothing is proven in a disc that a solved wall crosses, though the velocity there is bounded: such boxes
    are told by their corners and sides, as in three dimensions, unless a place without a velocity is near.

    without : a second flow to be subtracted as a vector, so that what remains is what the two differ by
    """
    fields = [BoundedField(model)] + ([] if without is None else [BoundedField(without)])

    def look(centres: FloatArray, half: FloatArray) -> Speeds:
        z = centres[:, 0] + 1j * centres[:, 1]
        radius = np.full(z.shape, float(np.hypot(*half)))
        discs = [field.discs(z, radius) for field in fields]
        velocity = discs[0].velocity - (discs[1].velocity if without is not None else 0.0)
        spread = np.sum([disc.spread(radius) for disc in discs], axis=0)
        if model.rings:
            blind = ~np.isfinite(spread) & _crosses_wall(model, z, radius)
            velocity[blind], spread[blind] = _sampled((model, without), z[blind], half)
        return _speeds(model, z, radius, np.abs(velocity), np.where(np.isfinite(spread), spread, np.inf))

    return look


def _crosses_wall(model: FlowModel, z: ComplexArray, radius: FloatArray) -> BoolArray:
    """Whether discs meet a ring and no place without a velocity."""
    places = model.singular_places[np.isfinite(model.singular_places)]
    near = np.min(np.abs(z[:, None] - places), axis=1, initial=np.inf)
    return np.asarray((np.abs(model.rings_distance(z)) <= radius) & (near > _CLEAR * radius))


def _sampled(
    models: tuple[FlowModel, FlowModel | None], z: ComplexArray, half: FloatArray
) -> tuple[ComplexArray, FloatArray]:
    """Mean velocity of the wet ones of nine places of a box [m/s], and `MARGIN` times what they differ."""
    steps = [complex(i * half[0], j * half[1]) for i in (-1, 0, 1) for j in (-1, 0, 1)]
    at = z[:, None] + np.array(steps)
    wet = models[0].wet(at)
    velocity = models[0].velocity(at) - (0.0 if models[1] is None else models[1].velocity(at))
    count = np.maximum(wet.sum(axis=1), 1)
    mean = np.where(wet, velocity, 0.0).sum(axis=1) / count
    apart = np.where(wet, np.abs(velocity - mean[:, None]), 0.0).max(axis=1, initial=0.0)
    return mean, np.where(wet.any(axis=1), MARGIN * apart, np.inf)


def near_field_speeds(field: NearField, without: FlowModel | None = None) -> Look:
    """Speeds of a flow in three dimensions over boxes, with bounds from their corners, an estimate.

    without : a depth-mean flow to be subtracted as a vector
    """

    def velocity(centres: FloatArray) -> tuple[ComplexArray, FloatArray]:
        z = centres[:, 0] + 1j * centres[:, 1]
        horizontal, upward = field.velocity(z, np.clip(centres[:, 2], 0.0, field.depth))
        return horizontal - (0.0 if without is None else without.velocity(z)), upward

    def look(centres: FloatArray, half: FloatArray) -> Speeds:
        middle, rise = velocity(centres)
        spread = np.zeros(centres.shape[0])
        for corner in product((-1.0, 1.0), repeat=3):
            horizontal, upward = velocity(centres + half * np.array(corner))
            spread = np.fmax(spread, np.hypot(np.abs(horizontal - middle), upward - rise))
        z = centres[:, 0] + 1j * centres[:, 1]
        holds = _holds(field, centres, half) | ~np.isfinite(middle)
        radius = np.full(z.shape, float(np.hypot(*half[:2])))
        speed = np.hypot(np.abs(middle), rise)
        return _speeds(field.model, z, radius, speed, np.where(holds, np.inf, MARGIN * spread))

    return look


def _holds(field: NearField, centres: FloatArray, half: FloatArray) -> BoolArray:
    """Whether a box holds an opening, or touches one."""
    holds = np.zeros(centres.shape[0], dtype=np.bool_)
    for opening in field.openings:
        at = np.array([opening.at.real, opening.at.imag, opening.elevation])
        holds |= np.all(np.abs(centres - at) <= 1.5 * half, axis=1)
    return holds


def _speeds(
    model: FlowModel, z: ComplexArray, radius: FloatArray, speed: FloatArray, spread: FloatArray
) -> Speeds:
    wet, gap = model.wet(z), np.abs(model.distance_to_wall(z))
    centre = np.where(np.isfinite(speed), speed, np.inf)
    with np.errstate(invalid="ignore"):
        least = np.where(np.isfinite(spread), np.maximum(centre - spread, 0.0), 0.0)
    largest = centre + spread
    return Speeds(centre, least, largest, wet & (gap >= radius), ~wet & (gap > radius))

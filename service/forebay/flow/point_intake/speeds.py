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


def plane_speeds(model: FlowModel, without: FlowModel | None = None) -> Look:
    """Speeds of a depth-mean flow over boxes, with proven bounds.

    without : a second flow to be subtracted as a vector, so that what remains is what the two differ by
    """
    fields = [BoundedField(model)] + ([] if without is None else [BoundedField(without)])

    def look(centres: FloatArray, half: FloatArray) -> Speeds:
        z = centres[:, 0] + 1j * centres[:, 1]
        radius = np.full(z.shape, float(np.hypot(*half)))
        discs = [field.discs(z, radius) for field in fields]
        velocity = discs[0].velocity - (discs[1].velocity if without is not None else 0.0)
        spread = np.sum([disc.spread(radius) for disc in discs], axis=0)
        return _speeds(model, z, radius, np.abs(velocity), np.where(np.isfinite(spread), spread, np.inf))

    return look


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

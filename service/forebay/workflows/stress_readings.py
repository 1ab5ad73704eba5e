"""What the trade reads from strain rates: exposure of fish, shear on bed and walls, flocculation."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.features import WATER, Singularity
from forebay.flow.layout import Layout, Sink, Source
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.passage import Passage, follow_passage
from forebay.flow.rheology import shear_rate
from forebay.flow.stress_state import StressState, StressStatus
from forebay.trade.bed_shear import (
    Friction,
    friction_coefficient,
    shear_stress,
    turbulent_gradient,
)
from forebay.trade.exposure import Exposure, Threshold, chosen_thresholds, expose, reach_of
from forebay.trade.water import water_properties

ON_WALL = 1e-6
"""Distance from a wall, over the scale of the layout, within which a place lies on it [-]."""

ARRIVED = 0.01
"""Distance from the target, over that between the two places, that counts as arrival by default [-]."""


@dataclass(frozen=True, slots=True)
class Way:
    """From where to where water is followed [m]; `within` [m] of the target counts as arrival."""

    start: complex
    target: complex
    within: float | None = None


@dataclass(frozen=True, slots=True)
class Asked:
    """What is to be read.

    exposure : ids of thresholds, empty for all, None for none
    friction : law of bed and wall friction, height : above the bed, for the turbulent G [m]
    way : along which G is integrated;  opening_radii : of point openings in plan, by name [m]
    """

    exposure: tuple[str, ...] | None = None
    friction: Friction | None = None
    height: float | None = None
    way: Way | None = None
    opening_radii: Mapping[str, float] = field(default_factory=lambda: MappingProxyType({}))


@dataclass(frozen=True, slots=True)
class PlaceReading:
    """Readings at one place; nan where it has no value or nothing was asked.

    shear_rate : sqrt(2 D' : D') [1/s];  exposures : against each threshold
    bed_shear, wall_shear : [Pa], the latter nan off the walls;  friction_velocity : u* [m/s]
    turbulent_gradient : estimate of the turbulent G [1/s]
    """

    shear_rate: float
    exposures: tuple[Exposure, ...] = ()
    bed_shear: float = np.nan
    wall_shear: float = np.nan
    friction_velocity: float = np.nan
    turbulent_gradient: float = np.nan


@dataclass(frozen=True, slots=True)
class OpeningReach:
    """How far from a point opening its own rate of shear exceeds a threshold [m].

    inside : whether that lies within the opening's radius, so that it is met by no water; None if unknown
    """

    element: str
    threshold: Threshold
    reach: float
    inside: bool | None


@dataclass(frozen=True, slots=True)
class StressReadings:
    """Readings of every state in order, of every opening, and along the way.

    friction_coefficient : c_f [-], nan without a law
    """

    places: tuple[PlaceReading, ...]
    thresholds: tuple[Threshold, ...]
    openings: tuple[OpeningReach, ...]
    passage: Passage | None
    friction_coefficient: float


def read_stresses(
    states: tuple[StressState, ...], asked: Asked, layout: Layout | None = None
) -> StressReadings:
    """Readings of stress states, and of the layout that they are in.

    Parameters
    ----------
    states : as computed
    asked : what is to be read; friction and a way need the layout
    layout : the site, whose water gives density and viscosity of the shear on bed and walls

    Returns
    -------
    StressReadings. Everything is that of the mean flow; the turbulent G is an estimate beside it.

    Raises
    ------
    UnknownThresholdError, SmoothBedError
    """
    thresholds = () if asked.exposure is None else chosen_thresholds(asked.exposure)
    rates = [_rate(state) for state in states]
    places = [PlaceReading(rate, expose(rate, thresholds)) for rate in rates]
    if layout is None:
        return StressReadings(tuple(places), thresholds, (), None, float("nan"))
    model = compile_layout(layout)
    coefficient = float("nan")
    if asked.friction is not None:
        coefficient = friction_coefficient(asked.friction, layout.depth)
        places = _with_shear(model, places, states, coefficient, asked.height or 0.5 * layout.depth)
    way = asked.way
    passage = None if way is None else follow_passage(model, way.start, way.target, _within(way))
    openings = _reaches(model, thresholds, asked.opening_radii)
    return StressReadings(tuple(places), thresholds, openings, passage, coefficient)


def _within(way: Way) -> float:
    return ARRIVED * abs(way.target - way.start) if way.within is None else way.within


def _rate(state: StressState) -> float:
    return float(shear_rate(state.strain_rate)) if state.status is StressStatus.COMPUTED else float("nan")


def _with_shear(
    model: FlowModel,
    places: list[PlaceReading],
    states: tuple[StressState, ...],
    coefficient: float,
    height: float,
) -> list[PlaceReading]:
    water = model.layout.water
    properties = water_properties(water.temperature, water.salinity)
    at = np.array([state.at for state in states], dtype=np.complex128)
    known = np.array([state.status is StressStatus.COMPUTED for state in states])
    speed = np.where(known, np.abs(model.velocity(at)), np.nan)
    stress = shear_stress(speed, coefficient, properties.density)
    velocity = np.sqrt(coefficient) * speed
    turbulent = turbulent_gradient(velocity, height, properties.dynamic_viscosity / properties.density)
    walls = np.where(_on_wall(model, at), stress, np.nan)
    columns = (stress.tolist(), walls.tolist(), velocity.tolist(), turbulent.tolist())
    rows = zip(places, *columns, strict=True)
    return [PlaceReading(place.shear_rate, place.exposures, *values) for place, *values in rows]


def _on_wall(model: FlowModel, at: ComplexArray) -> FloatArray:
    distance: FloatArray = model.distance_to_wall(at)
    return np.asarray(distance <= ON_WALL * model.scale)


def _reaches(
    model: FlowModel, thresholds: tuple[Threshold, ...], radii: Mapping[str, float]
) -> tuple[OpeningReach, ...]:
    points = [s for s in model.singularities if isinstance(s.kind, Source | Sink)]
    return tuple(_reach(point, threshold, radii) for point in points for threshold in thresholds)


def _reach(point: Singularity, threshold: Threshold, radii: Mapping[str, float]) -> OpeningReach:
    sides = 1.0 if point.on == WATER else 2.0
    reach = reach_of(2.0 * np.pi * abs(point.strength) * sides, threshold)
    radius = radii.get(point.owner)
    return OpeningReach(point.owner, threshold, float(reach), None if radius is None else reach <= radius)

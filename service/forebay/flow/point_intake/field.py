"""The flow of a layout in three dimensions, where its point openings have an elevation.

Everything keeps its depth-mean flow, which is uniform over the depth; each opening with an elevation, and
each of its images in the straight banks, adds the difference between the flow of a point opening and its
depth mean. That difference dies out within two depths.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.errors import LayoutError
from forebay.flow.features import WATER
from forebay.flow.layout import Sink, Source, outflow
from forebay.flow.model import FlowModel
from forebay.flow.point_intake.column import REACH, column_excess
from forebay.flow.point_intake.plan_images import plan_images, wall_samples
from forebay.flow.sheets.ring import Ring

AXIS = 1e-6
"""Distance over the depth within which a place is on an opening's vertical: means of both sides there [-]."""


class ElevationMissingError(LayoutError):
    """A three-dimensional flow was asked for, but no point source or sink has an elevation."""

    code = "elevation-missing"
    title = "No opening of the layout has an elevation"


@dataclass(frozen=True, slots=True)
class Opening:
    """A point opening.

    at : where it stands [m];  elevation : above the bed [m];  discharge : out of it [m3/s]
    images : of its place in the banks, itself first, shape (k,) [m]
    """

    name: str
    at: complex
    elevation: float
    discharge: float
    images: ComplexArray


@dataclass(frozen=True)
class NearField:
    """Velocity in three dimensions.

    model : the depth-mean flow;  openings : those with an elevation
    """

    model: FlowModel
    openings: tuple[Opening, ...]

    @property
    def depth(self) -> float:
        """Depth of the water [m]."""
        return self.model.layout.depth

    def velocity(self, at: ComplexArray, height: FloatArray) -> tuple[ComplexArray, FloatArray]:
        """Conjugate horizontal velocity u - iv and upward velocity w [m/s].

        at : shape (n,), x + iy [m];  height : shape (n,), above the bed [m]
        nan at an opening itself and where the depth-mean flow has no value; on land the continuation.
        """
        axis = self.on_axis(at)
        if not axis.any():
            return self._beside(at, height)
        along = self._tangents(at[axis]) * 2.0 * AXIS * self.depth
        horizontal, upward = np.empty(at.shape, dtype=np.complex128), np.empty(at.shape)
        horizontal[~axis], upward[~axis] = self._beside(at[~axis], height[~axis])
        sides = [self._beside(at[axis] + shift, height[axis]) for shift in (along, -along)]
        horizontal[axis] = 0.5 * (sides[0][0] + sides[1][0])
        upward[axis] = 0.5 * (sides[0][1] + sides[1][1])
        inside = self.at_opening(at, height)
        horizontal[inside], upward[inside] = np.nan, np.nan
        return horizontal, upward

    def speed(self, at: ComplexArray, height: FloatArray) -> FloatArray:
        """Speed [m/s], arrays as in `velocity`."""
        horizontal, upward = self.velocity(at, height)
        return np.hypot(np.abs(horizontal), upward)

    def _beside(self, at: ComplexArray, height: FloatArray) -> tuple[ComplexArray, FloatArray]:
        horizontal, upward = self.model.velocity(at), np.zeros(at.shape)
        for opening in self.openings:
            change, rise = self.excess(opening, at, height)
            horizontal, upward = horizontal + change, upward + rise
        return horizontal, upward

    def excess(
        self, opening: Opening, at: ComplexArray, height: FloatArray
    ) -> tuple[ComplexArray, FloatArray]:
        """What one opening adds to its depth mean, banks included: u - iv and w [m/s]."""
        horizontal, upward = np.zeros(at.shape, dtype=np.complex128), np.zeros(at.shape)
        for image in opening.images:
            away = at - image
            distance = np.abs(away)
            felt = (distance < REACH * self.depth) & (distance > 0.0)
            r = distance[felt]
            excess, rise = column_excess(r, height[felt], opening.elevation, self.depth)
            horizontal[felt] += opening.discharge * excess * np.conj(away[felt]) / r
            upward[felt] += opening.discharge * rise
        return horizontal, upward

    def on_axis(self, at: ComplexArray) -> BoolArray:
        """Whether a place lies above or below an opening, where the depth-mean flow alone has no velocity."""
        axis = np.zeros(at.shape, dtype=np.bool_)
        for opening in self.openings:
            axis |= np.abs(at - opening.at) < AXIS * self.depth
        return axis

    def at_opening(self, at: ComplexArray, height: FloatArray) -> BoolArray:
        """Whether a place is an opening itself, within a millionth of the depth."""
        inside = np.zeros(at.shape, dtype=np.bool_)
        for opening in self.openings:
            apart = np.hypot(np.abs(at - opening.at), height - opening.elevation)
            inside |= apart < AXIS * self.depth
        return inside

    def _tangents(self, at: ComplexArray) -> ComplexArray:
        """Direction of the nearest wall, along which the flow is even about an opening on it."""
        directions = np.array([wall.direction for wall in self.model.walls] or [1.0 + 0j])
        if len(self.model.walls) < 2:
            return np.full(at.shape, directions[0])
        distances = np.array([wall.distance(at) for wall in self.model.walls])
        return np.asarray(directions[np.argmin(distances, axis=0)], dtype=np.complex128)

    @cached_property
    def leak(self) -> float:
        """Largest velocity through a bank, pier or outline that images leave [m/s]: an estimate of the error.

        Zero to rounding on straight banks, rectangles and corners of 180/n degrees without piers.
        """
        return max((self._leak_of(opening) for opening in self.openings), default=0.0)

    def _leak_of(self, opening: Opening) -> float:
        spacing = self.depth * np.linspace(-3.0, 3.0, 61)
        places, directions = wall_samples(self.model.frame.walls, opening.at, spacing)
        for ring in self.model.rings:
            samples, along = self._ring_samples(ring, opening.at)
            places, directions = np.append(places, samples), np.append(directions, along)
        for pier in self.model.piers:
            if abs(pier.at - opening.at) - pier.radius < REACH * self.depth:
                ring = np.exp(2j * np.pi * np.arange(64) / 64)
                places = np.append(places, pier.at + pier.radius * ring)
                directions = np.append(directions, 1j * ring)
        clear = np.abs(places - opening.at) > AXIS * self.depth
        places, directions = places[clear], directions[clear]
        worst = 0.0
        for height in {opening.elevation, 0.0, self.depth}:
            change, _ = self.excess(opening, places, np.full(places.shape, height))
            through = (change * directions).imag
            worst = max(worst, float(np.max(np.abs(through), initial=0.0)))
        return worst

    def _ring_samples(self, ring: Ring, at: complex) -> tuple[ComplexArray, ComplexArray]:
        """Places on a ring's land edges within the reach of an opening, and the edges' directions there."""
        chosen = ring.is_land
        starts, spans = ring.starts[chosen], (ring.ends - ring.starts)[chosen]
        places = (starts[:, None] + spans[:, None] * np.linspace(0.05, 0.95, 19)).ravel()
        directions = np.repeat(spans / np.abs(spans), 19)
        near = np.abs(places - at) < REACH * self.depth
        return places[near], directions[near]


def near_field(model: FlowModel, elevations: Mapping[str, float]) -> NearField:
    """Three-dimensional flow of a layout.

    Parameters
    ----------
    model : its depth-mean flow
    elevations : of openings above the bed, by name, at most the depth [m]; only points have a near field

    Raises
    ------
    ElevationMissingError : no point source or sink has one
    TooLargeError : as `plan_images`
    """
    openings = tuple(
        _opening(model, element, elevations[element.name])
        for element in model.layout.elements
        if isinstance(element, Source | Sink) and element.name in elevations
    )
    if not openings:
        raise ElevationMissingError("no point source or sink has an elevation", ("elements",))
    return NearField(model, openings)


def _opening(model: FlowModel, element: Source | Sink, elevation: float) -> Opening:
    reach, straight = REACH * model.layout.depth, model.frame.walls
    place = next(s for s in model.singularities if s.owner == element.name)
    images = plan_images(model.layout.shore, straight, place.at, reach)
    if place.on not in {WATER, *(wall.name for wall in straight)}:
        images = np.concatenate((images, images))  # on an edge of a ring it coincides with its image
    return Opening(element.name, place.at, elevation, outflow(element), images)

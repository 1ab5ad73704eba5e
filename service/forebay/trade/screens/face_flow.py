"""How water meets one side of a screen: approach, sweeping velocity, and the time that fish spend there."""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum
from functools import cached_property
from math import inf

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.faces import Face
from forebay.flow.profiles import (
    Profile,
    extremes_of,
    integral,
    places_of_largest,
    share_not_negative,
)

_BESIDE = 1e-12
"""Distance from a bypass at which its two sides are read, as a part of the length [-]."""

TIE = 1e-12
"""Excess over a limit, as a part of it, that is rounding: a limit that is met exactly is met [-]."""


class ExposureStatus(StrEnum):
    """Whether the time along a face to the bypass is finite."""

    OK = "ok"
    SWEEPING_REVERSES = "sweeping-reverses"
    NOT_CONVERGED = "not-converged"


@dataclass(frozen=True, slots=True)
class Exposure:
    """Longest time along a face to the bypass [s], inf where the sweeping reverses; its error [s]."""

    time: float
    error: float
    status: ExposureStatus


@dataclass(frozen=True)
class FaceFlow:
    """Velocities along one side of a screen, at parts in (0, 1) of its length.

    approach : through the effective area, positive into the screen [m/s]
    along : from start to end [m/s]
    places : where to look for extremes (see `flow.faces`)
    end_part : part of the length left out at each end of extremes and exposure, where `along` is infinite
    bypass : part of the length at which the bypass is; None for the end that the water sweeps towards
    """

    face: Face
    approach: Profile
    along: Profile
    places: FloatArray
    end_part: float
    bypass: float | None = None

    @cached_property
    def mean_approach(self) -> float:
        """Mean approach velocity over the whole face [m/s]."""
        return integral(self.approach, 0.0, 1.0).value

    @cached_property
    def approach_range(self) -> tuple[float, float]:
        """Least and largest approach velocity [m/s]."""
        return extremes_of(self.approach, self.places)

    @property
    def places_of_largest_approach(self) -> FloatArray:
        """Where the approach velocity is largest: each place, or both ends of a stretch, as parts."""
        return places_of_largest(self.approach, self.places)

    def share_approach_within(self, limit: float) -> float:
        """Part of the face on which the approach velocity is at most `limit` [-]."""
        return share_not_negative(lambda p: limit * (1.0 + TIE) - self.approach(p), self.places)

    @cached_property
    def heading(self) -> float:
        """1 if the water sweeps from start to end on the whole, else -1; without a bypass fish go there."""
        return 1.0 if integral(self.along, 0.0, 1.0).value >= 0.0 else -1.0

    def sweeping(self, parts: FloatArray) -> FloatArray:
        """Velocity along the face towards the bypass [m/s]; negative where it leads away from it."""
        along = self.along(parts)
        if self.bypass is None:
            return self.heading * along
        return np.where(parts < self.bypass, along, -along)

    @cached_property
    def inner_places(self) -> FloatArray:
        """`places` between the end reaches, with their edges and both sides of the bypass."""
        low, high = self.end_part, 1.0 - self.end_part
        edges = [low, high]
        if self.bypass is not None:
            edges += [self.bypass - _BESIDE, self.bypass + _BESIDE]
        places = np.concatenate([self.places, edges])
        return np.unique(places[(places >= low) & (places <= high)])

    @cached_property
    def least_sweeping(self) -> float:
        """Least sweeping velocity between the end reaches [m/s]."""
        return extremes_of(self.sweeping, self.inner_places)[0]

    @cached_property
    def least_ratio(self) -> float:
        """Least sweeping over approach velocity between the end reaches [-]; inf where nothing is drawn."""

        def ratio(parts: FloatArray) -> FloatArray:
            approach = self.approach(parts)
            drawn = approach > 0.0
            return np.where(drawn, self.sweeping(parts) / np.where(drawn, approach, 1.0), inf)

        values = ratio(self.inner_places)
        if not np.isfinite(values).all():
            return float(values.min())
        return extremes_of(ratio, self.inner_places)[0]

    def share_swept(self, ratio: float) -> float:
        """Part of the whole face on which sweeping is at least `ratio` times approach velocity [-]."""
        if ratio not in self._shares_swept:
            self._shares_swept[ratio] = share_not_negative(
                lambda p: self.sweeping(p) - ratio * (1.0 - TIE) * self.approach(p), self.places
            )
        return self._shares_swept[ratio]

    @cached_property
    def _shares_swept(self) -> dict[float, float]:
        """What `share_swept` has found, by ratio: summary and verdicts ask for the same ones."""
        return {}

    def share_sweeping_above(self, limit: float) -> float:
        """Part of the whole face on which the sweeping velocity is at least `limit` [-]."""
        return share_not_negative(lambda p: self.sweeping(p) - limit * (1.0 - TIE), self.places)

    @cached_property
    def exposure(self) -> Exposure:
        """Longest time from an end of the face to the bypass, integral of ds / sweeping velocity."""
        times = [self._time(low, high) for low, high in self._legs()]
        return max(times, key=lambda exposure: exposure.time)

    def _legs(self) -> Iterator[tuple[float, float]]:
        """Stretches on which fish go one way."""
        low, high = self.end_part, 1.0 - self.end_part
        middle = high if self.bypass is None else min(max(self.bypass, low), high)
        yield from ((a, b) for a, b in ((low, middle), (middle, high)) if b - a > 2.0 * _BESIDE)

    def _time(self, low: float, high: float) -> Exposure:
        inside = self.inner_places[(self.inner_places > low) & (self.inner_places < high)]
        inside = np.concatenate([[low + _BESIDE], inside, [high - _BESIDE]])
        if extremes_of(self.sweeping, inside)[0] <= 0.0:
            return Exposure(inf, inf, ExposureStatus.SWEEPING_REVERSES)
        found = integral(lambda p: 1.0 / self.sweeping(p), low, high)
        status = ExposureStatus.OK if found.converged else ExposureStatus.NOT_CONVERGED
        return Exposure(self.face.length * found.value, self.face.length * found.error, status)

    def positions(self, parts: FloatArray) -> ComplexArray:
        """Where the velocities are read, x + iy [m]."""
        return self.face.positions(parts)

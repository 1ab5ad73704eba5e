"""Arrivals of much water: ramps of water that arrive evenly over short spans of time, and curves of these.

Released water spread over a length or a flux arrives by its own amount. Water spread over an area is told by
what crosses the boundary of the area: with tau(z) the time from z to the intake, u . grad tau = -1, so that
for any t

    area of the water that is there by t = int min(tau, t) d(flux in) over the boundary,

walls left out, outfalls within counted as boundary. (Divergence theorem for u min(tau, t).)
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import FloatArray

_CHUNK = 2_000_000
"""Numbers in memory at once."""
_BY_AMOUNT, _BY_TIME = 500, 150
"""Points of a curve at even steps of the amount and of the logarithm of time."""
_DUST = 1e-13
"""Amount over the total that is rounding [-]."""


@dataclass(frozen=True, slots=True)
class Ramps:
    """Water arriving evenly between two times, arrays of shape (n,).

    low, high : times [s];  weight : amount of water, negative where it is taken away
    """

    low: FloatArray
    high: FloatArray
    weight: FloatArray

    @classmethod
    def joined(cls, parts: list["Ramps"]) -> "Ramps":
        """All ramps of several."""
        if not parts:
            return cls(np.empty(0), np.empty(0), np.empty(0))
        return cls(*(np.concatenate([getattr(part, name) for part in parts]) for name in cls.__slots__))

    def amounts(self, t: FloatArray, *, by_area: bool, first: float | None = None) -> FloatArray:
        """Amount arrived by times t, shape (k,): sum of weight, or of weight times min(tau, t).

        first : time before which nothing arrives, which may be taken from all tau of a closed boundary
        """
        first = float(self.low.min(initial=np.inf)) if first is None else first
        total = np.zeros(t.size)
        rows = max(1, _CHUNK // max(self.low.size, 1))
        for start in range(0, t.size, rows):
            part = t[start : start + rows, None]
            value = self._elapsed(part, first) if by_area else self._arrived(part)
            total[start : start + rows] = value @ self.weight
        return total

    def _arrived(self, t: FloatArray) -> FloatArray:
        width = self.high - self.low
        with np.errstate(divide="ignore", invalid="ignore"):
            part = (t - self.low) / width
        return np.where(width > 0.0, np.clip(part, 0.0, 1.0), t >= self.low)

    def _elapsed(self, t: FloatArray, first: float) -> FloatArray:
        """Mean of min(tau, t) over each ramp, less min(first, t)."""
        width = self.high - self.low
        before = np.clip(t, self.low, self.high) - self.low
        with np.errstate(divide="ignore", invalid="ignore"):
            rise = np.where(width > 0.0, before - before**2 / (2.0 * width), 0.0)
        return np.minimum(t, self.low) - np.minimum(t, first) + rise


@dataclass(frozen=True, slots=True)
class Course:
    """Amount arrived against time, linear between points; shape (k,) each, both ascending."""

    time: FloatArray
    amount: FloatArray

    @property
    def total(self) -> float:
        """All that ever arrives."""
        return float(self.amount[-1])

    def at(self, t: FloatArray) -> FloatArray:
        """Amount by times t: what arrives at t itself is there."""
        later = np.searchsorted(self.time, t, side="right")
        value = np.interp(t, self.time, self.amount, left=0.0)
        held = np.where(later > 0, self.amount[np.maximum(later - 1, 0)], 0.0)
        return np.maximum(value, held)

    def when(self, amount: FloatArray) -> FloatArray:
        """Times at which these amounts have arrived."""
        rising = np.concatenate([[True], np.diff(self.amount) > 0.0])
        if np.count_nonzero(rising) == 1:
            return np.full(np.shape(amount), self.time[0])
        last = np.nonzero(rising)[0]
        before = np.unique(np.concatenate([last, np.maximum(last - 1, 0)]))
        amounts, times = self.amount[before], self.time[before]
        later = np.searchsorted(amounts, amount, side="left")
        later = np.clip(later, 1, amounts.size - 1)
        rise = amounts[later] - amounts[later - 1]
        with np.errstate(divide="ignore", invalid="ignore"):
            part = np.clip((amount - amounts[later - 1]) / rise, 0.0, 1.0)
        part = np.where(rise > 0.0, part, 1.0)
        return np.asarray(times[later - 1] + part * (times[later] - times[later - 1]))

    def lasting(self, duration: float) -> "Course":
        """The same water let go evenly over a duration: the mean of the course over the last `duration`."""
        if duration == 0.0:
            return self
        time = np.unique(np.concatenate([self.time, self.time + duration]))
        time = np.unique(np.concatenate([time, 0.5 * (time[1:] + time[:-1])]))
        amount = (self._integral(time) - self._integral(time - duration)) / duration
        amount[-1] = self.total
        return Course(time, np.maximum.accumulate(np.clip(amount, 0.0, self.total)))

    def _integral(self, t: FloatArray) -> FloatArray:
        """Integral of the amount up to t, exact."""
        steps = 0.5 * (self.amount[1:] + self.amount[:-1]) * np.diff(self.time)
        sums = np.concatenate([[0.0], np.cumsum(steps)])
        k = np.clip(np.searchsorted(self.time, t, side="right") - 1, 0, self.time.size - 1)
        since = t - self.time[k]
        following = np.minimum(k + 1, self.time.size - 1)
        span = self.time[following] - self.time[k]
        with np.errstate(divide="ignore", invalid="ignore"):
            slope = np.where(span > 0.0, (self.amount[following] - self.amount[k]) / span, 0.0)
        whole = sums[k] + self.amount[k] * since + 0.5 * slope * since**2
        return np.where(t < self.time[0], 0.0, whole)


def course_of(ramps: Ramps, *, by_area: bool, first: float | None = None) -> tuple[Course, float]:
    """Course of ramps, and how much it had to be moved to rise throughout; `first` as in `Ramps.amounts`."""
    time = _times(ramps)
    if by_area:
        time = np.unique(np.append(time, time[0] if first is None else first))
        amount = ramps.amounts(time, by_area=True, first=first)
    else:
        amount = ramps.amounts(time, by_area=False)
        before = ramps.amounts(np.array([np.nextafter(time[0], -np.inf)]), by_area=False)
        time, amount = np.concatenate([time[:1], time]), np.concatenate([before, amount])
    rising = np.maximum.accumulate(np.maximum(amount, 0.0))
    total = max(float(amount[-1]), 0.0)
    rising = np.minimum(rising, total)
    return Course(time, rising), float(np.max(np.abs(rising - amount), initial=0.0))


def _times(ramps: Ramps) -> FloatArray:
    """Times that a course is told at: dense where much arrives, and over the whole span."""
    bounds = np.concatenate([ramps.low, ramps.high])
    bounds = np.sort(bounds)
    order = np.argsort(ramps.low)
    sums = np.cumsum(np.abs(ramps.weight[order]))
    wanted = np.linspace(0.0, sums[-1], _BY_AMOUNT)
    dense = np.searchsorted(sums, wanted).clip(0, order.size - 1)
    picked = np.concatenate([ramps.low[order[dense]], ramps.high[order[dense]]])
    span = bounds[-1] - bounds[0]
    even = (
        bounds[0] + span * np.concatenate([[0.0], np.geomspace(1e-6, 1.0, _BY_TIME)])
        if span > 0.0
        else bounds[:1]
    )
    return np.unique(np.concatenate([bounds[:1], picked, even, bounds[-1:]]))

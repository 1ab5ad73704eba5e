"""Where the speed exceeds a limit about an intake: boxes halved until its surface is enclosed."""

from collections.abc import Callable
from dataclasses import dataclass, replace
from itertools import product
from typing import NamedTuple

import numpy as np

from forebay.flow.arrays import BoolArray, FloatArray

START = 8
"""Boxes along the shorter side at first."""

MOST_BOXES = 60_000
"""Boxes looked at, after which what is left undecided stays so."""


class Speeds(NamedTuple):
    """Speed over boxes, shape (n,) [m/s]: at the centre, least and largest; and how they lie to the water."""

    centre: FloatArray
    least: FloatArray
    largest: FloatArray
    wet: BoolArray
    dry: BoolArray


Look = Callable[[FloatArray, FloatArray], Speeds]
"""Speeds over boxes of centres, shape (n, d), and half-sides, shape (d,) [m]; wet, dry: wholly so."""


@dataclass(frozen=True, slots=True)
class Zone:
    """Boxes about a limit.

    half : half-sides of the smallest boxes, shape (d,) [m]
    inside, undecided : centres, shape (n, d);  inside_half : half-sides of each, shape (n, d)
    share : of each undecided box that is estimated to lie inside [-]
    """

    half: FloatArray
    inside: FloatArray
    inside_half: FloatArray
    undecided: FloatArray
    share: FloatArray

    @property
    def least(self) -> float:
        """Area [m2] or volume [m3] that is certainly inside."""
        return float(np.sum(np.prod(2.0 * self.inside_half, axis=1)))

    @property
    def largest(self) -> float:
        """Area [m2] or volume [m3] outside of which nothing is inside."""
        return self.least + float(np.prod(2.0 * self.half) * self.undecided.shape[0])

    @property
    def size(self) -> float:
        """Estimate of the area [m2] or volume [m3]."""
        return self.least + float(np.prod(2.0 * self.half)) * float(np.sum(self.share))

    def reach(self, at: complex) -> tuple[float, float]:
        """Largest distance in plan from a place to the zone [m]: certainly reached, and not exceeded."""
        centre = np.array([at.real, at.imag])
        least = _farthest(self.inside[:, :2] - centre, self.inside_half[:, :2])
        spread = np.broadcast_to(self.half[:2], (self.undecided.shape[0], 2))
        return least, max(least, _farthest(self.undecided[:, :2] - centre, spread))

    def plan_area(self) -> tuple[float, float]:
        """Area in plan under or over which anything is inside: certainly, and at most [m2]."""
        sure = self._shadow(self.inside, self.inside_half)
        half = np.broadcast_to(self.half, self.undecided.shape)
        maybe = sure | self._shadow(self.undecided, half)
        cell = float(np.prod(2.0 * self.half[:2]))
        return cell * len(sure), cell * len(maybe)

    def _shadow(self, centres: FloatArray, half: FloatArray) -> set[tuple[int, int]]:
        """Smallest cells in plan that boxes cover, by their numbers."""
        cells: set[tuple[int, int]] = set()
        first = np.rint((centres[:, :2] - half[:, :2]) / (2.0 * self.half[:2])).astype(np.int64)
        count = np.rint(half[:, :2] / self.half[:2]).astype(np.int64)
        for (x, y), (nx, ny) in zip(first.tolist(), count.tolist(), strict=True):
            cells.update(product(range(x, x + nx), range(y, y + ny)))
        return cells


def _farthest(away: FloatArray, half: FloatArray) -> float:
    return float(np.max(np.hypot(*(np.abs(away) + half).T), initial=0.0))


def enclose_zone(look: Look, low: FloatArray, high: FloatArray, limit: float, tolerance: float) -> Zone:
    """Boxes inside and about the region of a box-shaped window where the speed exceeds a limit.

    Parameters
    ----------
    look : speeds over boxes; the zone is as certain as their bounds
    low, high : corners of the window, shape (d,) [m]
    limit : [m/s]
    tolerance : undecided part of the size at which halving ends [-]

    Returns
    -------
    Zone. Halving ends early after `MOST_BOXES`; the undecided boxes then say how much is open.
    """
    counts = np.maximum(1, np.rint(START * (high - low) / np.min(high - low))).astype(int)
    half = 0.5 * (high - low) / counts
    axes = [low[k] + half[k] * (2 * np.arange(counts[k]) + 1) for k in range(low.size)]
    boxes = np.stack(np.meshgrid(*axes, indexing="ij"), axis=-1).reshape(-1, low.size)
    zone = Zone(half, np.empty((0, low.size)), np.empty((0, low.size)), boxes, np.zeros(boxes.shape[0]))
    looked = 0
    while True:
        looked += zone.undecided.shape[0]
        zone = _sifted(zone, look(zone.undecided, zone.half), limit)
        open_ = zone.largest - zone.least
        if zone.undecided.shape[0] == 0 or open_ <= tolerance * zone.size:
            return zone
        if looked + zone.undecided.shape[0] * 2**low.size > MOST_BOXES:
            return zone
        zone = _halved(zone)


def _sifted(zone: Zone, speeds: Speeds, limit: float) -> Zone:
    """Undecided boxes told apart by their speeds."""
    inside = speeds.wet & (speeds.least > limit)
    left = ~inside & ~speeds.dry & (speeds.largest > limit)
    known = np.isfinite(speeds.largest)
    width = np.where(known, np.maximum(speeds.largest - speeds.least, 1e-300), 1.0)
    share = np.clip((np.where(known, speeds.largest, 0.0) - limit) / width, 0.0, 1.0)
    share = np.where(known, share, (speeds.centre > limit).astype(np.float64))
    taken = zone.undecided[inside]
    return replace(
        zone,
        inside=np.concatenate([zone.inside, taken]),
        inside_half=np.concatenate([zone.inside_half, np.broadcast_to(zone.half, taken.shape)]),
        undecided=zone.undecided[left],
        share=np.where(speeds.wet, share, 0.5 * share)[left],
    )


def _halved(zone: Zone) -> Zone:
    half = 0.5 * zone.half
    steps = np.array(list(product((-1.0, 1.0), repeat=half.size))) * half
    boxes = (zone.undecided[:, None, :] + steps).reshape(-1, half.size)
    return replace(zone, half=half, undecided=boxes, share=np.zeros(boxes.shape[0]))

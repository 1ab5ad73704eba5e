"""Certified quadtree: halves boxes of the mapped plane until each is free or belongs to a proven zero.

A box is free when |W| exceeds what W can change by over the disc that holds it. A box on which W changes
little starts Newton's iteration; a zero is accepted with the proof that it is the only one in its disc. A box
across a line element is looked at twice, with W continued from either side.
"""

from dataclasses import dataclass, field, replace

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.stagnation.field import BoundedField, Discs
from forebay.flow.stagnation.regions import Region, site_radius
from forebay.flow.stagnation.ringside import FINENESS, beside_rings, is_still
from forebay.flow.stagnation.slits import TIP, Slit

START = 12
"""Boxes along the longer side at first."""

SMALLEST = 1e-8
"""Boxes below this part of the region are left over [-]."""

MOST_BOXES = 200_000
"""Boxes looked at before the search gives up and says so."""

CHUNK = 2048
"""Discs evaluated at once: bounds the memory."""

_RADII = (8.0, 4.0, 2.0, 1.0, 0.5, 0.25)


@dataclass(frozen=True, slots=True)
class Boxes:
    """Boxes of one size: centres, half-sides, line that W is continued across (-1 none), from which side."""

    at: ComplexArray
    half: complex
    line: IntArray
    side: IntArray

    def where(self, chosen: BoolArray) -> "Boxes":
        """The chosen ones."""
        return Boxes(self.at[chosen], self.half, self.line[chosen], self.side[chosen])

    def halved(self) -> "Boxes":
        """Four quarters of each."""
        x, y = 0.5 * self.half.real, 0.5 * self.half.imag
        offsets = np.array([complex(-x, -y), complex(x, -y), complex(-x, y), complex(x, y)])
        return Boxes(
            (self.at[:, None] + offsets).ravel(),
            0.5 * self.half,
            np.repeat(self.line, 4),
            np.repeat(self.side, 4),
        )


@dataclass(frozen=True, slots=True)
class FoundZero:
    """A proven simple zero.

    at : place [m];  radius, unique : of inclusion and of uniqueness [m]
    line, side : line element across which W is continued (-1 none) and from which side
    is_centre : index +1;  is_beyond : it lies behind the line, where W is only a continuation
    """

    at: complex
    radius: float
    unique: float
    line: int
    side: int
    is_centre: bool
    is_beyond: bool = False


@dataclass
class Quadtree:
    """One search; `zeros`, `leftover` and `strip` (discs beside polygonal walls) after `run`.

    flow, slits : the flow;  region : where to look
    holes, hole_radii : discs known to be free of zeros, or left to others [m]
    """

    flow: BoundedField
    slits: list[Slit]
    region: Region
    holes: ComplexArray
    hole_radii: FloatArray
    zeros: list[FoundZero] = field(default_factory=list)
    leftover: list[tuple[complex, float]] = field(default_factory=list)
    strip: list[tuple[complex, float]] = field(default_factory=list)
    visited: int = 0

    def run(self) -> None:
        """Search until every box is settled or too small."""
        boxes = self._first()
        while boxes.at.size:
            self.visited += boxes.at.size
            boxes, discs, z, radius = self._open(boxes)
            if boxes.at.size == 0:
                break
            self._try_newton(boxes, discs, z, radius)
            kept = ~self._known(boxes, z, radius)
            small = self._too_small(boxes, z, radius) | (self.visited > MOST_BOXES)
            for k in np.flatnonzero(kept & small):
                self.leftover.append((complex(boxes.at[k]), float(abs(boxes.half))))
            boxes = boxes.where(kept & ~small).halved()

    def _first(self) -> Boxes:
        width = self.region.right - self.region.left
        height = self.region.top - self.region.bottom
        cell = max(width, height) / START
        nx, ny = max(1, round(width / cell)), max(1, round(height / cell))
        half = complex(0.5 * width / nx, 0.5 * height / ny)
        x = self.region.left + half.real * (2 * np.arange(nx) + 1)
        y = self.region.bottom + half.imag * (2 * np.arange(ny) + 1)
        at = (x[:, None] + 1j * y[None, :]).ravel()
        return Boxes(at, half, np.full(at.size, -1, dtype=np.int64), np.zeros(at.size, dtype=np.int64))

    def _open(self, boxes: Boxes) -> tuple[Boxes, Discs, ComplexArray, FloatArray]:
        """Boxes that may hold a zero, with their discs."""
        z = self.flow.frame.map.inverse(boxes.at)
        radius = site_radius(self.flow.model, z, abs(boxes.half)) * (1.0 + 1e-9)
        wet = ~self._dry(z, radius) & ~self._known(boxes, z, radius)
        if self.flow.model.rings:
            wet &= self._off_rings(boxes, z, radius, wet)
        boxes, unsettled = self._locked(boxes.where(wet), z[wet], radius[wet])
        z = self.flow.frame.map.inverse(boxes.at)
        radius = site_radius(self.flow.model, z, abs(boxes.half)) * (1.0 + 1e-9)
        discs = self._discs(boxes, z, radius)
        maybe = ~(np.abs(discs.velocity) > discs.spread(radius)) | unsettled
        if self.flow.model.rings:
            most = np.abs(discs.velocity) + discs.spread(radius)
            maybe &= ~is_still(self.flow.model, z, most)
        discs = replace(discs, rest=np.where(unsettled, np.inf, discs.rest)).where(maybe)
        return boxes.where(maybe), discs, z[maybe], radius[maybe]

    def _dry(self, z: ComplexArray, radius: FloatArray) -> BoolArray:
        """Inside a pier, or in a disc that is left out."""
        dry = np.zeros(z.shape, dtype=np.bool_)
        for pier in self.flow.model.piers:
            dry |= np.abs(z - pier.at) + radius < pier.radius
        for hole, reach in zip(self.holes, self.hole_radii, strict=True):
            dry |= np.abs(z - hole) + radius <= reach
        return dry

    def _off_rings(self, boxes: Boxes, z: ComplexArray, radius: FloatArray, open_: BoolArray) -> BoolArray:
        """Neither on land behind a polygonal wall nor in the strip along it, which is noted."""
        touches, dry = beside_rings(self.flow.model, z, radius)
        aside = touches & (abs(boxes.half) < FINENESS * self.region.size)
        self.strip += list(zip(z[aside & open_].tolist(), radius[aside & open_].tolist(), strict=True))
        return ~(aside | dry)

    def _known(self, boxes: Boxes, z: ComplexArray, radius: FloatArray) -> BoolArray:
        """Within the disc in which a proven zero is the only one."""
        known = np.zeros(z.shape, dtype=np.bool_)
        for zero in self.zeros:
            same = (boxes.line == zero.line) & (boxes.side == zero.side)
            known |= same & (np.abs(z - zero.at) + radius <= zero.unique)
        return known

    def _locked(self, boxes: Boxes, z: ComplexArray, radius: FloatArray) -> tuple[Boxes, BoolArray]:
        """Boxes across a line doubled, one for each side; marks those that meet more than that."""
        line, side = boxes.line.copy(), boxes.side.copy()
        touched = np.full(z.shape, -1, dtype=np.int64)
        count, bad = np.zeros(z.shape, dtype=np.int64), np.zeros(z.shape, dtype=np.bool_)
        gone = np.zeros(z.shape, dtype=np.bool_)
        for k, slit in enumerate(self.slits):
            if slit.in_wall:
                continue
            hit = slit.distance(z) <= radius * 1.001
            bad |= slit.to_ends(z) <= radius * 1.001
            count += hit
            touched[hit] = k
            freed = (line == k) & ~hit
            gone |= freed & (np.sign(slit.local(z).imag) != side)
            line[freed], side[freed] = -1, 0
        bad |= count > 1
        double = (count == 1) & (line < 0) & ~bad
        kept = ~gone & ~double
        at = np.concatenate([boxes.at[kept], boxes.at[double], boxes.at[double]])
        ones = np.ones(int(double.sum()), dtype=np.int64)
        lines = np.concatenate([line[kept], touched[double], touched[double]])
        sides = np.concatenate([side[kept], ones, -ones])
        marks = np.concatenate([bad[kept], bad[double], bad[double]])
        return Boxes(at, boxes.half, lines, sides), marks

    def _discs(self, boxes: Boxes, z: ComplexArray, radius: FloatArray) -> Discs:
        lock = self._lock(boxes.line, boxes.side, z)
        parts = [
            self.flow.discs(z[k : k + CHUNK], radius[k : k + CHUNK], lock[k : k + CHUNK])
            for k in range(0, max(z.size, 1), CHUNK)
        ]
        names = ("velocity", "slope", "skew", "rest", "rounding")
        return Discs(*(np.concatenate([getattr(part, name) for part in parts]) for name in names))

    def _lock(self, line: IntArray, side: IntArray, z: ComplexArray) -> ComplexArray:
        lock = np.zeros(z.shape, dtype=np.complex128)
        for k, slit in enumerate(self.slits):
            chosen = line == k
            if chosen.any():
                lock[chosen] = slit.lock(z[chosen], side[chosen])
        return lock

    def _too_small(self, boxes: Boxes, z: ComplexArray, radius: FloatArray) -> BoolArray:
        """Below the smallest size; near the end of a line a good deal smaller."""
        small = np.full(z.shape, abs(boxes.half) < SMALLEST * self.region.size)
        for slit in self.slits:
            near = slit.to_ends(z) < 0.01 * slit.length
            small &= ~near | (radius < 0.02 * TIP * slit.length)
        return small

    def _try_newton(self, boxes: Boxes, discs: Discs, z: ComplexArray, radius: FloatArray) -> None:
        """Newton's iteration from every box on which W is nearly linear and could vanish nearby."""
        definite = discs.definiteness
        ready = np.abs(discs.velocity) < 4.0 * definite * radius
        ready &= discs.rest < 0.5 * definite * radius
        for zero in self.zeros:
            same = (boxes.line == zero.line) & (boxes.side == zero.side)
            ready &= ~(same & (np.abs(z - zero.at) < 0.5 * zero.unique))
        if not ready.any():
            return
        chosen = boxes.where(ready)
        reached = self._newton(z[ready], chosen.line, chosen.side, radius[ready])
        for found in self.prove(reached, chosen.line, chosen.side, radius[ready]):
            if found is not None:
                self._accept(found)

    def _newton(self, z: ComplexArray, line: IntArray, side: IntArray, radius: FloatArray) -> ComplexArray:
        """Newton's iteration for W + W_z d + W_zbar conj(d) = 0; where it runs away the start is kept."""
        at = z.copy()
        for _ in range(8):
            jet = self.flow.model.jet(at)
            velocity = jet.velocity + self._lock(line, side, at)
            a, b = jet.slope, jet.skew
            with np.errstate(divide="ignore", invalid="ignore"):
                step = (-velocity * np.conj(a) + np.conj(velocity) * b) / (np.abs(a) ** 2 - np.abs(b) ** 2)
            moved = at + step
            allowed = np.isfinite(step) & (np.abs(moved - z) <= 16.0 * radius)
            at = np.where(allowed, moved, at)
            if np.all(~allowed | (np.abs(step) <= 1e-15 * np.abs(at))):
                break
        return at

    def prove(
        self, z: ComplexArray, line: IntArray, side: IntArray, scale: FloatArray
    ) -> list[FoundZero | None]:
        """The proofs that discs about z hold exactly one zero each; None where there is no proof.

        Discs up to 8 `scale` [m] are tried for uniqueness.
        """
        lock = self._lock(line, side, z)
        point = self.flow.discs(z, np.zeros(z.shape), lock)
        definite = point.definiteness
        with np.errstate(divide="ignore", invalid="ignore"):
            radius = 2.0 * (np.abs(point.velocity) + point.rounding) / definite
        radius = np.where(np.isfinite(radius), radius, 0.0)
        trials = np.column_stack([radius, *(factor * scale for factor in _RADII)])
        change = self._change(z, trials, lock)
        granted = (radius > 0.0) & (change[:, 0] < 0.5 * definite)
        room = np.array([self._room(complex(at), int(k)) for at, k in zip(z, line, strict=True)])
        fits = (change < 0.95 * definite[:, None]) & (trials >= radius[:, None]) & (trials < room[:, None])
        unique = np.max(np.where(fits, trials, radius[:, None]), axis=1)
        centre = np.abs(point.slope) < np.abs(point.skew)
        return [
            FoundZero(
                complex(z[k]), float(radius[k]), float(unique[k]), int(line[k]), int(side[k]), bool(centre[k])
            )
            if granted[k]
            else None
            for k in range(z.size)
        ]

    def _change(self, z: ComplexArray, radii: FloatArray, lock: ComplexArray) -> FloatArray:
        """Bounds for the change of the derivatives over discs, shape of radii.

        2/R times the remainder over twice the radius R: Cauchy's estimate for analytic parts, and at least
        as much for the others.
        """
        at = np.repeat(z, radii.shape[1])
        flat = radii.ravel()
        rest = self.flow.discs(at, 2.0 * flat, np.repeat(lock, radii.shape[1])).rest
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.where(flat > 0.0, rest * 2.0 / flat, np.inf).reshape(radii.shape)

    def _room(self, z: complex, line: int) -> float:
        """Distance to the nearest line that W is not continued across, and to the ends of all [m]."""
        at = np.array([z])
        room = np.inf
        for k, slit in enumerate(self.slits):
            distance = slit.to_ends(at) if k == line or slit.in_wall else slit.distance(at)
            room = min(room, float(distance[0]))
        return room

    def _accept(self, found: FoundZero) -> None:
        """Note a zero that lies on its own side of its line and is not yet known."""
        if found.line >= 0:
            aside = float(self.slits[found.line].local(np.array([found.at])).imag[0]) * found.side
            if aside < -found.radius:
                self.zeros.append(replace(found, is_beyond=True))
                return
        for k, other in enumerate(self.zeros):
            apart = abs(other.at - found.at)
            same = (other.line, other.side) == (found.line, found.side)
            if same and apart + min(found.radius, other.radius) <= max(found.unique, other.unique):
                best = found if found.unique > other.unique else other
                self.zeros[k] = replace(best, radius=max(found.radius, other.radius, apart))
                return
        self.zeros.append(found)

"""Every zero of a rational velocity, proven one by one, and their number held against the degree."""

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.layout import Doublet
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.aberth import all_zeros
from forebay.flow.stagnation.candidates import depths, in_water, on_walls, settle
from forebay.flow.stagnation.certificate import EPS, Certificates, certify, polish
from forebay.flow.stagnation.clusters import enclose, groups, room_about
from forebay.flow.stagnation.count import FarField, UncountableFieldError, degree, far_field
from forebay.flow.stagnation.describe import VERTEX, Zero, wall_name
from forebay.flow.stagnation.orders import pole_orders, trimmed
from forebay.flow.stagnation.pier_walls import wall_zero
from forebay.flow.stagnation.result import WATER
from forebay.flow.stagnation.turning import rational_disc

MARGIN = 1e-4
"""Candidates this far on land, as part of the extent, may belong to a zero on the wall [-]."""

LINKED = 1e-4
"""Unproven candidates this close, as part of the extent, are taken together [-]."""


class RationalSearch:
    """Search of one rational model; `zeros` and `degree` after `run`."""

    def __init__(self, model: FlowModel) -> None:
        self.model = model
        self.field = model.rational
        self.frame = model.frame
        closed = bool(np.isfinite(self.frame.length))
        if closed and not (np.any(self.field.strengths) or np.any(self.field.moments)):
            raise UncountableFieldError("the water of the basin stands still")
        self.far = FarField() if closed else far_field(self.field)
        places = np.concatenate([self.field.poles, self.field.centres])
        inside = places[np.abs(places.real) <= self.frame.length * (1 + 1e-9)]
        self.extent = (
            max(float(np.ptp(inside.real)), float(np.ptp(inside.imag)), 1e-6) if inside.size else 1.0
        )
        if self.field.kappa > 0.0:
            self.extent = min(self.extent, np.pi)
        self.unproven = 0

    def run(self) -> list[Zero]:
        """All zeros found and proven."""
        candidates = self._candidates()
        polished = polish(self.field, candidates)
        found, marks = settle(self.field, self.frame, certify(self.field, polished))
        proven = found.granted & self._clear(found, marks)
        zeros = self._simple(found.where(proven), marks[proven])
        loose = polished[~found.granted]
        zeros += self._clustered(loose, found.where(found.granted))
        return self._distinct(zeros) + self._vertex()

    @property
    def degree(self) -> int:
        """D of the layout's poles, piers and far field."""
        return degree(
            weight=pole_weight(self.model), piers=len(self.model.piers), frame=self.frame, far=self.far
        )

    def _candidates(self) -> ComplexArray:
        field = trimmed(self.field, self._radii())
        orders = pole_orders(field, self.frame, self.far)
        if orders.zero_count <= 0:
            return np.empty(0, dtype=np.complex128)
        zeros, _ = all_zeros(field, orders)
        zeros = in_water(self.frame, zeros[np.isfinite(zeros)], MARGIN * self.extent)
        z = self.frame.map.inverse(zeros)
        kept = np.ones(zeros.size, dtype=np.bool_)
        for pier in self.model.piers:
            kept &= np.abs(z - pier.at) > 0.98 * pier.radius
        return zeros[kept]

    def _radii(self) -> FloatArray:
        """Radius of the pier round each multipole centre in the mapped plane, 0 for a doublet [-]."""
        first = len(self.model.layout.elements) + 1
        reach = [
            pier.radius * float(np.abs(self.frame.map.slope(np.asarray(pier.at))))
            for pier in self.model.piers
        ]
        owners = self.field.moment_owners
        return np.array([reach[owner - first] if owner >= first else 0.0 for owner in owners])

    def _clear(self, found: Certificates, marks: BoolArray) -> BoolArray:
        """Not on land: on a wall, or further inside than the radius of inclusion."""
        depth = np.where(marks, np.inf, depths(self.frame, found.at))
        radius = np.where(found.granted, found.radius, 0.0)
        return np.asarray(np.all(depth > radius[:, None], axis=1), dtype=np.bool_)

    def _simple(self, found: Certificates, marks: BoolArray) -> list[Zero]:
        zeros = []
        places = self.frame.map.inverse(found.at)
        stretch = 1.0 / np.abs(self.frame.map.slope(places))
        for k, z in enumerate(places):
            radius = self._site_radius(complex(z), float(found.radius[k]))
            walls = int(marks[k].sum())
            if walls:
                zeros.append(
                    Zero(complex(z), wall_name(self.model, complex(z)), radius, 1, 1 if walls == 1 else 0)
                )
                continue
            zero = self._beside_piers(complex(z), radius, float(found.unique[k] * stretch[k]))
            if zero is not None:
                zeros.append(zero)
        return zeros

    def _beside_piers(self, z: complex, radius: float, unique: float) -> Zero | None:
        """The zero in the water or on a pier's wall; None inside a pier."""
        for pier in self.model.piers:
            gap = abs(z - pier.at) - pier.radius
            if abs(gap) < max(unique, 1e-6 * pier.radius):
                on_wall = wall_zero(self.model, pier, z)
                if on_wall is not None and abs(on_wall.at - z) <= on_wall.gap + radius:
                    return Zero(on_wall.at, pier.name, on_wall.gap + radius, 1, 1)
            if gap < -radius:
                return None
        return Zero(z, WATER, radius, 1, 2)

    def _site_radius(self, z: complex, radius: float) -> float:
        """Radius in the site [m] of a disc of the mapped plane; eps of the coordinates is added."""
        rate = float(np.abs(self.frame.map.slope(np.asarray(z))))
        mapped = (
            radius / rate
            if self.frame.map.affine
            else np.expm1(radius / self._exponent) * self._exponent / rate
        )
        return float(mapped) + 4.0 * EPS * abs(z)

    @property
    def _exponent(self) -> float:
        return float(getattr(self.frame.map, "exponent", 1.0))

    def _clustered(self, loose: ComplexArray, others: Certificates) -> list[Zero]:
        zeros: list[Zero] = []
        disc = rational_disc(self.field)
        poles = np.concatenate([self.field.poles, self.field.centres])
        for group in groups(loose, LINKED * self.extent):
            centre, marks = self._centre(group)
            spread = float(np.max(np.abs(group - centre)))
            cluster = enclose(disc, centre, spread, room_about(centre, others.at, others.radius, poles))
            if cluster is None:
                self.unproven += 1
                continue
            if cluster.zeros > 0:
                zero = self._cluster_zero(centre, cluster.radius, cluster.zeros, marks)
                if zero is not None:
                    zeros.append(zero)
        return zeros

    def _centre(self, group: ComplexArray) -> tuple[complex, BoolArray]:
        """Middle of a group, moved on to the walls that are no further than its spread, and those walls."""
        middle = np.array([np.mean(group)])
        reach = 4.0 * float(np.max(np.abs(group - middle))) + 1e-7 * self.extent
        marks = np.abs(depths(self.frame, middle)) < reach
        return complex(on_walls(self.frame, middle, marks)[0]), marks[0]

    def _cluster_zero(self, tau: complex, radius: float, count: int, marks: BoolArray) -> Zero | None:
        z = complex(self.frame.map.inverse(np.asarray(tau)))
        reach = self._site_radius(z, radius)
        walls = int(marks.sum())
        if walls:
            weight = count if walls == 1 else (count - 1) // 2
            return Zero(z, wall_name(self.model, z), reach, count, weight)
        for pier in self.model.piers:
            gap = abs(z - pier.at) - pier.radius
            if abs(gap) <= reach:
                at = pier.at + (z - pier.at) / abs(z - pier.at) * pier.radius
                return Zero(at, pier.name, reach + abs(gap), count, count)
            if gap < 0.0:
                return None
        return Zero(z, WATER, reach, count, 2 * count)

    def _distinct(self, zeros: list[Zero]) -> list[Zero]:
        """Zeros whose discs are disjoint; of two that overlap the second is the first again."""
        kept: list[Zero] = []
        places = np.array([zero.at for zero in zeros], dtype=np.complex128)
        radii = np.array([zero.radius for zero in zeros])
        for k, zero in enumerate(zeros):
            again = np.abs(places[:k] - zero.at) <= radii[:k] + zero.radius
            if not again.any():
                kept.append(zero)
        return kept

    def _vertex(self) -> list[Zero]:
        """The vertex of a corner, if the velocity vanishes there: W ~ (z - vertex)^(k n - 1), k n > 1."""
        if self.frame.map.affine or self.far.left * self._exponent <= 1.0 + 1e-12:
            return []
        return [Zero(self.model.walls[0].point, VERTEX, 0.0, 1, 0)]


def pole_weight(model: FlowModel) -> int:
    """p: orders of the elements' poles, 2 per order in the water, 1 on a wall; one place, one pole."""
    places: dict[complex, tuple[complex, int, int]] = {}
    for element in model.singularities:
        total, order, sides = places.get(element.at, (0j, 0, 2 if element.on == WATER else 1))
        if isinstance(element.kind, Doublet) and element.kind.moment != 0:
            order = 2
        places[element.at] = (total + element.strength, order, sides)
    return sum(sides * max(order, 1 if total != 0 else 0) for total, order, sides in places.values())

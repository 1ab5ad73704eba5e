"""Search of flows that are no sums of poles: certified quadtree, counted by the turning along the edge.

Along a wall W_tau is real and does not turn except by pi at its zeros and poles; along the edges of the
region and round the slits it turns by a proven amount T in all. With Z the zeros (centres count -1),
P the pole orders and N the piers in the region, and M the right-angled corners of dead ends and basins,

    2 Z_water + Z_wall = T / pi + 2 P_water + P_wall + 2 N - M / 2

Outlines that stand free and islands count like piers; in surveyed water with E open edges, which is its own
region, E - 2 is added, since an open edge is crossed square to it.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.layout import Doublet, Surveyed
from forebay.flow.model import FlowModel
from forebay.flow.placement import TOUCHING
from forebay.flow.stagnation.bounds import exponent_of
from forebay.flow.stagnation.candidates import depths, on_walls
from forebay.flow.stagnation.clusters import enclose, groups
from forebay.flow.stagnation.describe import VERTEX, Zero, wall_name
from forebay.flow.stagnation.field import EPS, BoundedField
from forebay.flow.stagnation.pier_walls import wall_zero
from forebay.flow.stagnation.quadtree import FoundZero, Quadtree
from forebay.flow.stagnation.regions import Region, site_radius
from forebay.flow.stagnation.result import WATER, Window
from forebay.flow.stagnation.ringed import with_rings
from forebay.flow.stagnation.ringside import ring_distance
from forebay.flow.stagnation.slits import TIP, Slit, SlitTurning, slits_of
from forebay.flow.stagnation.turning import UnprovenTurningError, turning, winding

_NUDGES = (0.0, 0.0037, 0.0113, 0.0271)
"""Widenings of a region whose edge passes through a zero or a pole, as part of its size [-]."""

_CLUSTER = 1e-4
"""Boxes left over are taken for one multiple zero only within this part of the region [-]."""

_HOLES = (0.4, 0.15, 0.05, 0.01, 1e-3, 1e-4, 1e-5)
"""Radii of discs about poles tried, as part of the distance to the next singular place [-]."""


@dataclass(frozen=True, slots=True)
class _Pole:
    """A pole in the water: place [m], order, weight (2 in the water, 1 on a wall)."""

    at: complex
    order: int
    sides: int


class GeneralSearch:
    """Search of one model in one region; `degree` and `unresolved` after `run`."""

    def __init__(self, model: FlowModel, region: Region) -> None:
        self.model = model
        self.region = region
        self.field = BoundedField(model)
        self.slits = slits_of(model)
        self.degree: int | None = None
        self.unresolved: list[Window] = []

    def run(self) -> list[Zero]:
        """All zeros found and proven in the region."""
        turn, hidden = self._boundary()
        poles = self._poles()
        holes, radii = self._holes(poles)
        if turn is not None:
            self.degree = self._count(turn, poles)
        tree = Quadtree(self.field, self.slits, self.region, holes, radii)
        tree.run()
        zeros = [zero for found in tree.zeros if (zero := self._settled(found, tree)) is not None]
        zeros = _distinct(zeros)
        zeros += self._clustered(tree.leftover, zeros)
        if self.model.rings:
            zeros = with_rings(self.model, tree, zeros, self.degree)
        return zeros + hidden + self._vertex_zero()

    def _count(self, turn: float, poles: list[_Pole]) -> int:
        corners = 0
        if self.model.frame.closed:
            corners = 4 if np.isfinite(self.model.frame.length) else 2
        weight = sum(pole.order * pole.sides for pole in poles)
        holes = [pier.at for pier in self.model.piers]
        holes += [complex(ring.vertices[0]) for ring in self.model.rings if ring.is_solid and ring.closed]
        inside = sum(self._holds(self._tau(hole)) for hole in holes)
        shore = self.model.layout.shore
        outer = len(shore.edges) - 2 if isinstance(shore, Surveyed) else 0
        return round(turn / np.pi + weight + 2 * inside - 0.5 * corners) + outer

    def _boundary(self) -> tuple[float | None, list[Zero]]:
        """Turning of W_tau along all that bounds the region in the water, and zeros at ends of lines."""
        edges = None
        base = self.region
        for nudge in _NUDGES:
            self.region = base.widened(nudge)
            try:
                edges = sum(self._edge(edge) for edge in self.region.edges)
                break
            except UnprovenTurningError:
                continue
        slits = [
            slit for slit in self.slits if self._holds(self._tau(0.5 * (slit.line.start + slit.line.end)))
        ]
        hidden: list[Zero] = []
        for slit in slits:
            edge = SlitTurning(self.field, slit)
            try:
                turn = edge.total()
            except UnprovenTurningError:
                edges = None
                continue
            edges = edges + turn if edges is not None else None
            hidden += [self._artefact(at, count, slit) for at, count in edge.hidden if count > 0]
        return edges, hidden

    def _tau(self, z: complex) -> complex:
        return complex(self.model.frame.map.forward(np.array([z]))[0])

    def _holds(self, tau: complex) -> bool:
        slack = 1e-9 * self.region.size
        inside = self.region.left - slack <= tau.real <= self.region.right + slack
        return bool(inside and self.region.bottom - slack <= tau.imag <= self.region.top + slack)

    def _edge(self, edge: str) -> float:
        """Turning of W_tau along an edge; arg dz/dtau = Im tau / n is added in a corner."""
        path = self.region.path(edge)

        def disc(tau: ComplexArray, radius: FloatArray) -> tuple[ComplexArray, BoolArray]:
            z = self.model.frame.map.inverse(tau)
            return self.field.proves(z, site_radius(self.model, z, radius))

        turn = turning(disc, path)
        if not self.model.frame.map.affine:
            turn += float(path[-1].imag - path[0].imag) / exponent_of(self.model.frame)
        return turn

    def _poles(self) -> list[_Pole]:
        """Point elements of the region that are poles; those at one place are one."""
        cored = {core.owner for core in self.model.cores}
        places: dict[complex, tuple[complex, int, int]] = {}
        for element in self.model.singularities:
            if element.owner in cored or not self._holds(self._tau(element.at)):
                continue
            total, order, sides = places.get(element.at, (0j, 0, 2 if element.on == WATER else 1))
            if isinstance(element.kind, Doublet) and element.kind.moment != 0:
                order = 2
            places[element.at] = (total + element.strength, order, sides)
        return [
            _Pole(at, max(order, 1), sides)
            for at, (total, order, sides) in places.items()
            if order or total != 0
        ]

    def _holes(self, poles: list[_Pole]) -> tuple[ComplexArray, FloatArray]:
        """Discs without zeros: about poles, proven by winding there; about ends of lines, left to `slits`."""
        at = [pole.at for pole in poles]
        radii = [self._hole(pole) for pole in poles]
        for slit in self.slits:
            at += [slit.line.start, slit.line.end]
            radii += [TIP * slit.length] * 2
        return np.array(at, dtype=np.complex128), np.array(radii, dtype=np.float64)

    def _hole(self, pole: _Pole) -> float:
        """Radius of a disc about a pole, 0 if none can be proven to hold no zero, as on a ring."""
        others = np.abs(self.model.singular_places - pole.at)
        limits = [float(np.min(others[others > 0.0], initial=2.0 * self.model.scale))]
        limits += [abs(pier.at - pole.at) - pier.radius for pier in self.model.piers]
        limits += [float(slit.distance(np.array([pole.at]))[0]) for slit in self.slits]
        limits += [float(ring_distance(self.model, np.array([pole.at]))[0])] if self.model.rings else []
        if pole.sides == 2:
            limits.append(
                2.0
                * float(np.min([w.distance(np.asarray(pole.at)) for w in self.model.walls], initial=np.inf))
            )
        for part in _HOLES if min(limits) > TOUCHING * self.model.scale else ():
            radius = part * min(limits)
            try:
                if winding(self.field.proves, pole.at, radius) == -pole.order:
                    return radius * float(np.cos(np.pi / 64))
            except UnprovenTurningError:
                continue
        return 0.0

    def _settled(self, found: FoundZero, tree: Quadtree) -> Zero | None:
        """The zero on its wall if it must lie there; None on land, behind a line and inside a pier."""
        if found.is_beyond or self._at_tip(found.at):
            return None
        frame = self.model.frame
        tau = frame.map.forward(np.array([found.at]))
        depth = depths(frame, tau)[0] / float(np.abs(frame.map.slope(np.array([found.at])))[0])
        near = np.abs(depth) < found.unique
        if near.any():
            z = complex(frame.map.inverse(on_walls(frame, tau, near[None, :]))[0])
            line, side = np.array([found.line]), np.array([found.side])
            snapped = tree.prove(np.array([z]), line, side, np.array([found.unique]))[0]
            if snapped is not None and abs(z - found.at) <= snapped.unique:
                weight = 1 if near.sum() == 1 else 0
                return Zero(z, wall_name(self.model, z), snapped.radius + 4 * EPS * abs(z), 1, weight)
        if np.any(depth < 0.0) or not bool(self.model.wet(np.array([found.at]))[0]):
            return None
        return self._beside_piers(found)

    def _at_tip(self, z: complex) -> bool:
        """Within a disc about the end of a line, where zeros are counted by themselves."""
        return any(float(slit.to_ends(np.array([z]))[0]) <= TIP * slit.length for slit in self.slits)

    def _beside_piers(self, found: FoundZero) -> Zero | None:
        z, radius = found.at, found.radius + 4.0 * EPS * abs(found.at)
        for pier in self.model.piers:
            gap = abs(z - pier.at) - pier.radius
            if abs(gap) < max(found.unique, 1e-6 * pier.radius):
                on_wall = wall_zero(self.model, pier, z)
                if on_wall is not None and abs(on_wall.at - z) <= on_wall.gap + radius:
                    return Zero(on_wall.at, pier.name, on_wall.gap + radius, 1, 1)
            if gap < 0.0:
                return None
        return Zero(z, WATER, radius, 1, -2 if found.is_centre else 2)

    def _clustered(self, leftover: list[tuple[complex, float]], known: list[Zero]) -> list[Zero]:
        """Boxes left over, taken together: a disc with several zeros in it, or an unresolved window."""
        zeros: list[Zero] = []
        if not leftover:
            return zeros
        at = np.array([tau for tau, _ in leftover])
        half = leftover[0][1]
        others = np.array([zero.at for zero in known], dtype=np.complex128)
        for group in groups(at[:2000], 8.0 * half):
            middle = np.array([np.mean(group)])
            spread = float(np.max(np.abs(group - middle))) + half
            marks = np.abs(depths(self.model.frame, middle)) < 2.0 * spread
            tau = on_walls(self.model.frame, middle, marks)
            z = complex(self.model.frame.map.inverse(tau)[0])
            reach = float(site_radius(self.model, np.array([z]), 2.0 * spread)[0])
            gaps = np.concatenate([np.abs(others - z), np.abs(self.model.singular_places - z)])
            room = 0.5 * float(np.min(gaps[np.isfinite(gaps)], initial=self.model.scale))
            small = spread <= _CLUSTER * self.region.size
            cluster = enclose(self.field.proves, z, reach, room) if small else None
            if cluster is None:
                self.unresolved.append(
                    Window((z.real - reach, z.real + reach), (z.imag - reach, z.imag + reach))
                )
            elif cluster.zeros != 0:
                zeros += self._cluster_zero(z, cluster.radius, cluster.zeros, int(marks.sum()))
        return zeros

    def _cluster_zero(self, z: complex, radius: float, count: int, walls: int) -> list[Zero]:
        if walls:
            weight = count if walls == 1 else (count - 1) // 2
            return [Zero(z, wall_name(self.model, z), radius, abs(count), weight)]
        for pier in self.model.piers:
            gap = abs(z - pier.at) - pier.radius
            if abs(gap) <= radius:
                at = pier.at + (z - pier.at) / abs(z - pier.at) * pier.radius
                return [Zero(at, pier.name, radius + abs(gap), count, count)]
            if gap < 0.0:
                return []
        return [Zero(z, WATER, radius, abs(count), 2 * count)]

    def _artefact(self, at: complex, count: int, slit: Slit) -> Zero:
        wall = wall_name(self.model, at) if slit.opening is None else slit.line.on
        return Zero(at, wall, TIP * slit.length, count, 0, is_artefact=True)

    def _vertex_zero(self) -> list[Zero]:
        """The vertex of a corner beyond the left edge; its order is the turning there over pi."""
        if self.model.frame.map.affine or "left" not in self.region.edges:
            return []
        nearest = self.model.frame.map.inverse(np.array([complex(self.region.left, 0.0)]))[0]
        if abs(nearest - self.model.walls[0].point) > 0.05 * self.model.scale:
            return []
        try:
            order = round(-self._edge("left") / np.pi)
        except UnprovenTurningError:
            return []
        if order * exponent_of(self.model.frame) <= 1.0 + 1e-12:
            return []
        return [Zero(self.model.walls[0].point, VERTEX, 0.0, 1, 0)]


def _distinct(zeros: list[Zero]) -> list[Zero]:
    """Zeros with disjoint discs; one found twice is kept once."""
    kept: list[Zero] = []
    for zero in zeros:
        if not any(abs(other.at - zero.at) <= other.radius + zero.radius for other in kept):
            kept.append(zero)
    return kept

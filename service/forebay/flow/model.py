"""The flow of a layout: one object that is evaluated, searched, integrated and followed downstream."""

from dataclasses import dataclass, replace
from functools import cached_property, lru_cache

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.assembly import terms_of
from forebay.flow.core_centres import CoreCentre, centre_chords, core_centre, without_centres
from forebay.flow.cores import CoreTerm
from forebay.flow.corner_chords import corner_chords
from forebay.flow.ends import End, ends_of
from forebay.flow.features import (
    CoredVortex,
    Line,
    Singularity,
    cores_of,
    lines_of,
    singularities_of,
)
from forebay.flow.kernels.nearest import first_within
from forebay.flow.layout import Layout, Pier
from forebay.flow.maps import LogarithmMap
from forebay.flow.piers import PierSolution, solve_piers
from forebay.flow.placement import TOUCHING
from forebay.flow.poles import PoleField
from forebay.flow.settling import Ground, grounded
from forebay.flow.sheets.bound import BoundaryBound
from forebay.flow.sheets.boundary import Boundary, solve_boundary
from forebay.flow.sheets.ring import Ring
from forebay.flow.sheets.ring_set import NO_RINGS, RingSet
from forebay.flow.sheets.standing import Footings, footings
from forebay.flow.sheets.task import task_of
from forebay.flow.shores import Frame, Wall
from forebay.flow.sources import Sources
from forebay.flow.terms import Jet, Term

AMBIENT = "ambient"
"""Owner of everything that is there without the elements."""
_BESIDE = 1e-6
"""Stream functions within this part of a core's radius of its centre are those beside it: 1e-12 off [-]."""
_REMEMBERED = 32
"""Models kept: one request asks several questions of one layout. A model is a function of its layout."""


@dataclass(frozen=True)
class FlowModel:
    """Velocity, derivatives, potential and integrals of a layout's flow.

    W = u - iv = W_tau dtau/dz + sum of terms. Arrays may have any shape; nothing is validated: the value
    at a singularity is nan, on land it is the continuation of the flow and means nothing.

    layout : what was asked for;  frame : the shore in the mapped plane
    rational : poles of the mapped plane;  terms : line elements, cores, gradient
    scale : length scale [m];  boundary_residual : largest normal velocity on the piers as part of the
    largest speed there, on a sample other than the one fitted [-]
    rings_set : walls of outlines and surveyed shores;  boundary : how they were solved, None without any
    """

    layout: Layout
    frame: Frame
    rational: PoleField
    terms: tuple[Term, ...]
    scale: float
    boundary_residual: float
    rings_set: RingSet = NO_RINGS
    boundary: Boundary | None = None

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Conjugate velocity W = u - iv [m/s] at z [m]; relative accuracy 1e-14 of `magnitude`."""
        if self.cores:
            return self.jet(z).velocity
        at = self._off_vertex(z)
        flat = at.ravel()
        velocity = self.rational.velocity(self.frame.map.forward(flat)) * self.frame.map.slope(flat)
        for term in self.terms:
            velocity = velocity + term.velocity(flat)
        return self._still_at_vertex(z, velocity.reshape(at.shape))

    def jet(self, z: ComplexArray) -> Jet:
        """W [m/s] with dW/dz and dW/dzbar [1/s] at z [m]."""
        at = self._off_vertex(z)
        flat = at.ravel()
        jet = self._pole_jet(flat)
        for term in self.terms:
            jet = jet + term.jet(flat)
        for centre in self._centres:
            self._renew(jet, flat, centre)
        shape = at.shape
        return Jet(
            self._still_at_vertex(z, jet.velocity.reshape(shape)),
            jet.slope.reshape(shape),
            jet.skew.reshape(shape),
        )

    def _pole_jet(self, z: ComplexArray) -> Jet:
        slope = self.frame.map.slope(z)
        velocity, change = self.rational.jet(self.frame.map.forward(z))
        bent = change * slope**2 + velocity * self.frame.map.curvature(z)
        return Jet(velocity * slope, bent, np.zeros_like(velocity))

    def _renew(self, jet: Jet, z: ComplexArray, centre: CoreCentre) -> None:
        """Put in place what is accurate close to a core's centre."""
        near = centre.near(z)
        if not near.any():
            return
        renewed = centre.jet(z[near])
        for term in self.terms:
            if term is not centre.term:
                renewed = renewed + term.jet(z[near])
        jet.velocity[near], jet.slope[near], jet.skew[near] = renewed.velocity, renewed.slope, renewed.skew

    @cached_property
    def _centres(self) -> tuple[CoreCentre, ...]:
        terms = [term for term in self.terms if isinstance(term, CoreTerm)]
        return tuple(
            core_centre(term, self.rational, self.frame.map, self._gap_about(term.centres[0], term.owner))
            for term in terms
        )

    def _gap_about(self, at: complex, owner: int) -> float:
        """Distance to the nearest wall, pier or other point element [m]."""
        others = [abs(s.at - at) for s in self.singularities if s.owner != self.owners[owner]]
        return min([float(self.distance_to_wall(np.asarray(at))), *others])

    def _off_vertex(self, z: ComplexArray) -> ComplexArray:
        """Points at a corner's vertex moved to where every part is finite."""
        at = np.array(z, dtype=np.complex128)
        if self._corner:
            beside = TOUCHING * self.scale * self._corner.along * np.exp(0.5j * self._corner.angle)
            at = np.where(self._at_vertex(at), self._corner.vertex + beside, at)
        return np.asarray(at, dtype=np.complex128)

    @property
    def _corner(self) -> LogarithmMap | None:
        return self.frame.map if isinstance(self.frame.map, LogarithmMap) else None

    def _at_vertex(self, z: ComplexArray) -> BoolArray:
        if not self._corner:
            return np.zeros(np.shape(z), dtype=np.bool_)
        return np.abs(np.asarray(z) - self._corner.vertex) < TOUCHING * self.scale

    def _still_at_vertex(self, z: ComplexArray, velocity: ComplexArray) -> ComplexArray:
        """At the vertex of a corner below 180 degrees the water stands still."""
        if not self._corner or self._corner.angle >= np.pi:
            return velocity
        return np.where(self._at_vertex(z), 0.0, velocity)

    def potential(self, z: ComplexArray) -> ComplexArray:
        """Complex potential phi + i psi [m2/s] with principal branches: it jumps across cuts.

        Differences are exact only by `chord`. Where the flow is rotational phi has no meaning.
        """
        at = self._off_vertex(z)
        for core in self.cores:
            beside = _BESIDE * core.core.radius
            at = np.where(np.abs(at - core.at) < beside, core.at + beside, at)
        flat = at.ravel()
        total = self.rational.potential(self.frame.map.forward(flat))
        for term in self.terms:
            total = total + term.potential(flat)
        return total.reshape(at.shape)

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords in the water, owner by owner.

        Parameters
        ----------
        a, b : shape (n,), ends of the chords [m]; no chord meets a point element

        Returns
        -------
        shape (n, len(owners)) [m2/s]: circulation + i flux to the right of travel; exact to rounding.
        """
        return self._chords(a, b, pooled=False)

    def chord(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """`chords` summed over the owners, at less cost, shape (n,) [m2/s]."""
        return self._chords(a, b, pooled=True)[:, 0]

    def _chords(self, a: ComplexArray, b: ComplexArray, *, pooled: bool) -> ComplexArray:
        """Integrals with a column for each owner, or one for all of them."""
        start, end = np.atleast_1d(self._off_vertex(a)), np.atleast_1d(self._off_vertex(b))
        field = self._pooled if pooled else self._centreless
        columns = 1 if pooled else len(self.owners)
        if self._corner:
            sums = corner_chords(self._corner, field, start, end, columns)
        else:
            tau = self.frame.map.forward
            sums = field.chords(tau(start), tau(end), owner_count=columns)
        cores = [centre.term for centre in self._centres]
        for term in self.terms:
            if term not in cores:
                sums[:, 0 if pooled else term.owner] += term.chords(start, end)
        for centre in self._centres:
            own = centre_chords(centre, self.rational, self.frame.map, start, end)
            sums[:, 0 if pooled else centre.term.owner] += own
        return sums

    @cached_property
    def _centreless(self) -> PoleField:
        """The poles less the cored vortices, whose chords are a matter of their own."""
        return without_centres(self.rational, self._centres) if self._centres else self.rational

    @cached_property
    def _pooled(self) -> PoleField:
        """The same with one owner for all."""
        field = self._centreless
        nobody = np.zeros_like(field.owners)
        return replace(field, owners=nobody, moment_owners=np.zeros_like(field.moment_owners))

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W at z [m/s]: its rounding error is some 1e-15 of it."""
        at = self._off_vertex(z)
        flat = at.ravel()
        total = self.rational.magnitude(self.frame.map.forward(flat)) * np.abs(self.frame.map.slope(flat))
        for term in self.terms:
            total = total + term.magnitude(flat)
        return total.reshape(at.shape)

    def wet(self, z: ComplexArray) -> BoolArray:
        """Whether z lies in the water; walls count, with a tolerance of 1e-9 of the scale."""
        at = np.asarray(z, dtype=np.complex128)
        reach = TOUCHING * self.scale
        with np.errstate(invalid="ignore"):
            inside = self.frame.wet(self.frame.map.forward(at), reach * np.abs(self.frame.map.slope(at)))
        inside = inside | self._at_vertex(at)
        for pier in self.piers:
            inside = inside & (np.abs(at - pier.at) >= pier.radius - reach)
        if self.rings:
            inside = inside & self.rings_set.wet(at, reach)
        return np.asarray(inside, dtype=np.bool_)

    def singular(self, z: ComplexArray, radius: float | None = None) -> IntArray:
        """Index of the place without a velocity within `radius` [m] of z, or -1.

        Places: `singularities` in order (a vortex with a core is none), then both ends of every line, then
        the vertex of a corner above 180 degrees, then vertices of rings where the water turns by more.
        radius : default 1e-9 of the scale.
        """
        at = np.asarray(z, dtype=np.complex128)
        reach = TOUCHING * self.scale if radius is None else radius
        order = np.argsort(self.singular_places.real)
        found: IntArray = first_within(at.ravel(), self.singular_places, order, reach)
        return found.reshape(at.shape)

    @cached_property
    def singular_places(self) -> ComplexArray:
        """The places that `singular` counts, shape (s,), nan for cored vortices [m]."""
        cored = {vortex.owner for vortex in self.cores}
        places = [complex(np.nan, np.nan) if s.owner in cored else s.at for s in self.singularities]
        places += [end for line in self.lines for end in (line.start, line.end)]
        if self._corner and self._corner.angle > np.pi:
            places.append(self._corner.vertex)
        return np.concatenate((np.array(places, dtype=np.complex128), self.rings_set.salient))

    @cached_property
    def owners(self) -> tuple[str, ...]:
        """Who answers for what: "ambient", then elements, then structures."""
        return (
            AMBIENT,
            *(element.name for element in self.layout.elements),
            *(pier.name for pier in self.layout.structures),
        )

    @cached_property
    def singularities(self) -> tuple[Singularity, ...]:
        """The point elements."""
        return singularities_of(self.layout, self._footholds, TOUCHING * self.scale)

    @cached_property
    def lines(self) -> tuple[Line, ...]:
        """The line elements."""
        return lines_of(self.layout, self._footholds, TOUCHING * self.scale)

    @cached_property
    def _footholds(self) -> tuple[Wall, ...]:
        """The straight walls, and edges of rings on which elements stand."""
        standing = footings(self.layout, self.rings_set, TOUCHING * self.scale)
        return (*self.walls, *(footing.wall for footing in standing.values()))

    @cached_property
    def cores(self) -> tuple[CoredVortex, ...]:
        """The vortices with a core."""
        return cores_of(self.layout)

    @property
    def walls(self) -> tuple[Wall, ...]:
        """The straight walls."""
        return self.frame.walls

    @property
    def piers(self) -> tuple[Pier, ...]:
        """The piers."""
        return self.layout.piers

    @property
    def rings(self) -> tuple[Ring, ...]:
        """Walls of outlines and surveyed shores, water on their left."""
        return self.rings_set.rings

    @property
    def bound(self) -> BoundaryBound | None:
        """Bound of the error that the rings leave, None without any."""
        return None if self.boundary is None else self.boundary.bound

    @property
    def wall_names(self) -> tuple[str, ...]:
        """Names in the order of `nearest_wall`."""
        names = [wall.name for wall in self.walls] + [pier.name for pier in self.piers]
        return (*names, *(ring.name for ring in self.rings))

    def rings_distance(self, z: ComplexArray) -> FloatArray:
        """Distance to the nearest edge of a ring, open ones included, negative on land [m]."""
        gap = self.rings_set.gap(z)
        return np.asarray(np.where(self.rings_set.inside(z), gap, -gap), dtype=np.float64)

    @cached_property
    def ends(self) -> tuple[End, ...]:
        """The far ends of the water with what flows in there."""
        return ends_of(self.layout)

    @property
    def is_rational(self) -> bool:
        """Whether W_tau is a sum of poles and nothing else."""
        return not self.terms

    @cached_property
    def has_potential(self) -> bool:
        """Whether the flow is irrotational everywhere."""
        return not self.cores and self.layout.ambient.vorticity == 0.0

    def distance_to_wall(self, z: ComplexArray) -> FloatArray:
        """Distance to the nearest wall, pier or ring's land [m], inf without any; negative within one."""
        at = np.asarray(z, dtype=np.complex128)
        distance = np.full(at.shape, np.inf)
        for wall in self.walls:
            distance = np.minimum(distance, wall.distance(at))
        for pier in self.piers:
            distance = np.minimum(distance, np.abs(at - pier.at) - pier.radius)
        return np.minimum(distance, self.rings_set.distance(at)) if self.rings else distance

    def nearest_wall(self, z: ComplexArray) -> IntArray:
        """Index into `walls` followed by `piers` and `rings` of the nearest one, -1 without any."""
        at = np.asarray(z, dtype=np.complex128)
        distances = [wall.distance(at) for wall in self.walls]
        distances += [np.abs(at - pier.at) - pier.radius for pier in self.piers]
        distances += list(self.rings_set.distances(at)) if self.rings else []
        if not distances:
            return np.full(at.shape, -1, dtype=np.int64)
        return np.asarray(np.argmin(np.stack(distances), axis=0), dtype=np.int64)


@lru_cache(maxsize=_REMEMBERED)
def compile_layout(layout: Layout) -> FlowModel:
    """The flow model of a layout.

    Raises
    ------
    LayoutError : the subclass names the fault, `path` the place (see `settling.grounded`, `piers` and
        `sheets.boundary`)
    """
    ground = grounded(layout)
    standing = footings(ground.layout, ground.rings, TOUCHING * ground.scale)
    sources = Sources.of(ground, standing)
    terms = terms_of(ground.layout, ground.frame, standing)
    model = FlowModel(ground.layout, ground.frame, sources.field(), terms, ground.scale, 0.0, ground.rings)
    if ground.rings.rings:
        return _with_rings(model, ground, standing, sources)
    if not model.piers:
        return model
    solution = solve_piers(model.piers, ground.frame, model.rational, model.velocity)
    return replace(model, rational=sources.field(solution), boundary_residual=solution.residual)


def _with_rings(model: FlowModel, ground: Ground, standing: Footings, sources: Sources) -> FlowModel:
    """The flow with what outlines and surveyed shores add to it."""
    means = terms_of(ground.layout, ground.frame, standing, one_sided=False)
    bare = replace(model, terms=means, rings_set=NO_RINGS)

    def with_moments(solution: PierSolution) -> FlowModel:
        return replace(bare, rational=sources.field(solution))

    task = task_of(ground, standing, bare, model.rational, with_moments)
    boundary = solve_boundary(task)
    rational = model.rational if boundary.piers is None else sources.field(boundary.piers)
    residual = 0.0 if boundary.piers is None else boundary.piers.residual
    terms = (*model.terms, *boundary.terms)
    return replace(model, rational=rational, terms=terms, boundary_residual=residual, boundary=boundary)

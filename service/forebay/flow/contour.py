"""Circulation and flux along contours: exact, element by element, with winding numbers.

int W dz = circulation + i flux. Poles and line elements are integrated along chords by subtended angles,
which need no quadrature however close a contour passes; arcs are cut so finely that nothing singular lies
between them and their chords. What the chords miss is added in closed form: vorticity between arc and
chord, and the part of a line element that one crosses and the other does not.
"""

from dataclasses import dataclass
from enum import StrEnum

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.contour_quadrature import Quadrature, integrate_numerically
from forebay.flow.cores import CoreTerm
from forebay.flow.features import WATER, Line
from forebay.flow.gradient import GradientTerm
from forebay.flow.layout import CoreModel
from forebay.flow.model import FlowModel
from forebay.flow.paths import Contour
from forebay.flow.segments import Segment
from forebay.flow.strands import Strand, chords_between, strand_of

THROUGH = 1e-9
"""Distance from a point element within which a contour runs through it, relative to the scale [-]."""


_ENDS = 1e-7
"""Share of a piece within which a meeting with a line is that of an end that lies on the line [-]."""


class ContourStatus(StrEnum):
    """Whether a contour has values."""

    OK = "ok"
    THROUGH_SINGULARITY = "through-singularity"
    CROSSES_LAND = "crosses-land"


@dataclass(frozen=True, slots=True)
class ElementShare:
    """What one owner (with its images) adds: circulation and flux [m2/s]."""

    element: str
    circulation: float
    flux: float


@dataclass(frozen=True, slots=True)
class Enclosed:
    """How often a closed contour winds round an element or pier, anticlockwise positive [-]."""

    element: str
    turns: int


@dataclass(frozen=True, slots=True)
class ContourIntegral:
    """Integrals along one contour.

    length [m], enclosed_area [m2], signed, None if open
    circulation, flux : per unit depth [m2/s]; discharge : flux times depth [m3/s]; None without a value
    by_element : the ambient, every element and pier, in the layout's order; adds up to the whole
    enclosed : of a closed contour, only what it winds round; a line that it cuts is in no list
    quadrature : the same by quadrature of the velocity
    through : name of the point element that the contour meets
    """

    name: str
    closed: bool
    length: float
    enclosed_area: float | None
    circulation: float | None
    flux: float | None
    discharge: float | None
    by_element: tuple[ElementShare, ...]
    enclosed: tuple[Enclosed, ...]
    quadrature: Quadrature | None
    status: ContourStatus
    through: str | None = None


def integrate_contour(model: FlowModel, contour: Contour) -> ContourIntegral:
    """Circulation and flux to the right of travel along a contour.

    Parameters
    ----------
    model : the flow;  contour : the path [m]

    Returns
    -------
    ContourIntegral; status `through-singularity` if it comes within 1e-9 of the layout's scale of a point
    element, `crosses-land` if it leaves the water or cuts a pier; both without values.

    Notes
    -----
    Exact to rounding (some 1e-15 of the sum of |q| + |Gamma|) for every contour, also across line elements
    and through vortex cores. Along a line element: the mean of both sides, in a bank the water's side.
    """
    strand = strand_of(contour.pieces, _obstacles(model))
    through = _met(model, strand)
    if through is not None:
        return _valueless(contour, ContourStatus.THROUGH_SINGULARITY, through)
    if _leaves_water(model, strand):
        return _valueless(contour, ContourStatus.CROSSES_LAND)
    shares = _exact(model, strand)
    total = complex(shares.sum())
    return ContourIntegral(
        name=contour.name,
        closed=contour.closed,
        length=contour.length,
        enclosed_area=contour.enclosed_area,
        circulation=total.real,
        flux=total.imag,
        discharge=total.imag * model.layout.depth,
        by_element=tuple(
            ElementShare(owner, float(share.real), float(share.imag))
            for owner, share in zip(model.owners, shares, strict=True)
        ),
        enclosed=_enclosed(model, strand) if contour.closed else (),
        quadrature=integrate_numerically(model.velocity, strand, _breaks(model, strand)),
        status=ContourStatus.OK,
    )


def _valueless(contour: Contour, status: ContourStatus, through: str | None = None) -> ContourIntegral:
    return ContourIntegral(
        name=contour.name,
        closed=contour.closed,
        length=contour.length,
        enclosed_area=contour.enclosed_area,
        circulation=None,
        flux=None,
        discharge=None,
        by_element=(),
        enclosed=(),
        quadrature=None,
        status=status,
        through=through,
    )


def _obstacles(model: FlowModel) -> ComplexArray:
    """Places that may not lie between an arc and its chord, shape (p,) [m]."""
    field = model.rational
    poles = model.frame.map.inverse(np.concatenate([field.poles, field.centres]))
    places = [end for line in model.lines for end in (line.start, line.end)]
    places += [vortex.at for vortex in model.cores]
    places += [complex(vertex) for ring in model.rings for vertex in ring.vertices]
    if not model.frame.map.affine:
        places.append(model.walls[0].point)
    return np.concatenate([poles, np.array(places, dtype=np.complex128)])


def _met(model: FlowModel, strand: Strand) -> str | None:
    """Name of the first point element without a core that the path runs through."""
    cored = {vortex.owner for vortex in model.cores}
    for point in model.singularities:
        if point.owner not in cored and _distance(strand, point.at).min() <= THROUGH * model.scale:
            return point.owner
    return None


def _distance(strand: Strand, place: complex) -> FloatArray:
    """Least distance of each piece from a place, shape (k,) [m]."""
    return np.asarray(np.abs(strand.at(strand.nearest_share(place)) - place), dtype=np.float64)


def _leaves_water(model: FlowModel, strand: Strand) -> bool:
    """Whether a part between two meetings with walls or piers is dry."""
    meets = [strand.line_crossings(wall.point, wall.direction) for wall in model.walls]
    meets += [strand.circle_crossings(pier.at, pier.radius) for pier in model.piers]
    meets += _ring_crossings(model, strand)
    count = strand.start.size
    shares = np.concatenate([*meets, np.zeros((count, 1)), np.ones((count, 1))], axis=1)
    shares = np.sort(np.where(np.isnan(shares), 1.0, shares), axis=1)
    places = strand.at(0.5 * (shares[:, :-1] + shares[:, 1:]))
    return not bool(model.wet(places).all() and model.wet(strand.start).all() and model.wet(strand.end).all())


def _ring_crossings(model: FlowModel, strand: Strand) -> list[FloatArray]:
    """Shares at which the pieces meet edges of rings, an array (k, 2) for every edge that is met."""
    meets = []
    for ring in model.rings:
        for start, end in zip(ring.starts, ring.ends, strict=True):
            shares = strand.line_crossings(complex(start), complex(end - start))
            along = ((strand.at(shares) - start) / (end - start)).real
            with np.errstate(invalid="ignore"):
                shares = np.where((along >= -_ENDS) & (along <= 1.0 + _ENDS), shares, np.nan)
            if not np.isnan(shares).all():
                meets.append(shares)
    return meets


def _exact(model: FlowModel, strand: Strand) -> ComplexArray:
    """Integral by owner, shape (owners,): along chords, and what these miss."""
    sums = np.asarray(model.chords(strand.start, strand.end).sum(axis=0), dtype=np.complex128)
    arcs = strand.taken(np.flatnonzero(strand.turn != 0.0))
    if arcs.start.size == 0:
        return sums
    chords = chords_between(arcs.start, arcs.end)
    for term in model.terms:
        if isinstance(term, CoreTerm | GradientTerm):
            sums[term.owner] += _rotational(term, arcs).sum() - _rotational(term, chords).sum()
    for line in model.lines:
        if line.on == WATER:
            missed = _crossed(line, arcs) - _crossed(line, chords)
            sums[model.owners.index(line.owner)] += 1j * line.flux * abs(line.end - line.start) * missed
    return sums


def _rotational(term: CoreTerm | GradientTerm, strand: Strand) -> ComplexArray:
    """Whole integral of a rotational part along each piece, straight or curved, shape (k,)."""
    if isinstance(term, GradientTerm):
        straight = term.chords(strand.start, strand.end)
        curved = term.arcs(strand.centre, strand.start, strand.end, strand.turn)
        return np.where(strand.turn == 0.0, straight, curved)
    sums = term.whole_chords(strand.start, strand.end)
    for k in np.flatnonzero(strand.turn != 0.0):
        sums[k] = term.whole_arc(complex(strand.centre[k]), complex(strand.start[k]), float(strand.turn[k]))
    return sums


def _crossed(line: Line, strand: Strand) -> float:
    """Net share of a line on whose start's side the path passes from its left to its right [-].

    A piece that begins or ends on the line counts half there, as a passage from or to neither side.
    """
    segment = Segment(line.start, line.end)
    meets = strand.line_crossings(line.start, segment.run)
    at_start, at_end = segment.sides(strand.start) == 0.0, segment.sides(strand.end) == 0.0
    with np.errstate(invalid="ignore"):
        ends = (at_start[:, None] & (meets < _ENDS)) | (at_end[:, None] & (meets > 1.0 - _ENDS))
    meets = np.sort(np.where(ends | np.isnan(meets), 1.0, meets), axis=1)
    shares = np.column_stack([np.zeros(at_start.size), meets, np.ones(at_start.size)])
    sides = segment.sides(strand.at(0.5 * (shares[:, :-1] + shares[:, 1:])))
    for k in (1, 2):  # parts of no length go on as the one before
        sides[:, k] = np.where(shares[:, k + 1] > shares[:, k], sides[:, k], sides[:, k - 1])
    before, after = np.where(at_start, 0.0, sides[:, 0]), np.where(at_end, 0.0, sides[:, 2])
    steps = np.diff(np.column_stack([before, sides, after]), axis=1)
    along = ((strand.at(shares) - line.start) / segment.run).real
    return float((-0.5 * steps * np.clip(1.0 - along, 0.0, 1.0)).sum())


def _enclosed(model: FlowModel, strand: Strand) -> tuple[Enclosed, ...]:
    """Winding numbers about everything that the closed path winds round, in the layout's order."""
    turns: dict[str, int] = {}
    for point in model.singularities:
        if _distance(strand, point.at).min() > THROUGH * model.scale:
            turns[point.owner] = _winding(strand, point.at)
    for line in model.lines:
        if not _cuts_line(line, strand, THROUGH * model.scale):
            turns[line.owner] = _winding(strand, 0.5 * (line.start + line.end))
    for pier in model.piers:
        turns[pier.name] = _winding(strand, pier.at)
    for ring in model.rings:
        if ring.is_solid and ring.closed and ring.name in model.owners:
            turns[ring.name] = _winding(strand, complex(ring.vertices[0]))
    return tuple(Enclosed(owner, turns[owner]) for owner in model.owners if turns.get(owner, 0) != 0)


def _winding(strand: Strand, place: complex) -> int:
    """Winding number about a place: sum of the subtended angles over 2 pi, a whole number to rounding."""
    angles = np.angle((strand.end - place) * np.conj(strand.start - place))
    return round(float(angles.sum()) / (2.0 * np.pi))


def _cuts_line(line: Line, strand: Strand, reach: float) -> bool:
    """Whether the path meets a line element, within `reach` [m] of its ends."""
    run = line.end - line.start
    places = (strand.at(strand.line_crossings(line.start, run)) - line.start) / run
    beyond = reach / abs(run)
    with np.errstate(invalid="ignore"):
        crosses = bool(np.any((places.real > -beyond) & (places.real < 1.0 + beyond)))
    ends = (strand.start, strand.end)
    on_line = any(bool(np.any(_off_segment(line, places) <= reach)) for places in ends)
    return crosses or on_line


def _off_segment(line: Line, places: ComplexArray) -> FloatArray:
    """Distance of places from a line element, same shape [m]."""
    run = line.end - line.start
    share = np.clip(((places - line.start) * np.conj(run)).real / abs(run) ** 2, 0.0, 1.0)
    return np.asarray(np.abs(places - line.start - share * run), dtype=np.float64)


def _breaks(model: FlowModel, strand: Strand) -> FloatArray:
    """Shares at which the velocity is not smooth or peaks, for the quadrature; shape (k, j), nan for none."""
    length = np.abs(strand.end - strand.start)
    places = [point.at for point in model.singularities]
    places += [end for line in model.lines for end in (line.start, line.end)]
    columns = [np.full((length.size, 1), np.nan)]
    for place in places:
        near = np.where(_distance(strand, place) < length, strand.nearest_share(place), np.nan)
        columns.append(near[:, None])
    columns += [strand.line_crossings(line.start, line.end - line.start) for line in model.lines]
    columns += [
        strand.circle_crossings(vortex.at, vortex.core.radius)
        for vortex in model.cores
        if vortex.core.model is CoreModel.RANKINE
    ]
    return np.concatenate(columns, axis=1)

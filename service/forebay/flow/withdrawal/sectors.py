"""Sectors of a mouth between dividing streamlines, and where the water of each comes from.

All water of a sector has one origin, which one streamline traced against the flow tells; three are traced,
so that a divide that no stagnation point announces (a saddle at infinity, say) is noticed and found by
bisection. Water that has crossed a line source carries a part of its water, sigma / (speed behind the line),
which varies over a sector and is integrated by Gauss's rule.
"""

from dataclasses import dataclass
from itertools import pairwise
from math import pi

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import Doublet
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import Surroundings
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.mouths import Mouth
from forebay.flow.withdrawal.result import OriginKind

MERGED = 1e-12
"""Width of a sector, as part of the total, below which it has no water of its own [-]."""
PROBES: FloatArray = np.array([0.03, 0.4142, 0.97])
"""Parts of a sector's flux at which it is probed; the one between tells the origin if all agree [-]."""
_PARTS = 8
FINEST = 1e-10
"""Bisection: parts per round and width, as part of the total, at which it ends [-]."""
_OF_BOUND = 1e-2
"""The same over the bound of psi that solved walls leave, if that is more [-]."""
_SLIVER = 1e-6
"""Flux next to a divide found by bisection, over the total, that may remain unresolved [-]."""
_NODES = (12, 20)
"""Nodes of the two quadratures whose difference is the error estimate."""

_BESIDE = 2e-9
"""Of the water that has crossed a line: its sides are met a little off the line itself [-]."""

Origin = tuple[str, OriginKind]
Signature = tuple[str, OriginKind, tuple[int, ...]]


@dataclass(frozen=True, slots=True)
class Sector:
    """Water arriving between two coordinates of a mouth, low < high <= low + total [m2/s]."""

    low: float
    high: float

    @property
    def flux(self) -> float:
        """Discharge per depth [m2/s]."""
        return self.high - self.low

    def at(self, parts: FloatArray) -> FloatArray:
        """Coordinates at parts of the flux [m2/s]."""
        return self.low + self.flux * parts


@dataclass(frozen=True, slots=True)
class Tally:
    """Flux by origin of one mouth [m2/s], the estimated error of its quadratures, and whether it bisected."""

    fluxes: dict[Origin, float]
    error: float
    bisected: bool


def sectors_between(mouth: Mouth, dividers: FloatArray) -> list[Sector]:
    """Sectors between divides, shape (d,) coordinates [m2/s]; divides closer than `MERGED` count once."""
    least = MERGED * mouth.total
    if mouth.breaks:
        inner = dividers[(dividers > mouth.breaks[0]) & (dividers < mouth.breaks[-1])]
        edges = np.unique(np.concatenate([inner, mouth.breaks]))
        edges = _apart(edges, least, keep=mouth.breaks)
        return [Sector(float(a), float(b)) for a, b in pairwise(edges)]
    edges = _apart(np.unique(np.mod(dividers, mouth.total)), least, keep=())
    if edges.size > 1 and edges[0] + mouth.total - edges[-1] < least:
        edges = edges[:-1]
    if edges.size == 0:
        return [Sector(0.0, mouth.total)]
    ends = np.append(edges[1:], edges[0] + mouth.total)
    return [Sector(float(a), float(b)) for a, b in zip(edges, ends, strict=True)]


def _apart(edges: FloatArray, least: float, keep: tuple[float, ...]) -> FloatArray:
    """Edges without those that follow another closely, those to keep before all others."""
    chosen: list[float] = []
    for edge in edges:
        if chosen and edge - chosen[-1] < least:
            if edge in keep and chosen[-1] not in keep:
                chosen[-1] = float(edge)
            continue
        chosen.append(float(edge))
    return np.array(chosen)


def released(mouth: Mouth, coordinates: FloatArray) -> ComplexArray:
    """Points of a mouth at coordinates that may run past its total, shape (n,) [m]."""
    return mouth.release(coordinates if mouth.breaks else np.mod(coordinates, mouth.total))


@dataclass(frozen=True, slots=True)
class Source:
    """Follows water of a mouth back to its origin."""

    model: FlowModel
    surroundings: Surroundings
    tolerance: float

    def trace(self, mouth: Mouth, coordinates: FloatArray) -> Traces:
        """Streamlines against the flow from coordinates of the mouth, shape (n,) [m2/s]."""
        wrapped = coordinates if mouth.breaks else np.mod(coordinates, mouth.total)
        rules = TraceRules(forward=False, tolerance=self.tolerance)
        return trace_streamlines(
            self.model, mouth.release(wrapped), surroundings=self.surroundings, rules=rules
        )

    def signatures(self, traces: Traces) -> list[Signature]:
        """Origin and lines crossed, which are the same all over a sector."""
        crossed = [tuple(crossing.line for crossing in row) for row in traces.crossings]
        return [(*self.origin(traces, i), crossed[i]) for i in range(traces.ends.size)]

    def origin(self, traces: Traces, i: int) -> Origin:
        """Name and kind of what trace i ended at."""
        name = traces.names[i]
        if traces.stops[i] is Stop.FAR_END:
            return name, OriginKind.FAR_FIELD
        if traces.stops[i] is not Stop.CAPTURED:
            return OriginKind.UNRESOLVED.value, OriginKind.UNRESOLVED
        doublets = {e.name for e in self.model.layout.elements if isinstance(e, Doublet)}
        return name, OriginKind.DOUBLET if name in doublets else OriginKind.OUTFALL

    def parts(self, traces: Traces, i: int) -> dict[Origin, float]:
        """Parts of the water of trace i by origin: what the lines it crossed have added, and the rest."""
        lines = self.surroundings.lines
        parts: dict[Origin, float] = {}
        rest = 1.0
        for crossing in traces.crossings[i]:
            if lines.flux[crossing.line] <= 0.0:
                continue
            origin = (lines.owners[crossing.line], OriginKind.OUTFALL)
            parts[origin] = parts.get(origin, 0.0) + rest * (1.0 - crossing.leaving / crossing.arriving)
            rest *= crossing.leaving / crossing.arriving
        last = self.origin(traces, i)
        parts[last] = parts.get(last, 0.0) + rest
        return parts


def probes(sectors: list[Sector]) -> FloatArray:
    """Coordinates of the probes of all sectors, `PROBES` each [m2/s]."""
    return np.concatenate([sector.at(PROBES) for sector in sectors])


def tally(source: Source, mouth: Mouth, sectors: list[Sector], traces: Traces) -> Tally:
    """Flux of every origin into a mouth, from the traces of its `probes`."""
    signatures = source.signatures(traces)
    fluxes: dict[Origin, float] = {}
    error, bisected = 0.0, False
    for k, sector in enumerate(sectors):
        told = signatures[k * PROBES.size : (k + 1) * PROBES.size]
        pieces = [(sector, told[1])]
        if len(set(told)) > 1:
            bisected = True
            pieces, lost = _absorbed(_divided(source, mouth, sector, told), _SLIVER * mouth.total)
            error += lost
        for piece, signature in pieces:
            parts, defect = _flux_by_origin(source, mouth, piece, signature)
            error += defect
            for origin, flux in parts.items():
                fluxes[origin] = fluxes.get(origin, 0.0) + flux
    return Tally(fluxes, error, bisected)


def _divided(
    source: Source, mouth: Mouth, sector: Sector, told: list[Signature]
) -> list[tuple[Sector, Signature]]:
    """A sector cut wherever neighbouring probes differ."""
    places = sector.at(PROBES)
    cuts: list[float] = [sector.low]
    kept: list[Signature] = [told[0]]
    for a, b, left, right in zip(places[:-1], places[1:], told[:-1], told[1:], strict=True):
        for cut, signature in _switches(source, mouth, Sector(float(a), float(b)), (left, right)):
            cuts.append(cut)
            kept.append(signature)
    cuts.append(sector.high)
    return [(Sector(a, b), signature) for a, b, signature in zip(cuts[:-1], cuts[1:], kept, strict=True)]


def _absorbed(
    pieces: list[tuple[Sector, Signature]], least: float
) -> tuple[list[tuple[Sector, Signature]], float]:
    """Pieces with unresolved slivers given to a neighbour, and the flux of these [m2/s]."""
    kept: list[tuple[Sector, Signature]] = []
    lost, waiting = 0.0, 0.0
    for sector, signature in pieces:
        if signature[1] is OriginKind.UNRESOLVED and sector.flux <= least:
            lost += sector.flux
            if kept:
                kept[-1] = (Sector(kept[-1][0].low, sector.high), kept[-1][1])
            else:
                waiting += sector.flux
            continue
        kept.append((Sector(sector.low - waiting, sector.high), signature))
        waiting = 0.0
    return (kept, lost) if kept else (pieces, 0.0)


def _switches(
    source: Source, mouth: Mouth, sector: Sector, ends: tuple[Signature, Signature]
) -> list[tuple[float, Signature]]:
    """Coordinates at which the signature changes within a sector, with the signature beyond each."""
    if ends[0] == ends[1]:
        return []
    if sector.flux <= finest_of(source.model, mouth):
        return [(0.5 * (sector.low + sector.high), ends[1])]
    places = sector.at(np.linspace(0.0, 1.0, _PARTS + 1))
    told = [ends[0], *source.signatures(source.trace(mouth, places[1:-1])), ends[1]]
    found: list[tuple[float, Signature]] = []
    for a, b, left, right in zip(places[:-1], places[1:], told[:-1], told[1:], strict=True):
        found += _switches(source, mouth, Sector(float(a), float(b)), (left, right))
    return found


def finest_of(model: FlowModel, mouth: Mouth) -> float:
    """Flux beside a divide at which bisection ends [m2/s]: below the error of solved walls it finds noise."""
    bound = 0.0 if model.bound is None else model.bound.absolute
    return max(FINEST * mouth.total, _OF_BOUND * bound)


def _flux_by_origin(
    source: Source, mouth: Mouth, sector: Sector, signature: Signature
) -> tuple[dict[Origin, float], float]:
    """Flux of a sector by origin and its estimated error [m2/s]."""
    if not any(source.surroundings.lines.flux[k] > 0.0 for k in signature[2]):
        return {signature[:2]: sector.flux}, 0.0
    coarse, fine = (_integrated(source, mouth, sector, count) for count in _NODES)
    defect = max(abs(fine.get(origin, 0.0) - coarse.get(origin, 0.0)) for origin in fine | coarse)
    return fine, defect + _BESIDE * sector.flux


def _integrated(source: Source, mouth: Mouth, sector: Sector, count: int) -> dict[Origin, float]:
    """Gauss's rule in t, coordinate = low + flux sin2(pi t / 2): square roots at the edges become smooth."""
    nodes, weights = np.polynomial.legendre.leggauss(count)
    t = 0.5 * (nodes + 1.0)
    weights = 0.25 * pi * weights * np.sin(pi * t)
    weights = weights / weights.sum()
    traces = source.trace(mouth, sector.at(np.sin(0.5 * pi * t) ** 2))
    fluxes: dict[Origin, float] = {}
    for i, weight in enumerate(weights):
        for origin, part in source.parts(traces, i).items():
            fluxes[origin] = fluxes.get(origin, 0.0) + float(weight) * part * sector.flux
    return fluxes

"""Where the water of intakes comes from, by the separatrix method.

The branches of the stagnation points that flow into an intake divide its water into sectors of one origin
each. Where they arrive follows from psi, which is exact along chords and stationary at a stagnation point, so
that the shares are exact to rounding however coarsely the lines are traced; only which branch ends where is a
matter of tracing.
"""

from dataclasses import dataclass, replace
from itertools import pairwise
from math import nan

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import LineSink, Sink
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.traces import TraceRules, Traces
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.divides import Arrivals, Divides, arrivals_at, divides_of, retraced
from forebay.flow.withdrawal.mouths import Mouth, mouth_of
from forebay.flow.withdrawal.result import (
    EndWidth,
    IntakeWithdrawal,
    OriginKind,
    Share,
    WidthStatus,
    WithdrawalStatus,
)
from forebay.flow.withdrawal.sectors import (
    Sector,
    Source,
    Tally,
    finest_of,
    probes,
    released,
    sectors_between,
    tally,
)
from forebay.flow.withdrawal.zones import Canvas, canvas_of, dividing_streamlines, edges, zone_outline

DRAWN = TraceRules(tolerance=1e-6, largest_turn=0.1, keep_paths=True)
"""Rules of the lines that are drawn: neighbouring points differ by about 0.1 rad in direction."""
_CHECK = TraceRules(tolerance=1e-4)
"""Rules of the second run, whose difference from the first goes into the error."""
_ROUNDING = 2e-14
"""Of a streamline's sum of chords, over the sum of all discharges: some 50 chords at a few 1e-16 [-]."""
_LINE_ROUNDING = 1e-8
"""Of the flux to a line sink that a current crosses, whose ends are left out [-]."""


@dataclass(frozen=True, slots=True)
class _Mouthful:
    """One intake's mouth and what divides its water."""

    element: Sink | LineSink
    mouth: Mouth
    arrivals: Arrivals
    sectors: list[Sector]

    def seeds(self, canvas: Canvas) -> ComplexArray:
        """Probes of the sectors, then their edges [m]."""
        return released(self.mouth, np.concatenate([probes(self.sectors), edges(canvas, self.sectors)]))


@dataclass(frozen=True, slots=True)
class _Flow:
    """What all intakes have in common; `arriving` are traces of the arriving branches against the flow."""

    model: FlowModel
    search: StagnationSearch
    divides: Divides
    check: Divides
    canvas: Canvas
    arriving: Traces


def withdraw(
    model: FlowModel, search: StagnationSearch, intakes: tuple[str, ...]
) -> tuple[IntakeWithdrawal, ...]:
    """Shares, widths, dividing streamlines and zones of intakes.

    Parameters
    ----------
    model : the flow
    search : all its stagnation points; if not complete, the answers say `incomplete` and state no error
    intakes : names of sinks and line sinks

    Returns
    -------
    One IntakeWithdrawal for each name, in order.

    Notes
    -----
    Measured: shares to 1e-14 on layouts with closed forms. A line sink's mouth and water crossing line
    sources are exact to about 1e-8.
    """
    divides = divides_of(model, search.points, DRAWN)
    check = retraced(model, divides, _CHECK)
    mouthfuls = [_mouthful(model, divides, name) for name in intakes]
    canvas = canvas_of(model, divides.surroundings, intakes)
    seeds = [divides.branches.starts[divides.arriving], *(mouthful.seeds(canvas) for mouthful in mouthfuls)]
    rules = replace(DRAWN, forward=False)
    traces = trace_streamlines(model, np.concatenate(seeds), surroundings=divides.surroundings, rules=rules)
    cuts = np.cumsum([part.size for part in seeds])
    flow = _Flow(model, search, divides, check, canvas, traces.part(0, int(cuts[0])))
    parts = [traces.part(int(a), int(b)) for a, b in pairwise(cuts)]
    return tuple(_withdrawal(flow, mouthful, part) for mouthful, part in zip(mouthfuls, parts, strict=True))


def _mouthful(model: FlowModel, divides: Divides, name: str) -> _Mouthful:
    element = next(e for e in model.layout.elements if e.name == name and isinstance(e, Sink | LineSink))
    mouth = mouth_of(model, name, divides.surroundings)
    arrivals = arrivals_at(divides, name, mouth)
    return _Mouthful(element, mouth, arrivals, sectors_between(mouth, arrivals.coordinates))


def _withdrawal(flow: _Flow, mouthful: _Mouthful, traces: Traces) -> IntakeWithdrawal:
    element, mouth, arrivals, sectors = mouthful.element, mouthful.mouth, mouthful.arrivals, mouthful.sectors
    count = probes(sectors).size
    source = Source(flow.model, flow.divides.surroundings, DRAWN.tolerance)
    counted = tally(source, mouth, sectors, traces.part(0, count))
    shares = _shares(counted)
    status = _status(flow, mouthful, counted)
    widths = tuple(_widths(flow.model, counted))
    outline = zone_outline(
        flow.canvas, flow.divides, (mouth, arrivals, sectors), traces.part(count, traces.ends.size)
    )
    return IntakeWithdrawal(
        name=element.name,
        discharge=element.discharge,
        arriving=mouth.total * flow.model.layout.depth,
        width_far_upstream=next((w.width for w in widths if w.end != "downstream"), nan),
        widths=widths,
        dividing_streamlines=dividing_streamlines(
            flow.canvas, flow.divides, flow.arriving, (arrivals, element.name)
        ),
        zone=outline,
        centre=flow.canvas.centre,
        extent=flow.canvas.extent,
        shares=shares,
        recirculation_share=float(sum(s.share for s in shares if s.kind is OriginKind.OUTFALL)),
        share_error=nan if status is WithdrawalStatus.INCOMPLETE else _error(flow, mouthful, counted),
        status=status,
    )


def _shares(counted: Tally) -> tuple[Share, ...]:
    """Shares, largest first."""
    fluxes = sorted(counted.fluxes.items(), key=lambda item: (-item[1], item[0]))
    total = sum(flux for _, flux in fluxes)
    return tuple(Share(origin, kind, float(flux / total)) for (origin, kind), flux in fluxes if flux > 0.0)


def _status(flow: _Flow, mouthful: _Mouthful, counted: Tally) -> WithdrawalStatus:
    if not flow.search.complete:
        return WithdrawalStatus.INCOMPLETE
    if any(kind is OriginKind.UNRESOLVED for _, kind in counted.fluxes):
        return WithdrawalStatus.UNRESOLVED
    if mouthful.mouth.passed_through:
        return WithdrawalStatus.PASSED_THROUGH
    return WithdrawalStatus.BISECTED if counted.bisected else WithdrawalStatus.OK


def _error(flow: _Flow, mouthful: _Mouthful, counted: Tally) -> float:
    """Error of a share: change under tolerance, inclusion of the nodes, quadrature, walls, rounding.

    Walls that are solved move every divide by twice the bound of psi at most.
    """
    mouth, model = mouthful.mouth, flow.model
    again = arrivals_at(flow.check, mouthful.element.name, mouth)
    change = _difference(mouth, mouthful.arrivals.coordinates, again.coordinates)
    strengths = sum(2.0 * np.pi * abs(s.strength) for s in model.singularities)
    strengths += sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines)
    left_open = (2.0 * mouthful.arrivals.error + counted.error) / mouth.total
    left_open += _LINE_ROUNDING if mouth.passed_through else 0.0
    left_open += finest_of(model, mouth) / mouth.total if counted.bisected else 0.0
    if model.bound is not None:
        divides = max(1, mouthful.arrivals.coordinates.size)
        left_open += 2.0 * divides * model.bound.absolute / mouth.total
    return float(min(1.0, change + left_open + model.boundary_residual + _ROUNDING * strengths / mouth.total))


def _difference(mouth: Mouth, first: FloatArray, second: FloatArray) -> float:
    """Sum of the distances from every divide of one run to the nearest of the other, over the total."""
    if first.size == 0 or second.size == 0:
        return float(first.size != second.size)
    gaps = np.abs(first[:, None] - second)
    if not mouth.breaks:
        gaps = np.minimum(gaps, np.abs(mouth.total - gaps))
    return float(max(gaps.min(axis=0).sum(), gaps.min(axis=1).sum()) / mouth.total)


def _widths(model: FlowModel, counted: Tally) -> list[EndWidth]:
    """Flux from each far end over the speed there."""
    widths = []
    for end in model.ends:
        flux = counted.fluxes.get((end.name, OriginKind.FAR_FIELD), 0.0)
        if model.layout.ambient.has_gradient:
            widths.append(EndWidth(end.name, nan, WidthStatus.UNEVEN))
        elif end.speed == 0.0:
            widths.append(EndWidth(end.name, nan, WidthStatus.STILL))
        else:
            widths.append(EndWidth(end.name, flux / end.speed, WidthStatus.OK))
    return widths

"""Where the water of intakes comes from, by the separatrix method.

The branches of the stagnation points that flow into an intake divide its water into sectors of one origin
each. Where they arrive follows from psi, which is exact along chords and stationary at a stagnation point, so
that the shares are exact to rounding however coarsely the lines are traced; only which branch ends where is a
matter of tracing.
"""

from dataclasses import dataclass
from math import nan

import numpy as np

from forebay.flow.arrays import FloatArray
from forebay.flow.layout import LineSink, Sink
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch
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
from forebay.flow.withdrawal.sectors import Sector, Source, Tally, sectors_between, tally
from forebay.flow.withdrawal.zones import Canvas, canvas_of, dividing_streamlines, zone_outline

TOLERANCE = 1e-6
"""Of tracing, over the distance to the nearest site [-]."""
_CHECK = 0.03
"""The tolerance's factor in the second run, whose difference from the first goes into the error [-]."""
_ROUNDING = 2e-14
"""Of a streamline's sum of chords, over the sum of all discharges: some 50 chords at a few 1e-16 [-]."""
_LINE_ROUNDING = 1e-8
"""Of the flux to a line sink that a current crosses, whose ends are left out [-]."""


@dataclass(frozen=True, slots=True)
class _Reading:
    """What one intake's mouth says."""

    element: Sink | LineSink
    mouth: Mouth
    arrivals: Arrivals
    sectors: list[Sector]
    tally: Tally


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
    divides = divides_of(model, search.points, TOLERANCE)
    check = retraced(model, divides, TOLERANCE * _CHECK)
    canvas = canvas_of(model, divides.surroundings, intakes)
    return tuple(_withdrawal(model, search, name, (divides, check), canvas) for name in intakes)


def _withdrawal(
    model: FlowModel, search: StagnationSearch, name: str, divides: tuple[Divides, Divides], canvas: Canvas
) -> IntakeWithdrawal:
    reading = _read(model, divides[0], name)
    shares = _shares(reading)
    status = _status(search, reading)
    error = nan if status is WithdrawalStatus.INCOMPLETE else _error(model, reading, divides[1])
    widths = tuple(_widths(model, reading))
    return IntakeWithdrawal(
        name=name,
        discharge=reading.element.discharge,
        arriving=reading.mouth.total * model.layout.depth,
        width_far_upstream=next(
            (w.width for w in widths if w.end in {"ambient", "upstream", "open-end"}), nan
        ),
        widths=widths,
        dividing_streamlines=dividing_streamlines(canvas, divides[0], reading.arrivals, name),
        zone=zone_outline(canvas, divides[0], reading.mouth, reading.arrivals, reading.sectors),
        extent=canvas.extent,
        shares=shares,
        recirculation_share=float(sum(s.share for s in shares if s.kind is OriginKind.OUTFALL)),
        share_error=error,
        status=status,
    )


def _read(model: FlowModel, divides: Divides, name: str) -> _Reading:
    element = next(e for e in model.layout.elements if e.name == name and isinstance(e, Sink | LineSink))
    mouth = mouth_of(model, name, divides.surroundings)
    arrivals = arrivals_at(divides, name, mouth)
    sectors = sectors_between(mouth, arrivals.coordinates)
    source = Source(model, divides.surroundings, TOLERANCE)
    return _Reading(element, mouth, arrivals, sectors, tally(source, mouth, sectors))


def _shares(reading: _Reading) -> tuple[Share, ...]:
    """Shares, largest first."""
    fluxes = sorted(reading.tally.fluxes.items(), key=lambda item: (-item[1], item[0]))
    total = sum(flux for _, flux in fluxes)
    return tuple(Share(origin, kind, float(flux / total)) for (origin, kind), flux in fluxes if flux > 0.0)


def _status(search: StagnationSearch, reading: _Reading) -> WithdrawalStatus:
    if not search.complete:
        return WithdrawalStatus.INCOMPLETE
    if any(kind is OriginKind.UNRESOLVED for _, kind in reading.tally.fluxes):
        return WithdrawalStatus.UNRESOLVED
    if reading.mouth.passed_through:
        return WithdrawalStatus.PASSED_THROUGH
    return WithdrawalStatus.BISECTED if reading.tally.bisected else WithdrawalStatus.OK


def _error(model: FlowModel, reading: _Reading, check: Divides) -> float:
    """Error of a share: change under tolerance, inclusion of the nodes, quadrature, piers, rounding."""
    total = reading.mouth.total
    arrivals = arrivals_at(check, reading.element.name, reading.mouth)
    again = sectors_between(reading.mouth, arrivals.coordinates)
    change = _difference(reading.sectors, again, total)
    strengths = sum(2.0 * np.pi * abs(s.strength) for s in model.singularities)
    strengths += sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines)
    left_open = (2.0 * reading.arrivals.error + reading.tally.error) / total
    left_open += _LINE_ROUNDING if reading.mouth.passed_through else 0.0
    left_open += 1e-10 if reading.tally.bisected else 0.0
    return float(min(1.0, change + left_open + model.boundary_residual + _ROUNDING * strengths / total))


def _difference(sectors: list[Sector], again: list[Sector], total: float) -> float:
    """Half of the summed changes of the sectors' parts, 1 if their number has changed."""
    if len(sectors) != len(again):
        return 1.0
    parts: list[FloatArray] = [np.array([s.flux / total for s in row]) for row in (sectors, again)]
    return float(0.5 * np.abs(parts[0] - parts[1]).sum())


def _widths(model: FlowModel, reading: _Reading) -> list[EndWidth]:
    """Flux from each far end over the speed there."""
    widths = []
    for end in model.ends:
        flux = reading.tally.fluxes.get((end.name, OriginKind.FAR_FIELD), 0.0)
        if model.layout.ambient.has_gradient:
            widths.append(EndWidth(end.name, nan, WidthStatus.UNEVEN))
        elif end.speed == 0.0:
            widths.append(EndWidth(end.name, nan, WidthStatus.STILL))
        else:
            widths.append(EndWidth(end.name, flux / end.speed, WidthStatus.OK))
    return widths

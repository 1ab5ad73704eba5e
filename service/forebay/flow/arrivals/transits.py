"""When streamlines first cross a transect, solved on the streamline itself."""

from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.model import FlowModel
from forebay.flow.traces import Traces

_SUBSTEPS = 8
"""Steps of the fourth order within the part of a traced step up to the transect."""
_NEWTON = 4


@dataclass(frozen=True, slots=True)
class Transect:
    """A named polyline whose first crossing is timed; `points` of at least two places [m]."""

    name: str
    points: tuple[complex, ...]


def transit_times(
    model: FlowModel, transects: tuple[Transect, ...], traces: Traces
) -> list[dict[str, float]]:
    """Time of the first crossing of every transect that a streamline meets, by name, for n streamlines [s].

    Notes
    -----
    The step is found on the traced points, the time in it by Newton's method on the flow itself, integrated
    by the classical method of order 4 in eight parts; measured accuracy that of the tracing.
    """
    found: list[dict[str, float]] = [{} for _ in range(traces.ends.size)]
    for transect in transects:
        starts, spans = _segments(transect)
        hits = {i: hit for i, path in enumerate(traces.paths) if (hit := _first_hit(path, starts, spans))}
        if not hits:
            continue
        rows, step = np.array(list(hits)), np.array([hit.step for hit in hits.values()])
        z = np.array([traces.paths[i][k] for i, k in zip(rows, step, strict=True)])
        begin, end = (
            np.array([traces.path_times[i][k] for i, k in zip(rows, step + later, strict=True)])
            for later in (0, 1)
        )
        guess = np.array([hit.part for hit in hits.values()]) * (end - begin)
        segment = np.array([hit.segment for hit in hits.values()])
        times = begin + _solved(model, z, (starts[segment], spans[segment]), guess, end - begin)
        for i, time in zip(hits, times, strict=True):
            found[i][transect.name] = float(time)
    return found


def _segments(transect: Transect) -> tuple[ComplexArray, ComplexArray]:
    points = np.array(transect.points, dtype=np.complex128)
    span = points[1:] - points[:-1]
    return points[:-1][span != 0.0], span[span != 0.0]


class _Hit(NamedTuple):
    """Step of a path, segment of a polyline that it crosses, and part of the step before that."""

    step: int
    segment: int
    part: float


def _first_hit(path: ComplexArray, starts: ComplexArray, spans: ComplexArray) -> _Hit | None:
    """First crossing of a polyline by a path."""
    local = (path[:, None] - starts) / spans
    a, b = local[:-1], local[1:]
    with np.errstate(divide="ignore", invalid="ignore"):
        part = a.imag / (a.imag - b.imag)
        at = a.real + part * (b.real - a.real)
    crossed: BoolArray = ((a.imag < 0.0) != (b.imag < 0.0)) & (at >= 0.0) & (at <= 1.0)
    rows = np.nonzero(crossed.any(axis=1))[0]
    if rows.size == 0:
        return None
    step = int(rows[0])
    segment = int(np.argmin(np.where(crossed[step], part[step], np.inf)))
    return _Hit(step, segment, float(part[step, segment]))


def _solved(
    model: FlowModel,
    z: ComplexArray,
    line: tuple[ComplexArray, ComplexArray],
    guess: FloatArray,
    longest: FloatArray,
) -> FloatArray:
    """Times after which water from z is on the straight lines, at most `longest` [s]."""
    start, span = line
    time = guess
    for _ in range(_NEWTON):
        there = _drifted(model, z, time)
        offset = ((there - start) / span).imag
        speed = (np.conj(model.velocity(there)) / span).imag
        with np.errstate(divide="ignore", invalid="ignore"):
            change = -offset / speed
        time = np.clip(time + np.where(np.isfinite(change), change, 0.0), 0.0, longest)
    return time


def _drifted(model: FlowModel, z: ComplexArray, time: FloatArray) -> ComplexArray:
    """Where water from z is after a time, shape (n,)."""
    h = time / _SUBSTEPS
    for _ in range(_SUBSTEPS):
        first = np.conj(model.velocity(z))
        second = np.conj(model.velocity(z + 0.5 * h * first))
        third = np.conj(model.velocity(z + 0.5 * h * second))
        fourth = np.conj(model.velocity(z + h * third))
        z = z + h / 6.0 * (first + 2.0 * second + 2.0 * third + fourth)
    return z

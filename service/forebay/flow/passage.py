"""What water undergoes on its way from one place to another: travel time and the integral of G along it."""

from dataclasses import dataclass, replace
from enum import StrEnum

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.far_field import far_field_of
from forebay.flow.model import FlowModel
from forebay.flow.rheology import shear_rate
from forebay.flow.stress import gradient_from_jet, strain_rate
from forebay.flow.surroundings import survey
from forebay.flow.traces import Stop, TraceRules
from forebay.flow.tracing import trace_streamlines

TURN = 0.02
"""Largest turn of a streamline in one step [rad]: keeps the path close to its chords."""

_FINE, _COARSE = 6, 3
"""Gauss-Legendre nodes on each chord, and those that tell the error."""

_OFF_CHORD = 0.12
"""Change of G over the rise of an arc, over G and the turn: 2 rise / distance, rise = turn chord / 8 [-]."""

REGION = 50.0
"""Radius of what is followed, in scales of the layout [-]."""


class PassageStatus(StrEnum):
    """Whether the streamline leads where it was to lead."""

    ARRIVES = "arrives"
    MISSES = "misses"
    ON_SINGULARITY = "on-singularity"
    ON_LAND = "on-land"


@dataclass(frozen=True, slots=True)
class Passage:
    """Way of water from one place to the nearest point of its streamline to another.

    miss : distance between that point and the other place [m]
    time : travel time [s];  mean_gradient : time mean of G [1/s];  dose : integral of G dt [-]
    dose_error : estimate of the dose's error [-]
    largest_gradient : along the way [1/s];  path : [m];  end : where the streamline ends
    Numbers are nan unless the status is arrives; the miss is known also of one that misses.
    """

    status: PassageStatus
    miss: float = np.nan
    time: float = np.nan
    mean_gradient: float = np.nan
    dose: float = np.nan
    dose_error: float = np.nan
    largest_gradient: float = np.nan
    path: ComplexArray | None = None
    end: Stop | None = None


def follow_passage(model: FlowModel, start: complex, target: complex, within: float) -> Passage:
    """Streamline from a place, followed downstream to where it passes another.

    Parameters
    ----------
    model : the flow
    start, target : places in the water [m]
    within : distance from the target that counts as arrival [m]

    Returns
    -------
    Passage. G = sqrt(2 D : D) of the mean flow; its integral by Gauss and Legendre over the chords of the
    trace, whose error is told by half the nodes and by the rise of the arcs over their chords.
    """
    places = np.array([start, target])
    if not bool(np.all(model.wet(places))):
        return Passage(PassageStatus.ON_LAND)
    if bool(np.any(model.singular(places[:1]) >= 0)):
        return Passage(PassageStatus.ON_SINGULARITY)
    region = REGION * model.scale + abs(target - start)
    rules = TraceRules(largest_turn=TURN, region=region, keep_paths=True)
    surroundings = survey(model, np.empty(0, dtype=np.complex128))
    beyond = far_field_of(model, np.append(surroundings.sites.at, places))  # both places lie this side of it
    surroundings = replace(surroundings, far=beyond)
    traces = trace_streamlines(model, places[:1], surroundings=surroundings, rules=rules)
    if traces.paths[0].size < 2:  # still water goes nowhere, however near the target is
        return Passage(PassageStatus.MISSES, miss=abs(target - start), end=traces.stops[0])
    path, times = _cut(model, traces.paths[0], traces.path_times[0], target)
    miss = float(abs(path[-1] - target))
    if miss > within:
        return Passage(PassageStatus.MISSES, miss=miss, end=traces.stops[0])
    return _arrived(model, path, times, miss, traces.stops[0])


def _cut(
    model: FlowModel, path: ComplexArray, times: FloatArray, target: complex
) -> tuple[ComplexArray, FloatArray]:
    """The path and its times up to the point of its chords nearest to the target."""
    run = np.diff(path)
    with np.errstate(divide="ignore", invalid="ignore"):
        share = ((target - path[:-1]) * np.conj(run)).real / np.abs(run) ** 2
    share = np.clip(np.where(np.isfinite(share), share, 0.0), 0.0, 1.0)
    feet = path[:-1] + share * run
    k = int(np.argmin(np.abs(feet - target)))
    cut = np.append(path[: k + 1], feet[k])
    last = float(_means(model, cut[-2:], _FINE)[0][0]) * abs(feet[k] - path[k])
    return cut, np.append(times[: k + 1], times[k] + last)


def _means(model: FlowModel, path: ComplexArray, nodes: int) -> tuple[FloatArray, FloatArray]:
    """Mean slowness 1/|W| [s/m] along each chord of a path, and mean of G weighted by it [1/s]."""
    places, weights = np.polynomial.legendre.leggauss(nodes)
    z = path[:-1, None] + np.diff(path)[:, None] * (places + 1.0) / 2.0
    jet = model.jet(z)
    slowness = 1.0 / np.abs(jet.velocity)
    gradient = shear_rate(strain_rate(gradient_from_jet(jet.slope, jet.skew)))
    mean = slowness @ weights
    return 0.5 * mean, (gradient * slowness) @ weights / mean


def _arrived(model: FlowModel, path: ComplexArray, times: FloatArray, miss: float, end: Stop) -> Passage:
    fine, coarse = (_means(model, path, nodes)[1] for nodes in (_FINE, _COARSE))
    steps = np.diff(times)
    heading = model.velocity(path)
    turn = np.abs(np.angle(heading[1:] * np.conj(heading[:-1])))
    dose, time = float(fine @ steps), float(times[-1] - times[0])
    return Passage(
        PassageStatus.ARRIVES,
        miss=miss,
        time=time,
        mean_gradient=dose / time if time > 0.0 else float(fine[0]),
        dose=dose,
        dose_error=float(np.abs(fine - coarse) @ steps + _OFF_CHORD * (fine * turn) @ steps),
        largest_gradient=float(np.max(_gradient(model, path))),
        path=path,
        end=end,
    )


def _gradient(model: FlowModel, path: ComplexArray) -> FloatArray:
    jet = model.jet(path)
    return shear_rate(strain_rate(gradient_from_jet(jet.slope, jet.skew)))

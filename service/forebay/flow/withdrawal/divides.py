"""The dividing streamlines of a flow: every branch of its stagnation points followed to its end.

Water on the two sides of a branch that arrives at a stagnation point goes different ways beyond it; two
streamlines beside each such branch tell which ways, whatever walls they follow.
"""

from dataclasses import dataclass, replace

import numpy as np

from forebay.flow.arrays import BoolArray, FloatArray, IntArray
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationPoint
from forebay.flow.surroundings import Surroundings, survey
from forebay.flow.traces import Stop, TraceRules, Traces
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.branches import Branches, branches_of
from forebay.flow.withdrawal.mouths import Mouth

_BESIDE = 0.05
"""Angle between a branch and the streamlines beside it, on the circle about the stagnation point [rad]."""


@dataclass(frozen=True, slots=True)
class Divides:
    """Branches and what became of them.

    branches : n beginnings
    leaving, arriving : indices of those along which water leaves or arrives
    forward : traces of `leaving` with the water, with their paths
    beside : traces of both sides of `arriving`, left ones first
    """

    surroundings: Surroundings
    branches: Branches
    leaving: IntArray
    arriving: IntArray
    forward: Traces
    beside: Traces


@dataclass(frozen=True, slots=True)
class Arrivals:
    """Branches that end at one mouth.

    coordinates, nodes : shape (d,), where [m2/s] and the index of the node that each comes from
    error : what the inclusion of the nodes leaves open, summed [m2/s]
    """

    coordinates: FloatArray
    nodes: IntArray
    error: float


def divides_of(model: FlowModel, points: tuple[StagnationPoint, ...], rules: TraceRules) -> Divides:
    """Follow every branch of the stagnation points and of the ends of line elements."""
    surroundings = survey(model, np.array([point.at for point in points], dtype=np.complex128))
    branches = branches_of(model, points, surroundings)
    leaving = np.nonzero(branches.outgoing)[0]
    arriving = np.nonzero(~branches.outgoing)[0]
    ray = branches.starts[arriving] - branches.centres[arriving]
    beside = np.concatenate(
        [branches.centres[arriving] + ray * np.exp(1j * turn) for turn in (_BESIDE, -_BESIDE)]
    )
    beside = np.where(model.wet(beside), beside, np.tile(branches.starts[arriving], 2))
    seeds = np.concatenate([branches.starts[leaving], beside])
    traces = trace_streamlines(model, seeds, surroundings=surroundings, rules=rules)
    forward, sides = traces.part(0, leaving.size), traces.part(leaving.size, seeds.size)
    return Divides(surroundings, branches, leaving, arriving, forward, sides)


def retraced(model: FlowModel, divides: Divides, rules: TraceRules) -> Divides:
    """The same divides with the leaving branches traced by other rules, to see what that changes."""
    seeds = divides.branches.starts[divides.leaving]
    forward = trace_streamlines(model, seeds, surroundings=divides.surroundings, rules=rules)
    return replace(divides, forward=forward)


def arrivals_at(divides: Divides, name: str, mouth: Mouth) -> Arrivals:
    """Branches that end at, or cross, the intake `name`."""
    forward, lines = divides.forward, divides.surroundings.lines
    places: list[complex] = []
    drift: list[float] = []
    nodes: list[int] = []
    for i in range(forward.ends.size):
        node = int(divides.branches.node[divides.leaving[i]])
        met = [c.at for c in forward.crossings[i] if lines.owners[c.line] == name]
        if forward.stops[i] is Stop.CAPTURED and forward.names[i] == name:
            met.append(complex(forward.ends[i]))
        places += met
        drift += [float(forward.drift[i])] * len(met)
        nodes += [node] * len(met)
    if not places:
        return Arrivals(np.empty(0), np.empty(0, dtype=np.int64), 0.0)
    coordinates = mouth.coordinate(np.array(places)) + np.array(drift)
    index = np.array(nodes, dtype=np.int64)
    return Arrivals(coordinates, index, float(divides.branches.psi_errors[index].sum()))


def bounding(divides: Divides, name: str) -> BoolArray:
    """Which of the arriving branches has water of the intake `name` on one side only."""
    count = divides.arriving.size
    told = [_meets(divides, i, name) for i in range(2 * count)]
    return np.array([told[i] != told[i + count] for i in range(count)], dtype=np.bool_)


def _meets(divides: Divides, i: int, name: str) -> bool:
    beside, lines = divides.beside, divides.surroundings.lines
    crossed = any(lines.owners[crossing.line] == name for crossing in beside.crossings[i])
    return crossed or (beside.stops[i] is Stop.CAPTURED and beside.names[i] == name)

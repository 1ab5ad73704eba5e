"""The streamlines that divide released water: traced against the flow from every stagnation point."""

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.arrivals.scene import Scene
from forebay.flow.arrivals.transits import Transect
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.surroundings import survey
from forebay.flow.traces import TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.branches import branches_of
from forebay.flow.withdrawal.zones import filled_in

_DRAWN = TraceRules(forward=False, tolerance=1e-6, largest_turn=0.1, keep_paths=True)
"""Neighbouring points differ by about 0.1 rad in direction: chords sag by a hundredth of their length."""
_SAG = 1e-5
"""How far a chord of a dividing streamline may sag, over the scale, if at most 8 points are put on it [-]."""


def scene_of(model: FlowModel, search: StagnationSearch, transects: tuple[Transect, ...] = ()) -> Scene:
    """Survey a flow and trace its dividing streamlines, and those through the ends of transects."""
    points = np.array([point.at for point in search.points], dtype=np.complex128)
    surroundings = survey(model, points)
    branches = branches_of(model, search.points, surroundings)
    arriving = np.nonzero(~branches.outgoing)[0]
    ends = _moving(model, np.array([end for t in transects for end in (t.points[0], t.points[-1])]))
    seeds = np.concatenate([branches.starts[arriving], ends])
    traces = trace_streamlines(model, seeds, surroundings=surroundings, rules=_DRAWN)
    paths = [filled_in(model, traces.paths[i], _SAG * model.scale) for i in range(seeds.size)]
    for i, k in enumerate(arriving):
        paths[i] = np.append(branches.centres[k], paths[i])
    return Scene(model, surroundings, search.complete, tuple(paths), traces, arriving.size)


def _moving(model: FlowModel, z: ComplexArray) -> ComplexArray:
    """Places in the water at which it moves."""
    if z.size == 0:
        return np.empty(0, dtype=np.complex128)
    z = z[model.wet(z) & (model.singular(z) < 0)]
    return np.asarray(z[np.abs(model.velocity(z)) > 0.0], dtype=np.complex128)

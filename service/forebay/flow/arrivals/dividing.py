"""The streamlines that divide released water: traced against the flow from every stagnation point."""

import numpy as np

from forebay.flow.arrivals.scene import Scene
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


def scene_of(model: FlowModel, search: StagnationSearch) -> Scene:
    """Survey a flow and trace its dividing streamlines."""
    points = np.array([point.at for point in search.points], dtype=np.complex128)
    surroundings = survey(model, points)
    branches = branches_of(model, search.points, surroundings)
    arriving = np.nonzero(~branches.outgoing)[0]
    traces = trace_streamlines(model, branches.starts[arriving], surroundings=surroundings, rules=_DRAWN)
    paths = tuple(
        np.append(branches.centres[k], filled_in(model, traces.paths[i], _SAG * model.scale))
        for i, k in enumerate(arriving)
    )
    return Scene(model, surroundings, search.complete, paths, traces)

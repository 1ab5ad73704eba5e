"""The streamlines that divide released water: traced against the flow from every stagnation point."""

from dataclasses import replace

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.arrivals.scene import Scene
from forebay.flow.arrivals.transits import Transect
from forebay.flow.far_field import FarField
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import StagnationSearch
from forebay.flow.surroundings import Surroundings, survey
from forebay.flow.traces import TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.branches import branches_of
from forebay.flow.withdrawal.zones import filled_in

_DRAWN = TraceRules(forward=False, tolerance=1e-6, largest_turn=0.1, keep_paths=True)
"""Neighbouring points differ by about 0.1 rad in direction: chords sag by a hundredth of their length."""
_SAG = 1e-5
"""How far a chord of a dividing streamline may sag, over the scale, if at most 8 points are put on it [-]."""
_BEYOND = 1.5
"""Where the far field begins, over the distance of the farthest release or transect, if not farther [-]."""


def scene_of(
    model: FlowModel, search: StagnationSearch, places: ComplexArray, transects: tuple[Transect, ...] = ()
) -> Scene:
    """Survey a flow and trace its dividing streamlines, and those through the ends of transects.

    places : shape (n,), where water is released: streamlines are followed beyond all of them [m]
    """
    points = np.array([point.at for point in search.points], dtype=np.complex128)
    ends = np.array([end for transect in transects for end in transect.points], dtype=np.complex128)
    surroundings = _reaching(survey(model, points), np.concatenate([places, ends]))
    branches = branches_of(model, search.points, surroundings)
    arriving = np.nonzero(~branches.outgoing)[0]
    ends = _moving(model, np.array([end for t in transects for end in (t.points[0], t.points[-1])]))
    seeds = np.concatenate([branches.starts[arriving], ends])
    traces = trace_streamlines(model, seeds, surroundings=surroundings, rules=_DRAWN)
    paths = [filled_in(model, traces.paths[i], _SAG * model.scale) for i in range(seeds.size)]
    for i, k in enumerate(arriving):
        paths[i] = np.append(branches.centres[k], paths[i])
    return Scene(model, surroundings, search.complete, tuple(paths), traces, arriving.size)


def _reaching(surroundings: Surroundings, places: ComplexArray) -> Surroundings:
    """The same with the far field put beyond all places."""
    far = surroundings.far
    if places.size == 0 or not isinstance(far, FarField):
        return surroundings
    farthest = float(np.max(np.abs(places - far.centre)))
    return replace(surroundings, far=replace(far, reach=max(far.reach, _BEYOND * farthest)))


def _moving(model: FlowModel, z: ComplexArray) -> ComplexArray:
    """Places in the water at which it moves."""
    if z.size == 0:
        return np.empty(0, dtype=np.complex128)
    z = z[model.wet(z) & (model.singular(z) < 0)]
    return np.asarray(z[np.abs(model.velocity(z)) > 0.0], dtype=np.complex128)

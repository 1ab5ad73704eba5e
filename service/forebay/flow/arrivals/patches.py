"""What becomes of water released over a patch, from what crosses its boundary (see `spread`)."""

from dataclasses import replace
from math import nan

import numpy as np

from forebay.flow.arrivals.boundaries import boundary_of, intakes_within
from forebay.flow.arrivals.fates import INTAKE, Follower, Target
from forebay.flow.arrivals.findings import ArrivalRules, End, Findings, Passage
from forebay.flow.arrivals.release import Patch
from forebay.flow.arrivals.result import Outcome, ReleaseStatus
from forebay.flow.arrivals.sampling import Accuracy, Sample, passage, sampled, status_of, time_error
from forebay.flow.arrivals.slices import ends_over, wet_area
from forebay.flow.arrivals.spread import Course, Ramps, course_of
from forebay.flow.layout import Doublet, LineSink, Sink, Vortex
from forebay.flow.model import FlowModel

_PANELS = 16
"""Most panels of slices, of six each, by which water that is not captured is parted."""

_TRACED_PART = 0.3
"""Part of the error asked for that may come from tracing [-]."""
_FINER, _STEP = 2, 30.0
"""Finer tolerances tried, and the step from one to the next [-]."""


def find_patch(follower: Follower, patch: Patch, rules: ArrivalRules) -> Findings:
    """Fate of water spread evenly over the wet part of a patch.

    Notes
    -----
    What is captured, and when, comes from the boundary alone. What is not is parted by slices, unless all of
    it can only leave by one end.
    """
    scene = follower.scene
    area = wet_area(scene.model, patch, 0.05 * rules.tolerance * patch.area)
    if area.value <= 1e-9 * patch.area:
        return Findings(status=ReleaseStatus.ON_LAND, wet_share=0.0)
    sinks = [e.name for e in scene.model.layout.elements if isinstance(e, Sink | LineSink)]
    wanted = rules.wanted | {(INTAKE, name) for name in sinks}
    accuracy = Accuracy(rules.tolerance, area.value)
    sample = _sampled(follower, patch, frozenset(wanted), accuracy)
    first: dict[Target, float] = {(INTAKE, name): 0.0 for name in intakes_within(scene, patch)}
    passages, error = _passages(sample, frozenset(wanted), area.value, first)
    passages, excess = _within_whole(passages)
    error += excess + accuracy.edge + (sample.error + area.error) / area.value + scene.model.boundary_residual
    ends, parting = _ends(follower, patch, passages, rules.tolerance)
    error += parting
    return Findings(
        passages=passages,
        ends=ends,
        share_error=min(1.0, error) if scene.complete else nan,
        time_error=time_error(sample, passages, by_area=True, first=first),
        wet_share=min(1.0, area.value / patch.area),
        status=status_of(scene, sample, accurate=error <= rules.tolerance),
    )


def _sampled(follower: Follower, patch: Patch, wanted: frozenset[Target], accuracy: Accuracy) -> Sample:
    """The boundary's water, traced the more finely the longer it travels for the time that it spends inside.

    Areas are differences of travel times, so that the error of tracing grows by that ratio.
    """
    rakes = boundary_of(follower.scene, patch)
    sample = sampled(follower, rakes, wanted, accuracy, by_area=True)
    for _ in range(_FINER):
        lost = sum(sample.time_part * _flux_times(sample.ramps(target)) for target in wanted)
        if lost <= _TRACED_PART * accuracy.tolerance * accuracy.amount:
            break
        follower = replace(follower, tolerance=follower.tolerance / _STEP)
        sample = sampled(follower, rakes, wanted, accuracy, by_area=True)
    return sample


def _flux_times(ramps: Ramps) -> float:
    """Sum of flux, in or out, times travel time [m2]."""
    return float(np.sum(np.abs(ramps.weight) * 0.5 * (ramps.low + ramps.high)))


def _passages(
    sample: Sample, wanted: frozenset[Target], area: float, first: dict[Target, float]
) -> tuple[dict[Target, Passage], float]:
    """Passages of all targets met, and the error by smoothing, by tracing and by what the boundary lacks."""
    passages, error = {}, 0.0
    for target in sorted(wanted):
        ramps = sample.ramps(target)
        if not ramps.low.size:
            continue
        course, moved = course_of(ramps, by_area=True, first=first.get(target))
        found = passage(course, ramps, area, endless=sample.endless(target))
        passages[target] = found
        error += (moved + sample.time_part * _flux_times(ramps)) / area
    return passages, error


def _within_whole(passages: dict[Target, Passage]) -> tuple[dict[Target, Passage], float]:
    """Passages of which the intakes' do not add to more than the whole, and by how much they did."""
    captured = sum(found.course.total for (kind, _), found in passages.items() if kind == INTAKE)
    if captured <= 1.0:
        return passages, 0.0
    scaled = {
        target: replace(found, course=Course(found.course.time, found.course.amount / captured))
        for target, found in passages.items()
    }
    return scaled, captured - 1.0


def _ends(
    follower: Follower, patch: Patch, passages: dict[Target, Passage], tolerance: float
) -> tuple[dict[End, float], float]:
    """Shares by outcome and destination, and the error of parting what is not captured."""
    ends: dict[End, float] = {
        (Outcome.CAPTURED, name): found.course.total
        for (kind, name), found in passages.items()
        if kind == INTAKE
    }
    captured = sum(ends.values())
    rest = 1.0 - captured
    if rest <= 0.0:
        return ends, 0.0
    only = _only_end(follower)
    if only is not None:
        return {**ends, only: rest}, 0.0
    parts, change = ends_over(follower, patch, tolerance * patch.area, _PANELS)
    others = {end: part for end, part in parts.items() if end[0] is not Outcome.CAPTURED}
    whole, wet = sum(others.values()), sum(parts.values())
    if whole <= 0.0:
        return {**ends, (Outcome.UNRESOLVED, ""): rest}, rest
    ends |= {end: rest * part / whole for end, part in others.items()}
    return ends, change / wet + abs(whole / wet - rest)


def _only_end(follower: Follower) -> End | None:
    """The one end that uncaptured water can have; None if several, or if it may go round for ever."""
    model = follower.scene.model
    takes = [end.name for end in follower.scene.surroundings.far.ends if end.takes]
    doublets = any(isinstance(element, Doublet) for element in model.layout.elements)
    if len(takes) != 1 or doublets or _can_recirculate(model):
        return None
    return Outcome.PASSES, takes[0]


def _can_recirculate(model: FlowModel) -> bool:
    """Whether a streamline can close: without vorticity or circulation within, none can."""
    layout = model.layout
    turning = any(isinstance(element, Vortex) for element in layout.elements)
    structures = any(structure.circulation != 0.0 for structure in layout.structures)
    islands = any(island.circulation != 0.0 for island in getattr(layout.shore, "islands", ()))
    return turning or structures or islands or layout.ambient.has_gradient

"""Rakes round outfalls, on which water is told by the flux that leaves."""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrivals.curves import Rake
from forebay.flow.arrivals.rakes import Face, PointMouth
from forebay.flow.arrivals.scene import Scene
from forebay.flow.model import FlowModel
from forebay.flow.surroundings import LineFaces
from forebay.flow.withdrawal.faces import arrival_speed, turning_places
from forebay.flow.withdrawal.mouths import mouth_of


@dataclass(frozen=True, slots=True)
class SidePart:
    """Part of one side of a line element; leaving: whether water leaves it; whole: all of the line's does."""

    side: float
    low: float
    high: float
    leaving: bool
    whole: bool


def outfall_rakes(scene: Scene, name: str) -> list[Rake]:
    """Rakes on which the weight is the outfall's own flux, of a source or a line source."""
    lines = scene.surroundings.lines
    if name not in lines.owners:
        return [mouth_rake(scene, name)]
    k = lines.owners.index(name)
    return [
        Face(scene.model, lines, k, part.side, part.low, part.high, own=part.whole)
        for part in side_parts(scene, k)
        if part.leaving
    ]


def mouth_rake(scene: Scene, name: str) -> PointMouth:
    """Rake round a point outfall."""
    sites = scene.surroundings.sites
    index = sites.named(name)
    return PointMouth(
        model=scene.model,
        mouth=mouth_of(scene.model, name, scene.surroundings),
        at=complex(sites.at[index]),
        strength=float(sites.strength[index]),
    )


def side_parts(scene: Scene, k: int) -> list[SidePart]:
    """Both sides of line element k, or the wet one, cut where the flow across either turns."""
    model, lines = scene.model, scene.surroundings.lines
    sides = _wet_sides(model, lines, k)
    turns = [turning_places(model, lines, k, side) for side in sides]
    edges = np.unique(np.concatenate([[0.0, 1.0], *turns]))
    parts = []
    for side in sides:
        middles = 0.5 * (edges[1:] + edges[:-1])
        speed = -arrival_speed(model, lines, k, side, middles)
        for low, high, leaving in zip(edges[:-1], edges[1:], speed, strict=True):
            whole = leaving > float(lines.flux[k]) > 0.0
            parts.append(SidePart(side, float(low), float(high), bool(leaving > 0.0), bool(whole)))
    return parts


def _wet_sides(model: FlowModel, lines: LineFaces, k: int) -> tuple[float, ...]:
    if lines.in_water[k]:
        return (1.0, -1.0)
    middle = lines.start[k] + (0.5 + 1e-3j) * (lines.end[k] - lines.start[k])
    return (1.0,) if bool(model.wet(np.array([middle]))[0]) else (-1.0,)

"""The boundary of a patch of water as rakes: its edge, the outfalls within and the sides of line elements.

Walls carry no flux and are left out. On every rake the weight is the flux that enters the patch.
"""

from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray
from forebay.flow.arrivals.curves import Arc, Part, Rake, Straight
from forebay.flow.arrivals.outfalls import mouth_rake, side_parts
from forebay.flow.arrivals.rakes import Edge, Face
from forebay.flow.arrivals.release import OverDisc, Patch
from forebay.flow.arrivals.scene import Scene
from forebay.flow.arrivals.wetting import wet_parts
from forebay.flow.layout import Doublet, Sink, Source

_QUARTERS = 4
"""Arcs of a circle: over each, chords pass nothing that the arc does not."""


def within(patch: Patch, z: ComplexArray) -> BoolArray:
    """Whether places lie in a patch, shape (n,)."""
    if isinstance(patch, OverDisc):
        return np.asarray(np.abs(z - patch.centre) < patch.radius)
    ring = np.array(patch.points)
    inside = np.zeros(z.shape, dtype=np.bool_)
    for a, b in zip(ring, np.roll(ring, -1), strict=True):
        spans = (a.imag > z.imag) != (b.imag > z.imag)
        with np.errstate(divide="ignore", invalid="ignore"):
            x = a.real + (z.imag - a.imag) * (b.real - a.real) / (b.imag - a.imag)
        inside ^= spans & (z.real < x)
    return inside


def boundary_of(scene: Scene, patch: Patch) -> list[tuple[Rake, list[Part]]]:
    """Rakes with the parts of them in the water."""
    rakes = _edges(scene, outline(patch))
    for singularity in scene.model.singularities:
        if not bool(within(patch, np.array([singularity.at]))[0]):
            continue
        element = next(e for e in scene.model.layout.elements if e.name == singularity.owner)
        if isinstance(element, Source):
            rakes.append((mouth_rake(scene, element.name), [(0.0, 1.0)]))
        if isinstance(element, Doublet):
            rakes += _about_doublet(scene, element)
    for k in range(scene.surroundings.lines.flux.size):
        rakes += [(face, [(0.0, 1.0)]) for face in _faces_within(scene, patch, k)]
    return rakes


def outline(patch: Patch) -> list[Straight | Arc]:
    """The edge of a patch, anticlockwise."""
    if isinstance(patch, OverDisc):
        turn = 2.0 * np.pi / _QUARTERS
        return [Arc(patch.centre, patch.radius, 0.2 + k * turn, turn) for k in range(_QUARTERS)]
    return [Straight(a, b) for a, b in pairwise((*patch.points, patch.points[0]))]


def intakes_within(scene: Scene, patch: Patch) -> set[str]:
    """Names of intakes that draw from inside a patch."""
    layout, lines = scene.model.layout, scene.surroundings.lines
    points = {e.name for e in layout.elements if isinstance(e, Sink) and within(patch, np.array([e.at]))[0]}
    return points | {lines.owners[k] for k in range(lines.flux.size) if _inside(scene, patch, k)}


def _about_doublet(scene: Scene, element: Doublet) -> list[tuple[Rake, list[Part]]]:
    """Circle about a doublet, clockwise: it bounds the water from within."""
    sites = scene.surroundings.sites
    radius = float(sites.radius[sites.named(element.name)])
    arcs = [Arc(element.at, radius, 0.2 - k * 0.5 * np.pi, -0.5 * np.pi) for k in range(_QUARTERS)]
    return _edges(scene, arcs)


def _edges(scene: Scene, curves: Sequence[Straight | Arc]) -> list[tuple[Rake, list[Part]]]:
    """Curves as rakes, with the parts of each in the water."""
    parts = wet_parts(scene.model, curves)
    return [(Edge(scene.model, curve), part) for curve, part in zip(curves, parts, strict=True)]


def _faces_within(scene: Scene, patch: Patch, k: int) -> list[Face]:
    """Sides of line element k inside a patch; none if all water that meets it stays in it."""
    sides = [part for part in side_parts(scene, k) if part.leaving or scene.surroundings.lines.flux[k] > 0.0]
    if not any(part.leaving for part in sides):
        return []
    faces = []
    for part in side_parts(scene, k):
        for low, high in _inside(scene, patch, k):
            a, b = max(low, part.low), min(high, part.high)
            if b > a:
                faces.append(Face(scene.model, scene.surroundings.lines, k, part.side, a, b, own=False))
    return faces


def _inside(scene: Scene, patch: Patch, k: int) -> list[Part]:
    """Parts of line element k inside a patch."""
    lines = scene.surroundings.lines
    span = Straight(complex(lines.start[k]), complex(lines.end[k]))
    cuts = np.unique(np.concatenate([[0.0, 1.0], *(_meeting(span, curve) for curve in outline(patch))]))
    middles = span.place(0.5 * (cuts[1:] + cuts[:-1]))
    inside = within(patch, middles)
    return [(float(a), float(b)) for a, b, is_in in zip(cuts[:-1], cuts[1:], inside, strict=True) if is_in]


def _meeting(span: Straight, curve: Straight | Arc) -> np.ndarray:
    """Parts of a span at which it meets a curve, or the whole circle of an arc."""
    run = span.end - span.start
    if isinstance(curve, Arc):
        a = (span.start - curve.centre) / run
        root = (curve.radius / abs(run)) ** 2 - a.imag**2
        parts = np.array([-a.real - root**0.5, -a.real + root**0.5]) if root > 0.0 else np.empty(0)
    else:
        p, q = (curve.start - span.start) / run, (curve.end - span.start) / run
        parts = np.array(
            [p.real + (q.real - p.real) * p.imag / (p.imag - q.imag)] if p.imag * q.imag < 0 else []
        )
    return parts[(parts > 0.0) & (parts < 1.0)]

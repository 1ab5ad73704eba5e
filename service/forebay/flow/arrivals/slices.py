"""A patch cut into parallel slices: how much of it is water, and what becomes of the water on each.

The quadrature across the slices is Gauss's rule on panels that are halved until the parts no longer change.
"""

from collections import defaultdict
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.arrivals.curves import Straight
from forebay.flow.arrivals.cuts import cuts_on
from forebay.flow.arrivals.fates import INTAKE, Follower
from forebay.flow.arrivals.release import OverDisc, Patch
from forebay.flow.arrivals.result import Outcome
from forebay.flow.arrivals.sectors import Division, Piece, divided, pieces_between
from forebay.flow.arrivals.wetting import Amount, wet_parts
from forebay.flow.model import FlowModel

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(6)
_OBLIQUE = np.exp(0.8j)
"""Direction of the slices from that of the flow: along neither streamlines nor lines of equal arrival."""
_PROBES = np.array([-4.0, 0.37, 4.5])
"""Places x at which the water of a slice between two divides is probed."""
_FINEST = 1e-7
"""Part of a slice to which a divide is searched for [-]."""

End = tuple[Outcome, str]
Parts = dict[End, float]


@dataclass(frozen=True, slots=True)
class Slice:
    """Chords of a patch on one line, and the width that the line stands for [m]."""

    chords: tuple[Straight, ...]
    width: float


def wet_area(model: FlowModel, patch: Patch, tolerance: float) -> Amount:
    """Area of the water in a patch, wanted to `tolerance` [m2]."""
    centre, radius = _circle_about(patch)
    clear = float(np.abs(model.distance_to_wall(np.array([centre])))[0]) >= radius
    if clear and bool(model.wet(np.array([centre]))[0]):
        return Amount(patch.area, 0.0)

    def measured(panels: int) -> Parts:
        chords = _chords_of(_slices(patch, _axis(model, patch), panels))
        wet = wet_parts(model, list(chords))
        lengths = [
            chord.length * width * (b - a)
            for (chord, width), parts in zip(chords.items(), wet, strict=True)
            for a, b in parts
        ]
        return {(Outcome.PASSES, ""): sum(lengths)}

    parts, error = _converged(measured, (4, 256), tolerance)
    return Amount(sum(parts.values()), error)


def ends_over(follower: Follower, patch: Patch, tolerance: float, most_panels: int) -> tuple[Parts, float]:
    """Area of a patch by outcome and destination, and the estimated error of each [m2].

    tolerance : area to which it is wanted [m2]
    """
    scene = follower.scene

    def measured(panels: int) -> Parts:
        chords = _chords_of(_slices(patch, _axis(scene.model, patch), panels))
        wet = wet_parts(scene.model, list(chords))
        pieces = [
            piece
            for chord, parts in zip(chords, wet, strict=True)
            for piece in pieces_between(chord, parts, cuts_on(scene, chord))
        ]
        return _ends_of(divided(follower, pieces, _PROBES, _FINEST), chords)

    return _converged(measured, (2, most_panels), tolerance)


def _chords_of(slices: list[Slice]) -> dict[Straight, float]:
    """All chords with the width that each stands for [m]."""
    return {chord: part.width for part in slices for chord in part.chords}


def _ends_of(division: Division, widths: dict[Straight, float]) -> Parts:
    """Area by outcome and destination [m2]."""
    parts: Parts = defaultdict(float)
    for sector in division.sectors:
        area, signature = _area(sector.piece, widths), sector.signature
        for j, (kind, name) in enumerate(signature.targets):
            if kind == INTAKE:
                parts[Outcome.CAPTURED, name] += area * float(sector.shares[j].mean())
        if signature.outcome is not Outcome.CAPTURED:
            parts[signature.outcome, signature.to] += area * float(sector.left.mean())
    for piece in division.mixed:
        parts[Outcome.UNRESOLVED, ""] += _area(piece, widths)
    return dict(parts)


def _area(piece: Piece, widths: dict[Straight, float]) -> float:
    chord = piece.rake
    if not isinstance(chord, Straight):
        raise TypeError(type(chord).__name__)
    return piece.width * chord.length * widths[chord]


def _converged(
    measured: Callable[[int], Parts], panels: tuple[int, int], tolerance: float
) -> tuple[Parts, float]:
    """Parts with twice the panels until their error, twice the last change, is below `tolerance`; and that.

    Where slices begin to meet a wall or a divide the change shrinks unevenly, hence the factor.
    """
    count, most = panels
    before = measured(count)
    while True:
        count *= 2
        now = measured(count)
        changes = (abs(now.get(end, 0.0) - before.get(end, 0.0)) for end in now | before)
        change = 2.0 * max(changes, default=0.0)
        if change <= tolerance or count >= most:
            return now, change
        before = now


def _axis(model: FlowModel, patch: Patch) -> complex:
    """Direction of the slices."""
    velocity = complex(np.conj(model.velocity(np.array([_circle_about(patch)[0]])))[0])
    heading = velocity / abs(velocity) if np.isfinite(velocity) and velocity != 0.0 else 1.0
    return complex(heading * _OBLIQUE)


def _circle_about(patch: Patch) -> tuple[complex, float]:
    """Centre and radius of a circle that holds a patch [m]."""
    if isinstance(patch, OverDisc):
        return patch.centre, patch.radius
    ring = np.array(patch.points)
    centre = complex(0.5 * (ring.real.min() + ring.real.max()), 0.5 * (ring.imag.min() + ring.imag.max()))
    return centre, float(np.abs(ring - centre).max())


def _slices(patch: Patch, axis: complex, panels: int) -> list[Slice]:
    """Slices along `axis`, six on each of equal panels across it."""
    steps = (np.arange(panels)[:, None] + 0.5 * (_NODES + 1.0)) / panels
    parts, weights = steps.ravel(), np.tile(0.5 * _WEIGHTS / panels, panels)
    if isinstance(patch, OverDisc):
        return _disc_slices(patch, axis, parts, weights)
    turned = np.array(patch.points) / axis
    low, high = float(turned.imag.min()), float(turned.imag.max())
    return [
        Slice(_chords(turned, low + (high - low) * float(part), axis), (high - low) * float(weight))
        for part, weight in zip(parts, weights, strict=True)
    ]


def _disc_slices(disc: OverDisc, axis: complex, parts: FloatArray, weights: FloatArray) -> list[Slice]:
    """Slices at equal steps of the angle, in which the length of a chord is smooth."""
    slices = []
    for part, weight in zip(parts, weights, strict=True):
        angle = np.pi * (part - 0.5)
        half, height = disc.radius * np.cos(angle), disc.radius * np.sin(angle)
        ends = (disc.centre + axis * complex(x, height) for x in (-half, half))
        slices.append(Slice((Straight(*ends),), float(np.pi * weight * half)))
    return slices


def _chords(ring: ComplexArray, height: float, axis: complex) -> tuple[Straight, ...]:
    """Chords of a turned polygon at one height, turned back."""
    following = np.roll(ring, -1)
    crossed = (ring.imag < height) != (following.imag < height)
    a, b = ring[crossed], following[crossed]
    x = np.sort(a.real + (height - a.imag) / (b.imag - a.imag) * (b.real - a.real))
    return tuple(
        Straight(axis * complex(p, height), axis * complex(q, height))
        for p, q in zip(x[::2], x[1::2], strict=True)
        if q > p
    )

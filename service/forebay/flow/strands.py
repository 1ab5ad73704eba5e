"""A path as arrays of short pieces, each of which its chord can stand in for.

Between a piece and its chord there is nothing singular, so that the analytic part of the flow has the same
integral along both. What is rotational, or crosses a line element, differs in closed form (see `contour`).
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray, IntArray
from forebay.flow.paths import Arc, Piece, Straight

_COARSE = 0.25 * np.pi
"""Largest angle of an arc for one chord [rad]: it meets a line or circle twice at most."""

_DEPTH = 60
"""Bisections before an arc passes so close to a place that the chord cannot be told from it."""

_MARGIN = 0.1
"""Share of an arc's height over its chord by which a place must clear the chord too [-]."""


@dataclass(frozen=True, slots=True)
class Strand:
    """Pieces of a path, shape (k,) each; turn 0 marks a straight one, whose centre means nothing.

    start, end, centre : x + iy [m];  turn : swept angle, at most 45 degrees either way [rad]
    """

    start: ComplexArray
    end: ComplexArray
    centre: ComplexArray
    turn: FloatArray

    def at(self, share: FloatArray) -> ComplexArray:
        """Places after shares of the pieces, shape (k,) or (k, j) [m]."""
        start, end, centre, turn = (_like(value, share) for value in self._columns())
        straight = start + share * (end - start)
        curved = centre + (start - centre) * np.exp(1j * turn * share)
        return np.asarray(np.where(turn == 0.0, straight, curved), dtype=np.complex128)

    def rate(self, share: FloatArray) -> ComplexArray:
        """Derivative of `at` by the share, same shape [m]."""
        start, end, centre, turn = (_like(value, share) for value in self._columns())
        curved = 1j * turn * (self.at(share) - centre)
        return np.asarray(np.where(turn == 0.0, end - start, curved), dtype=np.complex128)

    def _columns(self) -> tuple[ComplexArray, ComplexArray, ComplexArray, FloatArray]:
        return self.start, self.end, self.centre, self.turn

    def taken(self, index: IntArray) -> "Strand":
        """The pieces with these indices, repeated as they are."""
        return Strand(self.start[index], self.end[index], self.centre[index], self.turn[index])

    def nearest_share(self, place: complex) -> FloatArray:
        """Share of each piece at which it is nearest to a place, shape (k,), 0 to 1."""
        run = self.end - self.start
        length = np.abs(run) ** 2
        straight = ((place - self.start) * np.conj(run)).real / np.where(length > 0.0, length, 1.0)
        turn = self._safe_turn
        middle = (self.start - self.centre) * np.exp(0.5j * turn)
        curved = 0.5 + np.angle((place - self.centre) * np.conj(middle)) / turn
        return np.clip(np.where(self.turn == 0.0, straight, curved), 0.0, 1.0)

    @property
    def _safe_turn(self) -> FloatArray:
        return np.where(self.turn == 0.0, 1.0, self.turn)

    def line_crossings(self, start: complex, direction: complex) -> FloatArray:
        """Shares at which the pieces meet the line through `start`, shape (k, 2), nan for none."""
        unit = np.conj(direction) / abs(direction)
        low, high = ((self.start - start) * unit).imag, ((self.end - start) * unit).imag
        rise = np.where(high == low, np.nan, high - low)
        straight = np.stack([-low / rise, np.full(rise.shape, np.nan)], axis=1)
        arm = (self.start - self.centre) * unit
        height = ((start - self.centre) * unit).imag / np.where(arm == 0.0, 1.0, np.abs(arm))
        with np.errstate(invalid="ignore"):
            rise = np.arcsin(height)
        curved = self._shares_of(np.stack([rise, np.pi - rise], axis=1) - np.angle(arm)[:, None])
        return self._inside(straight, curved)

    def circle_crossings(self, centre: complex, radius: float) -> FloatArray:
        """Shares at which the pieces meet a circle, shape (k, 2), nan for none or along the circle."""
        run, away = self.end - self.start, self.start - centre
        square, half = np.abs(run) ** 2, (away * np.conj(run)).real
        apart, arm = self.centre - centre, self.start - self.centre
        with np.errstate(invalid="ignore", divide="ignore"):
            root = np.sqrt(half**2 - square * (np.abs(away) ** 2 - radius**2))
            straight = np.stack([(-half - root) / square, (-half + root) / square], axis=1)
            excess = radius**2 - np.abs(apart) ** 2 - np.abs(arm) ** 2
            spread = np.arccos(excess / (2.0 * np.abs(apart) * np.abs(arm)))
        middle = np.angle(np.where(apart == 0.0, 1.0, apart) * np.conj(arm))
        curved = self._shares_of(np.stack([middle - spread, middle + spread], axis=1))
        return self._inside(straight, curved)

    def _shares_of(self, angles: FloatArray) -> FloatArray:
        """Shares of arcs at angles from their starts, the turn chosen so as to fall on the arc."""
        half = 0.5 * self._safe_turn[:, None]
        wrapped = np.angle(np.exp(1j * (angles - half)))
        return np.asarray(0.5 + 0.5 * wrapped / half, dtype=np.float64)

    def _inside(self, straight: FloatArray, curved: FloatArray) -> FloatArray:
        shares = np.where(self.turn[:, None] == 0.0, straight, curved)
        with np.errstate(invalid="ignore"):
            return np.where((shares > 0.0) & (shares < 1.0), shares, np.nan)


def _like(column: np.ndarray, share: FloatArray) -> np.ndarray:
    """A column in the shape of the shares."""
    return column if np.ndim(share) == 1 else column[:, None]


def chords_between(start: ComplexArray, end: ComplexArray) -> Strand:
    """Straight pieces, shape (k,)."""
    return Strand(start, end, start, np.zeros(start.shape))


def strand_of(pieces: tuple[Piece, ...], obstacles: ComplexArray) -> Strand:
    """The pieces of a path, arcs cut until no obstacle, shape (p,), is between them and their chords."""
    short = [part for piece in pieces for part in _cut(piece, obstacles)]
    arcs = [part if isinstance(part, Arc) else None for part in short]
    return Strand(
        np.array([part.start for part in short]),
        np.array([part.end for part in short]),
        np.array([part.start if arc is None else arc.centre for part, arc in zip(short, arcs, strict=True)]),
        np.array([0.0 if arc is None else arc.turn for arc in arcs]),
    )


def _cut(piece: Piece, obstacles: ComplexArray) -> list[Piece]:
    if isinstance(piece, Straight):
        return [piece]
    count = max(1, int(np.ceil(abs(piece.turn) / _COARSE)))
    waiting = [(piece.part(k / count, (k + 1) / count), 0) for k in reversed(range(count))]
    done: list[Piece] = []
    while waiting:
        arc, depth = waiting.pop()
        if depth < _DEPTH and _has_between(arc, obstacles):
            waiting += [(arc.part(0.5, 1.0), depth + 1), (arc.part(0.0, 0.5), depth + 1)]
        else:
            done.append(arc)
    return done


def _has_between(arc: Arc, places: ComplexArray) -> bool:
    """Whether a place lies between the arc and its chord, or just behind the chord."""
    outward = complex(np.exp(-0.5j * (arc.begin + arc.to)))
    floor = arc.radius * (1.0 - (1.0 + _MARGIN) * (1.0 - np.cos(0.5 * arc.turn)))
    local = (places - arc.centre) * outward
    return bool(np.any((np.abs(local) < arc.radius) & (local.real > floor)))

"""Sectors of rakes between dividing streamlines: one fate each, and smooth travel times within.

A place within a sector is named by x, s = low + (high - low) / (1 + exp(-x)). Towards a dividing streamline
travel times grow as the logarithm of the distance, which is a straight line in x; towards any other end they
are constant in it. Cubic splines in x of a few nodes are therefore accurate up to both ends.
"""

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from scipy.special import expit

from forebay.flow.arrays import FloatArray
from forebay.flow.arrivals.curves import Rake
from forebay.flow.arrivals.fates import Fate, Follower, Signature
from forebay.flow.arrivals.result import Outcome

PROBES: FloatArray = np.array([-5.0, -1.3, 0.37, 1.9, 5.5])
"""Places x at which a sector is probed."""
_WAYS = 8
"""Parts into which a span with a divide in it is cut at each round."""
_ROUNDS = 4
_LEAST = 1e-12
"""Width of a sector in s below which it holds no water [-]."""


@dataclass(frozen=True, slots=True)
class Piece:
    """Part of a rake, low < high."""

    rake: Rake
    low: float
    high: float

    @property
    def width(self) -> float:
        """In s [-]."""
        return self.high - self.low

    def parts(self, x: FloatArray) -> FloatArray:
        """s at places x."""
        return np.asarray(self.low + self.width * expit(x))


@dataclass(frozen=True, slots=True)
class Sector:
    """A piece of one fate, with the fates of its nodes x, ascending."""

    piece: Piece
    x: FloatArray
    fates: tuple[Fate, ...]

    @property
    def signature(self) -> Signature:
        """Common to all nodes."""
        return self.fates[0].signature

    @property
    def times(self) -> FloatArray:
        """Shape (targets, nodes) [s]."""
        return np.array([fate.times for fate in self.fates]).T

    @property
    def shares(self) -> FloatArray:
        """Shape (targets, nodes) [-]."""
        return np.array([fate.shares for fate in self.fates]).T

    @property
    def left(self) -> FloatArray:
        """Shape (nodes,) [-]."""
        return np.array([fate.left for fate in self.fates])


@dataclass(frozen=True, slots=True)
class Division:
    """Sectors found, pieces in which fates stayed mixed, and whether divides had to be searched for."""

    sectors: tuple[Sector, ...]
    mixed: tuple[Piece, ...]
    bisected: bool


def pieces_between(rake: Rake, parts: list[tuple[float, float]], cuts: FloatArray) -> list[Piece]:
    """Pieces of a rake's wet parts between its cuts."""
    pieces = []
    for low, high in parts:
        edges = [low, *(float(cut) for cut in cuts if low < cut < high), high]
        pieces += [Piece(rake, a, b) for a, b in pairwise(edges) if b - a > _LEAST]
    return pieces


def divided(follower: Follower, pieces: list[Piece], x: FloatArray, finest: float) -> Division:
    """Sectors of pieces with their nodes at x, cut further wherever the fates of neighbouring nodes differ.

    finest : width in s at which the search for a divide ends [-]
    """
    sectors: list[Sector] = []
    pending, bisected = pieces, False
    for _ in range(_ROUNDS):
        if not pending:
            break
        fates = fates_at(follower, pending, x)
        mixed = [
            (piece, row)
            for piece, row in zip(pending, fates, strict=True)
            if len({f.signature for f in row}) > 1
        ]
        sectors += [
            Sector(piece, x, tuple(row))
            for piece, row in zip(pending, fates, strict=True)
            if len({f.signature for f in row}) == 1
        ]
        bisected = bisected or bool(mixed)
        pending = _cut(follower, mixed, x, finest)
    return Division(tuple(sectors), tuple(pending), bisected)


def fates_at(follower: Follower, pieces: list[Piece], x: FloatArray) -> list[list[Fate]]:
    """Fates at places x of every piece."""
    places = [piece.rake.place(piece.parts(x)) for piece in pieces]
    delays = [piece.rake.delay(z) for piece, z in zip(pieces, places, strict=True)]
    if not places:
        return []
    fates = follower.fates(np.concatenate(places), np.concatenate(delays))
    return [fates[k * x.size : (k + 1) * x.size] for k in range(len(pieces))]


@dataclass(frozen=True, slots=True)
class _Span:
    """Part of a piece at whose ends fates differ; `signature` is that of its lower end."""

    piece: Piece
    low: float
    high: float
    signature: Signature


def _cut(
    follower: Follower, mixed: list[tuple[Piece, list[Fate]]], x: FloatArray, finest: float
) -> list[Piece]:
    """Pieces of the mixed ones, cut where fates change."""
    spans = []
    for piece, row in mixed:
        s = piece.parts(x)
        spans += [
            _Span(piece, float(s[k]), float(s[k + 1]), row[k].signature)
            for k in range(x.size - 1)
            if row[k].signature != row[k + 1].signature
        ]
    while any(span.high - span.low > finest for span in spans):
        spans = _narrowed(follower, spans)
    pieces: list[Piece] = []
    for piece, _ in mixed:
        cuts = sorted(0.5 * (span.low + span.high) for span in spans if span.piece is piece)
        edges = [piece.low, *cuts, piece.high]
        pieces += [Piece(piece.rake, a, b) for a, b in pairwise(edges) if b - a > finest]
    return pieces


def _narrowed(follower: Follower, spans: list[_Span]) -> list[_Span]:
    """The same spans, each with the first of its parts at whose ends fates differ."""
    inner = np.linspace(0.0, 1.0, _WAYS + 1)[1:-1]
    s = [span.low + (span.high - span.low) * inner for span in spans]
    places = [span.piece.rake.place(part) for span, part in zip(spans, s, strict=True)]
    delays = [span.piece.rake.delay(z) for span, z in zip(spans, places, strict=True)]
    fates = follower.fates(np.concatenate(places), np.concatenate(delays))
    narrowed = []
    for k, span in enumerate(spans):
        row = fates[k * inner.size : (k + 1) * inner.size]
        edges = [span.low, *(float(part) for part in s[k]), span.high]
        first = next((j for j, fate in enumerate(row) if fate.signature != span.signature), inner.size)
        narrowed.append(replace(span, low=edges[first], high=edges[first + 1]))
    return narrowed


def refined(follower: Follower, sectors: list[Sector]) -> list[Sector]:
    """Sectors with a node between every two; nodes of another fate than the sector's are left out."""
    middles = [0.5 * (sector.x[1:] + sector.x[:-1]) for sector in sectors]
    places = [s.piece.rake.place(s.piece.parts(x)) for s, x in zip(sectors, middles, strict=True)]
    delays = [s.piece.rake.delay(z) for s, z in zip(sectors, places, strict=True)]
    fates = follower.fates(np.concatenate(places), np.concatenate(delays)) if places else []
    done, start = [], 0
    for sector, x in zip(sectors, middles, strict=True):
        row = fates[start : start + x.size]
        start += x.size
        kept = [k for k in range(x.size) if row[k].signature == sector.signature]
        nodes = np.concatenate([sector.x, x[kept]])
        order = np.argsort(nodes)
        every = [*sector.fates, *(row[k] for k in kept)]
        done.append(Sector(sector.piece, nodes[order], tuple(every[k] for k in order)))
    return done


UNRESOLVED = Signature(Outcome.UNRESOLVED, "", (), ())
"""Signature of water whose fate stayed mixed."""

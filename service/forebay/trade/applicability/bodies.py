"""Bodies that stand in the stream: piers, outlines, islands, and outlines that are part of surveyed land."""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import Path
from forebay.flow.layout import Layout, Outline, Pier, Surveyed
from forebay.flow.sheets.clip import cut_at_banks
from forebay.flow.shores import frame_of

ALL_ROUND = np.exp(1j * np.pi * np.arange(180) / 180.0)
"""Directions in which a body is measured where the stream is not known, a degree apart."""


@dataclass(frozen=True, eq=False)
class Body:
    """A solid that water flows past.

    path : steps to it in the layout, none to one that became part of land;  noun : what it is
    middle : x + iy [m];  points : vertices in the water, shape (n,) [m];  radius : of a pier [m], else 0
    stands_free : whether water passes on both sides of it
    """

    path: Path
    noun: str
    name: str
    middle: complex
    points: ComplexArray
    radius: float
    stands_free: bool

    def breadth(self, stream: complex) -> float:
        """Extent across a stream in the direction of a vector [m].

        Without a stream the largest that it has across any direction, to 4e-5 of it.
        """
        if self.radius > 0.0:
            return 2.0 * self.radius
        if stream == 0.0:
            return max(float(np.ptp((self.points * turn).imag)) for turn in ALL_ROUND)
        return float(np.ptp((self.points * (stream / abs(stream)).conjugate()).imag))

    @property
    def called(self) -> str:
        """Noun and name."""
        return f"{self.noun} {self.name!r}"


def bodies_of(layout: Layout, merged: tuple[Outline, ...] = ()) -> Iterator[Body]:
    """Every body of a layout; merged : outlines that have become part of its surveyed land.

    An outline counts with what of it stands in front of the banks; one of which nothing does is none.
    """
    for index, structure in enumerate(layout.structures):
        path: Path = ("structures", index)
        if isinstance(structure, Pier):
            at, radius = structure.at, structure.radius
            yield Body(path, "pier", structure.name, at, np.array([at]), radius, stands_free=True)
        else:
            points, stands_free = _in_the_water(structure, layout)
            if points.size:
                yield _solid(path, "outline", structure.name, points, stands_free=stands_free)
    for outline in merged:
        yield _solid((), "outline", outline.name, np.array(outline.points), stands_free=False)
    for index, island in enumerate(layout.shore.islands if isinstance(layout.shore, Surveyed) else ()):
        path = ("shore", "islands", index)
        yield _solid(path, "island", island.name, np.array(island.points), stands_free=True)


def _solid(path: Path, noun: str, name: str, points: ComplexArray, *, stands_free: bool) -> Body:
    return Body(path, noun, name, complex(np.mean(points)), points, 0.0, stands_free=stands_free)


def _in_the_water(outline: Outline, layout: Layout) -> tuple[ComplexArray, bool]:
    """Vertices of an outline in front of the banks, shape (n,) [m], and whether it touches none."""
    points = np.array(outline.points, dtype=np.complex128)
    size = float(np.max(np.abs(points - points[0])))
    cut = cut_at_banks(points, frame_of(layout.shore, complex(np.mean(points)), size))
    return np.concatenate([np.empty(0, dtype=np.complex128), *cut.runs]), cut.closed

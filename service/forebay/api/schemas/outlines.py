"""Outlines as a client writes them: solids of any shape, and thin walls."""

from typing import Annotated, Literal, Self

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Name, Strict
from forebay.api.schemas.quantities import Position, PositiveMetres, SquareMetresPerSecond
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.flow.arrays import ComplexArray
from forebay.flow.errors import Path
from forebay.trade.survey.outlines import outline_points, wall_points
from forebay.trade.survey.rings import Change

MAX_VERTICES = 1000
"""Vertices of one outline, or of the middle line of one wall."""

Polyline = Annotated[list[Position], Field(min_length=2, max_length=MAX_VERTICES, fail_fast=True)]
Polygon = Annotated[list[Position], Field(min_length=3, max_length=MAX_VERTICES, fail_fast=True)]


class Outline(Strict):
    """Solid of any shape: groyne, jetty, quay, island. Exactly one of `points`, `line` with `thickness`."""

    model_config = {"json_schema_extra": describe_ways(("points",), ("line", "thickness"))}

    kind: Literal["outline"]
    name: Name
    points: Annotated[
        Polygon | None,
        Field(
            description="Vertices in either sense; what lies on or behind a bank is cut off",
            examples=[[[200.0, 0.0], [200.0, 12.0], [203.0, 12.0], [203.0, 0.0]]],
        ),
    ] = None
    line: Annotated[
        Polyline | None,
        Field(description="Middle line of a thin wall", examples=[[[200.0, 0.0], [200.0, 12.0]]]),
    ] = None
    thickness: Annotated[
        PositiveMetres | None,
        Field(description="Of the thin wall; its ends are square, its corners mitred", examples=[0.6]),
    ] = None
    circulation: Annotated[
        SquareMetresPerSecond,
        Field(
            description="Round an outline that stands free, anticlockwise positive; 0 if attached to a bank",
            examples=[0.0],
        ),
    ] = 0.0

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if (self.line is None) != (self.thickness is None):
            raise PydanticCustomError("one_way", "`line` and `thickness` go together")
        if (self.points is None) == (self.line is None):
            raise PydanticCustomError("one_way", "Exactly one of points, line with thickness")
        return self

    @property
    def size(self) -> int:
        """Number of vertices: a wall has two for each of its line."""
        return len(self.points or ()) + 2 * len(self.line or ())

    def traced(self, units: UnitSystem, path: Path) -> tuple[ComplexArray, tuple[Change, ...]]:
        """Vertices [m], anticlockwise, and what was mended; `path` is that of the structure.

        Raises RingError.
        """
        given = np.array([units.position(pair) for pair in self.points or self.line or ()])
        if self.thickness is None:
            return outline_points(given, (*path, "points"))
        return wall_points(given, units.read(self.thickness, "m"), (*path, "line")), ()

    def to_flow(self, units: UnitSystem, path: Path) -> flow.Outline:
        """Outline in SI."""
        points, _ = self.traced(units, path)
        return flow.Outline(self.name, tuple(points.tolist()), units.read(self.circulation, "m2/s"))

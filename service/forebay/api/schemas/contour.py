"""Request and answer of contour/integrate."""

import math
from typing import Annotated, Self

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.names import refuse_repeated
from forebay.api.schemas.common import Answer, Name, Strict
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import (
    AreaValue,
    CountValue,
    Degrees,
    DischargeValue,
    FluxValue,
    LengthValue,
    Position,
    PositiveMetres,
)
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.flow.contour import ContourStatus
from forebay.flow.errors import FlowError
from forebay.flow.paths import Arc, BrokenPathError, Piece, Straight
from forebay.flow.paths import Contour as FlowContour

MAX_CONTOURS = 1000
"""Contours of one request."""

MAX_SEGMENTS = 100_000
"""Vertices of a polyline, or segments of a path."""


class EmptyContourError(FlowError):
    """A contour has no length: it is a point, along which nothing can be integrated."""

    code = "contour-without-length"
    title = "A contour has no length"


class Circle(Strict):
    """Full circle, anticlockwise."""

    centre: Annotated[Position, Field(description="Centre")]
    radius: Annotated[PositiveMetres, Field(description="Radius")]


class LineSegment(Strict):
    """Straight segment."""

    start: Annotated[Position, Field(alias="from", description="Where it begins", examples=[[0.0, 10.0]])]
    end: Annotated[Position, Field(alias="to", description="Where it ends", examples=[[30.0, 10.0]])]


class ArcSegment(Strict):
    """Arc of a circle, anticlockwise if `to_deg` exceeds `from_deg`."""

    centre: Annotated[Position, Field(description="Centre")]
    radius: Annotated[PositiveMetres, Field(description="Radius")]
    from_deg: Annotated[Degrees, Field(description="Direction from the centre at the start", examples=[0.0])]
    to_deg: Annotated[Degrees, Field(description="Direction from the centre at the end")]

    def to_flow(self, units: UnitSystem) -> Arc:
        """Arc in SI."""
        angles = math.radians(self.from_deg), math.radians(self.to_deg)
        return Arc(units.position(self.centre), units.read(self.radius, "m"), *angles)


class Segment(Strict):
    """Exactly one of `line`, `arc`."""

    model_config = {"json_schema_extra": describe_ways(("line",), ("arc",))}

    line: Annotated[LineSegment | None, Field(description="Straight segment")] = None
    arc: Annotated[ArcSegment | None, Field(description="Arc of a circle")] = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if (self.line is None) == (self.arc is None):
            raise PydanticCustomError("one_way", "Exactly one of line, arc")
        return self

    def to_flow(self, units: UnitSystem) -> Piece:
        """Piece in SI."""
        if self.arc is not None:
            return self.arc.to_flow(units)
        if self.line is None:
            raise TypeError("a segment without line and arc passed its validation")
        return Straight(units.position(self.line.start), units.position(self.line.end))


class Contour(Strict):
    """Exactly one of `polyline`, `circle`, `path`."""

    model_config = {
        "json_schema_extra": describe_ways(("polyline",), ("circle",), ("path",), only={"closed": "polyline"})
    }

    name: Name
    polyline: Annotated[
        Annotated[list[Position], Field(min_length=2, max_length=MAX_SEGMENTS, fail_fast=True)] | None,
        Field(description="Vertices", examples=[[[60.0, 0.0], [60.0, 110.0]]]),
    ] = None
    closed: Annotated[bool, Field(strict=True, description="Whether a polyline returns to its start")] = False
    circle: Annotated[Circle | None, Field(description="Full circle, anticlockwise")] = None
    path: Annotated[
        Annotated[list[Segment], Field(min_length=1, max_length=MAX_SEGMENTS, fail_fast=True)] | None,
        Field(description="Lines and arcs one after the other; closed if it ends where it began"),
    ] = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if sum(way is not None for way in (self.polyline, self.circle, self.path)) != 1:
            raise PydanticCustomError("one_way", "Exactly one of polyline, circle, path")
        if self.closed and self.polyline is None:
            raise PydanticCustomError("closed_polyline", "`closed` belongs to a polyline")
        return self

    @property
    def size(self) -> int:
        """Number of segments."""
        return len(self.polyline or self.path or ()) or 1

    def to_flow(self, units: UnitSystem) -> FlowContour:
        """Contour in SI.

        Raises BrokenPathError, whose path is that of the piece at fault, or empty if there is no length.
        """
        if self.polyline is not None:
            points = np.array([units.position(pair) for pair in self.polyline])
            return FlowContour.polyline(self.name, points, closed=self.closed)
        if self.circle is not None:
            centre, radius = units.position(self.circle.centre), units.read(self.circle.radius, "m")
            return FlowContour.circle(self.name, centre, radius)
        return FlowContour(self.name, tuple(piece.to_flow(units) for piece in self.path or ()))


Contours = Annotated[list[Contour], Field(max_length=MAX_CONTOURS, description="Contours")]


def flow_contours(contours: list[Contour], units: UnitSystem, field: str) -> tuple[FlowContour, ...]:
    """Contours in SI; an error names its place below the request's `field`."""
    refuse_repeated(contours, field)
    converted = []
    for index, contour in enumerate(contours):
        try:
            converted.append(contour.to_flow(units))
        except BrokenPathError as error:
            if not error.path:
                raise EmptyContourError("all its points are one", (field, index)) from None
            error.path = (field, index, "path", *error.path)
            raise
    return tuple(converted)


class ContourRequest(LayoutRequest):
    """Circulation and flux along contours."""

    contours: Annotated[Contours, Field(min_length=1)]


class ElementShare(Answer):
    """What one element adds, images included."""

    element: Annotated[str, Field(examples=["town intake"])]
    circulation: FluxValue
    flux: FluxValue


class Enclosed(Answer):
    """How often a closed contour turns round an element."""

    element: Annotated[str, Field(examples=["town intake"])]
    turns: Annotated[CountValue, Field(description="Anticlockwise positive", examples=[1])]


class Quadrature(Answer):
    """Independent numerical integral of the velocity."""

    circulation: FluxValue
    flux: FluxValue
    error_estimate: FluxValue


class ContourValue(Answer):
    """Integrals along one contour; flux is positive towards the right of the direction of travel."""

    name: str
    closed: bool
    length: LengthValue
    enclosed_area: Annotated[AreaValue, Field(description="Signed, anticlockwise positive; null if open")]
    circulation: FluxValue
    flux: Annotated[FluxValue, Field(description="Per unit depth")]
    discharge: Annotated[DischargeValue, Field(description="Flux times depth")]
    by_element: list[ElementShare]
    enclosed: list[Enclosed]
    quadrature: Quadrature | None
    status: Annotated[ContourStatus, Field(description="Whether there are values")]
    through: Annotated[str | None, Field(description="Point element that the contour meets")]


class ContourResult(Answer):
    """Integrals along every contour, in order."""

    contours: list[ContourValue]

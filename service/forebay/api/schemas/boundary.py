"""What an answer says of walls that were solved for, and of the geometry they came from."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer
from forebay.api.schemas.quantities import (
    AreaValue,
    CountValue,
    DischargeValue,
    FluxValue,
    LengthValue,
    RatioValue,
)
from forebay.trade.survey.rings import ChangeKind


class WorstValue(Answer):
    """Where the walls are met least well."""

    ring: Annotated[str, Field(description="Wall, island or outline", examples=["island 1"])]
    x: LengthValue
    y: LengthValue


class IslandBound(Answer):
    """Error of the flow between the banks and one island or free outline."""

    name: Annotated[str, Field(examples=["island 1"])]
    stream_function_bound: FluxValue


class SolvedValue(Answer):
    """Errors of the solution along the walls; the flux between two points is twice as uncertain."""

    stream_function_bound: Annotated[
        FluxValue, Field(description="The stream function is nowhere in the water further off")
    ]
    relative_bound: Annotated[RatioValue, Field(description="The same over `through_flux`", examples=[4e-4])]
    through_flux: Annotated[
        FluxValue, Field(description="Flow through surveyed water; else current times size, and discharges")
    ]
    tolerance: Annotated[RatioValue, Field(description="Asked for", examples=[1e-4])]
    unknowns: Annotated[CountValue, Field(examples=[3927])]
    worst: WorstValue
    island_bounds: list[IslandBound]


class OpeningValue(Answer):
    """An open edge as found on the ring."""

    name: Annotated[str, Field(examples=["upstream"])]
    length: LengthValue
    discharge: Annotated[DischargeValue, Field(description="Into the water; null if not solved for")]


class SurveyValue(Answer):
    """Surveyed water as it was used."""

    grid: Annotated[
        str | None,
        Field(
            description="Grid of x, y: an EPSG code or a PROJ definition; null for a local plan",
            examples=["+proj=tmerc +lat_0=50.100000 +lon_0=8.600000 +k=1 +x_0=0 +y_0=0 +datum=WGS84"],
        ),
    ]
    scale_error: Annotated[
        RatioValue, Field(description="Largest error of lengths in the grid", examples=[3e-4])
    ]
    area: Annotated[AreaValue, Field(description="Of the water")]
    vertices_given: CountValue
    vertices: Annotated[CountValue, Field(description="After mending and simplification")]
    open_edges: list[OpeningValue]


class MovedValue(Answer):
    """Something that was mended, moved or left out."""

    what: ChangeKind
    pointer: Annotated[str, Field(examples=["#/layout/shore/water/coordinates/0"])]
    count: Annotated[CountValue, Field(description="Vertices concerned")]
    distance: Annotated[LengthValue, Field(description="Largest distance that a point or line moved")]
    x: Annotated[LengthValue, Field(description="Where that is; null if nowhere")]
    y: LengthValue


class BoundaryValue(Answer):
    """Walls that were solved for."""

    solved: Annotated[SolvedValue | None, Field(description="Null if nothing was computed of the flow")]
    survey: Annotated[SurveyValue | None, Field(description="Null without surveyed water")]
    moved: list[MovedValue]

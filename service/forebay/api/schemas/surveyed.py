"""Surveyed water as a client writes it: a GeoJSON polygon, its open edges and islands."""

from typing import Annotated, Literal, Self

from pydantic import Discriminator, Field, Tag, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.names import FAR_ENDS, refuse_reserved
from forebay.api.schemas.common import Name, Strict
from forebay.api.schemas.discharges import FACTORS, LARGEST, DischargeUnit
from forebay.api.schemas.quantities import SquareMetresPerSecond, given
from forebay.api.units import UnitSystem
from forebay.flow.errors import Path
from forebay.flow.layout import EdgeProfile
from forebay.trade.survey.islands import IslandSurvey
from forebay.trade.survey.open_edges import EdgeSurvey
from forebay.trade.survey.water import LOCAL, MOST_GIVEN, Survey, SurveyedWater, surveyed_water

MAX_RINGS = 500
"""Rings of one polygon."""

MAX_EDGES = 100
"""Open edges of one polygon."""

GridCode = Annotated[
    str,
    Field(
        pattern=r"^EPSG:[0-9]{4,6}$",
        description=(
            "Projected, conformal system counted in metres, whose x, y are those of the layout; with it "
            "answers can be given in longitude and latitude"
        ),
        examples=["EPSG:25832"],
    ),
]

MapCoordinate = Annotated[float, given("{crs}", 12.5, -1e8, 1e8)]
"""Coordinate in the unit of `crs`: degrees, or lengths."""

MapPosition = Annotated[
    list[MapCoordinate],
    Field(
        min_length=2,
        max_length=3,
        fail_fast=True,
        description="x or longitude, y or latitude; a height after them is not read",
        examples=[[0.0, 90.0]],
    ),
]

RingVertices = Annotated[list[MapPosition], Field(min_length=3, max_length=MOST_GIVEN, fail_fast=True)]


class WaterPolygon(Strict):
    """Polygon as in RFC 7946: the first ring is the outer bank, the others are islands; in either sense."""

    type: Literal["Polygon"]
    coordinates: Annotated[
        list[RingVertices],
        Field(
            min_length=1,
            max_length=MAX_RINGS,
            description="Rings; the first vertex may be repeated at the end, as RFC 7946 asks, or not",
            examples=[[[[0.0, 0.0], [900.0, 0.0], [900.0, 80.0], [0.0, 90.0], [0.0, 0.0]]]],
        ),
    ]


class SignedUnitDischarge(Strict):
    """Discharge into the water with its own unit, negative if it leaves."""

    value: Annotated[float, given("{unit}", 45.0, -1e12, 1e12), Field(description="Number in `unit`")]
    unit: Annotated[
        DischargeUnit, Field(description="MGD and gpm are of US gallons", examples=[DischargeUnit("m3/s")])
    ]

    @property
    def si(self) -> float:
        """Discharge [m3/s]."""
        return self.value * float(FACTORS[self.unit])

    @model_validator(mode="after")
    def _within_bounds(self) -> Self:
        if abs(self.si) > LARGEST:
            raise PydanticCustomError("discharge_bounds", f"A discharge is at most {LARGEST:g} m3/s")
        return self


def _form(value: object) -> str:
    return "with-unit" if isinstance(value, dict | SignedUnitDischarge) else "plain"


SignedDischarge = Annotated[
    Annotated[float, given("m3/s", 45.0, -LARGEST, LARGEST), Tag("plain")]
    | Annotated[SignedUnitDischarge, Tag("with-unit")],
    Discriminator(_form),
]
"""Discharge of either sign: a number in m3/s (ft3/s in US units), or a value with its own unit."""


class OpenEdge(Strict):
    """Part of the outer ring where water comes in or goes out; everything else is land."""

    name: Name
    start: Annotated[
        MapPosition, Field(alias="from", description="One end; the nearest vertex of the ring is meant")
    ]
    end: Annotated[MapPosition, Field(alias="to", description="Other end, in either order")]
    discharge: Annotated[
        SignedDischarge | None,
        Field(description="Into the water; null on one edge at most, which continuity then gives"),
    ] = None
    profile: Annotated[
        EdgeProfile,
        Field(description="Square to the edge with one potential on it, or the same speed everywhere on it"),
    ] = EdgeProfile.EQUIPOTENTIAL


class NamedIsland(Strict):
    """Name of the island that a place lies in, and the circulation round it."""

    name: Name
    at: Annotated[MapPosition, Field(description="A place on the island")]
    circulation: Annotated[
        SquareMetresPerSecond,
        Field(description="Round the island, anticlockwise positive", examples=[0.0]),
    ] = 0.0


class SurveyedShore(Strict):
    """Water polygon with islands and open edges."""

    kind: Literal["surveyed"]
    water: Annotated[WaterPolygon, Field(description="The water, holes are islands")]
    crs: Annotated[
        str,
        Field(
            pattern=r"^(local|EPSG:[0-9]{4,6})$",
            description=(
                "System of every position in `shore`: `local` (lengths of the layout's own plan), or an EPSG "
                "code, x or longitude first; EPSG:4326 for GeoJSON"
            ),
            examples=["EPSG:4326"],
        ),
    ] = LOCAL
    grid: Annotated[GridCode | None, Field(description="As `grid` of the layout")] = None
    open_edges: Annotated[
        list[OpenEdge], Field(max_length=MAX_EDGES, description="Where water comes in or goes out")
    ] = []
    islands: Annotated[
        list[NamedIsland],
        Field(max_length=MAX_RINGS, description="Names; an island without one is called `island <number>`"),
    ] = []
    simplify: Annotated[
        float,
        given("m", 2.0, 0.0, 1e6),
        Field(description="Vertices that near to the simplified rings are left out; open edges keep theirs"),
    ] = 0.0

    @property
    def size(self) -> int:
        """Number of vertices."""
        return sum(len(ring) for ring in self.water.coordinates)

    def survey(self, units: UnitSystem, grid: str | None) -> SurveyedWater:
        """The water in SI, on the plan of the layout.

        Raises LayoutError, whose path leads to what is wrong.
        """
        refuse_reserved({"islands": self.islands}, ("shore",))
        refuse_reserved({"open_edges": self.open_edges}, ("shore",), allowed=FAR_ENDS)
        return surveyed_water(self._written(units, grid))

    def _written(self, units: UnitSystem, grid: str | None) -> Survey:
        def read(pair: list[float]) -> complex:
            return units.position(pair) if self.crs == LOCAL else complex(pair[0], pair[1])

        path: Path = ("grid",) if self.grid is None else ("shore", "grid")
        return Survey(
            rings=tuple(tuple(map(read, ring)) for ring in self.water.coordinates),
            system=self.crs,
            grid=grid if self.grid is None else self.grid,
            grid_path=path,
            edges=tuple(
                EdgeSurvey(
                    edge.name,
                    read(edge.start),
                    read(edge.end),
                    read_signed(edge.discharge, units),
                    edge.profile,
                )
                for edge in self.open_edges
            ),
            islands=tuple(
                IslandSurvey(island.name, read(island.at), units.read(island.circulation, "m2/s"))
                for island in self.islands
            ),
            tolerance=units.read(self.simplify, "m"),
        )


def read_signed(discharge: float | SignedUnitDischarge | None, units: UnitSystem) -> float | None:
    """Discharge in m3/s."""
    if discharge is None or isinstance(discharge, SignedUnitDischarge):
        return None if discharge is None else discharge.si
    return units.read(discharge, "m3/s")

"""Request and answer of spill/arrivals."""

from typing import Annotated, Self

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.names import refuse_repeated
from forebay.api.schemas.common import Answer, Name, Strict
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import (
    CurvePoints,
    DurationSeconds,
    HorizonSeconds,
    LengthValue,
    Position,
    PositiveMetres,
    RatioValue,
    ShareTolerance,
    TimeValue,
)
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.flow.arrivals import release as flow
from forebay.flow.arrivals.result import LAST_SHARE, Outcome, ReleaseStatus, Tail
from forebay.flow.arrivals.transits import Transect

MAX_RELEASES = 100
"""Releases of one request."""

MAX_TRANSECTS = 20
"""Transects of one request."""

MAX_VERTICES = 200
"""Vertices of a polyline or polygon."""

Polyline = Annotated[
    list[Position],
    Field(min_length=2, max_length=MAX_VERTICES, fail_fast=True, examples=[[[0.0, 10.0], [0.0, 60.0]]]),
]
Ring = Annotated[
    list[Position],
    Field(
        min_length=3,
        max_length=MAX_VERTICES,
        fail_fast=True,
        examples=[[[0.0, 10.0], [20.0, 10.0], [10.0, 30.0]]],
    ),
]

WAYS = ("at", "polyline", "patch", "outfall")
"""Members of a release of which exactly one says where."""


class ReleasePatch(Strict):
    """Either `centre` and `radius`, or `polygon`."""

    model_config = {"json_schema_extra": describe_ways(("centre", "radius"), ("polygon",))}

    centre: Annotated[Position | None, Field(description="Centre of a disc")] = None
    radius: Annotated[PositiveMetres | None, Field(description="Radius of the disc")] = None
    polygon: Annotated[Ring | None, Field(description="Vertices of a simple polygon, in either sense")] = None

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        disc = self.centre is not None and self.radius is not None
        partly = (self.centre is None) != (self.radius is None)
        if partly or disc == (self.polygon is not None):
            raise PydanticCustomError("one_way", "Either centre and radius, or polygon")
        return self

    def to_flow(self, units: UnitSystem) -> flow.Patch:
        """Patch in SI; ReleaseError if a polygon has no area or meets itself."""
        if self.centre is not None and self.radius is not None:
            return flow.OverDisc(units.position(self.centre), units.read(self.radius, "m"))
        return flow.OverPolygon(tuple(units.position(pair) for pair in self.polygon or ()))


class SpillRelease(Strict):
    """A release that starts at t = 0; exactly one of `at`, `polyline`, `patch`, `outfall` says where."""

    model_config = {"json_schema_extra": describe_ways(*((way,) for way in WAYS))}

    name: Name
    at: Annotated[Position | None, Field(description="At one point")] = None
    polyline: Annotated[Polyline | None, Field(description="Spread evenly along a polyline")] = None
    patch: Annotated[ReleasePatch | None, Field(description="Spread evenly over an area")] = None
    outfall: Annotated[
        Name | None, Field(description="The water that this outfall gives", examples=["works outfall"])
    ] = None
    duration: Annotated[DurationSeconds, Field(description="Let go evenly over this time; 0: at once")] = 0.0

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        if sum(getattr(self, way) is not None for way in WAYS) != 1:
            raise PydanticCustomError("one_way", "Exactly one of at, polyline, patch, outfall")
        return self

    @property
    def spread(self) -> bool:
        """Whether it is more than a point."""
        return self.at is None

    def to_flow(self, units: UnitSystem) -> flow.Release:
        """Release in SI."""
        return flow.Release(self.name, self._place(units), self.duration)

    def _place(self, units: UnitSystem) -> flow.Place:
        if self.at is not None:
            return flow.AtPoint(units.position(self.at))
        if self.polyline is not None:
            return flow.AlongLine(tuple(units.position(pair) for pair in self.polyline))
        if self.patch is not None:
            return self.patch.to_flow(units)
        if self.outfall is None:
            raise TypeError("a release without a place passed its validation")
        return flow.FromOutfall(self.outfall)


class SpillTransect(Strict):
    """A line whose first crossing is timed."""

    name: Name
    polyline: Annotated[Polyline, Field(description="Vertices", examples=[[[60.0, 0.0], [60.0, 110.0]]])]


class SpillQuestions(Strict):
    """Releases, and what is asked of them."""

    releases: Annotated[list[SpillRelease], Field(min_length=1, max_length=MAX_RELEASES)]
    intakes: Annotated[
        Annotated[list[Name], Field(max_length=2000)] | None,
        Field(description="Intakes that count; all of them if absent", examples=[["town intake"]]),
    ] = None
    transects: Annotated[
        list[SpillTransect], Field(max_length=MAX_TRANSECTS, description="Lines to which travel is timed")
    ] = []
    horizon: Annotated[
        HorizonSeconds | None, Field(description="Time after which nothing counts; none if absent")
    ] = None
    tolerance: Annotated[
        ShareTolerance, Field(description="Error of a share or curve to be reached; the answer states it")
    ] = 1e-3
    curve_points: Annotated[
        CurvePoints, Field(description="Points of each curve, at even steps of the share")
    ] = 101


class SpillRequest(LayoutRequest, SpillQuestions):
    """Releases, and what is asked of them."""

    def wanted(self) -> tuple[str, ...] | None:
        """Names of intakes asked for, each once, or None for all."""
        return None if self.intakes is None else tuple(dict.fromkeys(self.intakes))

    def flow_releases(self) -> tuple[flow.Release, ...]:
        """Releases in SI; an error names its place in the request."""
        refuse_repeated(self.releases, "releases")
        converted = []
        for index, given in enumerate(self.releases):
            try:
                converted.append(given.to_flow(self.unit_system))
            except flow.ReleaseError as error:
                error.path = ("releases", index, *(("patch", "polygon") if given.patch else ("polyline",)))
                raise
        return tuple(converted)

    def flow_transects(self) -> tuple[Transect, ...]:
        """Transects in SI."""
        refuse_repeated(self.transects, "transects")
        units = self.unit_system
        converted = []
        for index, given in enumerate(self.transects):
            points = tuple(units.position(pair) for pair in given.polyline)
            if len(set(points)) < 2:
                raise flow.ReleaseError("the transect has no length", ("transects", index, "polyline"))
            converted.append(Transect(given.name, points))
        return tuple(converted)


class ArrivalTimes(Answer):
    """When released water is there; times from the start of the release."""

    share: Annotated[RatioValue, Field(description="Part of the release")]
    first_time: Annotated[TimeValue, Field(description="When the first of it is there")]
    median_time: Annotated[TimeValue, Field(description="When half of it is there")]
    last_time: Annotated[TimeValue, Field(description=f"When {LAST_SHARE:.0%} of it is there")]
    end_time: Annotated[TimeValue, Field(description="When the last of it is there; null unless bounded")]
    tail: Annotated[Tail, Field(description="How arrivals end")]


class IntakeArrival(ArrivalTimes):
    """Arrivals at one intake."""

    intake: Annotated[str, Field(examples=["town intake"])]


class TransectArrival(ArrivalTimes):
    """First crossings of one transect."""

    transect: Annotated[str, Field(examples=["bridge"])]


class OutcomeValue(Answer):
    """Part of a release with one outcome."""

    outcome: Annotated[Outcome, Field(description="What becomes of it")]
    to: Annotated[
        str | None, Field(description="Intake, far end or doublet it goes to", examples=["downstream"])
    ]
    share: RatioValue
    meaning: Annotated[str, Field(description="The outcome in words")]


class IntakeCurve(Answer):
    """Share arrived at one intake, at the times of the curve."""

    intake: str
    share: Annotated[list[RatioValue], Field(examples=[[0.0, 0.31]])]


class CurveValue(Answer):
    """Share arrived up to each time, linear between; empty where nothing arrives."""

    time: Annotated[list[TimeValue], Field(examples=[[1200.0, 1500.0]])]
    share: Annotated[list[RatioValue], Field(description="At all intakes asked for", examples=[[0.0, 0.31]])]
    by_intake: list[IntakeCurve]


class ReleaseValue(Answer):
    """What becomes of one release."""

    name: str
    status: Annotated[ReleaseStatus, Field(description="How far the answer can be trusted")]
    arrivals: Annotated[list[IntakeArrival], Field(description="Empty where nothing arrives")]
    transects: Annotated[list[TransectArrival], Field(description="First crossings, those that happen")]
    lost_share: Annotated[
        RatioValue,
        Field(description="What does not arrive within the horizon: 1 less the shares of arrivals"),
    ]
    outcomes: Annotated[list[OutcomeValue], Field(description="Largest first; the shares add to 1")]
    curve: CurveValue
    share_error: Annotated[
        RatioValue, Field(description="Largest error of a share or of the curve", examples=[1e-4])
    ]
    time_error: Annotated[TimeValue, Field(description="Largest error of a time", examples=[0.02])]
    divide_distance: Annotated[
        LengthValue, Field(description="From a point to the nearest dividing streamline; null without one")
    ]
    wet_share: Annotated[
        RatioValue, Field(description="Part of the line or patch that is water", examples=[1.0])
    ]


class SpillResult(Answer):
    """Every release, in order."""

    releases: list[ReleaseValue]
    last_share: Annotated[
        RatioValue, Field(description="Part of arrivals that `last_time` is about", examples=[LAST_SHARE])
    ]
    cautions: Annotated[list[str], Field(description="What no number can take away")]

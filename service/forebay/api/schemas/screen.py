"""Request and answer of screen/check."""

from typing import Annotated, Any, Literal, Self

from pydantic import Discriminator, Field, Tag, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Answer, Name, Strict
from forebay.api.schemas.discharges import Discharge, read_discharge
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import (
    AreaValue,
    BlockedFraction,
    DischargeValue,
    ExcessShare,
    ExposureSeconds,
    LengthValue,
    LimitSpeed,
    NotNegativeMetres,
    OpenFraction,
    OwnUnitValue,
    Position,
    PositionValue,
    PositiveMetres,
    ProfileCount,
    RatioValue,
    SpeedValue,
    SweepingRatio,
    TimeValue,
)
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.trade.criteria import SI_UNITS, Quantity
from forebay.trade.screens import screen as trade
from forebay.trade.screens.face_flow import ExposureStatus
from forebay.trade.screens.rules import VerdictStatus
from forebay.trade.screens.screen_flow import Basis

MAX_SCREENS = 100
"""Screens of one request."""

MAX_CRITERIA = 100
"""Criteria of one request."""


class FaceEnds(Strict):
    """Stretch of a bank, or of the wall of a structure."""

    start: Annotated[Position, Field(alias="from", description="One end", examples=[[60.0, 0.0]])]
    end: Annotated[Position, Field(alias="to", description="Other end", examples=[[72.0, 0.0]])]

    def to_trade(self, units: UnitSystem) -> tuple[complex, complex]:
        """Ends in SI."""
        return units.position(self.start), units.position(self.end)


class Screen(Strict):
    """A screen over a line sink (`element`), or over a `face` with a `name` and a `discharge`."""

    model_config = {"json_schema_extra": describe_ways(("element",), ("face", "name", "discharge"))}

    element: Annotated[Name | None, Field(description="Line sink", examples=["screen bay"])] = None
    face: Annotated[
        FaceEnds | None,
        Field(description="Wall that the screen is part of; on a bank it draws as a line sink"),
    ] = None
    name: Annotated[Name | None, Field(description="Of the face", examples=["north screen"])] = None
    discharge: Annotated[Discharge | None, Field(description="Through the face, positive")] = None
    height: Annotated[
        PositiveMetres,
        Field(description="Wetted height, along the face where it leans, at lowest water", examples=[2.5]),
    ]
    open_fraction: Annotated[OpenFraction, Field(description="Open part of the mesh: slot / (slot + wire)")]
    cleaning: Annotated[
        trade.Cleaning, Field(description="Whether debris is taken off while the screen works")
    ] = trade.Cleaning.ACTIVE
    blocked_fraction: Annotated[
        BlockedFraction, Field(description="Part of the face behind frames and other structural members")
    ] = 0.0
    opening: Annotated[
        PositiveMetres | None, Field(description="Width of slots, diameter of holes", examples=[0.00175])
    ] = None
    clearance: Annotated[NotNegativeMetres | None, Field(description="From the bottom", examples=[0.5])] = (
        None
    )
    sample_offset: Annotated[
        NotNegativeMetres,
        Field(description="Distance in front of the face at which velocities are read", examples=[0.076]),
    ] = 0.0
    end_reach: Annotated[
        NotNegativeMetres | None,
        Field(
            description="Length at each end left out of extremes and exposure, where the speed along a line "
            "that draws evenly is infinite; 1 % of the length, or `sample_offset` if larger, if absent",
            examples=[0.15],
        ),
    ] = None
    bypass: Annotated[
        NotNegativeMetres | None,
        Field(
            description="Distance of the bypass from the `from` end; the end swept to if absent",
            examples=[12.0],
        ),
    ] = None
    sweeping: Annotated[
        trade.Pump,
        Field(description="Which sweeping velocity ratio, share and exposure are of; both are answered"),
    ] = trade.Pump.ON
    points: Annotated[ProfileCount, Field(description="Points of the profile")] = 101

    @model_validator(mode="after")
    def _one_way(self) -> Self:
        of_face = (self.face, self.name, self.discharge)
        if self.element is None and None in of_face:
            raise PydanticCustomError("one_way", "Either element, or face with name and discharge")
        if self.element is not None and of_face != (None, None, None):
            raise PydanticCustomError("one_way", "face, name and discharge do not go with element")
        return self

    def to_trade(self, units: UnitSystem) -> trade.Screen:
        """Screen in SI."""
        face = None if self.face is None else self.face.to_trade(units)
        return trade.Screen(
            name=self.element or self.name or "",
            face=face,
            discharge=None if self.discharge is None else read_discharge(self.discharge, units),
            height=units.read(self.height, "m"),
            open_fraction=self.open_fraction,
            cleaning=self.cleaning,
            blocked_fraction=self.blocked_fraction,
            opening=_read(units, self.opening),
            clearance=_read(units, self.clearance),
            sample_offset=units.read(self.sample_offset, "m"),
            end_reach=_read(units, self.end_reach),
            bypass=_read(units, self.bypass),
            sweeping=self.sweeping,
            count=self.points,
        )


def _read(units: UnitSystem, value: float | None) -> float | None:
    return None if value is None else units.read(value, "m")


class OwnCriterion(Strict):
    """Limits of one's own, at least one."""

    name: Annotated[Name, Field(examples=["permit 17"])]
    max_approach: Annotated[LimitSpeed | None, Field(description="Of the approach velocity anywhere")] = None
    max_through_slot: Annotated[
        LimitSpeed | None, Field(description="Of discharge over open area", examples=[0.1524])
    ] = None
    min_sweeping: Annotated[
        LimitSpeed | None, Field(description="Of the sweeping velocity, pump off", examples=[0.2438])
    ] = None
    min_sweeping_ratio: Annotated[
        SweepingRatio | None, Field(description="Of sweeping over approach velocity")
    ] = None
    max_exposure_time: Annotated[
        ExposureSeconds | None, Field(description="Of the time along the face to the bypass")
    ] = None
    max_nonuniformity: Annotated[
        ExcessShare | None,
        Field(description="Excess of approach over `max_approach`, over the mean without one"),
    ] = None
    max_opening: Annotated[PositiveMetres | None, Field(description="Of the mesh", examples=[0.00175])] = None
    min_open_fraction: Annotated[OpenFraction | None, Field(description="Of the mesh", examples=[0.27])] = (
        None
    )
    min_clearance: Annotated[PositiveMetres | None, Field(description="From the bottom", examples=[0.3])] = (
        None
    )

    @model_validator(mode="after")
    def _some_limit(self) -> Self:
        if not self.limits(UnitSystem.SI):
            raise PydanticCustomError("no_limit", "At least one limit")
        return self

    def limits(self, units: UnitSystem) -> dict[Quantity, float]:
        """The limits given, in SI."""
        given = {quantity: getattr(self, quantity.replace("-", "_"), None) for quantity in Quantity}
        return {
            quantity: units.read(value, SI_UNITS[quantity])
            for quantity, value in given.items()
            if value is not None
        }


def _form(value: Any) -> str:  # noqa: ANN401  (anything that a client may have written)
    return "own" if isinstance(value, dict | OwnCriterion) else "id"


CriterionId = Annotated[str, Field(min_length=1, max_length=80, examples=["nmfs-west-active-approach"])]

Criterion = Annotated[
    Annotated[CriterionId, Tag("id")] | Annotated[OwnCriterion, Tag("own")], Discriminator(_form)
]


class ScreenQuestions(Strict):
    """Screens, and what they are held against."""

    screens: Annotated[
        list[Screen],
        Field(min_length=1, max_length=MAX_SCREENS, description="Each is judged by itself"),
    ]
    criteria: Annotated[
        list[Criterion],
        Field(
            max_length=MAX_CRITERIA,
            description="Ids from GET /v1/criteria, or limits of one's own",
            examples=[["nmfs-west-active-approach"]],
        ),
    ] = []
    allow_from_memory: Annotated[
        bool,
        Field(strict=True, description="Whether limits that nobody has read may be used"),
    ] = False
    passing_discharge: Annotated[
        Discharge | None, Field(description="Flow that passes the intake, for limits on the share drawn")
    ] = None


class ScreenRequest(LayoutRequest, ScreenQuestions):
    """Velocities along screen faces against criteria."""

    @property
    def count(self) -> int:
        """Points of all profiles."""
        return sum(screen.points for screen in self.screens)


class ProfileValue(Answer):
    """Columns along one side of a face, of equal length, between its end reaches."""

    distance: Annotated[list[LengthValue], Field(description="From the `from` end")]
    x: list[LengthValue]
    y: list[LengthValue]
    approach: Annotated[list[SpeedValue], Field(description="Into the screen, through the effective area")]
    sweeping: Annotated[list[SpeedValue], Field(description="From `from` to `to`, pump on")]
    sweeping_pump_off: Annotated[
        list[SpeedValue], Field(description="The same with this screen's pump off; empty where unknown")
    ]


class SweepValue(Answer):
    """Sweeping velocity with the pump on or off."""

    min_sweeping: Annotated[
        SpeedValue, Field(description="Towards the bypass, least between the end reaches")
    ]
    min_sweeping_ratio: Annotated[
        RatioValue, Field(description="Least sweeping over approach velocity between the end reaches")
    ]
    share_meeting_sweeping: Annotated[
        RatioValue, Field(description="Part of the whole face where sweeping is enough times approach")
    ]
    exposure_time: Annotated[
        TimeValue, Field(description="Longest way along the face to the bypass; null where it has no end")
    ]
    exposure_error: Annotated[TimeValue, Field(description="Error estimate of it", examples=[1e-9])]
    exposure_status: Annotated[ExposureStatus, Field(description="Whether it has an end")]


class SideValue(Answer):
    """One side of a screen."""

    side: Annotated[
        Literal["left", "right"], Field(description="Where its water is, seen from `from` to `to`")
    ]
    discharge: Annotated[DischargeValue, Field(description="That its mean approach velocity carries")]
    max_approach: SpeedValue
    max_approach_at: Annotated[
        list[PositionValue], Field(description="Where; both ends of a stretch of equal velocity")
    ]
    min_approach: SpeedValue
    mean_approach: SpeedValue
    profile: ProfileValue


class VerdictValue(Answer):
    """What one limit says of one screen."""

    criterion: Annotated[str, Field(description="Id or name", examples=["nmfs-west-active-approach"])]
    rule: Annotated[str, Field(description="What is limited", examples=["max_approach"])]
    value: Annotated[OwnUnitValue, Field(description="Number compared, in `unit`; null without end")]
    limit: Annotated[OwnUnitValue, Field(description="In `unit`")]
    unit: Annotated[str, Field(description="UCUM code of value, limit and margin", examples=["m/s"])]
    passed: Annotated[bool | None, Field(alias="pass", description="null where it was not judged")]
    margin: Annotated[OwnUnitValue, Field(description="Distance inside the limit, negative beyond it")]
    share_meeting: Annotated[RatioValue, Field(description="Part of the face that meets the limit")]
    pump: Annotated[trade.Pump | None, Field(description="Which sweeping velocity was judged")]
    status: Annotated[VerdictStatus, Field(description="Whether it was judged")]
    reason: Annotated[str, Field(description="Why not, or what the value is relative to")]
    confidence: Annotated[str, Field(description="document-read, from-memory or own", examples=["own"])]
    definition: Annotated[str, Field(description="What exactly is limited")]
    source: str


class ScreenValue(Answer):
    """One screen; numbers are over all of its sides."""

    element: Annotated[str, Field(description="Line sink or face", examples=["screen bay"])]
    on: Annotated[str, Field(description="Wall that it is part of, or water", examples=["right bank"])]
    basis: Annotated[Basis, Field(description="Whether the approach velocity is the flow's or Q / area")]
    cleaning: trade.Cleaning
    length: LengthValue
    end_reach: Annotated[LengthValue, Field(description="Left out at each end of extremes and exposure")]
    area: Annotated[AreaValue, Field(description="Length times height, of all sides")]
    effective_area: Annotated[AreaValue, Field(description="Less what frames block")]
    open_area: Annotated[AreaValue, Field(description="Open part of the effective area")]
    discharge: DischargeValue
    profile: Annotated[ProfileValue, Field(description="Of the side with the largest approach velocity")]
    max_approach: SpeedValue
    min_approach: SpeedValue
    mean_approach: Annotated[SpeedValue, Field(description="Discharge over effective area")]
    max_over_mean: Annotated[
        RatioValue, Field(description="Uniformity, as read: 1 where the face draws evenly")
    ]
    through_slot: Annotated[SpeedValue, Field(description="Discharge over open area")]
    max_through_slot: Annotated[SpeedValue, Field(description="Largest approach over open fraction")]
    sweeping: Annotated[trade.Pump, Field(description="Which one the next five numbers are of")]
    sweeping_ratio_asked: Annotated[
        RatioValue, Field(description="Enough: the largest ratio that a criterion asks for, else 1")
    ]
    min_sweeping: SpeedValue
    min_sweeping_ratio: RatioValue
    share_meeting_sweeping: RatioValue
    exposure_time: TimeValue
    exposure_error: TimeValue
    exposure_status: ExposureStatus | None
    pump_on: SweepValue
    pump_off: Annotated[SweepValue | None, Field(description="null where no such flow exists")]
    without_pump: Annotated[str, Field(description="Why there is none; empty otherwise")]
    sides: list[SideValue]
    verdicts: list[VerdictValue]


class ScreenResult(Answer):
    """Every screen, in order."""

    screens: list[ScreenValue]
    cautions: Annotated[list[str], Field(description="What no number can take away")]

"""Request and answer of submergence/check."""

from typing import Annotated, Self

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Answer, ComputeRequest, Name, Strict
from forebay.api.schemas.discharges import Discharge, read_discharge
from forebay.api.schemas.layout import Layout
from forebay.api.schemas.quantities import (
    AngleValue,
    AreaValue,
    DischargeValue,
    FluxValue,
    Gravity,
    LengthValue,
    Metres,
    ModelScale,
    OwnUnitValue,
    PositiveMetres,
    RatioValue,
    SpeedValue,
    SquareMetresPerSecond,
)
from forebay.api.schemas.water import Water
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.flow.contour import ContourStatus
from forebay.flow.errors import UnknownNameError
from forebay.trade.submergence import inlet as trade
from forebay.trade.submergence.rules import Standing
from forebay.trade.water import STANDARD_GRAVITY

MAX_INLETS = 200
"""Inlets of one request."""

RuleId = Annotated[str, Field(min_length=1, max_length=80, examples=["hydraulic-institute"])]


class Inlet(Strict):
    """An inlet with either `submergence`, or `surface_level` and `level`."""

    name: Name
    kind: Annotated[
        trade.InletKind, Field(description="Bells and vertical pipes open level", examples=["bell"])
    ]
    diameter: Annotated[
        PositiveMetres | None,
        Field(description="Of a bell outside at its lip, or of a pipe", examples=[0.9]),
    ] = None
    height: Annotated[PositiveMetres | None, Field(description="Of a slot", examples=[0.8])] = None
    width: Annotated[PositiveMetres | None, Field(description="Of a slot", examples=[2.4])] = None
    discharge: Annotated[Discharge | None, Field(description="That of `element` if absent")] = None
    element: Annotated[
        Name | None,
        Field(description="Sink of the layout that it is: its swirl is read there", examples=["town intake"]),
    ] = None
    submergence: Annotated[
        PositiveMetres | None,
        Field(
            description="Water over the lip of a bell or vertical pipe, over the centreline of another",
            examples=[2.0],
        ),
    ] = None
    surface_level: Annotated[Metres | None, Field(description="Lowest water level", examples=[101.2])] = None
    level: Annotated[
        Metres | None, Field(description="Level of the lip, or of the centreline", examples=[99.2])
    ] = None
    circulation: Annotated[
        SquareMetresPerSecond | None,
        Field(description="Of the approach flow, in place of the layout's", examples=[0.5]),
    ] = None
    core_radius: Annotated[
        PositiveMetres | None, Field(description="Of the vortex it feeds", examples=[0.05])
    ] = None
    throat_diameter: Annotated[
        PositiveMetres | None,
        Field(description="Of the pipe behind; the inlet's own if absent", examples=[0.6]),
    ] = None

    @model_validator(mode="after")
    def _whole(self) -> Self:
        wanted = {"height", "width"} if self.kind is trade.InletKind.SLOT else {"diameter"}
        if self._given("diameter", "height", "width") != wanted:
            raise PydanticCustomError("inlet_size", "A slot has height and width, any other a diameter")
        if not self._given("discharge", "element"):
            raise PydanticCustomError("inlet_discharge", "discharge or element is needed")
        levels = self._given("submergence", "surface_level", "level")
        if levels not in ({"submergence"}, {"surface_level", "level"}):
            raise PydanticCustomError("one_way", "Either submergence, or surface_level and level")
        if self.surface_level is not None and self.level is not None and self.surface_level <= self.level:
            raise PydanticCustomError("dry_inlet", "The water must stand above the inlet's level")
        return self

    def _given(self, *names: str) -> set[str]:
        """Which of these fields have a value."""
        return {name for name in names if getattr(self, name) is not None}

    def to_trade(self, units: UnitSystem, layout: flow.Layout | None, index: int) -> trade.Inlet:
        """Inlet in SI; raises UnknownNameError if it takes its discharge from a sink that is not there."""
        return trade.Inlet(
            name=self.name,
            kind=self.kind,
            discharge=self._discharge(units, layout, index),
            height=units.read(self.diameter or self.height or 0.0, "m"),
            width=_read(units, self.width, "m"),
            submergence=self._submergence(units),
            element=self.element,
            circulation=_read(units, self.circulation, "m2/s"),
            core_radius=_read(units, self.core_radius, "m"),
            throat=_read(units, self.throat_diameter, "m"),
        )

    def _discharge(self, units: UnitSystem, layout: flow.Layout | None, index: int) -> float:
        if self.discharge is not None:
            return read_discharge(self.discharge, units)
        for element in () if layout is None else layout.elements:
            if isinstance(element, flow.Sink | flow.LineSink) and element.name == self.element:
                return element.discharge
        raise UnknownNameError("No sink or line sink has this name.", ("inlets", index, "element"))

    def _submergence(self, units: UnitSystem) -> float:
        if self.submergence is not None:
            return units.read(self.submergence, "m")
        return units.read((self.surface_level or 0.0) - (self.level or 0.0), "m")


def _read(units: UnitSystem, value: float | None, si_unit: str) -> float | None:
    return None if value is None else units.read(value, si_unit)


class SubmergenceQuestions(Strict):
    """Inlets, and what they are held against."""

    water: Annotated[Water | None, Field(description="Of the inlets; the layout's if absent")] = None
    inlets: Annotated[list[Inlet], Field(min_length=1, max_length=MAX_INLETS, description="Inlets")]
    rules: Annotated[
        Annotated[list[RuleId], Field(min_length=1, max_length=50)] | None,
        Field(description="Ids from GET /v1/criteria; all that apply and are not from memory if absent"),
    ] = None
    allow_from_memory: Annotated[
        bool, Field(strict=True, description="Whether rules and thresholds that nobody has read may be used")
    ] = False
    model_scale: Annotated[
        ModelScale, Field(description="Length in the prototype over length in a model by Froude's law")
    ] = 1.0
    ring_radii: Annotated[
        Annotated[list[PositiveMetres], Field(min_length=1, max_length=20, fail_fast=True)] | None,
        Field(
            description="Rings round each inlet on which circulation is read; 1, 2, 4 diameters if absent",
            examples=[[1.0, 2.0, 4.0]],
        ),
    ] = None
    gravity: Annotated[Gravity | None, Field(description="The standard one if absent")] = None


class SubmergenceRequest(ComputeRequest, SubmergenceQuestions):
    """Inlets under a free surface."""

    layout: Annotated[Layout | None, Field(description="The site, for swirl and discharges")] = None

    @property
    def known_water(self) -> Water:
        """Water of the inlets."""
        if self.water is not None:
            return self.water
        return Water() if self.layout is None else self.layout.water

    def acceleration(self) -> float:
        """Acceleration of free fall in SI [m/s2]."""
        if self.gravity is None:
            return STANDARD_GRAVITY
        return self.unit_system.read(self.gravity, "m/s2")


class RuleValue(Answer):
    """One rule beside an inlet."""

    rule: Annotated[str, Field(examples=["hydraulic-institute"])]
    formula: str
    datum: Annotated[trade.Datum, Field(description="What submergence is measured down to")]
    required: LengthValue
    available: LengthValue
    margin: Annotated[LengthValue, Field(description="Available less required")]
    passed: Annotated[bool | None, Field(alias="pass", description="null where it could not be evaluated")]
    reason: Annotated[str, Field(description="Why it could not")]
    standing: Annotated[Standing, Field(description="How the rule is known")]
    note: str
    source: str


class ScaleEffectValue(Answer):
    """A threshold above which a scale effect is negligible, beside prototype and model."""

    quantity: Annotated[str, Field(examples=["reynolds"])]
    effect: str
    prototype: RatioValue
    model: Annotated[RatioValue, Field(description="By Froude's law")]
    threshold: RatioValue
    negligible: Annotated[bool, Field(description="Whether it is so in the model")]
    largest_scale: Annotated[RatioValue, Field(description="Scale that still meets it", examples=[12.0])]
    standing: Standing
    source: str


class RingValue(Answer):
    """Circulation on a circle round an inlet."""

    radius: LengthValue
    circulation: FluxValue
    status: Annotated[ContourStatus, Field(description="Whether the ring stays in the water")]


class VortexValue(Answer):
    """The vortex that the circulation could feed."""

    core_radius: LengthValue
    core_given: Annotated[
        bool,
        Field(
            description="If not: the least possible, 2 sqrt(nu S / V); dips and speeds are then upper bounds"
        ),
    ]
    critical_core_radius: Annotated[
        LengthValue, Field(description="Core below which the dip is deeper than the water over the inlet")
    ]
    rankine_dip: Annotated[LengthValue, Field(description="Of the surface at the axis")]
    burgers_dip: Annotated[LengthValue, Field(description="Of the surface at the axis")]
    rankine_speed: Annotated[SpeedValue, Field(description="Largest, round the axis")]
    burgers_speed: Annotated[SpeedValue, Field(description="Largest, round the axis")]
    circulation_number: Annotated[RatioValue, Field(description="Gamma S / Q")]
    swirl_angle_deg: Annotated[
        AngleValue, Field(description="In the pipe, if all of it entered in rigid rotation")
    ]
    air_could_be_drawn: Annotated[
        bool | None, Field(description="Whether Burgers' dip reaches the inlet; null where no core is given")
    ]


class BandValue(Answer):
    """Velocities at a bell."""

    least: SpeedValue
    largest: SpeedValue
    recommended: SpeedValue
    inside: bool
    standing: Standing
    source: str


class FindingValue(Answer):
    """Reason for a physical model."""

    reason: str
    value: Annotated[OwnUnitValue, Field(description="In `unit`")]
    limit: Annotated[OwnUnitValue, Field(description="In `unit`")]
    unit: Annotated[str, Field(examples=["m"])]
    standing: Annotated[Standing | None, Field(description="null where the reasoning is our own")]
    source: str


class InletValue(Answer):
    """One inlet."""

    name: str
    kind: trade.InletKind
    discharge: DischargeValue
    area: AreaValue
    diameter: Annotated[LengthValue, Field(description="Of a slot: that of the circle of equal area")]
    velocity: Annotated[SpeedValue, Field(description="Discharge over area")]
    submergence: Annotated[LengthValue, Field(description="Over the lip, or the centreline")]
    froude: Annotated[RatioValue, Field(description="V / sqrt(g D)")]
    reynolds: Annotated[RatioValue, Field(description="V D / nu", examples=[1.2e6])]
    radial_reynolds: Annotated[RatioValue, Field(description="Q / (nu S)", examples=[4e5])]
    weber: Annotated[RatioValue, Field(description="rho V2 D / sigma", examples=[3e4])]
    rules: list[RuleValue]
    governing_rule: Annotated[str | None, Field(description="The one with the least margin")]
    scale_effects: list[ScaleEffectValue]
    rings: Annotated[list[RingValue], Field(description="Empty without `element`")]
    circulation: Annotated[
        FluxValue, Field(description="As given, else on the largest ring in the water; null if unknown")
    ]
    vortex: Annotated[VortexValue | None, Field(description="null without circulation")]
    velocity_band: Annotated[BandValue | None, Field(description="Of bells, with allow_from_memory")]
    physical_model: Annotated[list[FindingValue], Field(description="What calls for one; empty if nothing")]


class SubmergenceResult(Answer):
    """Every inlet, in order."""

    inlets: list[InletValue]
    cautions: Annotated[list[str], Field(description="What no number can take away")]

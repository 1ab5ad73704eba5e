"""What the trade reads from stresses, as asked for and as answered."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer, Strict
from forebay.api.schemas.quantities import (
    BedFriction,
    ChezyCoefficient,
    LengthValue,
    ManningCoefficient,
    PathValue,
    Position,
    PositiveMetres,
    RateValue,
    RatioValue,
    TimeValue,
)
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.trade.bed_shear import Friction as KnownFriction
from forebay.trade.bed_shear import FrictionLaw
from forebay.workflows.stress_readings import Way


class Friction(Strict):
    """Friction of bed and walls, in exactly one of four ways."""

    model_config = {
        "json_schema_extra": describe_ways(
            ("coefficient",), ("manning_n",), ("chezy_c",), ("roughness_height",)
        )
    }

    coefficient: Annotated[BedFriction | None, Field(description="c_f = (u*/U)^2")] = None
    manning_n: Annotated[
        ManningCoefficient | None,
        Field(description="Manning's n in s/m^(1/3) whatever the unit system; c_f = g n^2 / h^(1/3)"),
    ] = None
    chezy_c: Annotated[
        ChezyCoefficient | None,
        Field(description="Chezy's C in m^(1/2)/s whatever the unit system; c_f = g / C^2"),
    ] = None
    roughness_height: Annotated[
        PositiveMetres | None,
        Field(description="k_s of Keulegan's U/u* = 5.75 log10(12.2 h/k_s)", examples=[0.05]),
    ] = None

    @property
    def ways(self) -> int:
        """How many ways are used."""
        given = (self.coefficient, self.manning_n, self.chezy_c, self.roughness_height)
        return sum(value is not None for value in given)

    def to_trade(self, units: UnitSystem) -> KnownFriction:
        """Law and number in SI."""
        for law, value in (
            (FrictionLaw.COEFFICIENT, self.coefficient),
            (FrictionLaw.MANNING, self.manning_n),
            (FrictionLaw.CHEZY, self.chezy_c),
        ):
            if value is not None:
                return KnownFriction(law, value)
        return KnownFriction(FrictionLaw.KEULEGAN, units.read(self.roughness_height or 0.0, "m"))


class FlocWay(Strict):
    """Two places in the water; flocs are followed along the streamline from the first."""

    start: Annotated[Position, Field(alias="from", description="Where the water comes from")]
    end: Annotated[Position, Field(alias="to", description="Where it is to pass")]
    within: Annotated[
        PositiveMetres | None,
        Field(
            description="Distance from `to` that counts as arrival; a hundredth of the way if absent",
            examples=[0.5],
        ),
    ] = None

    def to_flow(self, units: UnitSystem) -> Way:
        """Places in SI."""
        within = None if self.within is None else units.read(self.within, "m")
        return Way(units.position(self.start), units.position(self.end), within)


class ExposureValue(Answer):
    """A rate of shear against one threshold."""

    threshold: Annotated[str, Field(description="Id in `thresholds`", examples=["salmonid-juvenile"])]
    margin: Annotated[RatioValue, Field(description="Rate of shear over the threshold's")]
    exceeded: bool | None


class ThresholdValue(Answer):
    """A rate of shear that animals were seen to bear, or not."""

    id: Annotated[str, Field(examples=["salmonid-juvenile"])]
    organism: str
    life_stage: Annotated[str, Field(examples=["juvenile"])]
    rate: RateValue
    effect: Annotated[str, Field(description="What was seen above it or up to it")]
    confidence: Annotated[str, Field(examples=["abstract-read"])]
    source: str


class OpeningReachValue(Answer):
    """How far from a point opening its own mean flow exceeds a threshold."""

    element: str
    threshold: Annotated[str, Field(description="Id in `thresholds`", examples=["salmonid-juvenile"])]
    reach: LengthValue
    inside: Annotated[
        bool | None,
        Field(description="Whether that is within `opening_radius`, where no water is; null if unknown"),
    ]


class FrictionValue(Answer):
    """The friction that shear on bed and walls rests on."""

    law: Annotated[str, Field(examples=["manning"])]
    friction_coefficient: Annotated[RatioValue, Field(description="c_f = (u*/U)^2")]
    source: str


class FlocValue(Answer):
    """Flocculation along a streamline, by the mean flow alone."""

    status: Annotated[
        str, Field(description="arrives, misses, on-singularity or on-land", examples=["arrives"])
    ]
    miss: Annotated[LengthValue, Field(description="Nearest distance of the streamline to `to`")]
    residence_time: TimeValue
    mean_gradient: Annotated[RateValue, Field(description="Time mean of G")]
    largest_gradient: RateValue
    camp_number: Annotated[RatioValue, Field(description="G t: integral of G over the residence time")]
    camp_number_error: Annotated[RatioValue, Field(description="Error estimate of `camp_number`")]
    path: PathValue
    stop: Annotated[
        str | None, Field(description="How the streamline ends beyond `to`", examples=["captured"])
    ]
    range: Annotated[str, Field(description="Published ranges of G and G t, with source")]

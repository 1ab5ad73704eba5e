"""Request and answer of withdrawal/trace."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer, Name
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import DischargeValue, LengthValue, PathValue, PositionValue, RatioValue
from forebay.flow.withdrawal.result import OriginKind, WidthStatus, WithdrawalStatus


class WithdrawalRequest(LayoutRequest):
    """Where the water of intakes comes from."""

    intakes: Annotated[
        Annotated[list[Name], Field(min_length=1, max_length=2000)] | None,
        Field(description="Names of sinks; all of them if absent", examples=[["town intake"]]),
    ] = None

    def wanted(self) -> tuple[str, ...] | None:
        """Names asked for, each once, or None for all."""
        return None if self.intakes is None else tuple(dict.fromkeys(self.intakes))


class ShareValue(Answer):
    """Part of an intake's water by origin."""

    origin: Annotated[str, Field(alias="from", description="Outfall or far end", examples=["upstream"])]
    kind: Annotated[OriginKind, Field(description="Kind of the origin")]
    share: RatioValue


class WidthValue(Answer):
    """Width that an intake's water takes at a far end."""

    end: Annotated[str, Field(examples=["upstream"])]
    width: LengthValue
    status: Annotated[WidthStatus, Field(description="Why the width is or is not given")]


class IntakeValue(Answer):
    """Where one intake's water comes from."""

    name: str
    discharge: DischargeValue
    arriving: Annotated[DischargeValue, Field(description="Water that meets the intake")]
    width_far_upstream: Annotated[LengthValue, Field(description="Width at the end the current comes from")]
    widths: Annotated[list[WidthValue], Field(description="One for each far end")]
    dividing_streamlines: Annotated[list[PathValue], Field(description="In the direction of flow")]
    zone: Annotated[PathValue, Field(description="Outline of the water that reaches the intake")]
    extent_centre: Annotated[PositionValue, Field(description="Middle of the layout")]
    extent: Annotated[LengthValue, Field(description="Radius about it at which lines and zone are cut")]
    shares: Annotated[list[ShareValue], Field(description="By origin, largest first; they add to 1")]
    recirculation_share: Annotated[RatioValue, Field(description="Part that outfalls gave")]
    share_error: Annotated[RatioValue, Field(description="Largest error of a share", examples=[1e-9])]
    status: Annotated[WithdrawalStatus, Field(description="How far the answer can be trusted")]


class WithdrawalResult(Answer):
    """Every intake asked for, in order."""

    intakes: list[IntakeValue]

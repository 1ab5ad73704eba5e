"""Request and answer of influence/zone."""

from typing import Annotated

from pydantic import Field

from forebay.api.schemas.common import Answer, Name
from forebay.api.schemas.field import FieldModel
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import (
    AreaValue,
    LengthValue,
    LimitSpeed,
    PositiveMetres,
    VolumeValue,
)
from forebay.workflows.zone import Enquiry, ZoneSpeed


class ZoneRequest(LayoutRequest):
    """Zone of influence of one intake or outfall."""

    element: Annotated[Name, Field(description="Name of a source or sink, at a point or along a line")]
    limit_speed: Annotated[
        LimitSpeed, Field(description="Speed that is exceeded inside the zone", examples=[0.1524])
    ]
    speed: Annotated[
        ZoneSpeed,
        Field(
            description=(
                "`induced`: what the element adds to the velocity, the ambient current unchanged; `total`: "
                "the speed itself, other elements' zones within the window included"
            ),
            examples=["induced"],
        ),
    ] = ZoneSpeed.INDUCED
    model: Annotated[
        FieldModel,
        Field(
            description="`point-intake-3d` gives a volume, openings with an `elevation` being points",
            examples=["depth-mean"],
        ),
    ] = FieldModel.DEPTH_MEAN
    half_width: Annotated[
        PositiveMetres | None,
        Field(description="Half the side of the square window; absent: it grows until it holds the zone"),
    ] = None

    def enquiry(self) -> Enquiry:
        """What is wanted, in SI."""
        units, in_depth = self.unit_system, self.model is FieldModel.POINT_INTAKE_3D
        return Enquiry(
            element=self.element,
            limit=units.read(self.limit_speed, "m/s"),
            speed=self.speed,
            elevations=self.site_data().elevations if in_depth else None,
            half_width=None if self.half_width is None else units.read(self.half_width, "m"),
        )


class ZoneResult(Answer):
    """Zone of influence; bounds are proven where `is_certified`, else estimates from corners of boxes."""

    status: Annotated[str, Field(description="complete, reaches-window or empty", examples=["complete"])]
    is_certified: bool
    area: Annotated[AreaValue, Field(description="In plan")]
    area_least: AreaValue
    area_largest: AreaValue
    volume: Annotated[VolumeValue, Field(description="Area times depth in the depth-mean flow")]
    volume_least: VolumeValue
    volume_largest: VolumeValue
    reach: Annotated[LengthValue, Field(description="Largest distance in plan from the element's middle")]
    reach_least: LengthValue
    reach_largest: LengthValue
    window: Annotated[
        list[LengthValue],
        Field(description="x from, x to, y from, y to", examples=[[-10.0, 10.0, -10.0, 10.0]]),
    ]

"""Request of chart/flow-net."""

import math
from typing import Annotated, Self

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.quantities import Degrees, PixelCount
from forebay.api.schemas.stagnation import Window
from forebay.api.schemas.ways import describe_ways
from forebay.api.units import UnitSystem
from forebay.charts.options import ALL_LAYERS, FlowNetOptions, Layer, MediaType
from forebay.charts.units import SI, US
from forebay.flow.placement import scale_of


class ChartRequest(LayoutRequest):
    """Flow net of a layout."""

    model_config = {"json_schema_extra": describe_ways(("width", "height"), ())}

    window: Annotated[
        Window | None, Field(description="Part of the plan; chosen from the site if absent")
    ] = None
    title: Annotated[
        str,
        Field(
            min_length=1,
            max_length=120,
            pattern=r"^[^\x00-\x1f\x7f]+$",
            description="First line of the picture",
        ),
    ] = "Flow net"
    width: Annotated[PixelCount | None, Field(description="Width in pixels, with `height`")] = None
    height: Annotated[
        PixelCount | None, Field(description="Height in pixels, with `width`", examples=[800])
    ] = None
    layers: Annotated[
        list[Layer] | None,
        Field(max_length=len(Layer), description="What to show; everything if absent", examples=[["speed"]]),
    ] = None
    north_deg: Annotated[
        Degrees | None,
        Field(description="Direction of true north in the plan; if absent, that of `grid` or none"),
    ] = None

    @model_validator(mode="after")
    def _whole_size(self) -> Self:
        if (self.width is None) != (self.height is None):
            raise PydanticCustomError("one_way", "`width` and `height` go together")
        return self

    def options(self, media_type: str) -> FlowNetOptions:
        """Wishes in SI."""
        units = self.unit_system
        size = None if self.width is None or self.height is None else (self.width, self.height)
        return FlowNetOptions(
            media_type=MediaType(media_type),
            window=None if self.window is None else self.window.to_flow(units),
            title=self.title,
            size=size,
            units=US if units is UnitSystem.US else SI,
            layers=ALL_LAYERS if self.layers is None else frozenset(self.layers),
            north=self._north(),
        )

    def _north(self) -> float | None:
        """Direction of true north [rad]: as given, else that of the layout's map grid at its middle."""
        if self.north_deg is not None:
            return math.radians(self.north_deg)
        units = self.unit_system
        grid = self.layout.map_grid(units)
        return None if grid is None else grid.north(scale_of(self.flow_layout())[0])

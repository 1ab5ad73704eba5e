"""Request and answer of stagnation/search."""

from typing import Annotated, Self

from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from forebay.api.schemas.common import Answer, Strict
from forebay.api.schemas.layout import LayoutRequest
from forebay.api.schemas.places import Span
from forebay.api.schemas.quantities import (
    AngleValue,
    CountValue,
    FluxValue,
    LengthValue,
    RateValue,
    SpeedValue,
)
from forebay.api.units import UnitSystem
from forebay.flow.stagnation.result import SearchMethod, StagnationKind
from forebay.flow.stagnation.result import Window as FlowWindow


class Window(Strict):
    """Rectangle of the plan, from smaller to larger."""

    x: Annotated[Span, Field(description="Left and right edge")]
    y: Annotated[Span, Field(description="Lower and upper edge", examples=[[0.0, 110.0]])]

    @model_validator(mode="after")
    def _ordered(self) -> Self:
        if not (self.x[0] < self.x[1] and self.y[0] < self.y[1]):
            raise PydanticCustomError("empty_window", "A window runs from smaller to larger in x and in y")
        return self

    def to_flow(self, units: UnitSystem) -> FlowWindow:
        """Window in SI."""
        (left, right), (low, high) = ([units.read(edge, "m") for edge in span] for span in (self.x, self.y))
        return FlowWindow((left, right), (low, high))


class StagnationRequest(LayoutRequest):
    """All stagnation points of a layout, or those in a window."""

    window: Annotated[Window | None, Field(description="Where to search; all of the water if absent")] = None

    def flow_window(self) -> FlowWindow | None:
        """Window in SI."""
        return None if self.window is None else self.window.to_flow(self.unit_system)


class WindowValue(Answer):
    """Rectangle of the plan."""

    x: list[LengthValue]
    y: list[LengthValue]


class StagnationValue(Answer):
    """A place where the water stands still."""

    x: LengthValue
    y: LengthValue
    kind: Annotated[StagnationKind, Field(description="Shape of the flow around it")]
    on: Annotated[str, Field(description="Wall or structure it lies on, or `water`", examples=["water"])]
    residual_speed: Annotated[SpeedValue, Field(description="Speed computed there", examples=[1e-16])]
    strain_rate: Annotated[RateValue, Field(description="Principal strain rate")]
    outflow_deg: Annotated[AngleValue, Field(description="Direction along which water leaves; null if none")]
    stream_function: FluxValue
    inclusion_radius: Annotated[
        LengthValue, Field(description="The zero is within this distance", examples=[1e-12])
    ]
    multiplicity: Annotated[CountValue, Field(description="Simple zeros that coincide here", examples=[1])]
    is_artefact: Annotated[bool, Field(description="Belongs to the end of a line element, not to the site")]


class StagnationResult(Answer):
    """Stagnation points with an independent count of them."""

    points: list[StagnationValue]
    expected_count: CountValue
    found_count: CountValue
    complete: Annotated[bool, Field(description="Whether the independent count equals what was found")]
    method: SearchMethod
    degree: Annotated[CountValue, Field(description="Independent count; in the water 2, on a wall 1")]
    weight: Annotated[CountValue, Field(description="The same sum over what was found")]
    unresolved: Annotated[list[WindowValue], Field(description="Boxes the search could not decide")]

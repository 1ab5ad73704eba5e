"""Shores as a client writes them, and their conversion into the flow's own values."""

import math
from typing import Annotated, Literal

from pydantic import Field

from forebay.api.schemas.common import Strict
from forebay.api.schemas.quantities import Direction, InteriorDegrees, Position, PositiveMetres
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow

Along = Annotated[Direction, Field(description="Direction of the bank; the water lies on its left")]
Width = Annotated[PositiveMetres, Field(description="Distance between the two long banks", examples=[110.0])]


def unit_direction(pair: list[float]) -> complex:
    """Direction of length 1 as a complex number."""
    length = math.hypot(pair[0], pair[1])
    return complex(pair[0] / length, pair[1] / length)


class OpenWater(Strict):
    """No bank anywhere."""

    kind: Literal["open-water"]

    def to_flow(self, _units: UnitSystem) -> flow.OpenWater:
        """Open water, which has no numbers."""
        return flow.OpenWater()


class StraightBank(Strict):
    """One straight bank."""

    kind: Literal["straight-bank"]
    point: Annotated[Position, Field(description="Any point of the bank", examples=[[0.0, 0.0]])]
    along: Along

    def to_flow(self, units: UnitSystem) -> flow.StraightBank:
        """Straight bank in SI."""
        return flow.StraightBank(units.position(self.point), unit_direction(self.along))


class Channel(Strict):
    """Two parallel banks."""

    kind: Literal["channel"]
    point: Annotated[Position, Field(description="Any point of the right bank", examples=[[0.0, 0.0]])]
    along: Along
    width: Width

    def to_flow(self, units: UnitSystem) -> flow.Channel:
        """Channel in SI."""
        width = units.read(self.width, "m")
        return flow.Channel(units.position(self.point), unit_direction(self.along), width)


class Corner(Strict):
    """Two straight banks that meet."""

    kind: Literal["corner"]
    vertex: Annotated[Position, Field(description="Where the banks meet", examples=[[0.0, 0.0]])]
    along: Along
    interior_angle_deg: Annotated[InteriorDegrees, Field(description="Angle of the water between the banks")]

    def to_flow(self, units: UnitSystem) -> flow.Corner:
        """Corner in SI."""
        angle = math.radians(self.interior_angle_deg)
        return flow.Corner(units.position(self.vertex), unit_direction(self.along), angle)


class DeadEnd(Strict):
    """Channel closed at one end."""

    kind: Literal["dead-end"]
    point: Annotated[Position, Field(description="Right corner of the closed end", examples=[[0.0, 0.0]])]
    along: Annotated[Direction, Field(description="Direction out of the closed end")]
    width: Width

    def to_flow(self, units: UnitSystem) -> flow.DeadEnd:
        """Dead end in SI."""
        width = units.read(self.width, "m")
        return flow.DeadEnd(units.position(self.point), unit_direction(self.along), width)


class Basin(Strict):
    """Closed rectangle, whose discharges must balance."""

    kind: Literal["basin"]
    corner: Annotated[Position, Field(description="Corner where `along` starts", examples=[[0.0, 0.0]])]
    along: Along
    length: Annotated[PositiveMetres, Field(description="Extent along `along`", examples=[300.0])]
    width: Width

    def to_flow(self, units: UnitSystem) -> flow.Basin:
        """Basin in SI."""
        length, width = units.read(self.length, "m"), units.read(self.width, "m")
        return flow.Basin(units.position(self.corner), unit_direction(self.along), length, width)


Banks = OpenWater | StraightBank | Channel | Corner | DeadEnd | Basin

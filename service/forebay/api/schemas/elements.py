"""Elements and structures as a client writes them, and their conversion into the flow's own values."""

from typing import Annotated, Literal

from pydantic import Field

from forebay.api.schemas.common import Name, Strict
from forebay.api.schemas.discharges import Discharge, read_discharge
from forebay.api.schemas.quantities import (
    Elevation,
    ExcessDensity,
    Moment,
    PortArea,
    Position,
    PositiveMetres,
    SquareMetresPerSecond,
)
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.trade.applicability.site import PortShape


class Core(Strict):
    """Vortex core."""

    model: Annotated[
        flow.CoreModel, Field(description="How the vortex turns inside its core", examples=["lamb-oseen"])
    ]
    radius: Annotated[PositiveMetres, Field(description="Core radius")]


ElevationField = Annotated[
    Elevation | None,
    Field(description="Height of the opening's centre above the bed, at most the depth; absent: unknown"),
]
OpeningRadius = Annotated[
    PositiveMetres | None,
    Field(
        description="Radius of the opening or its screen in plan, inside which there is no water",
        examples=[0.4],
    ),
]
ExcessDensityField = Annotated[
    ExcessDensity | None,
    Field(description="Density of its water less that of the water around; negative: it rises"),
]
PortShapeField = Annotated[
    PortShape | None,
    Field(description="One round port, or a slot as long as the line; by kind if absent", examples=["slot"]),
]


class _Discharging(Strict):
    name: Name
    at: Annotated[Position, Field(description="Position")]
    discharge: Annotated[Discharge, Field(description="Discharge over the whole depth, positive")]
    elevation: ElevationField = None
    opening_radius: OpeningRadius = None


PortAreaField = Annotated[
    PortArea | None, Field(description="Area of the port; known, its jet can be judged")
]


class Source(_Discharging):
    """Point outfall."""

    kind: Literal["source"]
    port_area: PortAreaField = None
    excess_density: ExcessDensityField = None

    def to_flow(self, units: UnitSystem) -> flow.Source:
        """Source in SI."""
        return flow.Source(self.name, units.position(self.at), read_discharge(self.discharge, units))


class Sink(_Discharging):
    """Point intake."""

    kind: Literal["sink"]

    def to_flow(self, units: UnitSystem) -> flow.Sink:
        """Sink in SI."""
        return flow.Sink(self.name, units.position(self.at), read_discharge(self.discharge, units))


class _Spread(Strict):
    name: Name
    start: Annotated[Position, Field(alias="from", description="One end")]
    end: Annotated[Position, Field(alias="to", description="Other end", examples=[[52.0, 0.0]])]
    discharge: Annotated[Discharge, Field(description="Discharge of the whole line, positive")]


class LineSource(_Spread):
    """Diffuser: a source spread evenly along a line."""

    kind: Literal["line-source"]
    port_area: PortAreaField = None
    port_shape: PortShapeField = None
    excess_density: ExcessDensityField = None

    def to_flow(self, units: UnitSystem) -> flow.LineSource:
        """Line source in SI."""
        ends = units.position(self.start), units.position(self.end)
        return flow.LineSource(self.name, *ends, read_discharge(self.discharge, units))


class LineSink(_Spread):
    """Screen bay: a sink spread evenly along a line."""

    kind: Literal["line-sink"]
    elevation: ElevationField = None

    def to_flow(self, units: UnitSystem) -> flow.LineSink:
        """Line sink in SI."""
        ends = units.position(self.start), units.position(self.end)
        return flow.LineSink(self.name, *ends, read_discharge(self.discharge, units))


class Vortex(Strict):
    """Vortex, free unless it has a core."""

    kind: Literal["vortex"]
    name: Name
    at: Annotated[Position, Field(description="Position of the centre")]
    circulation: Annotated[SquareMetresPerSecond, Field(description="Circulation, anticlockwise positive")]
    core: Annotated[Core | None, Field(description="Core; without one the vortex is free")] = None

    def to_flow(self, units: UnitSystem) -> flow.Vortex:
        """Vortex in SI."""
        core = None if self.core is None else flow.Core(self.core.model, units.read(self.core.radius, "m"))
        return flow.Vortex(self.name, units.position(self.at), units.read(self.circulation, "m2/s"), core)


class Doublet(Strict):
    """Source and sink at one place, w = -M/(2 pi (z - at))."""

    kind: Literal["doublet"]
    name: Name
    at: Annotated[Position, Field(description="Position")]
    moment: Annotated[
        Moment,
        PortArea,
        Field(
            description="Strength per unit depth times spacing, from the sink to the source of the pair",
            examples=[[-1.2, 0.0]],
        ),
    ]

    def to_flow(self, units: UnitSystem) -> flow.Doublet:
        """Doublet in SI."""
        mx, my = (units.read(part, "m3/s") for part in self.moment)
        return flow.Doublet(self.name, units.position(self.at), complex(mx, my))


Element = Annotated[
    Source | Sink | LineSource | LineSink | Vortex | Doublet,
    Field(discriminator="kind", description="An element"),
]


class Pier(Strict):
    """Circular pier."""

    kind: Literal["pier"]
    name: Name
    at: Annotated[Position, Field(description="Position of the centre")]
    radius: Annotated[PositiveMetres, Field(description="Radius", examples=[1.5])]
    circulation: Annotated[
        SquareMetresPerSecond,
        Field(description="Circulation round the pier, anticlockwise positive", examples=[0.0]),
    ] = 0.0

    def to_flow(self, units: UnitSystem) -> flow.Pier:
        """Pier in SI."""
        circulation = units.read(self.circulation, "m2/s")
        return flow.Pier(self.name, units.position(self.at), units.read(self.radius, "m"), circulation)

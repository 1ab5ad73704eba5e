"""A layout as a client writes it, and its conversion into the flow's own values."""

from collections.abc import Iterator
from dataclasses import replace
from typing import Annotated

import numpy as np
from pydantic import Field, PrivateAttr

from forebay.api.names import refuse_reserved
from forebay.api.schemas.common import ComputeRequest, Strict
from forebay.api.schemas.conditions import Conditions
from forebay.api.schemas.elements import Element, Pier
from forebay.api.schemas.outlines import Outline
from forebay.api.schemas.quantities import (
    PerSecond,
    Position,
    Tolerance,
    Velocity,
)
from forebay.api.schemas.shores import Banks, OpenWater
from forebay.api.schemas.surveyed import GridCode, SurveyedShore
from forebay.api.schemas.water import Water
from forebay.api.units import UnitSystem
from forebay.flow import layout as flow
from forebay.flow.placement import places
from forebay.trade.applicability.site import SiteData
from forebay.trade.survey.attachments import Attached, attached, with_attached
from forebay.trade.survey.conflicts import check_conflicts
from forebay.trade.survey.errors import UnsuitableGridError
from forebay.trade.survey.grids import MapGrid, projected_grid, scale_error
from forebay.trade.survey.rings import Change
from forebay.trade.survey.water import SurveyedWater, corners

Shore = Annotated[Banks | SurveyedShore, Field(discriminator="kind", description="Banks")]
Structure = Annotated[Pier | Outline, Field(discriminator="kind", description="A structure")]

MAX_ELEMENTS = 2000
"""Elements that the schema admits; a service may set a lower limit."""

MAX_STRUCTURES = 500
"""Structures that the schema admits; a service may set a lower limit."""


EFFORT_A_PAIR = 100
"""Work to review one pair of elements or structures, counted in pairs of element and point."""

EFFORT_A_PIER_PAIR = 400_000
"""Work to solve the flow round piers, for each pair of them, counted likewise."""

EFFORT_A_VERTEX = 60_000
"""Work to solve the flow along rings and outlines, for each vertex, counted likewise."""

EFFORT_A_VERTEX_PAIR = 3_000
"""The same, for each pair of vertices: a dozen unknowns a vertex, all of which feel each other."""


GradientRow = Annotated[list[PerSecond], Field(min_length=2, max_length=2, fail_fast=True)]


class Ambient(Strict):
    """Current far upstream of every element, with an optional linear part about `at`."""

    velocity: Annotated[Velocity, Field(description="Velocity far upstream", examples=[[0.35, 0.0]])] = [
        0.0,
        0.0,
    ]
    gradient: Annotated[
        list[GradientRow],
        Field(
            min_length=2,
            max_length=2,
            fail_fast=True,
            description="[[du/dx, du/dy], [dv/dx, dv/dy]], zero trace",
            examples=[[[0.0, 0.001], [0.0, 0.0]]],
        ),
    ] = [[0.0, 0.0], [0.0, 0.0]]
    at: Annotated[Position, Field(description="Where the linear part vanishes", examples=[[0.0, 0.0]])] = [
        0.0,
        0.0,
    ]

    def to_flow(self, units: UnitSystem) -> flow.Ambient:
        """Ambient current in SI."""
        (ux, uy), (vx, vy) = self.gradient
        u, v = (units.read(part, "m/s") for part in self.velocity)
        return flow.Ambient(complex(u, v), ((ux, uy), (vx, vy)), units.position(self.at))


class Layout(Conditions):
    """A site: water, current, banks, what draws and gives, what stands in the way."""

    water: Annotated[Water, Field(description="Water properties")] = Water()
    ambient: Annotated[Ambient, Field(description="Ambient current")] = Ambient()
    shore: Annotated[Shore, Field(description="Banks; open water if absent")] = OpenWater(kind="open-water")
    elements: Annotated[
        list[Element], Field(max_length=MAX_ELEMENTS, description="What draws, gives or turns")
    ] = []
    structures: Annotated[
        list[Structure], Field(max_length=MAX_STRUCTURES, description="What stands in the water")
    ] = []
    grid: GridCode | None = None
    tolerance: Annotated[
        Tolerance,
        Field(
            description=(
                "Largest error of the stream function along outlines and surveyed rings, as part of the flow "
                "through; the answer's `boundary` says what was reached"
            )
        ),
    ] = 1e-4

    @property
    def size(self) -> int:
        """Number of elements and structures."""
        return len(self.elements) + len(self.structures)

    @property
    def vertices(self) -> int:
        """Number of vertices of rings and outlines."""
        outlines = sum(structure.size for structure in self.structures if isinstance(structure, Outline))
        return outlines + (self.shore.size if isinstance(self.shore, SurveyedShore) else 0)

    @property
    def effort(self) -> int:
        """Work before the first point: checks of each pair of things, and the solution along all walls."""
        piers = sum(isinstance(structure, Pier) for structure in self.structures)
        walls = EFFORT_A_VERTEX * self.vertices + EFFORT_A_VERTEX_PAIR * self.vertices**2
        return EFFORT_A_PAIR * self.size**2 + EFFORT_A_PIER_PAIR * piers**2 + walls

    _known: dict[UnitSystem, tuple[flow.Layout, SiteData]] = PrivateAttr(default_factory=dict)

    def converted(self, units: UnitSystem) -> tuple[flow.Layout, SiteData]:
        """`to_flow` and `site_data`, once for all the requests that share this layout: it is frozen."""
        if units not in self._known:
            self._known[units] = self.to_flow(units), self.site_data(units)
        return self._known[units]

    def is_converted(self, units: UnitSystem) -> bool:
        """Whether `converted` has succeeded."""
        return units in self._known

    def to_flow(self, units: UnitSystem) -> flow.Layout:
        """Layout in SI, with complex positions.

        Raises LayoutError: ReservedNameError if a name means something else in an answer, or what is wrong
        with surveyed geometry.
        """
        refuse_reserved({"elements": self.elements, "structures": self.structures})
        water = self.surveyed(units)
        layout = flow.Layout(
            depth=units.read(self.depth, "m"),
            water=self.water.to_flow(units),
            ambient=self.ambient.to_flow(units),
            shore=self._plain_shore(units) if water is None else water.shore,
            elements=tuple(element.to_flow(units) for element in self.elements),
            structures=tuple(self._flow_structures(units)),
            tolerance=self.tolerance,
        )
        check_conflicts(layout)
        return with_attached(layout)

    def _plain_shore(self, units: UnitSystem) -> flow.Shore:
        if isinstance(self.shore, SurveyedShore):
            raise TypeError("surveyed water is converted by its survey")
        return self.shore.to_flow(units)

    def _flow_structures(self, units: UnitSystem) -> Iterator[flow.Structure]:
        for index, structure in enumerate(self.structures):
            if isinstance(structure, Outline):
                yield structure.to_flow(units, ("structures", index))
            else:
                yield structure.to_flow(units)

    def surveyed(self, units: UnitSystem) -> SurveyedWater | None:
        """Surveyed water on the plan of the layout, with what was done to it; None on other shores.

        Raises LayoutError, whose path leads to what is wrong.
        """
        if not isinstance(self.shore, SurveyedShore):
            return None
        if self.shore.grid is not None and self.grid not in (None, self.shore.grid):
            raise UnsuitableGridError("it differs from the layout's own", ("shore", "grid"))
        return self.shore.survey(units, self.grid)

    def map_grid(self, units: UnitSystem) -> MapGrid | None:
        """Grid in which x, y are metres; None if nobody has said where the plan lies.

        Raises LayoutError: there is no such grid, or it does not serve.
        """
        water = self.surveyed(units)
        if water is not None or self.grid is None:
            return None if water is None else water.grid
        grid = projected_grid(self.grid, ("grid",))
        stand = [at for element in self.elements for _, at in places(element.to_flow(units))]
        if stand:
            scale_error(grid, corners(np.array(stand)), ("grid",))
        return grid

    def mended(self, units: UnitSystem) -> tuple[Change, ...]:
        """What was mended, moved and left out of rings and outlines."""
        water = self.surveyed(units)
        changes = [] if water is None else [*water.changes]
        for index, structure in enumerate(self.structures):
            if isinstance(structure, Outline):
                changes += structure.traced(units, ("structures", index))[1]
        changes += () if water is None else self._attached(water, units).changes
        return tuple(changes)

    def merged(self, units: UnitSystem) -> tuple[int, ...]:
        """Numbers of the structures that became part of surveyed land."""
        water = self.surveyed(units)
        return () if water is None else self._attached(water, units).merged

    def _attached(self, water: SurveyedWater, units: UnitSystem) -> Attached:
        return attached(water.shore, tuple(self._flow_structures(units)))

    def site_data(self, units: UnitSystem) -> SiteData:
        """What is known of the site beside its flow, in SI.

        Raises ElevationOutsideWaterError for an elevation above the surface.
        """
        merged = set(self.merged(units))
        outlines = (s for index, s in enumerate(self._flow_structures(units)) if index in merged)
        known = tuple(outline for outline in outlines if isinstance(outline, flow.Outline))
        return replace(self.data_of(self.elements, units), merged=known)


class LayoutRequest(ComputeRequest):
    """What every route about a layout takes."""

    layout: Annotated[Layout, Field(description="The site")]

    def flow_layout(self) -> flow.Layout:
        """Layout in SI."""
        return self.layout.converted(self.unit_system)[0]

    def site_data(self) -> SiteData:
        """What is known of the site beside its flow, in SI."""
        return self.layout.converted(self.unit_system)[1]

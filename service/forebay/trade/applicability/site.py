"""A site under review: its layout, what else is known of it, and the answer at hand."""

import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from enum import StrEnum
from functools import cached_property

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.ends import ends_of as far_ends
from forebay.flow.errors import Path
from forebay.flow.layout import (
    Channel,
    DeadEnd,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    Outline,
    Pier,
    Sink,
    Source,
    Surveyed,
    Vortex,
    outflow,
)
from forebay.trade.applicability.bodies import Body, bodies_of
from forebay.trade.applicability.geometry import distance_to, ends_of
from forebay.trade.exposure import Threshold


class PortShape(StrEnum):
    """How an outfall's water comes out."""

    ROUND = "round"
    SLOT = "slot"


@dataclass(frozen=True, slots=True)
class SiteData:
    """What a layout does not say; None or a missing name stands for unknown.

    bed_friction : c_f = (friction velocity / speed)^2 [-]
    port_areas : area of an outfall's port by its name [m2]
    wind_speed : at 10 m [m/s];  wind_direction : where it blows to, anticlockwise from +x [deg]
    density_difference : between layers [kg/m3];  interface_elevation : of their interface above the bed [m]
    depth_range : least and largest depth [m]
    tidal_period : after which the current reverses [s];  latitude : north positive [deg]
    elevations : of openings above the bed, by name [m];  opening_radii : in plan, by name [m]
    excess_densities : of outfalls' water over the water around, by name [kg/m3]
    port_shapes : of outfalls by name; a point's port is round, a line's a slot, if nothing is known
    merged : outlines that stand on surveyed land and have become part of it, so that the layout lacks them
    """

    bed_friction: float | None = None
    port_areas: Mapping[str, float] = field(default_factory=dict)
    wind_speed: float | None = None
    density_difference: float | None = None
    depth_range: tuple[float, float] | None = None
    wind_direction: float | None = None
    interface_elevation: float | None = None
    tidal_period: float | None = None
    latitude: float | None = None
    elevations: Mapping[str, float] = field(default_factory=dict)
    opening_radii: Mapping[str, float] = field(default_factory=dict)
    excess_densities: Mapping[str, float] = field(default_factory=dict)
    port_shapes: Mapping[str, PortShape] = field(default_factory=dict)
    merged: tuple[Outline, ...] = ()


@dataclass(frozen=True, slots=True)
class Readings:
    """The answer at hand.

    points : where values were asked for [m];  max_speed : largest speed among them [m/s]
    has_dissipation : whether strain, dissipation or G are in it
    resolves_openings : whether the near field of openings of known elevation is in the numbers
    thresholds : of exposure that the answer compares with
    assumed_temperature : of the water [degC], where the answer depends on it and nobody gave it
    boundary_bound : of the stream function's error along solved walls, over the flow through [-]
    """

    points: ComplexArray | None = None
    max_speed: float | None = None
    has_dissipation: bool = False
    resolves_openings: bool = False
    thresholds: tuple[Threshold, ...] = ()
    assumed_temperature: float | None = None
    boundary_bound: float | None = None


Thing = Element | Pier


@dataclass(frozen=True)
class Site:
    """What the rules look at."""

    layout: Layout
    data: SiteData = field(default_factory=SiteData)
    readings: Readings = field(default_factory=Readings)

    def elements(self) -> Iterator[tuple[Path, Element]]:
        """Elements with their paths."""
        for index, element in enumerate(self.layout.elements):
            yield ("elements", index), element

    @cached_property
    def bodies(self) -> tuple[Body, ...]:
        """Piers, outlines and islands: what water flows past."""
        found = bodies_of(self.layout, self.data.merged)
        return tuple(body for body in found if self.breadth(body) > 0.0)

    def compact(self) -> Iterator[tuple[Path, Source | Sink]]:
        """Sources and sinks at a point."""
        for path, element in self.elements():
            if isinstance(element, Source | Sink):
                yield path, element

    def outfalls(self) -> Iterator[tuple[Path, Source | LineSource]]:
        """Elements that give water."""
        for path, element in self.elements():
            if isinstance(element, Source | LineSource):
                yield path, element

    def intakes(self) -> Iterator[tuple[Path, Sink | LineSink]]:
        """Elements that take water."""
        for path, element in self.elements():
            if isinstance(element, Sink | LineSink):
                yield path, element

    def nearest_thing(self, z: complex, *, besides: Thing) -> tuple[float, str] | None:
        """Distance [m] and name of the nearest other element or pier."""
        starts, spans, radii = self._outlines
        share = ((z - starts) * spans.conj()).real / np.where(spans == 0.0, 1.0, np.abs(spans) ** 2)
        distances = np.abs(z - starts - np.clip(share, 0.0, 1.0) * spans) - radii
        distances[self._order[id(besides)]] = np.inf
        nearest = int(np.argmin(distances)) if distances.size > 1 else -1
        return (float(distances[nearest]), self._things[nearest].name) if nearest >= 0 else None

    @cached_property
    def _things(self) -> tuple[Thing, ...]:
        return (*self.layout.elements, *self.layout.piers)

    @cached_property
    def _order(self) -> dict[int, int]:
        return {id(thing): index for index, thing in enumerate(self._things)}

    @cached_property
    def _outlines(self) -> tuple[ComplexArray, ComplexArray, FloatArray]:
        """Starts, spans and radii of everything: a point has no span, only a pier a radius [m]."""
        ends = [ends_of(thing) for thing in self._things]
        starts = np.array([places[0] for places in ends], dtype=np.complex128)
        spans = np.array([places[-1] for places in ends], dtype=np.complex128) - starts
        radii = [thing.radius if isinstance(thing, Pier) else 0.0 for thing in self._things]
        return starts, spans, np.array(radii)

    @cached_property
    def extent(self) -> float:
        """Largest distance between ends of elements and centres of piers [m]."""
        places = np.array([end for thing in self._things for end in ends_of(thing)], dtype=np.complex128)
        return float(np.max(np.abs(places[:, None] - places), initial=0.0))

    @property
    def net_outflow(self) -> float:
        """Water that the elements add, all together [m3/s]."""
        return math.fsum(outflow(element) for element in self.layout.elements)

    @property
    def far_speeds(self) -> dict[str, float]:
        """Speed [m/s] at each far end by its name, by continuity in a channel and through open edges."""
        layout, ambient = self.layout, abs(self.layout.ambient.velocity)
        match layout.shore:
            case Channel(width=width):
                gain = self.net_outflow / (layout.depth * width)
                if ambient == 0.0:
                    return {"upstream": abs(0.5 * gain), "downstream": abs(0.5 * gain)}
                return {"upstream": ambient, "downstream": abs(ambient + gain)}
            case DeadEnd(width=width):
                return {"open-end": abs(self.net_outflow) / (layout.depth * width)}
            case Surveyed(edges=edges) if edges:
                return {end.name: end.speed for end in far_ends(layout)}
            case _:
                return {"ambient": ambient}

    @property
    def current(self) -> float:
        """Largest speed at a far end [m/s]: the current that the elements are in."""
        return max(self.far_speeds.values())

    def stream(self, z: complex) -> complex:
        """The ambient current at a place [m/s]; zero where it has no vector, as in surveyed water."""
        ambient = self.layout.ambient
        (a, b), (c, d) = ambient.gradient
        away = z - ambient.at
        shear = complex(a * away.real + b * away.imag, c * away.real + d * away.imag)
        return ambient.velocity + shear

    def breadth(self, body: Body) -> float:
        """Extent of a body across the stream, or its largest where the stream is not known [m]."""
        return body.breadth(self.stream(body.middle))

    def speed_past(self, body: Body) -> float:
        """Bound on the speed at a body without banks [m/s].

        An element nearer to its middle than half its breadth counts as if it stood that far away.
        """
        local = max(self.current, abs(self.stream(body.middle)))
        least = 0.5 * self.breadth(body)
        elements, depth = self.layout.elements, self.layout.depth
        return local + math.fsum(_induced(element, body.middle, depth, least) for element in elements)


def _induced(element: Element, z: complex, depth: float, least: float) -> float:
    """Speed that one element alone makes at a distance of at least `least`, or a bound on it [m/s]."""
    distance = max(distance_to(element, z), least)
    match element:
        case Vortex():
            strength = abs(element.circulation)
        case Doublet():
            strength = abs(element.moment) / distance
        case _:
            strength = element.discharge / depth
    return strength / (2.0 * math.pi * distance)

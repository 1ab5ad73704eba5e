"""What stands in the water: frozen values, SI units, positions as complex x + iy [m]."""

from dataclasses import dataclass, field
from enum import StrEnum


class CoreModel(StrEnum):
    """How a vortex turns inside its core."""

    RANKINE = "rankine"
    LAMB_OSEEN = "lamb-oseen"


@dataclass(frozen=True, slots=True)
class Core:
    """Vortex core. radius a [m]: rigid rotation within a (rankine), or exp(-r2/a2) vorticity."""

    model: CoreModel
    radius: float


@dataclass(frozen=True, slots=True)
class Source:
    """Point source of discharge Q > 0 [m3/s] into the water, over the whole depth."""

    name: str
    at: complex
    discharge: float


@dataclass(frozen=True, slots=True)
class Sink:
    """Point sink of discharge Q > 0 [m3/s] out of the water, over the whole depth."""

    name: str
    at: complex
    discharge: float


@dataclass(frozen=True, slots=True)
class LineSource:
    """Source of discharge Q > 0 [m3/s] spread evenly from `start` to `end`."""

    name: str
    start: complex
    end: complex
    discharge: float


@dataclass(frozen=True, slots=True)
class LineSink:
    """Sink of discharge Q > 0 [m3/s] spread evenly from `start` to `end`."""

    name: str
    start: complex
    end: complex
    discharge: float


@dataclass(frozen=True, slots=True)
class Vortex:
    """Vortex of circulation [m2/s], anticlockwise positive; free (no core) or with a core."""

    name: str
    at: complex
    circulation: float
    core: Core | None = None


@dataclass(frozen=True, slots=True)
class Doublet:
    """Doublet w = -M / (2 pi (z - at)); moment M [m3/s]: strength [m2/s] times spacing, sink to source."""

    name: str
    at: complex
    moment: complex


Element = Source | Sink | LineSource | LineSink | Vortex | Doublet
PointElement = Source | Sink | Vortex | Doublet
LineElement = LineSource | LineSink


@dataclass(frozen=True, slots=True)
class Pier:
    """Circular pier of `radius` [m] with `circulation` [m2/s] round it, anticlockwise positive."""

    name: str
    at: complex
    radius: float
    circulation: float = 0.0


@dataclass(frozen=True, slots=True)
class Outline:
    """Solid of any shape: groyne, jetty, quay, island.

    points : vertices, anticlockwise, the first not repeated at the end, x + iy [m]; what lies on or behind a
    bank is cut off when the layout is compiled
    circulation : round one that stands free in the water, anticlockwise positive [m2/s]
    """

    name: str
    points: tuple[complex, ...]
    circulation: float = 0.0


Structure = Pier | Outline


@dataclass(frozen=True, slots=True)
class OpenWater:
    """No bank anywhere."""


@dataclass(frozen=True, slots=True)
class StraightBank:
    """One straight bank through `point`; the water lies left of `along` (unit)."""

    point: complex
    along: complex


@dataclass(frozen=True, slots=True)
class Channel:
    """Two parallel banks; `point` on the right one, `along` (unit), `width` [m] to the left."""

    point: complex
    along: complex
    width: float


@dataclass(frozen=True, slots=True)
class Corner:
    """Two straight banks from `vertex`, along `along` (unit) and at `interior_angle` [rad] to its left."""

    vertex: complex
    along: complex
    interior_angle: float


@dataclass(frozen=True, slots=True)
class DeadEnd:
    """Channel closed at one end; `point` the closed end's right corner, `along` (unit) out of it."""

    point: complex
    along: complex
    width: float


@dataclass(frozen=True, slots=True)
class Basin:
    """Closed rectangle; `length` [m] along `along` (unit) from `corner`, `width` [m] to the left."""

    corner: complex
    along: complex
    length: float
    width: float


class EdgeProfile(StrEnum):
    """How the water crosses an open edge."""

    EQUIPOTENTIAL = "equipotential"
    UNIFORM = "uniform"


@dataclass(frozen=True, slots=True)
class OpenEdge:
    """Part of the outer ring of surveyed water where water comes in or goes out.

    first, count : the edges first ... first + count - 1 of the ring, edge k from point k to point k + 1
    discharge : into the water [m3/s]; None on at most one edge, which continuity then gives
    profile : square to the edge with one potential on it, or the same speed everywhere
    """

    name: str
    first: int
    count: int
    discharge: float | None
    profile: EdgeProfile


@dataclass(frozen=True, slots=True)
class Island:
    """Island in surveyed water; points clockwise, x + iy [m]; circulation anticlockwise positive [m2/s]."""

    name: str
    points: tuple[complex, ...]
    circulation: float = 0.0


@dataclass(frozen=True, slots=True)
class Stretch:
    """Land with a name of its own, a jetty that has grown out of a bank, say.

    ring : 0 for the outer ring, k for the k-th island;  edges : as `OpenEdge.first`, in any order
    """

    name: str
    ring: int
    edges: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Surveyed:
    """Water within a polygon; `outer` anticlockwise, x + iy [m], so that water lies left of every ring."""

    outer: tuple[complex, ...]
    islands: tuple[Island, ...] = ()
    edges: tuple[OpenEdge, ...] = ()
    stretches: tuple[Stretch, ...] = ()


Shore = OpenWater | StraightBank | Channel | Corner | DeadEnd | Basin | Surveyed


@dataclass(frozen=True, slots=True)
class Ambient:
    """Current without the elements: u = velocity + gradient (x - at).

    velocity : u + iv [m/s], far upstream of every element
    gradient : ((du/dx, du/dy), (dv/dx, dv/dy)) [1/s], zero trace
    at : where the gradient's part vanishes, x + iy [m]
    """

    velocity: complex = 0j
    gradient: tuple[tuple[float, float], tuple[float, float]] = ((0.0, 0.0), (0.0, 0.0))
    at: complex = 0j

    @property
    def vorticity(self) -> float:
        """dv/dx - du/dy [1/s], anticlockwise positive."""
        return self.gradient[1][0] - self.gradient[0][1]

    @property
    def has_gradient(self) -> bool:
        """Whether any entry of the gradient differs from zero."""
        return any(entry != 0.0 for row in self.gradient for entry in row)


@dataclass(frozen=True, slots=True)
class Water:
    """Temperature [degC] and absolute salinity [g/kg]."""

    temperature: float = 10.0
    salinity: float = 0.0


@dataclass(frozen=True, slots=True)
class Layout:
    """A site: water, current, shore, elements and structures.

    depth : mean depth [m]
    tolerance : largest error of the stream function that outlines and surveyed shores are solved to, as part
    of the flow through [-]
    """

    depth: float
    water: Water = field(default_factory=Water)
    ambient: Ambient = field(default_factory=Ambient)
    shore: Shore = field(default_factory=OpenWater)
    elements: tuple[Element, ...] = ()
    structures: tuple[Structure, ...] = ()
    tolerance: float = 1e-4

    @property
    def piers(self) -> tuple[Pier, ...]:
        """The piers among the structures, in order."""
        return tuple(s for s in self.structures if isinstance(s, Pier))

    @property
    def outlines(self) -> tuple[Outline, ...]:
        """The outlines among the structures, in order."""
        return tuple(s for s in self.structures if isinstance(s, Outline))

    @property
    def intakes(self) -> tuple[str, ...]:
        """Names of every sink and line sink, in order."""
        return tuple(element.name for element in self.elements if isinstance(element, Sink | LineSink))


def outflow(element: Element) -> float:
    """Discharge of an element into the water [m3/s]: positive for sources, negative for sinks, else 0."""
    match element:
        case Source() | LineSource():
            return element.discharge
        case Sink() | LineSink():
            return -element.discharge
        case Vortex() | Doublet():
            return 0.0

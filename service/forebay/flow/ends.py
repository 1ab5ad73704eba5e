"""The far ends of the water: where it comes from and goes to when no element does."""

from dataclasses import dataclass
from itertools import pairwise
from math import nan

from forebay.flow.layout import (
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Layout,
    OpenEdge,
    OpenWater,
    StraightBank,
    Surveyed,
    outflow,
)


@dataclass(frozen=True, slots=True)
class End:
    """A far end of the water.

    name : "ambient", "upstream", "downstream", "open-end" or the name of an open edge
    inflow : water entering there per depth [m2/s], negative if it leaves; nan where unbounded
    speed : current there [m/s], always >= 0
    direction : unit complex pointing out of the site towards the end; 0 where all directions count
    """

    name: str
    inflow: float
    speed: float
    direction: complex


def ends_of(layout: Layout) -> tuple[End, ...]:
    """The far ends of a layout's water.

    In a channel the current is that of the end it comes from; the other end follows from continuity,
    U_down = U_up + (sum of q) / width. Without a current each end supplies half of what the elements take.
    """
    shore, velocity = layout.shore, layout.ambient.velocity
    match shore:
        case OpenWater() | StraightBank() | Corner():
            direction = -velocity / abs(velocity) if velocity != 0 else 0j
            return (End("ambient", nan, abs(velocity), direction),)
        case Channel():
            return _channel_ends(shore, velocity, _net(layout))
        case DeadEnd():
            net = _net(layout)
            return (End("open-end", -net, abs(net) / shore.width, shore.along),)
        case Basin():
            return ()
        case Surveyed():
            return tuple(_edge_end(shore, edge, layout) for edge in shore.edges)


def inflows(shore: Surveyed, layout: Layout) -> tuple[float, ...]:
    """Discharge of each open edge into the water per depth [m2/s]; continuity gives the one left open."""
    given = sum(edge.discharge for edge in shore.edges if edge.discharge is not None) / layout.depth
    rest = -_net(layout) - given
    return tuple(rest if e.discharge is None else e.discharge / layout.depth for e in shore.edges)


def edge_points(shore: Surveyed, edge: OpenEdge) -> tuple[complex, ...]:
    """Vertices of an open edge from its first to its last, x + iy [m]."""
    count = len(shore.outer)
    return tuple(shore.outer[(edge.first + k) % count] for k in range(edge.count + 1))


def _edge_end(shore: Surveyed, edge: OpenEdge, layout: Layout) -> End:
    points = edge_points(shore, edge)
    inflow = inflows(shore, layout)[shore.edges.index(edge)]
    length = sum(abs(b - a) for a, b in pairwise(points))
    chord = points[-1] - points[0]
    return End(edge.name, inflow, abs(inflow) / length, -1j * chord / abs(chord))


def _net(layout: Layout) -> float:
    return sum(outflow(element) for element in layout.elements) / layout.depth


def _channel_ends(shore: Channel, velocity: complex, net: float) -> tuple[End, End]:
    current = (velocity * shore.along.conjugate()).real
    if current == 0.0:
        inflow_up = inflow_down = -0.5 * net
        towards = -shore.along
    else:
        inflow_up = abs(current) * shore.width
        inflow_down = -net - inflow_up
        towards = -shore.along if current > 0.0 else shore.along
    return (
        End("upstream", inflow_up, abs(inflow_up) / shore.width, towards),
        End("downstream", inflow_down, abs(inflow_down) / shore.width, -towards),
    )

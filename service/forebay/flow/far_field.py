"""Where a streamline has left the site for good: the far ends of the water.

In a channel the velocity tends to a constant like exp(-pi x / width), so that a few widths beyond the last
element nothing can turn a streamline back. In unbounded water it tends to the ambient current like 1/r, or,
without a current, to the field of the net discharge; the circle is put where what is left of the elements is
a small part of it.
"""

from dataclasses import dataclass
from math import inf, isnan, pi

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray, IntArray
from forebay.flow.layout import Channel, Corner, DeadEnd, Doublet, outflow
from forebay.flow.model import FlowModel

_STATION = 8.0
"""Widths beyond the last element at which a channel's end begins: exp(-8 pi) = 1e-11 [-]."""
_DOMINANCE = 20.0
"""How many times the leading part of the far field exceeds the rest on the circle [-]."""
_GRADIENT_REACH = 1000.0
"""Radius of the circle over the size of the layout, where an ambient gradient grows without bound [-]."""
_STILL = 1e-12
"""Part of the sum of all discharges below which an end takes nothing [-]."""


@dataclass(frozen=True, slots=True)
class FarEnd:
    """One end of the water.

    name : of the model's `ends`;  speed : there [m/s]
    gives, takes : whether water comes from it, goes to it
    """

    name: str
    speed: float
    gives: bool
    takes: bool


@dataclass(frozen=True, slots=True)
class FarField:
    """The ends and the line beyond which a streamline belongs to them.

    ends : at most two; in a channel the first lies against `axis`, the second along it
    centre, radius : middle [m] and half-size [m] of everything that stands in the water
    reach : distance from `centre` at which the far field begins, along `axis` or in every direction [m]
    axis : unit complex along a channel, 0 where the far field is a circle
    """

    ends: tuple[FarEnd, ...]
    centre: complex
    radius: float
    reach: float
    axis: complex

    def distance(self, z: ComplexArray) -> FloatArray:
        """Distance from the centre as the far field counts it: along the axis, with sign, or radial [m]."""
        offset = z - self.centre
        return (offset * np.conj(self.axis)).real if self.axis else np.abs(offset)

    @property
    def is_round(self) -> bool:
        """Whether the far field begins on a circle."""
        return not self.axis

    def ahead(self, z: ComplexArray, _heading: ComplexArray) -> FloatArray:
        """Distance to an end that must not be overrun, shape (n,): inf, since water goes on beyond [m]."""
        return np.full(z.shape, inf)

    def reached(self, z: ComplexArray, heading: ComplexArray, *, forward: bool) -> IntArray:
        """Index of the end that each point has reached, -1 for none.

        z : shape (n,) [m];  heading : unit direction of progress;  forward : with the water or against it
        """
        found = np.full(z.shape, -1, dtype=np.int64)
        distance = self.distance(z)
        for k, end in enumerate(self.ends):
            if not (end.takes if forward else end.gives):
                continue
            found[self._beyond(k, distance) & (self._outward(k, z, heading) > 0.0)] = k
        return found

    def _beyond(self, k: int, distance: FloatArray) -> BoolArray:
        if not self.axis:
            return distance > self.reach
        return distance > self.reach if self._side(k) > 0 else distance < -self.reach

    def _side(self, k: int) -> int:
        return 1 if len(self.ends) == 1 or k == 1 else -1

    def _outward(self, k: int, z: ComplexArray, heading: ComplexArray) -> FloatArray:
        direction = self._side(k) * self.axis if self.axis else z - self.centre
        return np.asarray((heading * np.conj(direction)).real, dtype=np.float64)


def far_field_of(model: FlowModel, places: ComplexArray) -> FarField:
    """Far field of a model.

    Parameters
    ----------
    model : the flow
    places : shape (m,), what the far field must leave behind: elements, piers, stagnation points [m]

    Notes
    -----
    Where an ambient gradient grows without bound the circle is only a thousand sizes away, not proved final.
    """
    centre = complex(
        np.mean([places.real.min(), places.real.max()]), np.mean([places.imag.min(), places.imag.max()])
    )
    shore = model.layout.shore
    size = max(float(np.max(np.abs(places - centre))), 1e-6 * model.scale)
    size = max([size, *(abs(pier.at - centre) + pier.radius for pier in model.piers)])
    if isinstance(shore, (Channel, DeadEnd)):
        stations = ((places - centre) * np.conj(shore.along)).real
        reach = float(np.max(np.abs(stations))) + _STATION * shore.width
        return FarField(_ordered_ends(model, shore.along), centre, size, reach, shore.along)
    ends = tuple(far_end(model, k) for k in range(len(model.ends)))
    return FarField(ends, centre, size, _circle(model, size), 0j)


def _ordered_ends(model: FlowModel, along: complex) -> tuple[FarEnd, ...]:
    """Ends of a channel, the one against `along` first."""
    ends = [far_end(model, k) for k in range(len(model.ends))]
    reversed_current = (model.layout.ambient.velocity * along.conjugate()).real < 0.0
    return tuple(reversed(ends) if reversed_current else ends)


def far_end(model: FlowModel, k: int) -> FarEnd:
    """The k-th end of the water, and whether water comes from it or goes to it."""
    end, inflow = model.ends[k], _inflow(model, k)
    if model.layout.ambient.has_gradient or isnan(inflow):
        return FarEnd(end.name, end.speed, gives=True, takes=True)
    least = _STILL * _total_discharge(model)
    return FarEnd(end.name, end.speed, gives=inflow > least, takes=inflow < -least)


def _inflow(model: FlowModel, k: int) -> float:
    """Water entering at an end [m2/s]; without a current all that the elements take, nan with one."""
    end = model.ends[k]
    if isnan(end.inflow) and end.speed == 0.0:
        return -sum(outflow(element) for element in model.layout.elements) / model.layout.depth
    return end.inflow


def _total_discharge(model: FlowModel) -> float:
    points = sum(2.0 * pi * abs(singularity.strength) for singularity in model.singularities)
    return float(points + sum(abs(line.flux) * abs(line.end - line.start) for line in model.lines))


def _total_moment(model: FlowModel) -> float:
    """Sum of the doublets' moments [m3/s]."""
    doublets = [e for e in model.layout.elements if isinstance(e, Doublet)]
    return float(sum(abs(doublet.moment) for doublet in doublets))


def _circle(model: FlowModel, size: float) -> float:
    """Radius beyond which nothing turns a streamline back, inf where nothing ever leaves [m]."""
    if not model.ends:
        return inf
    total = _total_discharge(model)
    if model.layout.ambient.has_gradient:
        return _GRADIENT_REACH * size
    end = model.ends[0]
    moment = _total_moment(model)
    if end.speed > 0.0:
        return float(_DOMINANCE * max(size, total / end.speed, (moment / end.speed) ** 0.5))
    leading = abs(_inflow(model, 0))
    if leading <= _STILL * total:
        return inf
    size = max(size, moment / leading)
    shore = model.layout.shore
    order = max(1.0, shore.interior_angle / pi) if isinstance(shore, Corner) else 1.0
    return float(size * (_DOMINANCE * max(1.0, total / leading)) ** order)

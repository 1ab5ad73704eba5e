"""Shores: the map that turns banks into mirrors, the images of a pole, the walls and the far ends."""

from dataclasses import dataclass
from math import ceil, exp, inf, log, pi

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.layout import Basin, Channel, Corner, DeadEnd, OpenWater, Shore, StraightBank, Surveyed
from forebay.flow.maps import AffineMap, ConformalMap, LogarithmMap
from forebay.flow.poles import PERIODIC, RATIONAL

_ROUNDING_DECADES = 39.0
"""exp(-39) = 1e-17: images further away than this change no digit [-]."""
_STRAIGHT = 1e-12
"""Interior angles this close to 180 degrees are a straight bank [rad]."""


@dataclass(frozen=True, slots=True)
class Wall:
    """Straight wall from point - before * direction to point + after * direction; water on the left.

    direction : unit complex;  before, after : lengths [m], inf where the wall never ends
    """

    name: str
    point: complex
    direction: complex
    before: float
    after: float

    def along(self, z: ComplexArray) -> FloatArray:
        """Distance along the wall from `point` [m], clipped to the wall."""
        offset = ((z - self.point) * np.conj(self.direction)).real
        return np.asarray(np.clip(offset, -self.before, self.after), dtype=np.float64)

    def nearest(self, z: ComplexArray) -> ComplexArray:
        """Nearest point of the wall, x + iy [m]."""
        return np.asarray(self.point + self.along(z) * self.direction, dtype=np.complex128)

    def distance(self, z: ComplexArray) -> FloatArray:
        """Distance to the wall [m]."""
        return np.abs(z - self.nearest(z))


@dataclass(frozen=True, slots=True)
class Images:
    """A pole and its mirror images, shape (k,) each.

    positions : mapped plane [-];  conjugated : strength and moments become their conjugates
    reversed : the moment of X^n takes the factor (-1)^n
    """

    positions: ComplexArray
    conjugated: BoolArray
    reversed: BoolArray


@dataclass(frozen=True, slots=True)
class Frame:
    """What a shore means in the mapped plane.

    map, kappa : see `maps` and `poles`;  walls : the straight walls
    mirrored : whether Im tau = 0 (and Im tau = pi with the periodic kernel) are banks
    closed : whether Re tau = 0 is a wall;  length : Re tau of the wall opposite, inf without one [-]
    """

    map: ConformalMap
    kappa: float
    walls: tuple[Wall, ...]
    mirrored: bool = True
    closed: bool = False
    length: float = inf

    def images(self, tau: complex) -> Images:
        """Every image of a pole at tau that can be felt in the water, the pole itself first.

        Images that coincide (a pole on a wall) are all listed.
        """
        positions, conjugated, reversed_ = [tau], [False], [False]
        if self.mirrored:
            positions, conjugated, reversed_ = [tau, tau.conjugate()], [False, True], [False, False]
        if self.closed:
            positions += [-tau.conjugate(), -tau]
            conjugated += [True, False]
            reversed_ += [True, True]
        rows = 0 if self.length == inf else ceil(_ROUNDING_DECADES / (2.0 * self.length))
        order = sorted(range(-rows, rows + 1), key=abs)
        shifts = np.array([2.0 * self.length * row if row else 0.0 for row in order])
        return Images(
            positions=(shifts[:, None] + np.array(positions)).ravel(),
            conjugated=np.tile(conjugated, shifts.size),
            reversed=np.tile(reversed_, shifts.size),
        )

    def wet(self, tau: ComplexArray, tolerance: FloatArray) -> BoolArray:
        """Whether tau lies in the water or within `tolerance` [-] of it."""
        inside = np.ones(np.shape(tau), dtype=np.bool_)
        if self.mirrored:
            inside &= tau.imag >= -tolerance
            if self.kappa == PERIODIC:
                inside &= tau.imag <= pi + tolerance
        if self.closed:
            inside &= tau.real >= -tolerance
            inside &= tau.real <= self.length + tolerance
        return inside

    def snapped(self, tau: complex, tolerance: float) -> complex:
        """Tau moved on to a wall that is within `tolerance` [-]."""
        real, imag = tau.real, tau.imag
        if self.mirrored:
            imag = _onto(imag, (0.0, pi) if self.kappa == PERIODIC else (0.0,), tolerance)
        if self.closed:
            real = _onto(real, (0.0, self.length), tolerance)
        return complex(real, imag)


def _onto(value: float, levels: tuple[float, ...], tolerance: float) -> float:
    return next((level for level in levels if abs(value - level) <= tolerance), value)


def frame_of(shore: Shore, middle: complex, size: float) -> Frame:
    """Frame of a shore.

    Parameters
    ----------
    shore : the shore
    middle : centre of what stands in the water, x + iy [m]; the origin is put near it, since
        coordinates far from their origin cost digits
    size : typical distance of the elements from each other [m], the unit of a corner's map
    """
    match shore:
        case OpenWater() | Surveyed():
            return Frame(AffineMap(middle, 1.0 + 0j), RATIONAL, (), mirrored=False)
        case StraightBank():
            return _straight(Wall("bank", shore.point, shore.along, inf, inf), middle)
        case Channel():
            return _channel(shore, middle)
        case Corner():
            return _corner(shore, middle, size)
        case DeadEnd():
            return _dead_end(shore)
        case Basin():
            return _basin(shore)


def _straight(bank: Wall, middle: complex, walls: tuple[Wall, ...] | None = None) -> Frame:
    origin = complex(bank.nearest(np.asarray(middle)))
    return Frame(AffineMap(origin, bank.direction.conjugate()), RATIONAL, walls or (bank,))


def _channel(shore: Channel, middle: complex) -> Frame:
    right = Wall("right bank", shore.point, shore.along, inf, inf)
    left = Wall("left bank", shore.point + 1j * shore.along * shore.width, -shore.along, inf, inf)
    tau = AffineMap(complex(right.nearest(np.asarray(middle))), pi / shore.width * shore.along.conjugate())
    return Frame(tau, PERIODIC, (right, left))


def _corner(shore: Corner, middle: complex, size: float) -> Frame:
    second = shore.along * complex(np.exp(1j * shore.interior_angle))
    walls = (
        Wall("first bank", shore.vertex, shore.along, 0.0, inf),
        Wall("second bank", shore.vertex, -second, inf, 0.0),
    )
    if abs(shore.interior_angle - pi) < _STRAIGHT:
        return _straight(Wall("bank", shore.vertex, shore.along, inf, inf), middle, walls)
    unit = exp(0.5 * (log(max(abs(middle - shore.vertex), size)) + log(size)))
    tau = LogarithmMap(shore.vertex, shore.along, shore.interior_angle, unit)
    return Frame(tau, PERIODIC, walls)


def _dead_end(shore: DeadEnd) -> Frame:
    across = 1j * shore.along
    walls = (
        Wall("right bank", shore.point, shore.along, 0.0, inf),
        Wall("left bank", shore.point + across * shore.width, -shore.along, inf, 0.0),
        Wall("closed end", shore.point, -across, shore.width, 0.0),
    )
    tau = AffineMap(shore.point, pi / shore.width * shore.along.conjugate())
    return Frame(tau, PERIODIC, walls, closed=True)


def _basin(shore: Basin) -> Frame:
    """The strip runs along the longer side, so that few rows of images are enough."""
    across = 1j * shore.along
    far = shore.corner + shore.length * shore.along
    walls = (
        Wall("right bank", shore.corner, shore.along, 0.0, shore.length),
        Wall("far end", far, across, 0.0, shore.width),
        Wall("left bank", far + across * shore.width, -shore.along, 0.0, shore.length),
        Wall("near end", shore.corner + across * shore.width, -across, 0.0, shore.width),
    )
    if shore.length >= shore.width:
        origin, along, length, width = shore.corner, shore.along, shore.length, shore.width
    else:
        origin, along, length, width = far, across, shore.width, shore.length
    tau = AffineMap(origin, pi / width * along.conjugate())
    return Frame(tau, PERIODIC, walls, closed=True, length=pi * length / width)

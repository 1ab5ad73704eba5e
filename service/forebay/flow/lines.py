"""Line sources and sinks: uniform strength along a segment, with every image that the shore asks for."""

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.line_fields import STRIP_PANEL, LineField, PlainField, StripField, WedgeField, wedge_panel
from forebay.flow.maps import AffineMap, LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.segments import Segment
from forebay.flow.shores import Frame, Wall
from forebay.flow.terms import Jet

_TWO_PI = 2.0 * np.pi

_NOTHING = complex(np.nan, np.nan)

Longest = Callable[[complex, complex], float]
"""Longest panel for a piece of a line between two places [-]."""

_IN_WALL = 1e-9
"""Distance from a wall, relative to the line's length, within which a line lies in it [-]."""

_FINEST = 1e-10
"""Shortest panel, relative to the line: panels shrink geometrically towards the vertex of a corner."""


@dataclass(frozen=True, slots=True)
class LineTerm:
    """Line element W = (q / 2 pi) mean over the line of 1/(z - s), plus what the shore adds.

    On the line W jumps by the strength per length; the value there is the mean of both sides, or the
    water side if the line lies in a bank. At either end W is infinite (logarithmically) and comes back
    as nan. Chords are exact wherever they run; a chord along the line gets the same mean, so that its
    flux is half the sum of both sides' (zero without other elements), and one that starts on the line
    leaves on the side where it goes.

    frame : affine map to the plane in which the field is known
    field : the element with its images in that plane
    panels : pieces of the line in that plane, from its start to its end
    shares : strength of each piece over 2 pi, negative for a sink [m2/s]
    owner : index among the model's owners
    """

    frame: AffineMap
    field: LineField
    panels: tuple[Segment, ...]
    shares: tuple[float, ...]
    owner: int

    def jet(self, z: ComplexArray) -> Jet:
        """Conjugate velocity [m/s] and derivatives [1/s] at z, any shape [m]; nan at the line's ends."""
        velocity, slope = self.field.jet(self._flat(z))
        whole = np.isfinite(velocity) & np.isfinite(slope)
        velocity = np.where(whole, velocity, _NOTHING).reshape(np.shape(z)) * self.frame.rate
        slope = np.where(whole, slope, _NOTHING).reshape(np.shape(z)) * self.frame.rate**2
        return Jet(velocity, slope, np.zeros(np.shape(z), dtype=np.complex128))

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Conjugate velocity alone [m/s]: as `jet` without its derivatives, at less cost."""
        velocity = self.field.velocity(self._flat(z))
        whole = np.where(np.isfinite(velocity), velocity, _NOTHING).reshape(np.shape(z))
        return np.asarray(whole * self.frame.rate, dtype=np.complex128)

    def _flat(self, z: ComplexArray) -> ComplexArray:
        """Places in the plane of the field, shape (n,) [-]."""
        return np.ravel(self.frame.forward(np.asarray(z, dtype=np.complex128)))

    def potential(self, z: ComplexArray) -> ComplexArray:
        """Complex potential [m2/s], any shape, cut along the line and its extension beyond the start."""
        return self.field.potential(self._flat(z)).reshape(np.shape(z))

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords a -> b [m2/s], crossing the line or not; shape of a."""
        return self.field.chords(self._flat(a), self._flat(b)).reshape(np.shape(a))

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W [m/s], any shape."""
        total = self.field.magnitude(self._flat(z)).reshape(np.shape(z))
        return np.asarray(total * abs(self.frame.rate), dtype=np.float64)


def line_term(
    start: complex, end: complex, flux: float, *, owner: int, frame: Frame, offset: float
) -> LineTerm:
    """Line element of a shore.

    Parameters
    ----------
    start, end : ends, x + iy [m]
    flux : discharge per depth over the whole line, positive into the water [m2/s]
    owner : index among the model's owners
    frame : the shore
    offset : added to the periodic kernel in a strip, as to every pole [-]; in a corner it is always 1/2
    """
    affine = _plane_of(frame)
    places = affine.forward(np.array([start, end]))
    inward = _inward((start, 0.5 * (start + end), end), frame.walls)
    run = complex(places[1] - places[0])
    facing = round(float(np.sign((inward * affine.rate * np.conj(run)).imag))) if inward else 0
    cuts = _cuts(complex(places[0]), run, _longest(frame))
    ends = [complex(places[0]) + run * cut for cut in cuts[:-1]] + [complex(places[1])]
    panels = tuple(Segment(a, b, facing) for a, b in pairwise(ends))
    shares = tuple(float(share) for share in flux / _TWO_PI * np.diff(cuts))
    field = _field_of(frame, panels, shares, offset=offset)
    return LineTerm(affine, field, panels, shares, owner)


def _plane_of(frame: Frame) -> AffineMap:
    """The plane in which a line stays straight and the shore simple: a corner's own, else the mapped one."""
    match frame.map:
        case LogarithmMap() as corner:
            return AffineMap(corner.vertex, corner.along.conjugate() / corner.unit)
        case AffineMap() as affine:
            return affine
        case _:
            msg = f"no line elements with {type(frame.map).__name__}"
            raise TypeError(msg)


def _longest(frame: Frame) -> Longest:
    """Longest panel that may cover a piece start -> end in the plane of the field."""
    match frame.map:
        case LogarithmMap() as corner:
            return lambda start, end: wedge_panel(start, end, corner.angle)
        case _ if frame.kappa == PERIODIC:
            return lambda *_: STRIP_PANEL
        case _:
            return lambda start, end: abs(end - start)


def _field_of(
    frame: Frame, panels: tuple[Segment, ...], shares: tuple[float, ...], *, offset: float
) -> LineField:
    """Panels with the images that the shore asks for."""
    match frame.map:
        case LogarithmMap() as corner:
            return WedgeField.of(panels, shares, angle=corner.angle)
        case _ if frame.kappa == PERIODIC:

            def places(s: complex) -> list[complex]:
                return [complex(place) for place in frame.images(s).positions]

            return StripField.of(panels, shares, places=places, offset=offset)
        case _:
            return PlainField.of(panels, shares, mirrored=frame.mirrored)


def _inward(places: tuple[complex, ...], walls: tuple[Wall, ...]) -> complex:
    """Normal into the water of the wall in which all places lie, 0 if there is none."""
    reach = _IN_WALL * abs(places[-1] - places[0])
    for wall in walls:
        if float(np.max(wall.distance(np.asarray(places)))) <= reach:
            return 1j * wall.direction
    return 0j


def _cuts(start: complex, run: complex, longest: Longest) -> FloatArray:
    """Ends of the panels as shares of the line, 0 ... 1, bisected until each is short enough."""
    waiting, done = [(0.0, 1.0)], [0.0]
    while waiting:
        a, b = waiting.pop()
        allowed = longest(start + run * a, start + run * b)
        if (b - a) * abs(run) <= allowed * (1.0 + 1e-12) or b - a <= _FINEST:
            done.append(b)
            continue
        middle = 0.5 * (a + b)
        waiting += [(middle, b), (a, middle)]
    return np.asarray(done)

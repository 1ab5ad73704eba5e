"""Line sources and sinks: uniform strength along a segment, with every image that the shore asks for."""

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.line_kernels import LineKernel, PlainKernel, StripKernel, WedgeKernel
from forebay.flow.maps import AffineMap, LogarithmMap
from forebay.flow.poles import PERIODIC
from forebay.flow.segments import Segment
from forebay.flow.shores import Frame, Wall
from forebay.flow.terms import Jet

_TWO_PI = 2.0 * np.pi

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

    frame : affine map to the plane in which the kernel works
    kernel : mirror images and what is periodic
    panels : pieces of the line in that plane, from its start to its end
    shares : strength of each piece over 2 pi, negative for a sink [m2/s]
    owner : index among the model's owners
    """

    frame: AffineMap
    kernel: LineKernel
    panels: tuple[Segment, ...]
    shares: tuple[float, ...]
    owner: int

    @classmethod
    def along(
        cls,
        ends: tuple[complex, complex],
        strength: float,
        *,
        frame: AffineMap,
        kernel: LineKernel,
        inward: complex = 0j,
        owner: int,
    ) -> "LineTerm":
        """Line element between two places.

        Parameters
        ----------
        ends : start and end, x + iy [m]
        strength : discharge per depth over the whole line, positive into the water [m2/s]
        frame, kernel : of the shore
        inward : normal into the water, complex, if the whole line lies in a wall, else 0
        owner : index among the model's owners
        """
        places = frame.forward(np.asarray(ends, dtype=np.complex128))
        start, end = complex(places[0]), complex(places[1])
        facing = round(float(np.sign((inward * frame.rate * np.conj(end - start)).imag))) if inward else 0
        cuts = _cuts(start, end, kernel)
        panels = tuple(
            Segment(start + (end - start) * a, start + (end - start) * b, facing) for a, b in pairwise(cuts)
        )
        shares = tuple(float(share) for share in strength / _TWO_PI * np.diff(cuts))
        return cls(frame, kernel, panels, shares, owner)

    def jet(self, z: ComplexArray) -> Jet:
        """Conjugate velocity [m/s] and derivatives [1/s] at z, any shape [m]; nan at the line's ends."""
        w = np.ravel(self.frame.forward(z))
        velocity, slope = np.zeros(w.shape, np.complex128), np.zeros(w.shape, np.complex128)
        with np.errstate(invalid="ignore"):
            for panel, share in zip(self.panels, self.shares, strict=True):
                velocity += share * self.kernel.velocity(w, panel)
                slope += share * self.kernel.slope(w, panel)
        whole = np.isfinite(velocity) & np.isfinite(slope)
        nothing = complex(np.nan, np.nan)
        velocity = np.where(whole, velocity, nothing).reshape(np.shape(z)) * self.frame.rate
        slope = np.where(whole, slope, nothing).reshape(np.shape(z)) * self.frame.rate**2
        return Jet(velocity, slope, np.zeros(np.shape(z), dtype=np.complex128))

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Conjugate velocity alone [m/s]: `jet` without its derivatives, at half the cost."""
        w = np.ravel(self.frame.forward(z))
        total = np.zeros(w.shape, dtype=np.complex128)
        with np.errstate(invalid="ignore"):
            for panel, share in zip(self.panels, self.shares, strict=True):
                total += share * self.kernel.velocity(w, panel)
        whole = np.where(np.isfinite(total), total * self.frame.rate, complex(np.nan, np.nan))
        return whole.reshape(np.shape(z))

    def potential(self, z: ComplexArray) -> ComplexArray:
        """Complex potential [m2/s], any shape, cut along the line and its extension beyond the start."""
        w = np.ravel(self.frame.forward(z))
        total = np.zeros(w.shape, dtype=np.complex128)
        for panel, share in zip(self.panels, self.shares, strict=True):
            total += share * self.kernel.potential(w, panel)
        return total.reshape(np.shape(z))

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of W dz along straight chords a -> b [m2/s], crossing the line or not; shape of a."""
        start, end = np.ravel(self.frame.forward(a)), np.ravel(self.frame.forward(b))
        total = np.zeros(start.shape, dtype=np.complex128)
        for panel, share in zip(self.panels, self.shares, strict=True):
            total += share * self.kernel.chords(start, end, panel)
        return total.reshape(np.shape(a))

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the parts of W [m/s], any shape."""
        w = np.ravel(self.frame.forward(z))
        total = np.zeros(w.shape)
        for panel, share in zip(self.panels, self.shares, strict=True):
            total += abs(share) * self.kernel.magnitude(w, panel)
        return np.asarray(total.reshape(np.shape(z)) * abs(self.frame.rate), dtype=np.float64)


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
    affine, kernel = _kernel(frame, offset)
    inward = _inward((start, 0.5 * (start + end), end), frame.walls)
    return LineTerm.along((start, end), flux, frame=affine, kernel=kernel, inward=inward, owner=owner)


def _kernel(frame: Frame, offset: float) -> tuple[AffineMap, LineKernel]:
    """Plane in which the shore's kernel works, and the kernel."""
    match frame.map:
        case LogarithmMap() as corner:
            return AffineMap(corner.vertex, corner.along.conjugate() / corner.unit), WedgeKernel(corner.angle)
        case AffineMap() as affine if frame.kappa == PERIODIC:
            return affine, StripKernel(lambda s: [complex(p) for p in frame.images(s).positions], offset)
        case AffineMap() as affine:
            return affine, PlainKernel(frame.mirrored)
        case _:
            msg = f"no line kernel for {type(frame.map).__name__}"
            raise TypeError(msg)


def _inward(places: tuple[complex, ...], walls: tuple[Wall, ...]) -> complex:
    """Normal into the water of the wall in which all places lie, 0 if there is none."""
    reach = _IN_WALL * abs(places[-1] - places[0])
    for wall in walls:
        if float(np.max(wall.distance(np.asarray(places)))) <= reach:
            return 1j * wall.direction
    return 0j


def _cuts(start: complex, end: complex, kernel: LineKernel) -> FloatArray:
    """Ends of the panels as shares of the line, 0 ... 1, bisected until the kernel is content."""
    whole = abs(end - start)
    open_pieces, done = [(0.0, 1.0)], [0.0]
    while open_pieces:
        a, b = open_pieces.pop()
        length = (b - a) * whole
        allowed = kernel.longest(start + (end - start) * a, start + (end - start) * b)
        if length <= allowed * (1.0 + 1e-12) or b - a <= _FINEST:
            done.append(b)
            continue
        middle = 0.5 * (a + b)
        open_pieces += [(middle, b), (a, middle)]
    return np.asarray(done)

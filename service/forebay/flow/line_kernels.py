"""Mean field of a panel of sources and its mirror images on every shore.

A kernel answers for one panel, a short straight segment in the plane in which it works, per unit of
strength q / (2 pi): the mean of 1/(z - s) plus what the banks add. The singular parts are exact logarithms;
the smooth remainder of the periodic kernels is integrated by Gauss-Legendre nodes on the panel.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.remainders import decay, rest, rest_log, rest_power, rest_slope
from forebay.flow.segments import Segment

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
"""12 nodes: panels are so short that every remainder is analytic within 3 half-lengths of the panel's middle,
an ellipse of parameter 5.8; the error is below 5.8^-24 = 1e-18."""

_STRIP_PANEL = 2.0
"""Longest panel in a strip of width pi [-]: remainders are analytic within pi of it."""

_WEDGE_PANEL = 0.5
"""Longest panel in a wedge, relative to its distance from the vertex [-]."""

_NEAR_PANEL = 1.5
"""Distance from a panel's middle, in lengths, within which its logarithms are taken exactly [-]."""

Images = Callable[[complex], list[complex]]
"""All places from which a source at a given place is seen, itself first, up to shifts by 2 pi i."""


class LineKernel(Protocol):
    """Field of one panel per unit of q / (2 pi), in the plane where the kernel works."""

    def longest(self, start: complex, end: complex) -> float:
        """Longest panel allowed for a piece start -> end."""
        ...

    def velocity(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Mean over the panel of the field of a source, shape (n,)."""
        ...

    def slope(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Derivative of `velocity`, shape (n,)."""
        ...

    def potential(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Integral of `velocity`, cut along the panel and the line beyond its start, shape (n,)."""
        ...

    def chords(self, a: ComplexArray, b: ComplexArray, panel: Segment) -> ComplexArray:
        """Integral of `velocity` along straight chords, shape (n,)."""
        ...

    def magnitude(self, z: ComplexArray, panel: Segment) -> FloatArray:
        """Sum of the absolute values of the parts of `velocity`, shape (n,)."""
        ...


def _gauss(panel: Segment) -> list[tuple[complex, float]]:
    """Nodes on the panel and their weights, which add to 1."""
    places = panel.middle + 0.5 * panel.run * _NODES
    return [(complex(s), float(0.5 * weight)) for s, weight in zip(places, _WEIGHTS, strict=True)]


def _own_side(panel: Segment, z: ComplexArray) -> FloatArray:
    """Side of the panel on which each point is taken to lie for the potential on display."""
    return np.where(panel.sides(z) < 0.0, -1.0, 1.0)


@dataclass(frozen=True, slots=True)
class PlainKernel:
    """1/(z - s) in open water; with a bank on the real axis also 1/(z - conj s)."""

    mirrored: bool

    def _sources(self, panel: Segment) -> list[Segment]:
        image = Segment(np.conj(panel.start), np.conj(panel.end), panel.facing)
        return [panel, image] if self.mirrored else [panel]

    def longest(self, start: complex, end: complex) -> float:
        """Any length: all is exact."""
        return abs(end - start)

    def velocity(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Sum of exact logarithms."""
        return np.asarray(sum(source.mean_inverse(z) for source in self._sources(panel)))

    def slope(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """-1 / ((z - start)(z - end)), summed."""
        return -np.asarray(sum(source.mean_inverse_square(z) for source in self._sources(panel)))

    def potential(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Mean logarithms."""
        parts = [source.mean_log(z, source.run, _own_side(source, z)) for source in self._sources(panel)]
        return np.asarray(sum(parts))

    def chords(self, a: ComplexArray, b: ComplexArray, panel: Segment) -> ComplexArray:
        """Mean subtended angles."""
        return np.asarray(sum(source.subtended(a, b) for source in self._sources(panel)))

    def magnitude(self, z: ComplexArray, panel: Segment) -> FloatArray:
        """Sum of absolute values."""
        return np.asarray(sum(np.abs(source.mean_inverse(z)) for source in self._sources(panel)))


@dataclass(frozen=True, slots=True)
class StripKernel:
    """X(z - s) + offset, X(d) = coth(d/2)/2, over all images, in the strip 0 <= Im z <= pi.

    images : images of a place; for a channel itself and its conjugate, more with closed ends
    offset : added to every X [-]
    """

    images: Images
    offset: float

    def longest(self, start: complex, end: complex) -> float:
        """The same everywhere."""
        return min(_STRIP_PANEL, abs(end - start))

    def _sources(self, panel: Segment) -> list[Segment]:
        """Images of the panel, those that coincide with it (up to 2 pi i) with its facing."""
        images = []
        for start, end in zip(self.images(panel.start), self.images(panel.end), strict=True):
            above = 0.5 * (start + end).imag > np.pi * (1.0 + 1e-9)
            drop = 2j * np.pi if above else 0.0
            image = Segment(start - drop, end - drop)
            gap = image.middle - panel.middle
            same = abs(gap - 2j * np.pi * round(gap.imag / (2.0 * np.pi))) <= 1e-12 * (
                1.0 + abs(panel.middle)
            )
            images.append(Segment(image.start, image.end, panel.facing if same else 0))
        return images

    def _shifted(self, z: ComplexArray, source: Segment) -> ComplexArray:
        """Points moved by 2 pi i so that the source's nearest pole is the source itself."""
        return z - 2j * np.pi * np.round((z - source.middle).imag / (2.0 * np.pi))

    def velocity(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Exact logarithm of each image's nearest pole, and the remainder."""
        total = np.zeros(z.shape, dtype=np.complex128)
        for source in self._sources(panel):
            near = self._shifted(z, source)
            total += source.mean_inverse(near) + self.offset
            total += np.asarray(sum(weight * rest(near - s) for s, weight in _gauss(source)))
        return total

    def slope(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Derivative of `velocity`."""
        total = np.zeros(z.shape, dtype=np.complex128)
        for source in self._sources(panel):
            near = self._shifted(z, source)
            total -= source.mean_inverse_square(near)
            total += np.asarray(sum(weight * rest_slope(near - s) for s, weight in _gauss(source)))
        return total

    def potential(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Mean of log sinh((z - s)/2), cut only along the panel's own line."""
        total = np.zeros(z.shape, dtype=np.complex128)
        for source in self._sources(panel):
            total += self._smooth(z, source)
            if not _is_below(source):
                total += source.mean_log(z, source.run, _own_side(source, z))
        return total

    def chords(self, a: ComplexArray, b: ComplexArray, panel: Segment) -> ComplexArray:
        """Differences of the smooth part, and subtended angles of images in the strip itself."""
        total = np.zeros(a.shape, dtype=np.complex128)
        for source in self._sources(panel):
            total += self._smooth(b, source) - self._smooth(a, source)
            if not _is_below(source):
                total += source.subtended(a, b)
        return total

    def _smooth(self, z: ComplexArray, source: Segment) -> ComplexArray:
        """The part of the potential that is continuous all over the strip.

        For a source in the strip: the remainder. For one below it, 0 <= Im(z - s) <= 2 pi: everything, as
        log cosh((z - s - i pi)/2), with the logarithm of its nearer pole (s or s + 2 pi i) taken exactly.
        """
        offset = self.offset * (z - source.middle)
        if not _is_below(source):
            parts = [weight * rest_log(z - s) for s, weight in _gauss(source)]
            return np.asarray(sum(parts) + offset)
        upper = (z - source.middle).imag > np.pi
        near = z - np.where(upper, 2j * np.pi, 0.0)
        parts = [weight * rest_log(near - s) for s, weight in _gauss(source)]
        side = np.where(upper, -1.0, 1.0)
        return np.asarray(sum(parts) + source.mean_log(near, 1.0, side) - 0.5j * np.pi * side + offset)

    def magnitude(self, z: ComplexArray, panel: Segment) -> FloatArray:
        """Sum of absolute values."""
        total = np.zeros(z.shape)
        for source in self._sources(panel):
            near = self._shifted(z, source)
            total += np.abs(source.mean_inverse(near)) + np.abs(rest(near - source.middle)) + abs(self.offset)
        return total


def _coincide(place: complex, other: complex) -> bool:
    """Whether two places of the strip are the same to rounding, up to shifts by 2 pi i."""
    gap = place - other
    turns = round(gap.imag / (2.0 * np.pi))
    return abs(gap - 2j * np.pi * turns) <= 1e-12 * (1.0 + abs(other))


def _is_below(source: Segment) -> bool:
    """Whether an image lies below the strip, so that two of its poles border on it."""
    return source.middle.imag < 0.0


@dataclass(frozen=True, slots=True)
class WedgeKernel:
    """(n/z)(X(n log(z/s)) + 1/2) and its mirror image, in the wedge 0 <= arg z <= angle = pi/n.

    All flux leaves to infinity; nothing leaves through the vertex z = 0.
    """

    angle: float

    def longest(self, start: complex, end: complex) -> float:
        """A share of the piece's distance from the vertex."""
        reach = min(_WEDGE_PANEL, 0.6 * self.angle, max(0.05, 2.0 * np.pi - self.angle))
        return reach * _distance_from_origin(start, end)

    @property
    def _exponent(self) -> float:
        return float(np.pi) / self.angle

    def logarithm(self, z: ComplexArray) -> ComplexArray:
        """log z with its cut on the bisector of the land; at the vertex that of a point 1e-300 away."""
        half = 0.5 * self.angle
        angle = np.angle(z * np.exp(-1j * half)) + half
        return np.asarray(np.log(np.abs(_off_vertex(z))) + 1j * angle, dtype=np.complex128)

    def _families(self, z: ComplexArray, panel: Segment) -> list["_Family"]:
        """The panel itself and its images in the first and the second bank, each with its points."""
        log_z = self.logarithm(z)
        log_middle = complex(self.logarithm(np.asarray(panel.middle)))
        second = (log_z - np.conj(log_middle)).imag > self.angle
        everywhere = np.ones(z.shape, dtype=np.bool_)
        return [
            self._family(panel, 0, z[everywhere], everywhere),
            self._family(panel, 1, z[~second], ~second),
            self._family(panel, 2, z[second], second),
        ]

    def _family(self, panel: Segment, bank: int, z: ComplexArray, chosen: BoolArray) -> "_Family":
        """Points `chosen` as they see the panel (bank 0) or its image in bank 1 or 2."""
        image = (lambda s: s) if bank == 0 else np.conj
        turn = np.exp(2j * self.angle) if bank == 2 else 1.0
        source = Segment(complex(image(panel.start) * turn), complex(image(panel.end) * turn), panel.facing)
        if bank and abs(source.middle - panel.middle) > 1e-12 * abs(panel.middle):
            source = Segment(source.start, source.end, 0)
        lift = 2j * self.angle if bank == 2 else 0.0
        logs = [(complex(image(self.logarithm(np.asarray(s))) + lift), weight) for s, weight in _gauss(panel)]
        log_z = self.logarithm(z)
        apart = log_z - complex(image(self.logarithm(np.asarray(panel.middle))) + lift)
        near = (np.abs(z - source.middle) < _NEAR_PANEL * abs(source.run)) & (np.abs(apart) < 2.0)
        return _Family(source, bank, chosen, log_z, near, logs)

    def velocity(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Exact logarithms of the panel and images nearby, remainders or the full kernel elsewhere."""
        return self._spread(z, panel, self._family_velocity)

    def slope(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Derivative of `velocity`."""
        return self._spread(z, panel, self._family_slope)

    def _spread(
        self, z: ComplexArray, panel: Segment, part: Callable[[ComplexArray, "_Family"], ComplexArray]
    ) -> ComplexArray:
        total = np.zeros(z.shape, dtype=np.complex128)
        for family in self._families(z, panel):
            total[family.chosen] += part(z[family.chosen], family)
        return total

    def _family_velocity(self, z: ComplexArray, family: "_Family") -> ComplexArray:
        n, near, far = self._exponent, family.near, ~family.near
        sums = np.zeros(z.shape, dtype=np.complex128)
        for log_s, weight in family.logs:
            apart = family.log_z - log_s
            sums[far] += weight * n * decay(n * apart[far])
            sums[near] += weight * (n * (rest(n * apart[near]) + 0.5) - (rest(apart[near]) + 0.5))
        sums /= _off_vertex(z)
        sums[near] += family.source.mean_inverse(z[near])
        return sums

    def _family_slope(self, z: ComplexArray, family: "_Family") -> ComplexArray:
        n, near, far = self._exponent, family.near, ~family.near
        sums = np.zeros(z.shape, dtype=np.complex128)
        for log_s, weight in family.logs:
            apart = family.log_z - log_s
            full = decay(n * apart[far])
            sums[far] += weight * n * full * (n * decay(-n * apart[far]) - 1.0)
            inner = apart[near]
            first = n * (rest(n * inner) + 0.5) - (rest(inner) + 0.5)
            sums[near] += weight * (n * n * rest_slope(n * inner) - rest_slope(inner) - first)
        sums /= _off_vertex(z)
        sums /= _off_vertex(z)
        sums[near] -= family.source.mean_inverse_square(z[near])
        return sums

    def potential(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """Mean of the potential of sources on the panel, cut along the panel's own line."""
        return self._smooth(z, panel) + panel.mean_log(z, panel.run, _own_side(panel, z))

    def chords(self, a: ComplexArray, b: ComplexArray, panel: Segment) -> ComplexArray:
        """Differences of the smooth part, and the panel's subtended angle."""
        return self._smooth(b, panel) - self._smooth(a, panel) + panel.subtended(a, b)

    def _smooth(self, z: ComplexArray, panel: Segment) -> ComplexArray:
        """The potential without the panel's own logarithm: continuous all over the wedge."""
        n = self._exponent
        own, first, second = self._families(z, panel)
        total = np.zeros(z.shape, dtype=np.complex128)
        for log_s, weight in own.logs:
            apart = own.log_z - log_s
            total += weight * (rest_power(n * apart) - rest_power(apart) - log_s)
        total[first.chosen] += self._image_potential(z[first.chosen], first)
        total[second.chosen] += self._image_potential(z[second.chosen], second)
        return total

    def _image_potential(self, z: ComplexArray, family: "_Family") -> ComplexArray:
        """Mean of log(exp(d) - 1) - i pi/2, d = n (log z - conj log s), cut nowhere in the wedge."""
        n, near, far = self._exponent, family.near, ~family.near
        side = 1.0 if family.bank == 1 else -1.0
        start = -0.5j * np.pi if family.bank == 1 else 1.5j * np.pi
        axis = 1.0 if family.bank == 1 else complex(np.exp(1j * self.angle))
        total = np.zeros(z.shape, dtype=np.complex128)
        for log_s, weight in family.logs:
            apart = family.log_z - log_s
            inner = apart[near]
            total[near] += weight * (rest_power(n * inner) - rest_power(inner) - log_s)
            total[far] += weight * _log_one_plus_exp(n * apart[far] - side * 1j * np.pi)
        turn = 0.0 if family.bank == 1 else 1j * self.angle
        total[far] += 0.5j * np.pi - np.log(n)
        total[near] += family.source.mean_log(z[near], axis, side) + turn + start
        return total

    def magnitude(self, z: ComplexArray, panel: Segment) -> FloatArray:
        """Absolute values of the panel's part and its image's."""
        total = np.zeros(z.shape)
        for family in self._families(z, panel):
            total[family.chosen] += np.abs(self._family_velocity(z[family.chosen], family))
        return total


@dataclass(frozen=True, slots=True)
class _Family:
    """One image of a panel and the points that see it.

    source : the image, in the plane of the wedge;  bank : 0 for the panel itself, 1 or 2 for the mirror
    chosen : which points, shape (n,);  log_z, near : of those points, shape (c,)
    logs : logarithms of the nodes' images on their own sheet, with weights
    """

    source: Segment
    bank: int
    chosen: BoolArray
    log_z: ComplexArray
    near: BoolArray
    logs: list[tuple[complex, float]]


def _log_one_plus_exp(d: ComplexArray) -> ComplexArray:
    """log(1 + exp(d)), continuous in |Im d| <= pi."""
    right = d.real > 0.0
    return np.where(right, d, 0.0) + np.log(1.0 + np.exp(np.where(right, -d, d)))


def _off_vertex(z: ComplexArray) -> ComplexArray:
    """Points, the vertex itself moved by 1e-300."""
    return np.where(z == 0.0, 1e-300, z)


def _distance_from_origin(start: complex, end: complex) -> float:
    """Least distance of the segment start -> end from 0."""
    run = end - start
    along = np.clip(-(start * np.conj(run)).real / abs(run) ** 2, 0.0, 1.0)
    return float(abs(start + along * run))

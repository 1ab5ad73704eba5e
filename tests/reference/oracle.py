"""Velocity of a layout in 40 digits by routes of its own: half-plane maps and image pairs, or quadrature.

Nothing of `forebay.flow` but the description of the layout is used. The program works with hyperbolic
cotangents (period 2 pi i); here every bounded shore is mapped to the half plane (exp, power, cosh, Jacobi
sn), where an element has one mirror image. Line elements are integrals of point sources over their length.
See README.md.
"""

from dataclasses import dataclass
from typing import Any

import mpmath

from forebay.flow.layout import (
    Basin,
    Channel,
    CoreModel,
    Corner,
    DeadEnd,
    Doublet,
    Element,
    Layout,
    LineSink,
    LineSource,
    OpenWater,
    Shore,
    Sink,
    Source,
    StraightBank,
    Surveyed,
    Vortex,
    outflow,
)

CONTEXT = mpmath.MPContext()
CONTEXT.dps = 45
"""Working digits: 40 and a margin for cancellation."""

CORE_REACH = 12
"""A lamb-oseen core differs from a free vortex by exp(-144) beyond this many radii."""

Number = Any
"""mpmath real or complex."""


def exact(value: complex) -> Number:
    """Return the number that the doubles stand for."""
    return CONTEXT.mpc(value.real, value.imag)


@dataclass
class Sum:
    """A velocity and the sum of the magnitudes of its terms, which scales its rounding."""

    value: Number
    scale: Number

    @classmethod
    def of(cls, *terms: Number) -> "Sum":
        return cls(CONTEXT.fsum(terms), CONTEXT.fsum(abs(term) for term in terms))

    def __add__(self, other: "Sum") -> "Sum":
        return Sum(self.value + other.value, self.scale + other.scale)


class HalfPlaneMap:
    """Map t(z) of the water of a shore to the upper half plane, with its derivative."""

    def __init__(self, shore: Shore) -> None:
        self.shore = shore
        match shore:
            case Surveyed():
                raise NotImplementedError
            case OpenWater():
                self.origin, self.along = CONTEXT.mpc(0), CONTEXT.mpc(1)
            case StraightBank() | Channel() | DeadEnd():
                self.origin, self.along = exact(shore.point), exact(shore.along)
            case Corner():
                self.origin, self.along = exact(shore.vertex), exact(shore.along)
            case Basin():
                self.origin, self.along = exact(shore.corner), exact(shore.along)
                self.nome = CONTEXT.exp(-2 * CONTEXT.pi * CONTEXT.mpf(shore.width) / shore.length)
                self.modulus = CONTEXT.mfrom(q=self.nome)
                self.stretch = 2 * CONTEXT.ellipk(self.modulus) / shore.length
        self.along /= abs(self.along)

    def local(self, z: Number) -> Number:
        """Coordinates with the origin and direction of the shore."""
        return (z - self.origin) * CONTEXT.conj(self.along)

    def __call__(self, z: Number) -> tuple[Number, Number]:
        """t(z) and dt/dz."""
        local = self.local(z)
        t: Number
        slope: Number
        match self.shore:
            case Surveyed():
                raise NotImplementedError
            case OpenWater() | StraightBank():
                t, slope = local, CONTEXT.mpc(1)
            case Channel(width=width):
                rate = CONTEXT.pi / width
                t = CONTEXT.exp(rate * local)
                slope = rate * t
            case DeadEnd(width=width):
                rate = CONTEXT.pi / width
                t, slope = CONTEXT.cosh(rate * local), rate * CONTEXT.sinh(rate * local)
            case Corner(interior_angle=angle):
                t, slope = self._power(local, CONTEXT.pi / angle, angle)
            case Basin():
                t, slope = self._sine_amplitude(local)
        return t, slope * CONTEXT.conj(self.along)

    @staticmethod
    def _power(local: Number, power: Number, angle: float) -> tuple[Number, Number]:
        # the cut of the argument bisects the land, so that both walls are on its far side
        middle = CONTEXT.expj(CONTEXT.mpf(angle) / 2)
        logarithm = CONTEXT.log(local / middle) + CONTEXT.mpc(0, CONTEXT.mpf(angle) / 2)
        t = CONTEXT.exp(power * logarithm)
        return t, power * t / local

    def _sine_amplitude(self, local: Number) -> tuple[Number, Number]:
        u = self.stretch * local - CONTEXT.ellipk(self.modulus)
        sn, cn, dn = (CONTEXT.ellipfun(kind, u=u, q=self.nome) for kind in ("sn", "cn", "dn"))
        return sn, self.stretch * cn * dn


class Oracle:
    """Reference velocity W = u - iv of a layout without piers."""

    def __init__(self, layout: Layout) -> None:
        self.layout = layout
        self.map = HalfPlaneMap(layout.shore)
        self.mirrored = not isinstance(layout.shore, OpenWater)
        self.standing: dict[Number, tuple[Number, Number]] = {}
        self.surplus = self._surplus()

    def _surplus(self) -> Number:
        """Net discharge of a basin over all that flows: doubles balance to rounding only.

        In the half plane it would leave by the point at infinity, which is the middle of a bank, where it
        spoils the velocity nearby in the 13th digit; so it is taken from every element in proportion.
        """
        if not isinstance(self.layout.shore, Basin):
            return CONTEXT.mpf(0)
        flows = [CONTEXT.mpf(outflow(element)) for element in self.layout.elements]
        total = CONTEXT.fsum(abs(flow) for flow in flows)
        return CONTEXT.fsum(flows) / total if total else CONTEXT.mpf(0)

    def velocity(self, z: complex | Number) -> Sum:
        """Return W at a place in the water."""
        place = exact(z) if isinstance(z, complex) else z
        total = self._current(place)
        mapped = self.map(place)
        for element in self.layout.elements:
            total += self._element(element, place, mapped)
        return total

    def _element(self, element: Element, z: Number, mapped: tuple[Number, Number]) -> Sum:
        match element:
            case Source() | Sink():
                return self._pair(mapped, exact(element.at), self._per_depth(element) / (2 * CONTEXT.pi))
            case Vortex():
                strength = CONTEXT.mpc(0, -CONTEXT.mpf(element.circulation)) / (2 * CONTEXT.pi)
                free = self._pair(mapped, exact(element.at), strength)
                return free + self._core(element, z)
            case Doublet():
                return self._doublet(mapped, exact(element.at), exact(element.moment))
            case LineSource() | LineSink():
                return self._line(element, z, mapped)

    def _per_depth(self, element: Element) -> Number:
        flow = CONTEXT.mpf(outflow(element))
        return (flow - self.surplus * abs(flow)) / CONTEXT.mpf(self.layout.depth)

    def _standing(self, at: Number) -> tuple[Number, Number]:
        """Map of the place of an element, remembered."""
        if at not in self.standing:
            self.standing[at] = self.map(at)
        return self.standing[at]

    def _pair(self, mapped: tuple[Number, Number], at: Number, strength: Number) -> Sum:
        """Pole and image in the half plane: g / (t - s) + conj(g) / (t - conj(s)), times dt/dz."""
        t, slope = mapped
        s, _ = self._standing(at)
        own = slope * strength / (t - s)
        if not self.mirrored:
            return Sum.of(own)
        return Sum.of(own, slope * CONTEXT.conj(strength) / (t - CONTEXT.conj(s)))

    def _doublet(self, mapped: tuple[Number, Number], at: Number, moment: Number) -> Sum:
        """Derivative of the pair of a source with respect to its place."""
        t, slope = mapped
        s, slope_there = self._standing(at)
        strength = moment * slope_there / (2 * CONTEXT.pi)
        own = slope * strength / (t - s) ** 2
        if not self.mirrored:
            return Sum.of(own)
        return Sum.of(own, slope * CONTEXT.conj(strength) / (t - CONTEXT.conj(s)) ** 2)

    def _line(self, element: LineSource | LineSink, z: Number, mapped: tuple[Number, Number]) -> Sum:
        """Integral of point sources over the line, the interval split abreast of z."""
        start, end = exact(element.start), exact(element.end)
        strength = self._per_depth(element) / (2 * CONTEXT.pi)
        abreast = CONTEXT.re((z - start) / (end - start))
        cuts = sorted({CONTEXT.mpf(0), min(max(abreast, CONTEXT.mpf(0)), CONTEXT.mpf(1)), CONTEXT.mpf(1)})

        def point(fraction: Number) -> Number:
            return self._pair(mapped, start + fraction * (end - start), strength).value

        with CONTEXT.workdps(25):  # 1e-20 is far below the 1e-12 that is asked for, and four times faster
            value = CONTEXT.quad(point, cuts)
            middle = self._pair(mapped, (start + end) / 2, strength).scale
        return Sum(value, middle + abs(value))

    def _core(self, vortex: Vortex, z: Number) -> Sum:
        """What a core takes off the free vortex, images in the walls included where they reach."""
        if vortex.core is None:
            return Sum.of()
        radius = CONTEXT.mpf(vortex.core.radius)
        terms = []
        for at, sign in self._images(exact(vortex.at), CORE_REACH * radius, z):
            r = abs(z - at) / radius
            if vortex.core.model is CoreModel.RANKINE:
                loss = max(1 - r * r, CONTEXT.mpf(0))
            else:
                loss = CONTEXT.exp(-r * r)
            strength = CONTEXT.mpc(0, -sign * CONTEXT.mpf(vortex.circulation)) / (2 * CONTEXT.pi)
            terms.append(-strength * loss / (z - at) if r else CONTEXT.mpc(0))
        return Sum.of(*terms)

    def _images(self, at: Number, reach: Number, z: Number) -> list[tuple[Number, int]]:
        """Vortex and its mirror images with their signs, as far as they are within reach of z."""
        local = self.map.local(at)
        flip = CONTEXT.conj
        found: list[tuple[Number, int]]
        match self.layout.shore:
            case Surveyed():
                raise NotImplementedError
            case OpenWater():
                found = [(local, 1)]
            case StraightBank():
                found = [(local, 1), (flip(local), -1)]
            case Channel(width=width):
                period = CONTEXT.mpc(0, 2 * CONTEXT.mpf(width))
                found = [
                    (s + k * period, sign) for s, sign in ((local, 1), (flip(local), -1)) for k in (-1, 0, 1)
                ]
            case Corner():
                found = [(local, 1)]
            case DeadEnd(width=width):
                found = self._box_images(local, None, width)
            case Basin(length=length, width=width):
                found = self._box_images(local, length, width)
        placed = [(self.map.origin + s * self.map.along, sign) for s, sign in found]
        return [(s, sign) for s, sign in placed if abs(z - s) < reach]

    @staticmethod
    def _box_images(local: Number, length: float | None, width: float) -> list[tuple[Number, int]]:
        flip = CONTEXT.conj
        four = ((local, 1), (flip(local), -1), (-flip(local), -1), (-local, 1))
        shifts = (0,) if length is None else (-1, 0, 1)
        return [
            (s + CONTEXT.mpc(2 * j * CONTEXT.mpf(length or 0), 2 * k * CONTEXT.mpf(width)), sign)
            for s, sign in four
            for j in shifts
            for k in (-1, 0, 1)
        ]

    def _current(self, z: Number) -> Sum:
        """Ambient current with its gradient; in a channel the elements' pairs leave one end untouched."""
        ambient = self.layout.ambient
        (ux, uy), (vx, vy) = ambient.gradient
        offset = z - exact(ambient.at)
        x, y = CONTEXT.re(offset), CONTEXT.im(offset)
        terms = [
            CONTEXT.conj(exact(ambient.velocity)),
            CONTEXT.mpc(ux, -vx) * x,
            CONTEXT.mpc(uy, -vy) * y,
        ]
        if isinstance(self.layout.shore, Channel):
            terms.append(self._end_correction(self.layout.shore))
        return Sum.of(*terms)

    def _end_correction(self, shore: Channel) -> Number:
        """Shift so that the end the current comes from is left alone, and not the one against `along`."""
        net = CONTEXT.fsum(self._per_depth(element) for element in self.layout.elements)
        speed = (self.layout.ambient.velocity * shore.along.conjugate()).real
        share = CONTEXT.mpf(0) if speed > 0 else CONTEXT.mpf(1) if speed < 0 else CONTEXT.mpf(1) / 2
        return -share * net / CONTEXT.mpf(shore.width) * CONTEXT.conj(self.map.along)

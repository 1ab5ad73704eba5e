"""Vortex cores: what a rankine or lamb-oseen core changes in the field of a point vortex.

With zeta = z - s, r = |zeta| and c = -i Gamma / (2 pi) the cored vortex is W = c f(r) / zeta,
f = min(r^2/a^2, 1) (rankine) or 1 - exp(-r^2/a^2) (lamb-oseen). The point vortex c / zeta and all its images
are poles; the term is the difference c (f - 1) / zeta, which dies out within a few radii.
"""

from dataclasses import dataclass, replace
from itertools import pairwise

import numpy as np
from scipy.special import exp1, owens_t

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.core_images import REACH, core_images
from forebay.flow.layout import Core, CoreModel
from forebay.flow.shores import Frame
from forebay.flow.terms import Jet

_TWO_PI = 2.0 * np.pi

_PANEL = 0.5
"""Longest panel of the quadrature along an arc through a core, in radii: 16 nodes leave 1e-16."""

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(16)


@dataclass(frozen=True, slots=True)
class CoreTerm:
    """Cored vortex minus point vortex, with its mirror images.

    Straight walls stay impermeable: each is a mirror of the core too. A pier in the core is not.

    model, radius : of the core, a [m]
    centres : shape (k,), positions of the vortex (first) and of its images [m]
    circulations : shape (k,), Gamma of each [m2/s]
    owner : index among the model's owners
    """

    model: CoreModel
    radius: float
    centres: tuple[complex, ...]
    circulations: tuple[float, ...]
    owner: int

    def _pairs(self) -> list[tuple[complex, float]]:
        return list(zip(self.centres, self.circulations, strict=True))

    def velocity(self, z: ComplexArray) -> ComplexArray:
        """Difference of W [m/s], any shape; not finite at the centre."""
        return self.jet(z).velocity

    def jet(self, z: ComplexArray) -> Jet:
        """Difference of W [m/s] and of its derivatives [1/s] at z, any shape; not finite at the centre.

        Rankine, inside: c (conj zeta / a^2 - 1/zeta), slope c/zeta^2, skew c/a^2; outside zero.
        Lamb-Oseen, e = exp(-r^2/a^2): -c e/zeta, slope c e (1/zeta^2 + conj zeta/(a^2 zeta)), skew c e/a^2.
        The point vortex and its difference cancel near the centre: the sum keeps an absolute accuracy of
        1e-16 Gamma/r in W and 1e-16 Gamma/r^2 in the slope.
        """
        points = np.asarray(z, dtype=np.complex128)
        velocity, slope, skew = (np.zeros(points.shape, dtype=np.complex128) for _ in range(3))
        for centre, circulation in self._pairs():
            c = -1j * circulation / _TWO_PI
            zeta = points - centre
            weight = self._vorticity(np.abs(zeta))
            away = np.where(weight > 0.0, zeta, np.inf)
            with np.errstate(divide="ignore", invalid="ignore"):
                inverse = 1.0 / away
                velocity += c * (self._inside(zeta) - weight * inverse)
                slope += c * inverse * (weight * inverse + self._twist(zeta))
            skew += c * weight / self.radius**2
        return Jet(velocity, slope, skew)

    def _vorticity(self, r: FloatArray) -> FloatArray:
        """Vorticity over Gamma / (pi a^2): 1 within the radius, or exp(-r^2/a^2) [-]."""
        if self.model is CoreModel.RANKINE:
            return np.where(r <= self.radius, 1.0, 0.0)
        return np.asarray(np.exp(-((r / self.radius) ** 2)), dtype=np.float64)

    def _inside(self, zeta: ComplexArray) -> ComplexArray | float:
        """Rankine: conj zeta / a^2 within the radius; lamb-oseen: nothing [1/m]."""
        if self.model is CoreModel.RANKINE:
            return np.where(np.abs(zeta) <= self.radius, np.conj(zeta) / self.radius**2, 0.0)
        return 0.0

    def _twist(self, zeta: ComplexArray) -> ComplexArray | float:
        """Lamb-Oseen: exp(-r^2/a^2) conj zeta / a^2; rankine: nothing [1/m]."""
        if self.model is CoreModel.RANKINE:
            return 0.0
        return np.asarray(self._vorticity(np.abs(zeta)) * np.conj(zeta) / self.radius**2)

    def potential(self, z: ComplexArray) -> ComplexArray:
        """i times the difference of the stream functions [m2/s], any shape; phi has no meaning."""
        points = np.asarray(z, dtype=np.complex128)
        total = np.zeros(points.shape)
        for centre, circulation in self._pairs():
            square = (np.abs(points - centre) / self.radius) ** 2
            total -= circulation / (2.0 * _TWO_PI) * self._stream_difference(square)
        return np.asarray(1j * total, dtype=np.complex128)

    def _stream_difference(self, square: FloatArray) -> FloatArray:
        """-4 pi psi / Gamma of the core less that of the point vortex; square = r^2/a^2 [-]."""
        with np.errstate(divide="ignore"):
            if self.model is CoreModel.LAMB_OSEEN:
                return np.asarray(exp1(square), dtype=np.float64)
            return np.where(square < 1.0, square - 1.0 - np.log(square), 0.0)

    def chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Integral of the difference along straight chords a -> b [m2/s], shape of a.

        Rankine: the part of the chord within the radius. Lamb-Oseen: circulation by Owen's T function,
        flux by the exponential integral. Exact to rounding. A chord through the very centre counts as
        passing it on its left (Gamma/2 taken off), as a subtended angle of +pi does.
        """
        parts = [self._whole(a, b, s, g) - _point_chord(a - s, b - s, g) for s, g in self._pairs()]
        return np.asarray(sum(parts, np.zeros(np.shape(a))), dtype=np.complex128)

    def jet_about_centre(self, z: ComplexArray) -> Jet:
        """Whole vortex and the differences of its images: `jet` with the point vortex put back.

        With x = r^2/a^2: rankine c conj zeta / a^2; lamb-oseen c (1 - exp(-x))/x conj zeta / a^2. Accurate to
        rounding at the centre too, where W is zero and the skew c/a^2.
        """
        zeta = np.asarray(z, dtype=np.complex128) - self.centres[0]
        c = -1j * self.circulations[0] / _TWO_PI
        bar = np.conj(zeta) / self.radius**2
        x = (np.abs(zeta) / self.radius) ** 2
        weight = self._vorticity(np.abs(zeta))
        filled, change = np.ones(x.shape), np.zeros(x.shape)
        if self.model is CoreModel.LAMB_OSEEN:
            safe = np.maximum(x, 1e-3)
            filled = np.where(x > 1e-3, -np.expm1(-safe) / safe, 1.0 - x * (0.5 - x * (1.0 / 6.0 - x / 24.0)))
            closed = (safe * np.exp(-safe) + np.expm1(-safe)) / safe**2
            change = np.where(x > 1e-3, closed, -0.5 + x * (1.0 / 3.0 - x * (0.125 - x / 30.0)))
        images = replace(self, centres=self.centres[1:], circulations=self.circulations[1:])
        direct = (c * filled * bar, c * change * bar**2, c * weight / self.radius**2)
        return images.jet(z) + Jet(*(np.asarray(part, dtype=np.complex128) for part in direct))

    def chords_through_centre(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """As `chords` with the point vortex at the centre put back: no chord is an exception."""
        images = replace(self, centres=self.centres[1:], circulations=self.circulations[1:])
        whole = self._whole(a, b, self.centres[0], self.circulations[0])
        return whole + images.chords(a, b)

    def whole_chords(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """As `chords` for the whole cored vortices; chords through a centre are no exception."""
        return np.asarray(sum(self._whole(a, b, s, g) for s, g in self._pairs()), dtype=np.complex128)

    def _whole(self, a: ComplexArray, b: ComplexArray, centre: complex, circulation: float) -> ComplexArray:
        if self.model is CoreModel.RANKINE:
            return _rankine_chord(a - centre, b - centre, circulation, self.radius)
        return _lamb_oseen_chord(a - centre, b - centre, circulation, self.radius)

    def whole_arc(self, centre: complex, start: complex, turn: float) -> complex:
        """Integral of the whole cored vortices' W along a circular arc [m2/s].

        No centre of a vortex may lie between the arc and its chord.

        centre, start : of the arc, x + iy [m];  turn : swept angle, anticlockwise positive [rad]
        """
        return sum(self._whole_arc(centre - s, start - s, turn, circulation=g) for s, g in self._pairs())

    def _whole_arc(self, centre: complex, start: complex, turn: float, *, circulation: float) -> complex:
        """One vortex at the origin: far pieces by the subtended angle, near ones as they ask."""
        reach = self.radius * (1.0 if self.model is CoreModel.RANKINE else REACH)
        arm = start - centre
        cuts = [0.0, *_meets(centre, arm, turn, reach), 1.0]
        places = centre + arm * np.exp(1j * turn * np.array(cuts))
        total = 0j
        for (p, q), (u, v) in zip(pairwise(cuts), pairwise(places), strict=True):
            middle = abs(centre + arm * np.exp(0.5j * turn * (p + q)))
            if middle >= reach:
                total += complex(_point_chord(np.asarray(u), np.asarray(v), circulation))
            elif self.model is CoreModel.RANKINE:
                swept = np.conj(centre) * (v - u) + 1j * abs(arm) ** 2 * turn * (q - p)
                total += -1j * circulation / _TWO_PI * complex(swept) / self.radius**2
            else:
                total += self._smooth_arc(centre, u - centre, turn * (q - p), circulation=circulation)
        return total

    def _smooth_arc(self, centre: complex, arm: complex, turn: float, *, circulation: float) -> complex:
        """Lamb-Oseen vortex at the origin along an arc near it: Gauss-Legendre panels of half a radius."""
        count = int(np.ceil(abs(arm) * abs(turn) / (_PANEL * self.radius))) + 1
        width = turn / count
        angles = width * (np.arange(count)[:, None] + 0.5 * (_NODES + 1.0))
        zeta = centre + arm * np.exp(1j * angles)
        square = (np.abs(zeta) / self.radius) ** 2
        filled = np.where(square > 0.0, -np.expm1(-square) / np.where(square > 0.0, square, 1.0), 1.0)
        velocity = -1j * circulation / _TWO_PI * filled * np.conj(zeta) / self.radius**2
        return complex((velocity * 1j * (zeta - centre) * _WEIGHTS).sum() * 0.5 * width)

    def magnitude(self, z: ComplexArray) -> FloatArray:
        """Sum of the absolute values of the differences [m/s], any shape."""
        points = np.asarray(z, dtype=np.complex128)
        total = np.zeros(points.shape)
        for centre, circulation in self._pairs():
            r = np.abs(points - centre)
            weight = self._vorticity(r)
            total += abs(circulation) / _TWO_PI * weight / np.where(weight > 0.0, r, 1.0)
        return total


def core_term(at: complex, circulation: float, core: Core, *, owner: int, frame: Frame) -> CoreTerm:
    """Core of a vortex with its mirror images.

    at : position, x + iy [m];  circulation : Gamma [m2/s];  owner : index among the model's owners
    frame : the shore, whose walls mirror the core
    """
    reach = core.radius * (1.0 if core.model is CoreModel.RANKINE else REACH)
    places, signs = core_images(at, reach, frame)
    return CoreTerm(core.model, core.radius, places, tuple(circulation * sign for sign in signs), owner)


def _point_chord(a: ComplexArray, b: ComplexArray, circulation: float) -> ComplexArray:
    """Point vortex at the origin: c log(b/a), the angle subtended by the straight chord in (-pi, pi]."""
    with np.errstate(divide="ignore"):
        stretch = np.log(np.abs(b) / np.abs(a))
    angle = np.arctan2((np.conj(a) * b).imag, (np.conj(a) * b).real)
    return np.asarray(-1j * circulation / _TWO_PI * (stretch + 1j * angle), dtype=np.complex128)


def _rankine_chord(a: ComplexArray, b: ComplexArray, circulation: float, radius: float) -> ComplexArray:
    """Rankine vortex at the origin: c log(q/p) outside, c conj((p + q)/2)(q - p)/a^2 within the radius."""
    run = b - a
    square = np.where(run == 0.0, 1.0, np.abs(run) ** 2)
    half = (a * np.conj(run)).real
    root = np.sqrt(np.maximum(half**2 - square * (np.abs(a) ** 2 - radius**2), 0.0))
    p = a + np.clip((-half - root) / square, 0.0, 1.0) * run
    q = a + np.clip((-half + root) / square, 0.0, 1.0) * run
    within = root > 0.0
    p, q = np.where(within, p, a), np.where(within, q, a)  # nothing within: all of it comes after
    inner = -1j * circulation / (_TWO_PI * radius**2) * np.conj(0.5 * (p + q)) * (q - p)
    before = np.where(np.abs(p - a) > 0.0, _safe_point_chord(a, p, circulation), 0.0)
    after = np.where(np.abs(b - q) > 0.0, _safe_point_chord(q, b, circulation), 0.0)
    return np.asarray(before + inner + after, dtype=np.complex128)


def _safe_point_chord(a: ComplexArray, b: ComplexArray, circulation: float) -> ComplexArray:
    """`_point_chord` where neither end is the centre, else zero."""
    at_centre = (a == 0.0) | (b == 0.0)
    chord = _point_chord(np.where(at_centre, 1.0, a), np.where(at_centre, 1.0, b), circulation)
    return np.where(at_centre, 0.0, chord)


def _lamb_oseen_chord(a: ComplexArray, b: ComplexArray, circulation: float, radius: float) -> ComplexArray:
    """Lamb-Oseen vortex at the origin: angle and Owen's T for the circulation, psi for the flux.

    circulation along the chord = Gamma sign(h) [T(0, t/h) - T(sqrt 2 h/a, t/h)] between its ends, where
    h is the distance of the centre to the left and t runs along the chord;
    psi = -(Gamma/4 pi)(log r^2 + E1(r^2/a^2)).
    """
    run = b - a
    length = np.abs(run)
    unit = run / np.where(length > 0.0, length, 1.0)
    left = -(a * np.conj(unit)).imag
    h = np.abs(left)
    turned = [_turned((end * np.conj(unit)).real, h, radius) for end in (a, b)]
    along = circulation * np.where(left < 0.0, -1.0, 1.0) * (turned[1] - turned[0])
    psi = [-circulation / (2.0 * _TWO_PI) * _entire(np.abs(end) ** 2 / radius**2) for end in (a, b)]
    return np.asarray(np.where(length > 0.0, along, 0.0) + 1j * (psi[1] - psi[0]), dtype=np.complex128)


def _turned(t: FloatArray, h: FloatArray, radius: float) -> FloatArray:
    """T(0, t/h) - T(sqrt 2 h/a, t/h), zero for h = 0 [-]."""
    ratio = np.where(h > 0.0, t / np.where(h > 0.0, h, 1.0), 0.0)
    turned = np.arctan(ratio) / _TWO_PI - owens_t(np.sqrt(2.0) * h / radius, ratio)
    return np.asarray(turned, dtype=np.float64)


def _entire(square: FloatArray) -> FloatArray:
    """log x + E1(x) + Euler's constant, 0 at x = 0."""
    x = np.maximum(square, 1e-300)
    return np.asarray(np.where(x < 1e-16, x, np.log(x) + exp1(x) + np.euler_gamma), dtype=np.float64)


def _meets(centre: complex, arm: complex, turn: float, radius: float) -> list[float]:
    """Where the arc centre + arm exp(i turn x) meets the circle |z| = radius: x in (0, 1), ascending."""
    distance, reach = abs(centre), abs(arm)
    if distance == 0.0 or turn == 0.0:
        return []
    cosine = (radius**2 - distance**2 - reach**2) / (2.0 * distance * reach)
    if abs(cosine) >= 1.0:
        return []
    first = np.angle(centre / arm)
    angles = [first + np.arccos(cosine), first - np.arccos(cosine)]
    turns = [angle / turn + k * abs(_TWO_PI / turn) for angle in angles for k in range(-3, 4)]
    return sorted({float(x) for x in turns if 0.0 < x < 1.0})

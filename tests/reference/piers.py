"""Velocity round circular piers in open water and beside a straight bank, by two routes of its own.

One pier: the circle theorem of Milne-Thomson in 45 digits, every pole with its inverse point.
Several piers, or a pier beside a bank: Schwarz's alternating method in 80-bit floats. Each circle in turn
answers the Taylor series that it sees of all the rest by a multipole series; the coefficients come from a
discrete Fourier transform over the circle. A bank is the real axis: each pier and element gets its mirror
image. See README.md.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forebay.flow.layout import Doublet, Layout, Pier, Sink, Source, StraightBank, Vortex, outflow
from reference.oracle import CONTEXT, Number, Sum, exact

Long = NDArray[np.clongdouble]

ORDER = 120
"""Terms of each multipole series: enough for gaps down to a tenth of a radius, (1/1.4)^120 = 1e-18."""

SAMPLES = 512
SWEEPS = 120
PI = np.longdouble("3.14159265358979323846264338327950288")


@dataclass(frozen=True)
class Poles:
    """Poles of W: strength / (z - at)^order."""

    at: Long
    strength: Long
    order: NDArray[np.int64]

    def velocity(self, z: Long) -> Long:
        """Sum of the poles at every z."""
        terms = self.strength / (z[:, None] - self.at) ** self.order
        return np.asarray(terms.sum(axis=1))


def _poles(layout: Layout) -> list[tuple[Number, Number, int]]:
    """(place, strength, order) of every point element; strengths g = (q - i Gamma) / 2 pi, or M / 2 pi."""
    found = []
    for element in layout.elements:
        match element:
            case Source() | Sink():
                strength = CONTEXT.mpf(outflow(element)) / layout.depth
                order = 1
            case Vortex(core=None):
                strength = CONTEXT.mpc(0, -CONTEXT.mpf(element.circulation))
                order = 1
            case Doublet():
                strength = exact(element.moment)
                order = 2
            case _:
                raise ValueError(element)
        found.append((exact(element.at), strength / (2 * CONTEXT.pi), order))
    return found


def circle_theorem(layout: Layout, place: complex) -> Sum:
    """Round the one pier of a layout in open water: w = f(z) + conj f(a^2 / conj z), z from the centre.

    For W this adds -(a/z)^2 conj(W0(c + a^2 / conj z)), W0 the velocity without the pier. Cancelling the pole
    of the fraction analytically is left out: 45 digits bear it.
    """
    (pier,) = layout.piers
    centre, radius = exact(pier.at), CONTEXT.mpf(pier.radius)
    z = exact(place)

    def undisturbed(at: Number) -> Sum:
        terms = [g / (at - s) ** order for s, g, order in _poles(layout)]
        return Sum.of(*terms, CONTEXT.conj(exact(layout.ambient.velocity)), *_strain(layout, at))

    offset = z - centre
    mirrored = undisturbed(centre + radius**2 / CONTEXT.conj(offset))
    factor = -((radius / offset) ** 2)
    own = CONTEXT.mpc(0, -CONTEXT.mpf(pier.circulation)) / (2 * CONTEXT.pi) / offset
    answer = Sum(factor * CONTEXT.conj(mirrored.value), abs(factor) * mirrored.scale)
    return undisturbed(z) + answer + Sum.of(own)


def _strain(layout: Layout, z: Number) -> list[Number]:
    """Ambient gradient without vorticity: W = (du/dx - i du/dy) (z - at)."""
    if layout.ambient.vorticity:
        raise ValueError(layout.ambient)
    (ux, uy), _ = layout.ambient.gradient
    return [CONTEXT.mpc(ux, -uy) * (z - exact(layout.ambient.at))]


def _long(value: Number) -> np.clongdouble:
    real, imaginary = (
        np.longdouble(CONTEXT.nstr(part, 25)) for part in (CONTEXT.re(value), CONTEXT.im(value))
    )
    return np.clongdouble(real + 1j * imaginary)


class Schwarz:
    """Flow round several piers in open water or beside a straight bank, in 80-bit floats."""

    def __init__(self, layout: Layout) -> None:
        self.layout = layout
        shore = layout.shore
        self.origin, self.along = np.clongdouble(0), np.clongdouble(1)
        mirrored = isinstance(shore, StraightBank)
        if isinstance(shore, StraightBank):
            self.origin = np.clongdouble(shore.point)
            self.along = np.clongdouble(shore.along) / np.abs(np.clongdouble(shore.along))
        poles = [(self._local(_long(s)), self._turned(g, k), k) for s, g, k in _poles(layout)]
        piers = [
            (self._local(np.clongdouble(p.at)), np.longdouble(p.radius), p.circulation) for p in layout.piers
        ]
        if mirrored:
            poles += [(np.conj(s), np.conj(g), order) for s, g, order in poles]
            piers += [(np.conj(c), a, -circulation) for c, a, circulation in piers]
        self.poles = Poles(
            np.array([s for s, _, _ in poles], dtype=np.clongdouble),
            np.array([g for _, g, _ in poles], dtype=np.clongdouble),
            np.array([order for _, _, order in poles], dtype=np.int64),
        )
        self.centres = np.array([c for c, _, _ in piers], dtype=np.clongdouble)
        self.radii = np.array([a for _, a, _ in piers], dtype=np.longdouble)
        self.circulations = np.array([g for _, _, g in piers], dtype=np.longdouble)
        self.stream = np.conj(np.clongdouble(layout.ambient.velocity)) * self.along
        self.series = np.zeros((len(piers), ORDER), dtype=np.clongdouble)
        self._solve()

    def _local(self, z: np.clongdouble) -> np.clongdouble:
        return np.clongdouble((z - self.origin) * np.conj(self.along))

    def _turned(self, strength: Number, order: int) -> np.clongdouble:
        """A moment turns with the frame, a discharge or circulation does not."""
        return np.clongdouble(_long(strength) * (np.conj(self.along) if order == 2 else 1))

    def _of_pier(self, number: int, z: Long) -> Long:
        """W of one pier: its circulation and sum alpha_n (a / (z - c))^(n + 1)."""
        offset = z - self.centres[number]
        ratio = self.radii[number] / offset
        total = np.zeros_like(z)
        for coefficient in self.series[number][::-1]:
            total = (total + coefficient) * ratio
        return np.asarray(total * ratio - 1j * self.circulations[number] / (2 * PI) / offset)

    def _solve(self) -> None:
        angle = 2 * PI * np.arange(SAMPLES, dtype=np.longdouble) / SAMPLES
        circle = np.cos(angle) + 1j * np.sin(angle)
        powers = np.conj(circle)[None, :] ** np.arange(ORDER)[:, None] / SAMPLES
        for _ in range(SWEEPS):
            change = np.longdouble(0)
            for number in range(len(self.centres)):
                rim = self.centres[number] + self.radii[number] * circle
                seen = self.stream + self.poles.velocity(rim)
                for other in range(len(self.centres)):
                    if other != number:
                        seen = seen + self._of_pier(other, rim)
                answer = -np.conj(powers @ seen)
                change = max(change, np.abs(answer - self.series[number]).max())
                self.series[number] = answer
            if change < 1e-18 * (1 + np.abs(self.series).max()):
                return
        message = "Schwarz's method has not converged"
        raise ArithmeticError(message)

    def velocity(self, z: NDArray[np.complex128]) -> NDArray[np.complex128]:
        """W = u - iv at every place, in the frame of the layout."""
        local = (z.astype(np.clongdouble) - self.origin) * np.conj(self.along)
        total = self.stream + self.poles.velocity(local)
        for number in range(len(self.centres)):
            total = total + self._of_pier(number, local)
        return np.asarray(total * np.conj(self.along), dtype=np.complex128)


def rim(pier: Pier, count: int = 97) -> NDArray[np.complex128]:
    """Points on the wall of a pier; a prime count, so that they are nobody's collocation points."""
    turns = np.exp(2j * np.pi * np.arange(count) / count)
    return np.asarray(pier.at + pier.radius * turns, dtype=np.complex128)

"""Exact integrals of 1/(z - s) and log(z - s) over a straight segment of sources s.

Every function is a mean over the segment, so that a source strength multiplies it directly, and stays
accurate for short segments far away, for points next to an end, and on the segment itself.
"""

from dataclasses import dataclass

import numpy as np

from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray

_ON_WALL = 1e-9
"""Angular distance from a segment in a wall within which a point counts as on the water side of it [-]."""

_ROUNDING = 16.0 * np.finfo(np.float64).eps
"""Distance from a segment, relative to the coordinates, within which a point counts as on it [-]."""

_SERIES = 1.0 / (2.0 * np.arange(1, 14) * (2.0 * np.arange(1, 14) + 1.0))
"""1 / (2k (2k + 1)), k = 1 ... 13: with |2m| >= 4 the first term left out is below 16^-14 = 1e-17."""


@dataclass(frozen=True, slots=True)
class Segment:
    """Straight segment of sources.

    start, end : ends, complex [m] or [-]
    facing : 0, or the sign of Im((z - start) / (end - start)) for all water if the segment lies in a wall
    """

    start: complex
    end: complex
    facing: int = 0

    @property
    def run(self) -> complex:
        """end - start."""
        return self.end - self.start

    @property
    def middle(self) -> complex:
        """Midpoint."""
        return 0.5 * (self.start + self.end)

    def _cross(self, z: ComplexArray) -> FloatArray:
        """|run| times the distance to the left of the segment's line, from the nearer end."""
        near_start = np.abs(z - self.start) < np.abs(z - self.end)
        away = np.where(near_start, z - self.start, z - self.end)
        return np.asarray((away * np.conj(self.run)).imag, dtype=np.float64)

    def sides(self, z: ComplexArray) -> FloatArray:
        """1 left of the line start -> end, -1 right, 0 on it to rounding; in a wall the water's side."""
        cross = self._cross(z)
        reach = _ROUNDING * abs(self.run) * (np.abs(z) + abs(self.start) + abs(self.end))
        if not self.facing:
            return np.where(np.abs(cross) <= reach, 0.0, np.sign(cross))
        on_wall = (np.abs(cross) <= reach) | self._on_wall(z, cross)
        return np.where(on_wall, float(self.facing), np.sign(cross))

    def _on_wall(self, z: ComplexArray, cross: FloatArray) -> BoolArray:
        """Whether a point counts as on the segment, seen from a place in the water beside it."""
        to_start, to_end = z - self.start, z - self.end
        between = (to_start * np.conj(to_end)).real < 0.0
        within = _ON_WALL * abs(self.run) * np.minimum(np.abs(to_start), np.abs(to_end))
        return np.asarray(between & (np.abs(cross) <= within), dtype=np.bool_)

    def mean_inverse(self, z: ComplexArray) -> ComplexArray:
        """Mean of 1/(z - s): log((z - start) / (z - end)) / (end - start), shape of z.

        On the segment: the mean of both sides, or the water side if the segment lies in a wall.
        Not finite at either end.
        """
        to_start, to_end = z - self.start, z - self.end
        side = self.sides(z)
        dot = (to_start * np.conj(to_end)).real
        turn = np.arctan2(-side * np.abs(self._cross(z)), dot)
        turn = np.where((side == 0.0) & (dot < 0.0), 0.0, turn)
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = self.run / to_end
            close = np.log(np.abs(to_start) / np.abs(to_end))
            stretch = 0.5 * np.log1p(2.0 * ratio.real + np.abs(ratio) ** 2)
        stretch = np.where(np.abs(ratio) < 0.5, stretch, close)
        with np.errstate(invalid="ignore"):  # infinite at an end
            return np.asarray((stretch + 1j * turn) / self.run, dtype=np.complex128)

    def mean_inverse_square(self, z: ComplexArray) -> ComplexArray:
        """Mean of 1/(z - s)^2: 1 / ((z - start)(z - end)), shape of z; not finite at either end."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(1.0 / ((z - self.start) * (z - self.end)), dtype=np.complex128)

    def mean_log(self, z: ComplexArray, axis: complex, side: FloatArray | float) -> ComplexArray:
        """Mean of log(z - s), angles measured from `axis` in [0, pi] (side 1), [-pi, 0] (-1) or as 0 (0).

        Parameters
        ----------
        z : any shape; the ends are allowed, the mean is finite there
        axis : direction from which angles are measured; its own angle is not added
        side : shape of z or one value, the half-plane of the axis in which z - s lies

        Notes
        -----
        (e log(z - start) - f log(z - end)) - 1 with e = (z - start)/run, f = e - 1; beyond two lengths the
        series log m - sum (2m)^-2k / (2k (2k + 1)), m = (z - middle)/run.
        """
        run = self.run
        e, f, m = (z - self.start) / run, (z - self.end) / run, (z - self.middle) / run
        log_e = _logarithm(e, (z - self.start) / axis, side)
        log_f = _logarithm(f, (z - self.end) / axis, side)
        far = np.abs(m) > 2.0
        inverse = 1.0 / np.where(far, 4.0 * m * m, 16.0)
        series = inverse * np.polynomial.polynomial.polyval(inverse, _SERIES)
        outer = _logarithm(np.where(far, m, 2.0), (z - self.middle) / axis, side) - series
        mean = np.where(far, outer, e * log_e - f * log_f - 1.0)
        return np.asarray(np.log(abs(run)) + mean, dtype=np.complex128)

    def subtended(self, a: ComplexArray, b: ComplexArray) -> ComplexArray:
        """Mean over s of log((b - s)/(a - s)), continuous along the straight chord a -> b.

        Where the chord crosses the segment the imaginary part jumps by 2 pi times the share of the
        segment on its left. A chord that runs along the segment gets the mean of both sides, or the
        water side if the segment lies in a wall.

        a, b : shape (n,), ends of the chords
        """
        side_a, side_b = self.sides(a), self.sides(b)
        crossing = side_a * side_b < 0.0
        resolved_a = np.where(side_a == 0.0, side_b, side_a)
        resolved_b = np.where(side_b == 0.0, side_a, side_b)
        jump = np.where(crossing, side_a * self._share_passed(a, b), 0.0)
        passed = self.mean_log(b, self.run, resolved_b) - self.mean_log(a, self.run, resolved_a)
        return np.asarray(passed + 2j * np.pi * jump, dtype=np.complex128)

    def _share_passed(self, a: ComplexArray, b: ComplexArray) -> FloatArray:
        """Share of the segment between its end and the place where the chord a -> b meets its line."""
        e, f = (a - self.start) / self.run, (b - self.start) / self.run
        rise = f.imag - e.imag
        meets = (e.real * f.imag - f.real * e.imag) / np.where(rise == 0.0, 1.0, rise)
        return np.asarray(np.clip(1.0 - meets, 0.0, 1.0), dtype=np.float64)


def _logarithm(value: ComplexArray, angled: ComplexArray, side: FloatArray | float) -> ComplexArray:
    """log|value| + i angle of `angled`, held to the given side; zero where the value is."""
    modulus = np.abs(value)
    angle = np.where(side == 0.0, 0.0, np.arctan2(side * np.abs(angled.imag), angled.real))
    return np.log(np.where(modulus == 0.0, 1.0, modulus)) + 1j * angle

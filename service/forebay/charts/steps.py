"""Round numbers: the flux of a tube, the speed bands, the length of the scale bar."""

from dataclasses import dataclass
from fractions import Fraction
from math import ceil, floor, gcd, lcm, log10

import numpy as np

from forebay.flow.arrays import FloatArray

LINES_ACROSS = 22
"""Streamlines wanted across the busiest line of the grid."""

LINES_INTO_ONE = 28
"""Streamlines that may run into one intake."""

TOLERANCE = 1.7
"""Factor by which the tubes may differ from the wanted number so that discharges are whole tubes."""

BANDS = 8
"""Largest number of speed bands."""

NARROW_RANGE = 0.4
"""Spread of speeds, as a share of the largest, below which the first band takes all that is slow."""


@dataclass(frozen=True, slots=True)
class Tube:
    """Discharge of a stream tube in the picture's units; `whole`: intakes and outfalls take whole ones."""

    discharge: float
    whole: bool


def round_number(value: float) -> float:
    """Nearest of 1, 2, 2.5, 5 times a power of ten, by ratio; value > 0."""
    power = 10.0 ** floor(log10(value))
    return min((factor * power for factor in (1.0, 2.0, 2.5, 5.0, 10.0)), key=lambda c: abs(log10(c / value)))


def round_down(value: float) -> float:
    """Largest of 1, 2, 5 times a power of ten that is not above `value` > 0."""
    power = 10.0 ** floor(log10(value))
    return max(factor * power for factor in (1.0, 2.0, 5.0) if factor * power <= value * (1 + 1e-9))


def choose_tube(discharges: list[float], flow_across: float, least: float = 0.0) -> Tube:
    """Discharge per stream tube near flow_across / LINES_ACROSS.

    First choice: a divisor of all discharges, so that every line runs from a source or the rim to a sink or
    the rim. Second: a divisor of the largest one. Third: a round number.

    Parameters
    ----------
    discharges : of all sources and sinks, positive, in the picture's units
    flow_across : discharge over the busiest line of the grid, positive, same units
    least : discharge below which the lines would stand too close, same units

    Returns
    -------
    Tube.
    """
    largest = max(discharges, default=0.0)
    wanted = max(flow_across / LINES_ACROSS, largest / LINES_INTO_ONE, least)
    for divisor, whole in ((common_divisor(discharges), True), (largest, len(discharges) == 1)):
        tube = roundest_part(divisor, wanted)
        if tube is not None:
            return Tube(tube, whole)
    return Tube(round_number(wanted), whole=not discharges)


def roundest_part(whole: float, wanted: float) -> float | None:
    """A whole part of a number within TOLERANCE of `wanted`, with the fewest figures; None if none is."""
    fewest, most = ceil(whole / (wanted * TOLERANCE)), floor(whole * TOLERANCE / wanted)
    parts = [whole / count for count in range(max(fewest, 1), most + 1)]
    return min(
        parts, key=lambda part: (len(f"{part:.6g}".strip("0.")), abs(log10(part / wanted))), default=None
    )


def common_divisor(discharges: list[float]) -> float:
    """Largest number of which all discharges are multiples to six significant digits; 0 for none."""
    if not discharges:
        return 0.0
    parts = [Fraction(f"{value:.6g}") for value in discharges]
    shared = lcm(*(part.denominator for part in parts))
    return gcd(*(int(part * shared) for part in parts)) / shared


def speed_levels(speeds: FloatArray) -> FloatArray:
    """Limits of the speed bands from zero, at least two; the first band is wide if speeds are alike.

    The last limit lies near the 97th percentile of the map, so that the few cells at an intake do not
    take all the colours; what is faster gets a band of its own.
    """
    if speeds.size == 0:
        return np.array([0.0, 1.0])
    low, high = (float(value) for value in np.percentile(speeds, [2.0, 97.0]))
    if high <= 0.0:
        return np.array([0.0, 1.0])
    if high - low > NARROW_RANGE * high:
        low = 0.0
    spread = max(high - low, 1e-3 * high)
    most = BANDS if low == 0.0 else BANDS - 1
    step = next(c for c in growing_steps(spread / BANDS) if ceil(high / c) - floor(low / c) <= most)
    first, last = floor(low / step), ceil(high / step)
    limits = np.arange(first, max(last, first + 1) + 1) * step
    return np.asarray(limits if first == 0 else np.append(0.0, limits), dtype=np.float64)


def growing_steps(start: float) -> list[float]:
    """Round numbers from `start` upwards."""
    power = 10.0 ** floor(log10(start))
    return [c * power * 10**n for n in range(3) for c in (1.0, 2.0, 2.5, 5.0) if c * power * 10**n >= start]


def figures(value: float, digits: int = 3) -> str:
    """Number in `digits` significant figures without an exponent where that is readable."""
    text = f"{value:.{digits}g}"
    return f"{value:.0f}" if "e+" in text and abs(value) < 1e7 else text

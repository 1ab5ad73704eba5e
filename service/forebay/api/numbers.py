"""Significant digits: shorter numbers in answers, without loss where all digits are asked for."""

import math

import numpy as np
import numpy.typing as npt
from numba import njit

FloatArray = npt.NDArray[np.float64]
IntArray = npt.NDArray[np.int64]

EXACT_POWER = 22
"""Largest n for which 10^n is a double without error."""

POWERS: FloatArray = np.power(10.0, np.arange(EXACT_POWER + 1))
"""Powers of ten without error."""

DOUBT = 2.0 * float(np.finfo(np.float64).eps)
"""Distance from a tie, over the number, within which the rounding of a product decides [-]."""

EVERY_DIGIT = 17
"""Significant digits that identify any double."""


def round_number(value: float, digits: int) -> float | None:
    """Round to `digits` significant digits; None for NaN and infinities."""
    if not math.isfinite(value):
        return None
    return value if digits >= EVERY_DIGIT else _round_text(value, digits)


def _round_text(value: float, digits: int) -> float:
    """Round through text; the largest doubles, which would round up to infinity, stay as they are."""
    rounded = float(f"{value:.{digits}g}")
    return rounded if math.isfinite(rounded) else value


def round_array(values: FloatArray, digits: int) -> FloatArray:
    """Round every finite value to `digits` significant digits; NaN stays, infinities become NaN.

    Powers of ten up to 1e22 are exact, so that n / 10^k is the double nearest to the decimal number and
    prints short; the rare values beyond, and those next to a tie, are rounded through text.
    """
    flat = np.array(values, dtype=np.float64).ravel()
    if digits >= EVERY_DIGIT:
        flat[np.isinf(flat)] = np.nan
        return flat.reshape(values.shape)
    textual = np.empty(flat.size, dtype=np.int64)
    count = _round_in_place(flat, digits, POWERS, textual)
    for index in textual[:count].tolist():
        flat[index] = _round_text(float(flat[index]), digits)
    return flat.reshape(values.shape)


@njit(cache=True, error_model="numpy")
def _round_in_place(values: FloatArray, digits: int, powers: FloatArray, textual: IntArray) -> int:
    """Round what can be rounded by exact powers; the rest stays, its indices go to `textual`.

    values : shape (n,), changed;  powers : 10^0 ... 10^22;  textual : shape (n,), filled from the front
    Returns how many indices were written.
    """
    count = 0
    for i in range(values.shape[0]):
        value = values[i]
        size = abs(value)
        if size == 0.0 or value != value:  # noqa: PLR0124  (NaN)
            continue
        if size == np.inf:
            values[i] = np.nan
            continue
        power = digits - 1 - math.floor(math.log10(size))
        if abs(power) > powers.shape[0] - 1:
            textual[count] = i
            count += 1
            continue
        scaled = size * powers[power] if power >= 0 else size / powers[-power]
        whole = np.rint(scaled)
        # the scaling itself rounds, which may make a tie of what is none; the logarithm may be one off
        tie = abs(abs(scaled - whole) - 0.5) <= DOUBT * scaled
        if tie or scaled < powers[digits - 1] or scaled > powers[digits]:
            textual[count] = i
            count += 1
            continue
        rounded = whole / powers[power] if power >= 0 else whole * powers[-power]
        values[i] = math.copysign(rounded, value)
    return count

"""Significant digits: shorter numbers in answers, without loss where all digits are asked for."""

import math

import numpy as np
import numpy.typing as npt

FloatArray = npt.NDArray[np.float64]

EXACT_POWER = 22
"""Largest n for which 10^n is a double without error."""

DOUBT = 2.0 * float(np.finfo(np.float64).eps)
"""Distance from a tie, over the number, within which the rounding of a product decides [-]."""

EVERY_DIGIT = 17
"""Significant digits that identify any double."""

FEW = 50
"""Values up to which rounding one by one through text is the faster way."""

BLOCK = 65536
"""Values rounded at a time, so that the intermediate arrays stay in the cache."""


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
    if digits < EVERY_DIGIT and flat.size <= FEW:
        flat[:] = [_round_text(value, digits) for value in flat.tolist()]
    elif digits < EVERY_DIGIT:
        for start in range(0, flat.size, BLOCK):
            _round_block(flat[start : start + BLOCK], digits)
    flat[np.isinf(flat)] = np.nan
    return flat.reshape(values.shape)


def _round_block(block: FloatArray, digits: int) -> None:
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        power = digits - 1 - np.floor(np.log10(np.abs(block)))
        usual = np.abs(power) <= EXACT_POWER
        scale = 10.0 ** np.where(usual, np.abs(power), 0.0)
        scaled = np.where(power >= 0, block * scale, block / scale)
        whole = np.rint(scaled)
        rounded = np.where(power >= 0, whole / scale, whole * scale)
        # the scaling itself rounds, which may make a tie of what is none
        doubtful = np.abs(np.abs(scaled - whole) - 0.5) <= DOUBT * np.abs(scaled)
    textual = (~usual | doubtful) & np.isfinite(block) & (block != 0.0)
    rounded[textual] = [_round_text(value, digits) for value in block[textual].tolist()]
    np.copyto(block, rounded, where=usual | textual)

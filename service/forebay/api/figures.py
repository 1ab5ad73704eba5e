"""Numbers and units as an engineer reads them in a summary, a table or on paper."""

import math
import re

UNIT_WORDS = {
    "[ft_i]": "ft",
    "[lbf_av]": "lbf",
    "[lb_av]": "lb",
    "[degF]": "°F",
    "Cel": "°C",
    "deg": "°",
    "{crs}": "of the crs",
    "By": "B",
    "a": "year",
}
"""Printed form of the UCUM codes that answers use, where it is another."""

SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")

EXPONENT = re.compile(r"(?<=[A-Za-z])\d")
"""Digit that raises the unit before it to a power."""

CLOSED_FORM = 1e-12
"""Share below which an error is rounding of a closed form, and written as such [-]."""


def unit_name(code: str) -> str:
    """Printed form of a UCUM code: `m3/s` is m³/s, `[ft_i]3/s` is ft³/s; nothing for pure numbers."""
    if code in {"1", "{unit}"}:
        return ""
    for word, printed in UNIT_WORDS.items():
        if word.startswith("[") or code == word:
            code = code.replace(word, printed)
    raised = EXPONENT.sub(lambda digit: digit.group().translate(SUPERSCRIPTS), code)
    return raised.replace(".", "·")


def figure(value: float | None, digits: int = 4) -> str:
    """Significant digits with a power of ten only where that is shorter; a dash if there is no value."""
    if value is None or not math.isfinite(value):
        return "–"
    if value == 0:
        return "0"
    if 1e-3 <= abs(value) < 1e7:
        text = f"{value:.{digits}g}"
        return (f"{value:.0f}" if "e" in text else text).replace("-", "−")
    mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
    mantissa = mantissa.rstrip("0").rstrip(".") if "." in mantissa else mantissa
    return f"{mantissa}·10{str(int(exponent)).translate(SUPERSCRIPTS)}".replace("-", "−")


def quantity(value: float | None, unit: str, digits: int = 4) -> str:
    """Number with the printed form of its unit's code."""
    return f"{figure(value, digits)} {unit_name(unit)}".rstrip()


def percent(share: float | None) -> str:
    """Share as per cent to two decimals, without the sign; a dash if there is no value."""
    return "–" if share is None or not math.isfinite(share) else f"{100 * share:.2f}"


def share_with_error(share: float | None, error: float | None) -> str:
    """Share in per cent with its error bound, e.g. `7.52 ± 10⁻⁵`; without one if none is known."""
    if share is None or error is None or not (math.isfinite(share) and math.isfinite(error)):
        return percent(share)
    return f"{percent(share)} ± {figure(100 * max(error, CLOSED_FORM), 1)}"


def error_bound(value: float | None) -> str:
    """Error to one digit, a dash if none is known."""
    return figure(value, 1)


def duration(seconds: float | None) -> str:
    """Time in seconds, minutes, hours or days, whichever reads best; a dash if there is no value."""
    if seconds is None or not math.isfinite(seconds):
        return "–"
    units = ((86400.0, "d", 3.0), (3600.0, "h", 3.0), (60.0, "min", 5.0))
    size, name = next(((size, name) for size, name, least in units if seconds >= least * size), (1.0, "s"))
    return f"{figure(seconds / size, 3)} {name}"


def counted(number: int, noun: str, plural: str | None = None) -> str:
    """Number with its noun: `1 sink`, `2 sinks`."""
    return f"{number} {noun if number == 1 else plural or noun + 's'}"

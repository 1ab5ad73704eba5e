"""Elementary functions without branches, so that loops over them become vector instructions.

The compiler turns calls of a mathematical library inside a loop into scalar calls, five to ten times
slower. The polynomials here are Taylor series (exponential, sine, cosine) cut where the next term is
below rounding on the reduced range, the logarithm of Sun's fdlibm and the arc tangent of Moshier's Cephes
library. Errors against mpmath are below 2 units in the last place.
"""

import math
from typing import Any

from numba import njit, types
from numba.extending import intrinsic

_HALF_PI_HIGH = 1.5707963267948966
_HALF_PI_LOW = 6.123233995736766e-17
_LN2_HIGH = 6.93147180369123816490e-01
_LN2_LOW = 1.90821492927058770002e-10
_FARTHEST = 700.0
"""Arguments of exp(-x) beyond this give exp(-700) = 1e-304, which no sum can feel."""


@intrinsic
def _bits_of(_typing_context: Any, _x: Any) -> Any:  # noqa: ANN401  # types of the compiler
    def generate(context: Any, builder: Any, _: Any, arguments: Any) -> Any:  # noqa: ANN401
        return builder.bitcast(arguments[0], context.get_value_type(types.int64))

    return types.int64(types.float64), generate


@intrinsic
def _number_of(_typing_context: Any, _x: Any) -> Any:  # noqa: ANN401
    def generate(context: Any, builder: Any, _: Any, arguments: Any) -> Any:  # noqa: ANN401
        return builder.bitcast(arguments[0], context.get_value_type(types.float64))

    return types.float64(types.int64), generate


_bits: Any = _bits_of
_number: Any = _number_of
"""The 64 bits of a double, and back: called from compiled code with one argument."""


@njit(inline="always", error_model="numpy")
def decay(x: float) -> tuple[float, float]:
    """exp(-x) and 1 - exp(-x) for x >= 0, both to full relative accuracy."""
    x = min(x, _FARTHEST)
    k = int(x * 1.4426950408889634 + 0.5)
    r = k * _LN2_HIGH - x + k * _LN2_LOW
    p = 1.0 / 13.0
    p = (p * r + 1.0) * (1.0 / 12.0)
    p = (p * r + 1.0) * (1.0 / 11.0)
    p = (p * r + 1.0) * (1.0 / 10.0)
    p = (p * r + 1.0) * (1.0 / 9.0)
    p = (p * r + 1.0) * (1.0 / 8.0)
    p = (p * r + 1.0) * (1.0 / 7.0)
    p = (p * r + 1.0) * (1.0 / 6.0)
    p = (p * r + 1.0) * (1.0 / 5.0)
    p = (p * r + 1.0) * (1.0 / 4.0)
    p = (p * r + 1.0) * (1.0 / 3.0)
    p = (p * r + 1.0) * 0.5
    p = (p * r + 1.0) * r
    power: float = _number((1023 - k) << 52)
    return power * (1.0 + p), (1.0 - power) - power * p


@njit(inline="always", error_model="numpy")
def sine_cosine(x: float) -> tuple[float, float]:
    """Sin and cos for |x| < 1e5."""
    n = math.floor(x * (2.0 / math.pi) + 0.5)
    r = (x - n * _HALF_PI_HIGH) - n * _HALF_PI_LOW
    z = r * r
    s = 1.0 / (16.0 * 17.0)
    s = (1.0 - z * s) * (1.0 / (14.0 * 15.0))
    s = (1.0 - z * s) * (1.0 / (12.0 * 13.0))
    s = (1.0 - z * s) * (1.0 / (10.0 * 11.0))
    s = (1.0 - z * s) * (1.0 / (8.0 * 9.0))
    s = (1.0 - z * s) * (1.0 / (6.0 * 7.0))
    s = (1.0 - z * s) * (1.0 / (4.0 * 5.0))
    s = (1.0 - z * s) * (1.0 / (2.0 * 3.0))
    s = r - r * (z * s)
    c = 1.0 / (15.0 * 16.0)
    c = (1.0 - z * c) * (1.0 / (13.0 * 14.0))
    c = (1.0 - z * c) * (1.0 / (11.0 * 12.0))
    c = (1.0 - z * c) * (1.0 / (9.0 * 10.0))
    c = (1.0 - z * c) * (1.0 / (7.0 * 8.0))
    c = (1.0 - z * c) * (1.0 / (5.0 * 6.0))
    c = (1.0 - z * c) * (1.0 / (3.0 * 4.0))
    c = (1.0 - z * c) * 0.5
    c = 1.0 - z * c
    quadrant = int(n) & 3
    odd = (quadrant & 1) == 1
    sine = c if odd else s
    cosine = s if odd else c
    sine = -sine if quadrant >= 2 else sine
    cosine = -cosine if 1 <= quadrant <= 2 else cosine
    return sine, cosine


@njit(inline="always", error_model="numpy")
def logarithm(x: float) -> float:
    """Natural logarithm of a positive normal number; of 0 it is about -709, not -inf."""
    bits = _bits(x)
    m: float = _number((bits & 0x000FFFFFFFFFFFFF) | 0x3FF0000000000000)
    above = m > 1.4142135623730951
    m = 0.5 * m if above else m
    exponent: float = float((bits >> 52) - 1023) + (1.0 if above else 0.0)
    f = m - 1.0
    s = f / (2.0 + f)
    z = s * s
    w = z * z
    even = w * (3.999999999940941908e-01 + w * (2.222219843214978396e-01 + w * 1.531383769920937332e-01))
    odd = z * (
        6.666666666666735130e-01
        + w * (2.857142874366239149e-01 + w * (1.818357216161805012e-01 + w * 1.479819860511658591e-01))
    )
    half = 0.5 * f * f
    return exponent * _LN2_HIGH - ((half - (s * (half + even + odd) + exponent * _LN2_LOW)) - f)


@njit(inline="always", error_model="numpy")
def angle(y: float, x: float) -> float:
    """atan2(y, x) in [-pi, pi]; 0 for two zeros."""
    ax = abs(x)
    ay = abs(y)
    larger = max(ax, ay)
    smaller = min(ax, ay)
    steep = smaller > 0.41421356237309503 * larger
    numerator = (smaller - larger) if steep else smaller
    denominator = (smaller + larger) if steep else larger
    t = numerator / (denominator if denominator != 0.0 else 1.0)
    z = t * t
    p = -8.750608600031904122785e-1 * z - 1.615753718733365076637e1
    p = (p * z - 7.500855792314704667340e1) * z - 1.228866684490136173410e2
    p = p * z - 6.485021904942025371773e1
    q = (z + 2.485846490142306297962e1) * z + 1.650270098316988542046e2
    q = ((q * z + 4.328810604912902668951e2) * z + 4.853903996359136964868e2) * z + 1.945506571482613964425e2
    r = t * (z * p / q) + t
    r = r + (0.78539816339744830962 if steep else 0.0)
    r = (1.57079632679489661923 - r) if ay > ax else r
    r = (3.14159265358979323846 - r) if x < 0.0 else r
    return -r if y < 0.0 else r

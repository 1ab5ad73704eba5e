"""Branch-free elementary functions against mpmath, over the arguments the kernels use."""

import mpmath
import numpy as np
import pytest
from numba import njit

from forebay.flow.kernels.elementary import angle, decay, logarithm, sine_cosine

ULP = 2.0**-53


@njit
def _all(x, y):
    """Columns: exp(-x), 1 - exp(-x), sin x, cos x, log x, atan2(y, x - 3)."""
    table = np.empty((x.size, 6))
    for i in range(x.size):
        table[i, 0], table[i, 1] = decay(x[i])
        table[i, 2], table[i, 3] = sine_cosine(x[i])
        table[i, 4] = logarithm(x[i])
        table[i, 5] = angle(y[i], x[i] - 3.0)
    return table


REFERENCES = [
    lambda x, y: mpmath.exp(-x),
    lambda x, y: -mpmath.expm1(-x),
    lambda x, y: mpmath.sin(x),
    lambda x, y: mpmath.cos(x),
    lambda x, y: mpmath.log(x),
    lambda x, y: mpmath.atan2(y, x - 3),
]
NAMES = ["decay", "loss", "sine", "cosine", "logarithm", "angle"]


@pytest.mark.parametrize("column", range(6), ids=NAMES)
def test_within_three_units_in_the_last_place(column):
    generator = np.random.default_rng(7)
    x = np.concatenate([generator.uniform(0.0, 2 * np.pi, 400), 10.0 ** generator.uniform(-12, 2, 400)])
    x = x[x < 2 * np.pi] if column in {2, 3} else x  # half of Im d, which the period bounds
    y = generator.standard_normal(x.size) * 10.0 ** generator.uniform(-6, 6, x.size)
    value = _all(x, y)[:, column]
    with mpmath.workdps(40):
        exact = [REFERENCES[column](mpmath.mpf(a), mpmath.mpf(b)) for a, b in zip(x, y, strict=True)]
        # the difference x - 3 is rounded before the angle is taken: one more unit there
        errors = [
            abs(mpmath.mpf(v) - e) / max(abs(e), mpmath.mpf(1) / 3 if column == 5 else 0)
            for v, e in zip(value, exact, strict=True)
        ]
    assert float(max(errors)) < (3 if column not in {2, 3} else 40) * ULP
    # near multiples of pi/2 sine and cosine lose digits relative to themselves; 40 units at the nearest drawn


def test_far_arguments_neither_overflow_nor_vanish():
    table = _all(np.array([699.0, 1e6]), np.array([1.0, 1.0]))
    assert table[0, 0] == pytest.approx(float(mpmath.exp(-699)), rel=1e-13)
    assert 0.0 < table[1, 0] < 1e-300
    assert table[1, 1] == 1.0

"""Bounds hold wherever they are tried, and are not so wide as to be useless."""

import numpy as np
import pytest

from forebay.flow.model import compile_layout
from forebay.flow.poles import PERIODIC, RATIONAL
from forebay.flow.stagnation.bounds import lamb_oseen_second
from forebay.flow.stagnation.certificate import certify, polish
from forebay.flow.stagnation.field import BoundedField
from forebay.flow.stagnation.kernels import multipole_bounds, simple_bounds
from support.layouts import CORED_KINDS, LINE_KINDS, POINT_KINDS, random_layout
from support.sites import SHORES

RIM = np.exp(2j * np.pi * np.arange(48) / 48)


def kernel(d, kappa):
    return 1 / d if kappa == RATIONAL else 0.5 / np.tanh(0.5 * d)


@pytest.mark.parametrize("kappa", [RATIONAL, PERIODIC])
def test_simple_pole(kappa):
    generator = np.random.default_rng(1)
    for _ in range(200):
        d = complex(generator.uniform(-6, 6), generator.uniform(-6, 6))
        nearest = abs(d) if kappa == RATIONAL else abs(d - 2j * np.pi * np.round(d.imag / (2 * np.pi)))
        radius = nearest * generator.uniform(0.01, 0.9)
        x, rim = kernel(d, kappa), kernel(d + radius * RIM, kappa)
        value, slope = simple_bounds(d, radius, kappa)
        change = np.max(np.abs(rim - x + (x * x - kappa) * radius * RIM))
        turn = np.max(np.abs(rim * rim - x * x))
        assert change <= value * (1 + 1e-9) + 1e-13  # rounding of the sampled values
        assert turn <= slope * (1 + 1e-9) + 1e-13


def test_simple_pole_is_exact_without_copies():
    """On the near side of 1/d the remainder reaches its bound."""
    value, slope = simple_bounds(2.0 + 0j, 1.0, RATIONAL)
    assert value == pytest.approx(1 / 1 - 1 / 2 - 1 / 4, rel=1e-14)
    assert slope == pytest.approx(1 - 1 / 4, rel=1e-14)


def test_a_disc_that_holds_a_pole_has_no_bound():
    assert simple_bounds(1.0 + 0j, 1.0, RATIONAL) == (np.inf, np.inf)
    moments = np.ones(3, dtype=complex)
    assert multipole_bounds(0.1 + 6.2j, 1.0, PERIODIC, moments) == (np.inf, np.inf)


@pytest.mark.parametrize("kappa", [RATIONAL, PERIODIC])
@pytest.mark.parametrize("order", [1, 2, 5])
def test_multipoles(kappa, order):
    generator = np.random.default_rng(order)
    moments = np.zeros(order, dtype=complex)
    moments[-1] = 1 - 2j

    def first(d):
        x = kernel(d, kappa)
        return moments[-1] * order * x ** (order - 1) * (kappa - x * x)

    def second(d):
        x = kernel(d, kappa)
        bend = kappa - x * x
        rise = (order - 1) * x ** (order - 2) * bend * bend if order > 1 else 0.0
        return moments[-1] * order * (rise - 2 * x**order * bend)

    for _ in range(100):
        d = complex(generator.uniform(-6, 6), generator.uniform(-3, 3))
        radius = abs(d) * generator.uniform(0.01, 0.7)
        value, slope = multipole_bounds(d, radius, kappa, moments)
        rim = d + radius * RIM
        change = np.max(np.abs(first(rim) - first(d) - second(d) * radius * RIM))
        assert change <= value * (1 + 1e-9) + 1e-12 * abs(first(d))
        assert np.max(np.abs(second(rim) - second(d))) <= slope * (1 + 1e-9) + 1e-12 * abs(second(d))


def test_lamb_oseen_bound_falls_and_covers_the_core():
    r = np.linspace(0.0, 15.0, 500)
    bound = lamb_oseen_second(r)
    assert np.all(np.diff(bound) <= 0.0)
    assert bound[0] < 4.0  # the true maximum is about 2.5


@pytest.mark.parametrize("shore", list(SHORES))
@pytest.mark.parametrize("kinds", [POINT_KINDS, LINE_KINDS, CORED_KINDS])
def test_discs_hold_on_every_shore(shore, kinds):
    """The Taylor remainder of W over discs of the water, sampled on their rims."""
    model = compile_layout(random_layout(shore, 3, kinds=kinds, count=4))
    field = BoundedField(model)
    generator = np.random.default_rng(5)
    at = np.array([s.at for s in model.singularities] + [line.start for line in model.lines])
    z = np.concatenate(
        [
            at + 10.0 ** generator.uniform(-1, 1) * np.exp(1j * generator.uniform(0, 6, at.size))
            for _ in range(12)
        ]
    )
    z = z[model.wet(z)]
    room = np.min(np.abs(z[:, None] - at), axis=1)
    for line in model.lines:
        along = np.clip(((z - line.start) / (line.end - line.start)).real, 0, 1)
        room = np.minimum(room, np.abs(z - line.start - along * (line.end - line.start)))
    room = np.minimum(room, model.distance_to_wall(z))
    radius = 0.6 * room
    discs = field.discs(z, radius)
    finite = np.isfinite(discs.rest)
    assert finite.mean() > 0.5
    for turn in RIM:
        step = radius * turn
        rest = model.velocity(z + step) - discs.velocity - discs.slope * step - discs.skew * np.conj(step)
        assert np.all(np.abs(rest)[finite] <= (discs.rest + 4 * discs.rounding)[finite] + 1e-13)


def test_certificate_refuses_a_double_zero_and_grants_its_neighbours():
    """W = 1 + g/(t-1) + g/(t+1) with g = i(1 + e): zeros at distance sqrt(2 e) of each other's middle."""
    from forebay.flow.layout import Ambient, Layout, Vortex

    for excess, granted in ((0.0, False), (1e-15, False), (1e-10, True), (1e-3, True)):
        g = 2 * np.pi * (1 + excess)
        layout = Layout(
            1.0, ambient=Ambient(1 + 0j), elements=(Vortex("a", 1 + 0j, -g), Vortex("b", -1 + 0j, -g))
        )
        model = compile_layout(layout)
        root = np.sqrt(complex((1 + excess) ** 2 - 1))
        near = -1j * (1 + excess) + np.array([1j, -1j]) * root
        at = polish(model.rational, model.frame.map.forward(near))
        assert bool(certify(model.rational, at).granted.all()) is granted

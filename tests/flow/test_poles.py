"""Sums of poles: kernels, derivatives and path integrals against mpmath."""

import mpmath
import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.poles import PERIODIC, RATIONAL, PoleField

CASES = [(RATIONAL, 0.0), (PERIODIC, 0.0), (PERIODIC, 0.5), (PERIODIC, -0.5)]
NAMES = ["rational", "both ends", "right end", "left end"]


def kernel(kappa, d):
    """X(d) in the working digits of mpmath."""
    return mpmath.coth(mpmath.mpc(d) / 2) / 2 if kappa == PERIODIC else 1 / mpmath.mpc(d)


def a_field(kappa, offset):
    """Five poles and two multipoles within 0 < Im tau < 3."""
    generator = np.random.default_rng(1)

    def numbers(count):
        return generator.uniform(-2, 2, count) + 1j * generator.uniform(0.1, 3, count)

    return PoleField(
        kappa,
        offset,
        0.3 + 0j,
        numbers(5),
        numbers(5),
        np.arange(5),
        numbers(2),
        np.array([[0.3 + 0.1j, 0.05j, 0.02], [0.1 + 0j, 0j, 0j]]),
        np.array([1, 2]),
    )


def expected_velocity(field, tau):
    """W_tau in the working digits of mpmath."""
    poles = sum(
        mpmath.mpc(g) * (kernel(field.kappa, tau - mpmath.mpc(p)) + field.offset)
        for g, p in zip(field.strengths, field.poles, strict=True)
    )
    multipoles = 0
    for centre, row in zip(field.centres, field.moments, strict=True):
        x = kernel(field.kappa, tau - mpmath.mpc(centre))
        multipoles += (field.kappa - x**2) * sum((n + 1) * mpmath.mpc(c) * x**n for n, c in enumerate(row))
    return field.constant + poles + multipoles


@pytest.fixture(params=CASES, ids=NAMES)
def field(request):
    return a_field(*request.param)


@pytest.fixture
def tau():
    generator = np.random.default_rng(2)
    return generator.uniform(-3, 3, 12) + 1j * generator.uniform(0, 3, 12)


class TestVelocity:
    def test_agrees_with_mpmath(self, field, tau):
        expected = np.array([complex(expected_velocity(field, mpmath.mpc(t))) for t in tau])
        # about ten terms, each rounded a few times
        assert np.all(np.abs(field.velocity(tau) - expected) <= 1e-14 * field.magnitude(tau))

    def test_derivative_agrees_with_mpmath(self, field, tau):
        velocity, slope = field.jet(tau)
        with mpmath.workdps(30):
            expected = [
                complex(mpmath.diff(lambda t: expected_velocity(field, t), mpmath.mpc(t))) for t in tau
            ]
        assert_allclose(velocity, field.velocity(tau), rtol=1e-13)  # the same sum, other order of operations
        nearest = np.min(np.abs(tau[:, None] - np.append(field.poles, field.centres)), axis=1)
        # third-order poles amplify the rounding of tau by 3 / distance
        assert np.all(np.abs(slope - expected) <= 1e-13 * field.magnitude(tau) / nearest)

    def test_does_not_depend_on_how_many_points_are_asked(self, field):
        many = np.linspace(-3, 3, 200) + 0.05j
        assert_allclose(field.velocity(many)[70:73], field.velocity(many[70:73]), rtol=0, atol=0)

    def test_is_not_finite_at_a_pole(self, field):
        assert not np.isfinite(field.velocity(field.poles[:1]))[0]

    def test_far_along_the_channel_is_the_constant_plus_the_offsets(self):
        for offset in (0.0, 0.5, -0.5):
            field = a_field(PERIODIC, offset)
            far = field.velocity(np.array([-900 + 1j, 900 + 1j]))
            net = field.strengths.sum()
            # coth(450) is 1 in double precision
            assert_allclose(far, field.constant + net * (offset + np.array([-0.5, 0.5])), rtol=1e-14)

    def test_right_end_keeps_small_velocities_upstream(self):
        """With offset 1/2 the field decays like exp(Re tau) on the left: no digit is lost to 1/2 - 1/2."""
        tau, pole = -60 + 1j, 0.5j
        none, nobody = np.empty(0, np.complex128), np.empty(0, np.int64)
        field = PoleField(
            PERIODIC,
            0.5,
            0j,
            np.array([pole]),
            np.array([1 + 0j]),
            np.array([1]),
            none,
            none.reshape(0, 0),
            nobody,
        )
        with mpmath.workdps(60):
            d = mpmath.mpc(tau - pole)
            expected = complex(1 / (1 - mpmath.exp(-d)))
        assert_allclose(field.velocity(np.array([tau]))[0], expected, rtol=1e-14)  # relative, at 1e-26


class TestPathIntegrals:
    def test_agree_with_quadrature(self, field, tau):
        a, b = tau[:2], tau[6:8]
        expected = []
        for start, end in zip(a, b, strict=True):
            span = mpmath.mpc(end - start)
            nodes = np.linspace(0, 1, 33).tolist()
            expected.append(
                complex(
                    mpmath.quad(
                        lambda u, s=start, d=span: expected_velocity(field, mpmath.mpc(s) + u * d) * d, nodes
                    )
                )
            )
        # quadrature over 32 panels reaches 15 digits at the distances drawn here
        assert_allclose(field.chords(a, b, owner_count=5).sum(axis=1), expected, rtol=0, atol=2e-13)

    def test_closed_path_counts_turns(self, field):
        """A square round one pole: 2 pi i g, to its owner."""
        pole = field.poles[3]
        gap = 0.3 * np.min(np.abs(np.delete(field.poles, 3) - pole))
        gap = min(gap, 0.3 * np.min(np.abs(field.centres - pole)))
        corners = pole + gap * np.array([-1 - 1j, 1 - 1j, 1 + 1j, -1 + 1j])
        integrals = field.chords(corners, np.roll(corners, -1), owner_count=5).sum(axis=0)
        expected = np.zeros(5, np.complex128)
        expected[3] = 2j * np.pi * field.strengths[3]
        assert_allclose(integrals, expected, rtol=0, atol=1e-13)  # some forty logarithms of order 1

    def test_round_a_channel_length_of_images(self):
        """A path from -30 to 30 above a pole and one below differ by 2 pi i g."""
        field = a_field(PERIODIC, 0.0)
        top, bottom = 3.1j, 0.01j
        start, end = -30 + 1j, 30 + 1j
        over = field.chords(
            np.array([start, start + top, end + top]), np.array([start + top, end + top, end]), owner_count=5
        )
        under = field.chords(
            np.array([start, start - bottom, end - bottom]),
            np.array([start - bottom, end - bottom, end]),
            owner_count=5,
        )
        inside = (field.poles.imag > 0.99) & (field.poles.imag < 4.1)
        turns = (under - over).sum(axis=0) / (2j * np.pi)
        assert_allclose(turns, np.where(inside, field.strengths, 0), rtol=0, atol=1e-13)  # sums of order 30

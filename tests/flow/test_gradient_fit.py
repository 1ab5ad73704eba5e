"""Gradients from measured velocities: against a general solver and against repeated sampling."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from scipy.optimize import curve_fit

from forebay.flow.gradient_fit import (
    CollinearSamplesError,
    TooFewSamplesError,
    UnevenSamplesError,
    VelocitySamples,
    fit_gradient,
    propagate_errors,
)
from forebay.flow.stress import (
    Fluid,
    dissipation,
    mean_velocity_gradient,
    padded,
    strain_rate,
    viscous_stress,
)

WATERY = Fluid(1.3e-3, 999.7)
TRUE = np.array([[0.3, -0.2], [0.5, -0.1]])

coordinates = st.floats(-50.0, 50.0)
places = st.lists(st.tuples(coordinates, coordinates), min_size=3, max_size=12)


def sampled(x, y, *, gradient=TRUE, noise=0.0, seed=1):
    x, y = np.asarray(x, dtype=float), np.asarray(y, dtype=float)
    scatter = noise * np.random.default_rng(seed).standard_normal((2, len(x)))
    u = 0.4 + gradient[0, 0] * x + gradient[0, 1] * y + scatter[0]
    v = -0.1 + gradient[1, 0] * x + gradient[1, 1] * y + scatter[1]
    return VelocitySamples(x, y, u, v)


NOISY = sampled([0, 4, 1, 5, 2, 3, 6], [0, 1, 5, 6, 3, 1, 2], noise=0.05)


def is_well_spread(points):
    spread = np.linalg.svd(np.array(points) - np.mean(points, axis=0), compute_uv=False)
    return spread[1] > 1e-3 * spread[0] > 0.0


@given(places.filter(is_well_spread))
def test_linear_field_is_recovered(points):
    x, y = np.array(points).T
    fit = fit_gradient(sampled(x, y))
    # velocities up to 40 m/s carry 1e-14 of rounding, divided by the narrowest spread
    spread = np.linalg.svd(np.array(points) - np.mean(points, axis=0), compute_uv=False)
    assert_allclose(fit.velocity_gradient, TRUE, rtol=0, atol=1e-12 * (1.0 + 1.0 / spread[1]))
    assert fit.residual_rms < 1e-12
    assert 0.0 < fit.spread_ratio <= 1.0


def test_errors_are_those_of_a_general_solver():
    def plane(place, start, by_x, by_y):
        return start + by_x * place[0] + by_y * place[1]

    place = np.stack([NOISY.x, NOISY.y])
    fit = fit_gradient(NOISY)
    assert fit.degrees_of_freedom == 4
    for component, values in enumerate((NOISY.u, NOISY.v)):
        best, covariance = curve_fit(plane, place, values, method="lm")  # unit weights, residual variance
        # the general solver differentiates numerically (1e-8) and stops at 1e-8
        assert_allclose(fit.velocity_gradient[component], best[1:], rtol=1e-6)
        block = fit.covariance[2 * component : 2 * component + 2, 2 * component : 2 * component + 2]
        assert_allclose(block, covariance[1:, 1:], rtol=1e-5)


def test_residual_is_the_root_mean_square_of_both_components():
    fit = fit_gradient(NOISY)
    ones = np.stack([np.ones(7), NOISY.x, NOISY.y], axis=1)
    squares = sum(float(np.linalg.lstsq(ones, values)[1][0]) for values in (NOISY.u, NOISY.v))
    assert_allclose(fit.residual_rms, np.sqrt(squares / 7), rtol=1e-12)


@pytest.mark.parametrize("correlation", [0.0, 0.8], ids=["independent", "correlated"])
def test_errors_agree_with_repeated_sampling(correlation):
    # 4000 repetitions: the spread of a standard deviation is 1/sqrt(8000) = 1.1 %; four of those
    random = np.random.default_rng(7)
    x, y = random.uniform(-5, 5, (2, 12))
    mix = np.linalg.cholesky([[1.0, correlation], [correlation, 1.0]]) * 0.02
    estimates, predicted = [], []
    for _ in range(4000):
        scatter = mix @ random.standard_normal((2, 12))
        exact = sampled(x, y)
        fit = fit_gradient(VelocitySamples(x, y, exact.u + scatter[0], exact.v + scatter[1]))
        errors = propagate_errors(fit, WATERY)
        phi = dissipation(strain_rate(padded(fit.velocity_gradient)), WATERY)
        shear_rate = mean_velocity_gradient(phi, WATERY)
        gradient = padded(fit.velocity_gradient)
        estimates.append([strain_rate(gradient)[0, 1], gradient[1, 0] - gradient[0, 1], phi, shear_rate])
        predicted.append(
            [errors.strain_rate[0, 1], errors.vorticity, errors.dissipation, errors.mean_velocity_gradient]
        )
    root_mean_square = np.sqrt(np.mean(np.square(predicted), axis=0))
    assert_allclose(root_mean_square, np.std(estimates, axis=0), rtol=0.045)


def test_propagation_agrees_with_differences():
    fit = fit_gradient(NOISY)
    errors = propagate_errors(fit, WATERY)

    def derived(entries):
        rate = strain_rate(padded(entries.reshape(2, 2)))
        phi = float(dissipation(rate, WATERY))
        tau = viscous_stress(rate, WATERY)
        return np.array([phi, np.sqrt(phi / 1.3e-3), rate[0, 1], tau[0, 0], tau[2, 2], np.trace(rate)])

    at, step = fit.velocity_gradient.ravel(), 1e-6
    slopes = [(derived(at + step * unit) - derived(at - step * unit)) / (2 * step) for unit in np.eye(4)]
    expected = np.sqrt(np.einsum("ak,ab,bk->k", slopes, fit.covariance, slopes))
    found = [errors.dissipation, errors.mean_velocity_gradient, errors.strain_rate[0, 1]]
    found += [errors.viscous_stress[0, 0], errors.viscous_stress[2, 2], errors.dilatation]
    assert_allclose(found, expected, rtol=1e-7)  # central differences of step 1e-6
    assert errors.strain_rate[2, 2] == 0.0
    assert_allclose(errors.velocity_gradient[:2, :2].ravel(), np.sqrt(np.diag(fit.covariance)), rtol=1e-14)


def test_three_samples_leave_no_errors():
    fit = fit_gradient(sampled([0, 1, 0], [0, 0, 1]))
    errors = propagate_errors(fit, WATERY)
    assert fit.degrees_of_freedom == 0
    assert_allclose(fit.velocity_gradient, TRUE, rtol=0, atol=1e-15)
    assert np.isnan(errors.strain_rate).all()
    assert np.isnan([errors.dissipation, errors.mean_velocity_gradient, errors.vorticity]).all()


def test_still_water_has_no_error_of_the_shear_rate():
    # G is the length of a vector there: it has no derivative at zero
    zero = np.zeros(5)
    errors = propagate_errors(
        fit_gradient(VelocitySamples(np.arange(5.0), np.arange(5.0) ** 2, zero, zero)), WATERY
    )
    assert np.isnan(errors.mean_velocity_gradient)
    assert np.isnan(errors.dissipation)
    assert errors.vorticity == 0.0


def test_map_grid_coordinates_cost_only_their_rounding():
    near = fit_gradient(sampled([0, 40, 10, 50], [0, 10, 50, 60], noise=0.01))
    x, y = np.array([0, 40, 10, 50.0]), np.array([0, 10, 50, 60.0])
    base = sampled(x, y, noise=0.01)
    far = fit_gradient(VelocitySamples(x + 5.6e5, y + 5.93e6, base.u, base.v))
    assert_allclose(far.velocity_gradient, near.velocity_gradient, rtol=1e-10)


class TestInvalid:
    @pytest.mark.parametrize("count", [0, 1, 2])
    def test_too_few(self, count):
        with pytest.raises(TooFewSamplesError) as caught:
            fit_gradient(sampled(range(count), range(count)))
        assert caught.value.path == ("velocity_samples",)

    def test_uneven_columns(self):
        with pytest.raises(UnevenSamplesError, match=r"\[3, 3, 2, 3\]"):
            fit_gradient(VelocitySamples(np.arange(3.0), np.arange(3.0) ** 2, np.zeros(2), np.zeros(3)))

    @pytest.mark.parametrize(
        ("x", "y"),
        [
            pytest.param([0, 1, 2, 3], [0, 0, 0, 0], id="along x"),
            pytest.param([1, 1, 1], [0, 5, 9], id="along y"),
            pytest.param([0.1, 0.2, 0.3, 0.7], [0.3, 0.6, 0.9, 2.1], id="inclined, rounded"),
            pytest.param([2, 2, 2], [3, 3, 3], id="one place"),
            pytest.param([0, 0, 0], [0, 0, 0], id="the origin"),
            pytest.param([0, 1, 2], [0, 0, 1e-9], id="within 1e-9 of a line"),
            pytest.param([5e5, 5e5 + 0.3, 5e5 + 0.6], [1e6, 1e6 + 0.1, 1e6 + 0.2], id="map grid"),
        ],
    )
    def test_in_a_line(self, x, y):
        with pytest.raises(CollinearSamplesError) as caught:
            fit_gradient(sampled(x, y))
        assert caught.value.path == ("velocity_samples",)

    def test_just_out_of_line(self):
        assert fit_gradient(sampled([0, 1, 2], [0, 0, 1e-6])).spread_ratio > 1e-8

"""Stress of given states: inputs of every form, and what a wrong one is told."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.errors import FlowError
from forebay.flow.gradient_fit import CollinearSamplesError, VelocitySamples
from forebay.flow.layout import Water
from forebay.flow.stress import Fluid
from forebay.flow.stress_state import StressStatus
from forebay.trade.fluids import UnphysicalFluidError
from forebay.trade.water import WaterRangeError
from forebay.workflows.stress import (
    AsymmetricStrainRateError,
    GradientState,
    SampledState,
    StrainRateState,
    TensorShapeError,
    ZeroNormalError,
    compute_stress,
)

WATERY = Fluid(1e-3, 1000.0)
GENERAL = np.array([[1.0, 2.0], [3.0, -1.0]])
SQUARE = VelocitySamples(*np.array([[0.0, 1, 0, 1], [0, 0, 1, 1], [0, 1, 2, 3.1], [0, 3, -1, 2]]))


def one(state, fluid=WATERY):
    return compute_stress(fluid, (state,))[0]


def test_gradient_and_its_strain_rate_agree():
    by_gradient = one(GradientState("a", GENERAL))
    by_rate = one(StrainRateState("a", 0.5 * (GENERAL + GENERAL.T)))
    assert_allclose(by_gradient.stress, by_rate.stress)
    assert by_gradient.plane_vorticity == 1.0
    assert np.isnan(by_rate.vorticity).all()
    assert by_rate.status is StressStatus.COMPUTED


def test_plane_and_padded_gradient_agree():
    spatial = np.zeros((3, 3))
    spatial[:2, :2] = GENERAL
    plane, space = one(GradientState("a", GENERAL)), one(GradientState("a", spatial))
    assert_allclose(plane.stress, space.stress)
    assert plane.is_plane
    assert not space.is_plane


def test_samples_carry_their_fit():
    state = one(SampledState("a", SQUARE))
    assert state.fit is not None
    assert state.standard_errors is not None
    assert state.fit.degrees_of_freedom == 1
    assert_allclose(state.strain_rate[0, 0], state.fit.velocity_gradient[0, 0])
    assert state.standard_errors.mean_velocity_gradient > 0.0


def test_names_and_order_are_kept():
    states = compute_stress(WATERY, (GradientState("b", GENERAL), SampledState("a", SQUARE)))
    assert [state.name for state in states] == ["b", "a"]


def test_water_has_its_own_viscosity():
    # 10 degC fresh water, IAPWS: 1.3059 mPa.s
    state = one(GradientState("a", np.array([[0.0, 10.0], [0.0, 0.0]])), Water(10.0, 0.0))
    assert state.viscous_stress[0, 1] == pytest.approx(13.059e-3, rel=1e-4)
    assert state.mean_velocity_gradient == pytest.approx(10.0, rel=1e-14)


def test_normals_are_made_unit():
    state = one(GradientState("a", GENERAL, pressure=3.0, normals=((0.0, 2e-200), (3e200, 4e200, 0.0))))
    assert_allclose(state.tractions.traction[0], state.stress[1])
    assert_allclose(state.tractions.traction[1], 0.6 * state.stress[0] + 0.8 * state.stress[1])


WRONG = [
    pytest.param(GradientState("a", np.eye(4)), TensorShapeError, ("velocity_gradient",), id="4x4"),
    pytest.param(GradientState("a", np.zeros((2, 3))), TensorShapeError, ("velocity_gradient",), id="2x3"),
    pytest.param(StrainRateState("a", np.eye(1)), TensorShapeError, ("strain_rate",), id="1x1"),
    pytest.param(StrainRateState("a", GENERAL), AsymmetricStrainRateError, ("strain_rate",), id="asymmetric"),
    pytest.param(
        GradientState("a", GENERAL, normals=((1.0, 0.0), (0.0, 0.0))),
        ZeroNormalError,
        ("planes", 1, "normal"),
        id="zero normal",
    ),
    pytest.param(
        GradientState("a", GENERAL, normals=((1.0,),)),
        ZeroNormalError,
        ("planes", 0, "normal"),
        id="short normal",
    ),
    pytest.param(
        SampledState("a", VelocitySamples(*np.array([[0.0, 1, 2]] * 4))),
        CollinearSamplesError,
        ("velocity_samples",),
        id="in a line",
    ),
]


@pytest.mark.parametrize(("state", "error", "path"), WRONG)
def test_wrong_state_is_pointed_at(state, error, path):
    with pytest.raises(error) as caught:
        compute_stress(WATERY, (GradientState("right", GENERAL), state))
    assert isinstance(caught.value, FlowError)
    assert caught.value.path == ("states", 1, *path)


FLUIDS = [
    pytest.param(Fluid(0.0, 1000.0), UnphysicalFluidError, "dynamic_viscosity", id="inviscid"),
    pytest.param(Fluid(1e-3, -1.0), UnphysicalFluidError, "density", id="massless"),
    pytest.param(Fluid(1e-3, 1000.0, -0.7e-3), UnphysicalFluidError, "second_viscosity", id="gains energy"),
    pytest.param(Water(40.1, 0.0), WaterRangeError, "temperature", id="hot"),
    pytest.param(Water(10.0, -0.1), WaterRangeError, "salinity", id="less than fresh"),
]


@pytest.mark.parametrize(("fluid", "error", "field"), FLUIDS)
def test_wrong_fluid_is_pointed_at(fluid, error, field):
    with pytest.raises(error) as caught:
        one(GradientState("a", GENERAL), fluid)
    assert caught.value.path == ("fluid", field)


def test_stokes_hypothesis_written_out_is_accepted():
    written = Fluid(1e-3, 1000.0, -2e-3 / 3.0)
    state = one(GradientState("a", np.eye(3)), written)
    assert state.dissipation >= 0.0
    assert_allclose(state.viscous_stress, 0.0, atol=1e-18)

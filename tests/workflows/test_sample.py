"""Sampling: which columns come back, and what is said of points without a value."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Core,
    CoreModel,
    Layout,
    LineSink,
    Pier,
    Sink,
    StraightBank,
    Vortex,
    Water,
)
from forebay.trade.water import water_properties
from forebay.workflows.sample import PointStatus, Quantity, sample_field

BANK = Layout(
    2.0,
    water=Water(12.0, 0.0),
    ambient=Ambient(0.5 + 0j),
    shore=StraightBank(0j, 1 + 0j),
    elements=(Sink("intake", 0 + 1j, 2.0),),
    structures=(Pier("pier", 9 + 5j, 1.0),),
)


def test_velocity_comes_without_being_asked():
    samples = sample_field(BANK, np.array([3 + 2j, -4 + 1j]))
    assert list(samples.columns) == ["x", "y", "u", "v", "speed"]
    assert_allclose(samples.columns["speed"], np.hypot(samples.columns["u"], samples.columns["v"]))
    assert samples.flagged == ()


def test_every_quantity_has_a_column_of_finite_numbers():
    samples = sample_field(BANK, np.array([3 + 2j, -4 + 1j]), [q.value for q in Quantity])
    assert set(samples.columns) == {"x", "y", "u", "v", "speed", *Quantity}
    assert np.all(np.isnan(samples.columns["velocity_bound"]))  # no wall had to be solved
    others = [column for name, column in samples.columns.items() if name != "velocity_bound"]
    assert all(np.all(np.isfinite(column)) for column in others)


def test_points_on_land_and_on_an_intake_are_flagged_and_the_rest_answered():
    z = np.array([3 + 2j, 0 + 1j, 3 - 1j, 9 + 5j, 3 + 0j])
    samples = sample_field(BANK, z, ["vorticity"])
    assert [(flag.index, flag.status) for flag in samples.flagged] == [
        (1, PointStatus.ON_SINGULARITY),
        (2, PointStatus.ON_LAND),
        (3, PointStatus.ON_LAND),
    ]
    known = np.isfinite(samples.columns["u"])
    assert known.tolist() == [True, False, False, False, True]
    assert np.isfinite(samples.columns["vorticity"]).tolist() == known.tolist()
    assert_allclose(samples.columns["x"], z.real)


def test_points_on_a_line_element_are_flagged_and_have_the_mean_of_both_sides():
    """Across a line sink of q per length the velocity jumps by q / 2 on each side of the ambient current."""
    current, flux = 0.5, 3.0 / 2.0 / 10.0
    line = LineSink("bay", 0j, 6 + 8j, 3.0)
    layout = Layout(2.0, ambient=Ambient(current + 0j), elements=(line,))
    middle, normal = 3 + 4j, 1j * (0.6 + 0.8j)
    z = np.array([middle, middle + 1e-9 * normal, middle - 1e-9 * normal, 0j, 9 + 12j])
    samples = sample_field(layout, z)
    assert [(flag.index, flag.status) for flag in samples.flagged] == [
        (0, PointStatus.ON_LINE_ELEMENT),
        (3, PointStatus.ON_SINGULARITY),
    ]
    velocity = samples.columns["u"] + 1j * samples.columns["v"]
    # 1e-9 m beside the line its own part along it has changed by a share of 1e-10
    assert_allclose(velocity[0], current, atol=1e-9)
    assert_allclose(velocity[0], (velocity[1] + velocity[2]) / 2, atol=1e-9)
    assert_allclose(velocity[1] - velocity[2], -flux * normal, atol=1e-9)


def test_points_on_a_line_element_on_a_bank_have_the_velocity_of_the_water():
    layout = Layout(2.0, shore=StraightBank(0j, 1 + 0j), elements=(LineSink("bay", 0j, 10 + 0j, 3.0),))
    samples = sample_field(layout, np.array([5 + 0j]))
    assert samples.flagged == ()
    # the whole discharge from the water side, 3 m3/s over 10 m and 2 m; a dozen roundings
    assert_allclose(samples.columns["v"], -0.15, rtol=1e-14)


def test_surface_of_a_cylinder():
    """Speed 2 U |sin t|, Cp = 1 - 4 sin^2 t: -3 abeam, 0 at 30 degrees, 1 at the front (Batchelor, ch. 6)."""
    layout = Layout(1.0, ambient=Ambient(0.5 + 0j), structures=(Pier("p", 0j, 2.0),))
    angle = np.radians([30.0, 90.0, 150.0, 180.0])
    columns = sample_field(
        layout,
        np.asarray(2.0 * np.exp(1j * angle), np.complex128),
        ["pressure_coefficient", "strain_rate_xx"],
    ).columns
    assert_allclose(columns["speed"], np.sin(angle), atol=1e-14)
    assert_allclose(columns["pressure_coefficient"], [0.0, -3.0, 0.0, 1.0], atol=1e-13)
    assert columns["strain_rate_xx"][3] == pytest.approx(-2 * 0.5 / 2.0)  # -2 U / a at the front


def test_pressure_uses_the_water_of_the_layout():
    samples = sample_field(
        BANK, np.array([3 + 2j]), ["pressure_gradient_along", "acceleration_x", "acceleration_y"]
    )
    columns = {name: float(column[0]) for name, column in samples.columns.items()}
    density = water_properties(12.0).density
    along = (columns["acceleration_x"] * columns["u"] + columns["acceleration_y"] * columns["v"]) / columns[
        "speed"
    ]
    assert columns["pressure_gradient_along"] == pytest.approx(-density * along, rel=1e-12)


def test_head_and_pressure_agree():
    """Bernoulli: the head's slope along the flow is -(V . grad V) . t / g, seen over a short way."""
    z = 3 + 2j
    step = 1e-4
    at = sample_field(BANK, np.array([z]), ["pressure_gradient_along", "direction_deg"])
    direction = np.exp(1j * np.radians(at.columns["direction_deg"][0]))
    ends = sample_field(BANK, np.array([z - step * direction, z + step * direction]), ["head_change"])
    slope = float(np.diff(ends.columns["head_change"])[0]) / (2 * step)
    weight = water_properties(12.0).density * 9.80665
    # central difference over 2e-4 m of a field varying over 2 m: 1e-8, and rounding 1e-16 / 1e-4
    assert at.columns["pressure_gradient_along"][0] == pytest.approx(slope * weight, rel=1e-7)


class TestRotationalFlow:
    LAYOUT = Layout(
        2.0, ambient=Ambient(0.2 + 0j), elements=(Vortex("gyre", 0j, 3.0, Core(CoreModel.RANKINE, 2.0)),)
    )

    def test_no_potential_and_no_bernoulli_inside_a_core(self):
        names = ["potential", "pressure_coefficient", "head_change", "stream_function", "vorticity"]
        columns = sample_field(self.LAYOUT, np.array([1 + 0.5j, 3 + 0.5j]), names).columns
        for name in names[:3]:
            assert np.isfinite(columns[name]).tolist() == [False, True]
        assert np.all(np.isfinite(columns["stream_function"]))
        assert_allclose(columns["vorticity"], [3.0 / (np.pi * 4.0), 0.0], atol=1e-14)  # Gamma over the area

    def test_middle_of_a_core_is_an_ordinary_point(self):
        samples = sample_field(self.LAYOUT, np.array([0j]), ["vorticity", "strain_rate_xx"])
        assert samples.flagged == ()
        assert samples.columns["u"][0] == pytest.approx(0.2, abs=1e-12)  # nothing but the ambient
        assert samples.columns["vorticity"][0] == pytest.approx(3.0 / (np.pi * 4.0), abs=1e-12)
        assert samples.columns["strain_rate_xx"][0] == pytest.approx(0.0, abs=1e-12)

    def test_shear_has_no_potential_anywhere(self):
        layout = Layout(2.0, ambient=Ambient(0.2 + 0j, gradient=((0.0, 0.1), (0.0, 0.0))))
        columns = sample_field(
            layout, np.array([1 + 1j]), ["potential", "vorticity", "stream_function"]
        ).columns
        assert np.isnan(columns["potential"][0])
        assert columns["vorticity"][0] == pytest.approx(-0.1)
        assert columns["stream_function"][0] == pytest.approx(0.2 + 0.05)  # U y + S y^2 / 2


def test_still_water_has_no_pressure_coefficient():
    layout = Layout(2.0, elements=(Sink("intake", 0j, 2.0),))
    columns = sample_field(layout, np.array([2 + 0j]), ["pressure_coefficient", "head_change"]).columns
    assert np.isnan(columns["pressure_coefficient"][0])
    speed = 1.0 / (2 * np.pi * 2)
    assert columns["head_change"][0] == pytest.approx(-(speed**2) / (2 * 9.80665))

"""Near the centre of a core nothing cancels: velocity, derivatives and chords in closed form."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Corner,
    Layout,
    OpenWater,
    Sink,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout

AT, RADIUS, GAMMA = 100.3 + 52.7j, 1.7, -3.0
CORES = [Core(model, RADIUS) for model in CoreModel]
SHORES = {
    "open water": OpenWater(),
    "bank": StraightBank(100 + 50j, 1 + 0j),
    "channel": Channel(100 + 50j, 1 + 0j, 6.0),
    "corner": Corner(97 + 50j, 1 + 0j, 1.4),
}


def whole(zeta, core):
    """Cored vortex of checks 4.4: c f(r) / zeta, c = -i Gamma / (2 pi)."""
    x = np.abs(zeta) ** 2 / core.radius**2
    f = np.minimum(x, 1.0) if core.model is CoreModel.RANKINE else -np.expm1(-x)
    return -1j * GAMMA / (2 * np.pi) * np.where(x > 0, f / np.where(x > 0, zeta, 1.0), 0.0)


@pytest.mark.parametrize("core", CORES, ids=[core.model.value for core in CORES])
def test_alone_in_a_current_the_closed_form_holds_at_every_distance(core):
    model = compile_layout(Layout(1.0, ambient=Ambient(0.4 + 0.1j), elements=(Vortex("v", AT, GAMMA, core),)))
    zeta = np.concatenate([[0.0], np.geomspace(1e-14, 20.0, 60)]) * np.exp(0.6j)
    at = AT + zeta
    exact = 0.4 - 0.1j + whole(at - AT, core)
    # positions near 100 m are rounded to 1.4e-14 m; the rotation rate is 0.16 1/s
    assert_allclose(model.velocity(at), exact, rtol=0, atol=2e-13)


@pytest.mark.parametrize("core", CORES, ids=[core.model.value for core in CORES])
@pytest.mark.parametrize("shore", SHORES.values(), ids=SHORES.keys())
class TestOnEveryShore:
    def model(self, shore, core):
        elements = (Vortex("v", AT, GAMMA, core), Sink("s", AT + 1.3 + 0.4j, 0.5))
        return compile_layout(Layout(1.0, shore=shore, elements=elements))

    def test_velocity_is_continuous_through_the_edge_of_the_reach(self, shore, core):
        """Across the place where the formula changes the velocity differs only by its slope."""
        model = self.model(shore, core)
        reach = model._centres[0].reach
        across = AT + reach * np.exp(0.9j) * np.array([1 - 1e-9, 1 + 1e-9])
        inside, outside = model.velocity(across)
        assert abs(inside - outside) < 1e-8 * reach + 1e-12  # strain and rotation below 2 1/s, ring to 1e-12

    def test_vorticity_at_the_centre(self, shore, core):
        jet = self.model(shore, core).jet(np.array([AT]))
        # a lamb-oseen image 5.4 m away adds exp(-(5.4/1.7)^2) = 4e-5 of it
        spread = 1e-4 if core.model is CoreModel.LAMB_OSEEN else 1e-12
        assert -2 * jet.skew.imag[0] == pytest.approx(GAMMA / (np.pi * RADIUS**2), rel=spread)
        # lamb-oseen images add exp(-(5.4/1.7)^2) = 4e-5 of it beside a bank: below 1e-4 everywhere
        assert np.isfinite(jet.slope[0])

    def test_chords_through_the_centre_agree_with_quadrature(self, shore, core):
        model = self.model(shore, core)
        nodes, weights = np.polynomial.legendre.leggauss(40)
        ends = {
            "through": (AT - 0.7, AT + 0.7),
            "from the centre": (AT, AT + 0.7j),
            "to beside it": (AT - 0.7j, AT + 1e-7),
            "past it": (AT - 0.7 + 1e-9j, AT + 0.7 + 1e-9j),
        }
        for name, (a, b) in ends.items():
            cuts = np.linspace(a, b, 9)
            mid, half = 0.5 * (cuts[1:] + cuts[:-1])[:, None], 0.5 * (cuts[1:] - cuts[:-1])[:, None]
            expected = (model.velocity(mid + half * nodes) * half * weights).sum()
            chord = model.chord(np.array([a]), np.array([b]))[0]
            # the quadrature is smooth here (rankine stays inside its circle): rounding, and 1e-10 Gamma where
            # the rest of the logarithm is replaced by its value at the centre
            assert abs(chord - expected) < 1e-9, name

    def test_closed_contours_give_the_vorticity_inside(self, shore, core):
        model = self.model(shore, core)
        corners = AT + 0.3 * np.exp(2j * np.pi * np.arange(4) / 4)
        total = model.chord(corners, np.roll(corners, -1)).sum()
        assert abs(total.imag) < 1e-12  # no source inside
        if core.model is CoreModel.RANKINE:
            assert total.real == pytest.approx(
                GAMMA * 0.18 / (np.pi * RADIUS**2), rel=1e-10
            )  # square of area 0.18

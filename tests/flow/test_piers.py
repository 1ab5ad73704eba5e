"""Piers: circle theorem where it is exact, honest residuals where it is not."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.errors import UnsolvedStructureError
from forebay.flow.layout import Ambient, Channel, Doublet, Layout, Pier, Sink, Source, Vortex
from forebay.flow.model import compile_layout
from forebay.flow.piers import circle


def ring(pier, count=257):
    """Wall points of a pier, none of them among those fitted."""
    return circle(pier, count, 0.1234)


class TestCircleTheorem:
    """One pier in open water: Milne-Thomson's circle theorem."""

    PIER = Pier("p", 3 + 2j, 0.7)

    def test_cylinder_in_a_stream(self):
        """Surface speed 2 U |sin theta| (any textbook; checks of the trade 1.4)."""
        model = compile_layout(Layout(1.0, ambient=Ambient(0.5 + 0j), structures=(self.PIER,)))
        z, normal = ring(self.PIER)
        assert_allclose(np.abs(model.velocity(z)), np.abs(normal.imag), atol=1e-14)  # 2 U = 1

    def test_source_beside_a_cylinder(self):
        """u_theta = (q/pi) f sin t / (a^2 + f^2 - 2 a f cos t); q = 2, a = 1, f = 3: 0.190986 abeam."""
        pier = Pier("p", 0j, 1.0)
        model = compile_layout(Layout(1.0, elements=(Source("s", 3 + 0j, 2.0),), structures=(pier,)))
        tangential = -model.velocity(np.array([1j]))[0].real  # anticlockwise is -x at the top
        assert tangential == pytest.approx(3 / (np.pi * 5), abs=1e-15)  # = 0.190986, two images exact
        assert round(tangential, 6) == 0.190986

    def test_every_point_element_is_exact(self):
        elements = (
            Sink("a", 5 + 2j, 1.5),
            Source("b", 3 + 3j, 1.0),
            Vortex("c", 2 + 1j, -2.0),
            Doublet("d", 4 + 3j, -0.3 + 0.1j),
        )
        layout = Layout(2.0, ambient=Ambient(0.3 + 0.1j), elements=elements, structures=(self.PIER,))
        model = compile_layout(layout)
        z, normal = ring(self.PIER)
        velocity = model.velocity(z)
        # ten poles of order 1 m/s rounded at 1e-16 each
        assert np.max(np.abs((velocity * normal).real)) < 2e-14 * np.max(np.abs(velocity))
        assert model.boundary_residual < 2e-14
        assert model.rational.moments.shape[1] == 1  # images leave only the stream to a doublet

    def test_circulation_is_what_was_given(self):
        pier = Pier("p", 3 + 2j, 0.7, circulation=-1.7)
        model = compile_layout(Layout(1.0, elements=(Sink("a", 5 + 2j, 1.5),), structures=(pier,)))
        corners = pier.at + 1.2 * pier.radius * np.exp(2j * np.pi * np.arange(8) / 8)
        total = model.chord(corners, np.roll(corners, -1)).sum()
        assert total == pytest.approx(-1.7 + 0j, abs=1e-14)  # residue theorem; eight logarithms


def test_flow_round_two_piers_holds_between_the_fitted_points():
    piers = (Pier("p", 0j, 1.0, 0.3), Pier("q", 2.3 + 0j, 1.0))
    layout = Layout(1.0, ambient=Ambient(0.4 + 0.2j), elements=(Sink("a", 1.1 + 3j, 1.0),), structures=piers)
    model = compile_layout(layout)
    for pier in piers:
        z, normal = ring(pier)
        velocity = model.velocity(z)
        # the reported residual is of another sample: it may be exceeded by the spread of samples, not more
        assert np.max(np.abs((velocity * normal).real)) < 3 * max(model.boundary_residual, 1e-13) * 2.0


@pytest.mark.parametrize("gap", [0.3, 0.1])
def test_pier_beside_a_bank_in_a_channel(gap):
    pier = Pier("p", 0 + 1j * (1 + gap), 1.0)
    layout = Layout(1.0, ambient=Ambient(0.4 + 0j), shore=Channel(0j, 1 + 0j, 3.0), structures=(pier,))
    model = compile_layout(layout)
    z, normal = ring(pier)
    velocity = model.velocity(z)
    assert np.max(np.abs((velocity * normal).real)) <= 5 * model.boundary_residual * np.max(np.abs(velocity))
    # continuity: all of 0.4 * 3 m2/s passes through the two gaps
    lower = model.chord(np.array([0j]), np.array([1j * gap]))[0]
    upper = model.chord(np.array([1j * (2 + gap)]), np.array([3j]))[0]
    assert -(lower.imag + upper.imag) == pytest.approx(-1.2, abs=1e-9)  # residual times the pier's girth


def test_a_gap_too_narrow_to_be_solved_is_refused_with_its_residual():
    piers = (Pier("p", 0j, 1.0), Pier("q", 2.0001 + 0j, 1.0))
    layout = Layout(1.0, ambient=Ambient(0.4j), structures=piers)
    with pytest.raises(UnsolvedStructureError) as caught:
        compile_layout(layout)
    assert caught.value.path == ("structures",)
    assert float(caught.value.facts["residual"]) > 1e-8

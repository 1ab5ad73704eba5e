"""The pier references against each other and against textbook values."""

import numpy as np
import pytest

from forebay.flow.layout import Ambient, Doublet, Layout, Pier, Sink, Source, StraightBank, Vortex
from reference.piers import Schwarz, circle_theorem, rim
from support.sites import direction

ONE = Layout(
    2.0,
    ambient=Ambient(0.4 - 0.1j),
    elements=(Source("s", 5 + 1j, 2.0), Vortex("v", -3 + 4j, 1.5), Doublet("d", 1 - 5j, 2 - 1j)),
    structures=(Pier("p", 0.5 + 0.2j, 1.5, 0.7),),
)
PLACES = np.array([3 + 0.1j, -2 - 1j, 0.5 + 1.75j, 7 - 6j])


def test_one_pier_by_both_routes():
    by_theorem = np.array([complex(circle_theorem(ONE, complex(z)).value) for z in PLACES])
    assert (
        np.abs(Schwarz(ONE).velocity(PLACES) - by_theorem).max() < 1e-15
    )  # rounding of the answer to doubles


def test_source_beside_a_circle():
    # circle theorem, two lecture notes: q = 2, a = 1, f = 3: u_theta(90 deg) = q f / (pi (a^2 + f^2))
    layout = Layout(1.0, elements=(Source("s", 3 + 0j, 2.0),), structures=(Pier("p", 0j, 1.0),))
    speed = -complex(circle_theorem(layout, 1j).value).real  # at the top, azimuthal is -x
    assert speed == pytest.approx(0.190986, abs=5e-7)  # six digits are printed


CROWD = Layout(
    1.0,
    ambient=Ambient(0.3 * direction(25)),
    shore=StraightBank(1 + 2j, direction(25)),
    elements=(
        Sink("k", 1 + 2j + direction(25) * (6 + 2j), 1.0),
        Vortex("v", 1 + 2j + direction(25) * (-4 + 6j), 1.0),
    ),
    structures=(
        Pier("p", 1 + 2j + direction(25) * (0 + 1.4j), 1.0, 0.4),
        Pier("r", 1 + 2j + direction(25) * (1.5 + 3.5j), 1.2, -0.2),
    ),
)


def test_no_water_crosses_piers_or_bank():
    flow = Schwarz(CROWD)
    for pier in CROWD.piers:
        z = rim(pier)
        normal = (flow.velocity(z) * (z - pier.at) / pier.radius).real
        assert np.abs(normal).max() < 1e-14  # speeds are of order one; doubles on the way out
    bank = np.asarray(1 + 2j + direction(25) * np.linspace(-20, 20, 41), dtype=np.complex128)
    assert np.abs((flow.velocity(bank) * direction(25)).imag).max() < 1e-14

"""The flows that a mesh is made for: velocity is the derivative of the potential, and no bank is crossed."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.layout import Channel, Corner, DeadEnd, OpenWater, StraightBank
from forebay.flow.sheets.ring import EdgeKind, Ring
from forebay.flow.sheets.typical import PotentialFlow, typical_flows
from forebay.flow.shores import frame_of

SQUARE = np.array([3 + 2j, 4 + 2j, 4 + 3j, 3 + 3j])
SOLID = Ring("solid", SQUARE, True, ("solid",) * 4, (EdgeKind.LAND,) * 4, True, 1)
SHORES = [
    OpenWater(),
    StraightBank(0j, 1 + 0j),
    Channel(0j, 1 + 0j, 8.0),
    Corner(0j, 1 + 0j, 2.0),
    DeadEnd(0j, 1 + 0j, 8.0),
]


@pytest.mark.parametrize("shore", SHORES, ids=lambda shore: type(shore).__name__)
def test_velocity_is_the_derivative_of_the_potential(shore):
    frame = frame_of(shore, 3.5 + 2.5j, 2.0)
    z, step = np.array([1.5 + 1j, 3 + 4j, 5 + 3j], dtype=np.complex128), 1e-5 + 0j
    for known in typical_flows(shore, (SOLID,), frame):
        flow = known.flow
        assert isinstance(flow, PotentialFlow)
        central = flow.chord(z - step, z + step) / (2.0 * step)
        assert_allclose(flow.velocity(z), central, rtol=1e-8)  # second order in the step
        for wall in frame.walls:
            on_wall = wall.point + wall.direction * np.array([2.0, 5.0]) * (1.0 if wall.after > 0 else -1.0)
            through = (flow.velocity(on_wall) * wall.direction).imag
            assert_allclose(through, 0.0, atol=1e-12 * np.abs(flow.velocity(on_wall)).max())

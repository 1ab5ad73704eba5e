"""Kernels of solved walls take one layout of arrays, compiled before the service is ready."""

import numpy as np
import pytest

from forebay.flow.kernels import ring_walls, sheet_layer, sheet_near, sheet_rows
from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Layout,
    OpenEdge,
    OpenWater,
    Outline,
    Shore,
    Sink,
    StraightBank,
    Surveyed,
)
from forebay.flow.model import compile_layout

SQUARE = Outline("square", (4 + 4j, 6 + 4j, 6 + 6j, 4 + 6j))
EDGES = OpenEdge("in", 3, 1, 1.0, EdgeProfile.EQUIPOTENTIAL), OpenEdge("out", 1, 1, None, EdgeProfile.UNIFORM)
SHORES: tuple[tuple[Shore, Ambient], ...] = (
    (OpenWater(), Ambient(1 + 0j)),
    (StraightBank(0j, 1 + 0j), Ambient(1 + 0j)),
    (Channel(0j, 1 + 0j, 12.0), Ambient(1 + 0j)),
    (Surveyed((0j, 12 + 0j, 12 + 12j, 12j), (), EDGES), Ambient()),
)
KERNELS = (
    sheet_near.near_sums,
    sheet_near.off_nodes,
    sheet_rows.influence_rows,
    sheet_layer.layer_peak,
    ring_walls.nearest_edges,
    ring_walls.rings_around,
    ring_walls.first_contact,
)


@pytest.fixture(scope="module", autouse=True)
def asked() -> None:
    """Ask for everything on every kind of shore."""
    z = np.array([1 + 2.5j, 2 + 7j])
    for shore, ambient in SHORES:
        elements = (Sink("s", 8 + 8j, 0.1),)
        model = compile_layout(
            Layout(1.0, shore=shore, ambient=ambient, structures=(SQUARE,), elements=elements)
        )
        model.jet(z)
        model.velocity(z)
        model.potential(z)
        model.chords(z[:1], z[1:])
        model.distance_to_wall(z)


@pytest.mark.parametrize("kernel", KERNELS, ids=lambda kernel: kernel.__name__)
def test_one_signature(kernel):
    assert len(kernel.signatures) == 1

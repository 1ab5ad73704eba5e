"""Layouts with outlines and surveyed shores that cannot be, each with its pointer."""

import pytest

from forebay.flow.errors import (
    CurrentThroughWallError,
    DuplicateNameError,
    ElementInStructureError,
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
    UnbalancedDischargeError,
    UnsolvableBoundaryError,
)
from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Island,
    Layout,
    LineSink,
    OpenEdge,
    Outline,
    Pier,
    Sink,
    StraightBank,
    Surveyed,
    Vortex,
)
from forebay.flow.model import compile_layout

BANK, CHANNEL = StraightBank(0j, 1 + 0j), Channel(0j, 1 + 0j, 10.0)
BOX = (0j, 10 + 0j, 10 + 6j, 6j)
EAST = OpenEdge("east", 1, 1, 3.0, EdgeProfile.EQUIPOTENTIAL)
WEST = OpenEdge("west", 3, 1, None, EdgeProfile.UNIFORM)
ISLAND = Island("island", (4 + 2j, 4 + 4j, 6 + 4j, 6 + 2j))
LAKE = Surveyed(BOX, (ISLAND,), (EAST, WEST))


def square(x, y, size=2.0, name="o", circulation=0.0):
    corner = complex(x, y)
    return Outline(name, (corner, corner + size, corner + size * (1 + 1j), corner + size * 1j), circulation)


CASES = [
    ({"shore": BANK, "structures": (square(0, -3),)}, ElementOnLandError, ("structures", 0)),
    ({"shore": CHANNEL, "structures": (square(0, -1, 12),)}, UnsolvableBoundaryError, ("structures", 0)),
    ({"structures": (square(0, 0), square(1, 1, name="p"))}, OverlappingStructuresError, ("structures", 1)),
    (
        {"structures": (square(0, 0, 9), square(1, 1, name="p"))},
        OverlappingStructuresError,
        ("structures", 1),
    ),
    (
        {"structures": (Outline("o", (0j, 2 + 2j, 2 + 0j, 2j)),)},
        OverlappingStructuresError,
        ("structures", 0),
    ),
    (
        {"structures": (square(0, 0), Pier("p", 2.5 + 1j, 0.6))},
        OverlappingStructuresError,
        ("structures", 1, "radius"),
    ),
    (
        {"structures": (square(0, 0), Pier("p", 1 + 1j, 0.1))},
        OverlappingStructuresError,
        ("structures", 1, "at"),
    ),
    (
        {"shore": BANK, "structures": (square(0, -1, circulation=1.0),)},
        ElementMisplacedError,
        ("structures", 0, "circulation"),
    ),
    (
        {"structures": (square(0, 0),), "elements": (Sink("s", 1 + 1j, 1.0),)},
        ElementInStructureError,
        ("elements", 0, "at"),
    ),
    (
        {"structures": (square(0, 0),), "elements": (Sink("s", 2 + 2j, 1.0),)},
        ElementMisplacedError,
        ("elements", 0, "at"),
    ),
    (
        {"structures": (square(0, 0),), "elements": (Vortex("s", 2 + 1j, 1.0),)},
        ElementMisplacedError,
        ("elements", 0, "at"),
    ),
    (
        {"structures": (square(0, 0),), "elements": (LineSink("s", -1 + 1j, 3 + 1j, 1.0),)},
        ElementOnLandError,
        ("elements", 0, "to"),
    ),
    ({"shore": LAKE, "ambient": Ambient(1 + 0j)}, CurrentThroughWallError, ("ambient", "velocity")),
    ({"shore": Surveyed(BOX, (), (EAST,))}, UnbalancedDischargeError, ("shore", "edges")),
    ({"shore": LAKE, "elements": (Sink("s", 20 + 1j, 1.0),)}, ElementOnLandError, ("elements", 0, "at")),
    (
        {"shore": LAKE, "elements": (Sink("island", 2 + 1j, 1.0),)},
        DuplicateNameError,
        ("shore", "islands", 0, "name"),
    ),
    ({"shore": LAKE, "structures": (square(20, 2),)}, ElementOnLandError, ("structures", 0)),
    (
        {"shore": Surveyed(BOX, (Island("i", (4 + 0j, 4 + 2j, 5 + 2j)),), (EAST, WEST))},
        OverlappingStructuresError,
        ("shore", "islands", 0),
    ),
    (
        {"shore": Surveyed(BOX, (), (EAST, OpenEdge("north", 2, 1, None, EdgeProfile.UNIFORM)))},
        UnsolvableBoundaryError,
        ("shore", "edges", 0, "count"),
    ),
]


@pytest.mark.parametrize(("parts", "error", "path"), CASES)
def test_refused_with_a_pointer(parts, error, path):
    with pytest.raises(error) as caught:
        compile_layout(Layout(1.0, **parts))
    assert caught.value.path == path

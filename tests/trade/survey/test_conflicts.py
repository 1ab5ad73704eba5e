"""Who stands in whose way on surveyed water and beside outlines, each with the path of the one at fault."""

import numpy as np
import pytest

from forebay.flow.errors import (
    DuplicateNameError,
    ElementInStructureError,
    ElementMisplacedError,
    ElementOnLandError,
    OverlappingStructuresError,
)
from forebay.flow.layout import (
    EdgeProfile,
    Island,
    Layout,
    LineSink,
    OpenEdge,
    OpenWater,
    Outline,
    Pier,
    Sink,
    Surveyed,
    Vortex,
)
from forebay.trade.survey.attachments import with_attached
from forebay.trade.survey.conflicts import check_conflicts
from forebay.trade.survey.rings import signed_area

WATER = Surveyed(
    (0j, 900 + 0j, 900 + 80j, 90j),
    (Island("eyot", (300 + 30j, 300 + 50j, 400 + 50j, 400 + 30j)),),
    (
        OpenEdge("upstream", 3, 1, 45.0, EdgeProfile.EQUIPOTENTIAL),
        OpenEdge("downstream", 1, 1, None, EdgeProfile.EQUIPOTENTIAL),
    ),
)
QUAY = Outline("quay", (0j, 10 + 0j, 10 + 5j, 5j))


def layout(*things, shore=WATER):
    structures = tuple(thing for thing in things if isinstance(thing, Outline | Pier))
    elements = tuple(thing for thing in things if not isinstance(thing, Outline | Pier))
    return Layout(4.0, shore=shore, elements=elements, structures=structures)


def moved(outline, by, name="other"):
    return Outline(name, tuple(z + by for z in outline.points))


@pytest.mark.parametrize(
    "things",
    [
        (Sink("s", 100 + 40j, 1.0),),
        (Sink("s", 100 + 0j, 1.0),),  # on the bank
        (LineSink("s", 100 + 40j, 200 + 40j, 1.0),),
        (Pier("p", 100 + 40j, 2.0), moved(QUAY, 200 + 20j)),
        (moved(QUAY, 200 - 2j),),  # a quay that grows out of the bank
    ],
)
def test_what_stands_free_is_let_be(things):
    check_conflicts(layout(*things))


@pytest.mark.parametrize(
    ("things", "error", "path"),
    [
        ((Sink("s", 100 - 5j, 1.0),), ElementOnLandError, ("elements", 0, "at")),
        ((Sink("s", 350 + 40j, 1.0),), ElementOnLandError, ("elements", 0, "at")),  # on the island
        ((LineSink("s", 250 + 40j, 450 + 40j, 1.0),), ElementOnLandError, ("elements", 0, "to")),
        ((Sink("s", 40j, 1.0),), ElementMisplacedError, ("elements", 0, "at")),  # on an open edge
        ((Vortex("v", 100 + 0j, 1.0),), ElementMisplacedError, ("elements", 0, "at")),
        ((moved(QUAY, 100 - 50j),), ElementOnLandError, ("structures", 0)),
        ((moved(QUAY, 330 + 35j),), ElementOnLandError, ("structures", 0)),  # all of it on the island
        ((Pier("p", 100 + 1j, 2.0),), OverlappingStructuresError, ("structures", 0, "radius")),
        ((moved(QUAY, -5 + 40j),), OverlappingStructuresError, ("structures", 0)),  # across an open edge
        ((Sink("eyot", 100 + 40j, 1.0),), DuplicateNameError, ("elements", 0, "name")),
        ((Sink("upstream", 100 + 40j, 1.0),), DuplicateNameError, ("elements", 0, "name")),
    ],
)
def test_conflict_with_surveyed_water_is_refused(things, error, path):
    with pytest.raises(error) as found:
        check_conflicts(layout(*things))
    assert found.value.path == path


@pytest.mark.parametrize(
    ("things", "error", "path"),
    [
        ((QUAY, Sink("s", 5 + 2j, 1.0)), ElementInStructureError, ("elements", 0, "at")),
        ((QUAY, LineSink("s", -5 + 2j, 15 + 2j, 1.0)), ElementInStructureError, ("elements", 0, "to")),
        ((QUAY, Vortex("v", 5 + 5j, 1.0)), ElementMisplacedError, ("elements", 0, "at")),
        ((QUAY, moved(QUAY, 5 + 0j)), OverlappingStructuresError, ("structures", 0)),
        ((QUAY, moved(QUAY, 10 + 0j)), OverlappingStructuresError, ("structures", 0)),  # side by side
        ((QUAY, Pier("p", 12 + 2j, 2.0)), OverlappingStructuresError, ("structures", 0)),
        ((QUAY, moved(Outline("q", (1j, 1 + 1j, 1 + 2j)), 2)), OverlappingStructuresError, ("structures", 0)),
    ],
)
def test_conflict_with_an_outline_is_refused(things, error, path):
    with pytest.raises(error) as found:
        check_conflicts(layout(*things, shore=OpenWater()))
    assert found.value.path == path


@pytest.mark.parametrize("at", [5 + 5j, 5 + 5.1j])
def test_intake_may_stand_on_or_beside_the_wall_of_an_outline(at):
    check_conflicts(layout(QUAY, Sink("s", at, 1.0), shore=OpenWater()))


def test_quay_on_a_bank_becomes_land():
    plain = layout(moved(QUAY, 200 - 2j), Pier("p", 100 + 40j, 2.0))
    found = with_attached(plain)
    assert isinstance(found.shore, Surveyed)
    assert [s.name for s in found.structures] == ["p"]
    # 10 m by the 3 m that stand out of the bank, widened by 1e-6 of the size all round
    lost = signed_area(np.array(WATER.outer)) - signed_area(np.array(found.shore.outer))
    assert lost == pytest.approx(30.0, abs=0.03)
    for edge, before in zip(found.shore.edges, WATER.edges, strict=True):
        assert found.shore.outer[edge.first] == WATER.outer[before.first]


def test_mole_on_an_island_keeps_its_name():
    found = with_attached(layout(moved(QUAY, 395 + 35j)))
    assert isinstance(found.shore, Surveyed)
    (island,) = found.shore.islands
    assert island.name == "eyot"
    assert -signed_area(np.array(island.points)) == pytest.approx(2000 + 5 * 5, abs=0.03)


@pytest.mark.parametrize(
    ("wall", "reason"),
    [
        (Outline("dam", (500 - 5j, 502 - 5j, 502 + 95j, 500 + 95j)), "parts the water"),
        (Outline("causeway", (350 - 5j, 352 - 5j, 352 + 40j, 350 + 40j)), "joins an island"),
    ],
)
def test_outline_that_changes_how_water_hangs_together_is_refused(wall, reason):
    with pytest.raises(OverlappingStructuresError, match=reason) as error:
        with_attached(layout(wall))
    assert error.value.path == ("structures", 0)


def test_free_outline_stays_a_structure():
    plain = layout(moved(QUAY, 200 + 20j))
    assert with_attached(plain) == plain

"""The catalogue as a whole, geometry, and the order and paths of what is raised."""

import math
import re

import numpy as np
import pytest

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Layout,
    LineSink,
    OpenWater,
    Pier,
    Sink,
    Source,
    StraightBank,
)
from forebay.trade.applicability.cautions import CAUTIONS
from forebay.trade.applicability.geometry import bank_distance, distance_to, element_bank_distance
from forebay.trade.applicability.review import CATALOGUE, evaluate
from forebay.trade.applicability.site import Readings, Site
from forebay.trade.applicability.warning import Severity

CODES = {kind.code for kind in CATALOGUE}
UP = StraightBank(0j, 1 + 0j)
BUSY = Layout(
    2.0,
    ambient=Ambient(2.5 + 0j),
    shore=UP,
    elements=(
        Sink("town", 10 + 1j, 1.0),
        Source("works", 13 + 1j, 1.0),
        LineSink("bay", 40 + 0j, 50 + 0j, 2.0),
    ),
    structures=(Pier("P", 30 + 20j, 1.0),),
)


def test_codes_are_permanent_names():
    assert len(CODES) == len(CATALOGUE)
    assert all(re.fullmatch(r"[a-z]+(-[a-z]+)*", code) for code in CODES)


# renaming or dropping one of these breaks clients: they may only be added to
PERMANENT = """
ambient-zero bank-shear bed-friction-unknown channel-end-split core-near-wall
density-difference-unknown depth-range-unknown friction-length intake-elevation-unknown line-ends
mixing-left-out near-field near-field-overlap near-field-result outfall-jet-reach outfall-jet-speed
outfall-passive pier-lee port-area-unknown rigid-lid rigid-lid-failed rotational-field
salient-corner shallow-wake transverse-mixing turbulence-left-out uneven-depth water-temperature-assumed
wind-drift wind-unknown
near-field-error surface-speed-up tidal-reversal earth-rotation earth-rotation-strong layer-withdrawal
buoyant-spreading threshold-from-memory interface-unknown tidal-period-unknown latitude-unknown
"""


def test_no_code_was_lost():
    assert set(PERMANENT.split()) <= CODES


@pytest.mark.parametrize("kind", CATALOGUE, ids=lambda kind: kind.code)
def test_entry_is_complete(kind):
    assert all([kind.meaning, kind.threshold, kind.formula, kind.source])
    assert kind.severity in Severity


def test_most_serious_comes_first():
    severities = [warning.severity for warning in evaluate(Site(BUSY))]
    order = [Severity.UNSAFE_TO_USE, Severity.CAUTION, Severity.NOTE]
    assert severities == sorted(severities, key=order.index)
    assert severities[0] is Severity.UNSAFE_TO_USE


def test_paths_lead_into_the_layout():
    roots = {"elements": len(BUSY.elements), "structures": len(BUSY.structures)}
    for warning in evaluate(Site(BUSY)):
        if warning.path and warning.path[0] in roots:
            root, index = warning.path
            assert isinstance(index, int)
            assert 0 <= index < roots[str(root)]
        else:
            assert warning.path in {(), ("depth",), ("ambient", "velocity")}


def test_kinds_and_occurrences_agree():
    kinds = {kind.code: kind for kind in CATALOGUE}
    for warning in evaluate(Site(BUSY, readings=Readings(np.array([10 + 2j]), 4.0, has_dissipation=True))):
        assert warning.severity is kinds[warning.code].severity
        assert warning.source == kinds[warning.code].source
        for number in (warning.value, warning.limit):
            assert number is None or math.isfinite(number)


def test_message_names_what_it_is_about():
    for warning in evaluate(Site(BUSY)):
        if warning.path and warning.path[0] == "elements":
            assert any(repr(element.name) in warning.message for element in BUSY.elements)


def test_empty_water_has_notes_only():
    assert {warning.severity for warning in evaluate(Site(Layout(3.0)))} == {Severity.NOTE}


def test_no_points_is_no_answer():
    site = Site(BUSY, readings=Readings(np.array([], dtype=complex)))
    assert evaluate(site) == evaluate(Site(BUSY))


def test_cautions_say_who_decides():
    text = " ".join(CAUTIONS)
    for word in ("Screening", "divers", "swimmers", "craft", "Regulators", "licensed engineers"):
        assert word in text


NORTH = 1j
SHORES = [
    (OpenWater(), 3 + 4j, math.inf),
    (StraightBank(1 + 1j, NORTH), -2 + 9j, 3.0),
    (Channel(0j, 1 + 0j, 10.0), 5 + 3j, 3.0),
    (Channel(0j, 1 + 0j, 10.0), 5 + 8j, 2.0),
    (Corner(0j, 1 + 0j, math.pi / 2), 3 + 1j, 1.0),
    (Corner(0j, 1 + 0j, math.pi / 2), 1 + 3j, 1.0),
    (Corner(0j, 1 + 0j, 1.5 * math.pi), -3 + 4j, 5.0),
    (Corner(0j, 1 + 0j, 1.5 * math.pi), -3 - 1j, 3.0),
    (DeadEnd(0j, 1 + 0j, 10.0), 2 + 5j, 2.0),
    (DeadEnd(0j, 1 + 0j, 10.0), 20 + 9j, 1.0),
    (Basin(0j, 1 + 0j, 30.0, 10.0), 28 + 5j, 2.0),
    (Basin(0j, 1 + 0j, 30.0, 10.0), 15 + 4j, 4.0),
]


@pytest.mark.parametrize(
    ("shore", "z", "distance"), SHORES, ids=[f"{type(s).__name__}{z}" for s, z, _ in SHORES]
)
def test_distance_to_the_bank(shore, z, distance):
    assert bank_distance(shore, z) == pytest.approx(distance, rel=1e-14)


@pytest.mark.parametrize(("z", "distance"), [(3 + 2j, 2.0), (-3 + 4j, 5.0), (13 - 4j, 5.0)])
def test_distance_to_a_line(z, distance):
    assert distance_to(LineSink("a", 0j, 10 + 0j, 1.0), z) == pytest.approx(distance, rel=1e-14)


def test_line_round_a_salient_corner_is_nearest_to_its_vertex():
    # water west and north of the fourth quadrant's land: the ends lie 3 m from the banks, the middle closer
    corner = Corner(0j, 1 + 0j, 1.5 * math.pi)
    line = LineSink("a", 3 + 3j, -3 - 3j, 1.0)
    assert element_bank_distance(corner, line) == pytest.approx(0.0, abs=1e-14)  # rounding of a few metres

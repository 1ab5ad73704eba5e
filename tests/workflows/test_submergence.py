"""Checking submergence: which rules and thresholds count, what is said with the numbers, whose rings."""

from dataclasses import replace

import pytest

from forebay.flow.errors import UnknownNameError
from forebay.flow.layout import Ambient, Layout, Sink, Source, Vortex, Water
from forebay.trade.screens.criteria_choice import CriterionFromMemoryError
from forebay.trade.submergence.inlet import Inlet, InletKind
from forebay.trade.submergence.notices import inlet_notices
from forebay.trade.submergence.rules import NOT_LISTED, RULES, Standing, UnknownRuleError
from forebay.trade.submergence.scale import THRESHOLDS
from forebay.workflows.submergence import Choice, check_submergence

WATER = Water(20.0)
PIPE = Inlet(name="pipe", kind=InletKind.VERTICAL_PIPE, discharge=0.5, height=0.6, submergence=2.0)
LAYOUT = Layout(
    3.0,
    ambient=Ambient(0.2 + 0j),
    elements=(Sink("pump", 0j, 0.5), Vortex("gyre", 1.5 + 0j, -0.4), Source("works", 30 + 0j, 0.2)),
)


def test_rules_are_those_asked_for_each_once():
    (check,) = check_submergence(
        (PIPE,), WATER, Choice(rules=("prosser-floor", "gordon-lateral", "prosser-floor"))
    )
    assert [found.rule.id for found in check.rules] == ["prosser-floor", "gordon-lateral"]


@pytest.mark.parametrize("kind", InletKind)
def test_usual_rules_are_those_that_apply_and_have_been_read(kind):
    inlet = replace(PIPE, kind=kind, width=1.0 if kind is InletKind.SLOT else None)
    for from_memory in (False, True):
        (check,) = check_submergence((inlet,), WATER, Choice(from_memory=from_memory))
        expected = [
            rule.id
            for rule in RULES
            if kind in rule.applies_to and (from_memory or rule.standing is Standing.QUOTED)
        ]
        assert [found.rule.id for found in check.rules] == expected
        assert expected


def test_unknown_and_remembered_rules_are_refused():
    with pytest.raises(UnknownRuleError) as unknown:
        check_submergence((PIPE,), WATER, Choice(rules=("thumb",)))
    assert unknown.value.path == ("rules", 0)
    with pytest.raises(CriterionFromMemoryError) as remembered:
        check_submergence((PIPE,), WATER, Choice(rules=("prosser-floor", "jain-raju-garde")))
    assert remembered.value.path == ("rules", 1)


@pytest.mark.parametrize("name", ["works", "gyre", "nobody"])
def test_only_sinks_are_inlets(name):
    with pytest.raises(UnknownNameError) as caught:
        check_submergence((PIPE, replace(PIPE, element=name)), WATER, Choice(), LAYOUT)
    assert caught.value.path == ("inlets", 1, "element")


def test_circulation_is_that_of_the_widest_ring_unless_given():
    inlet = replace(PIPE, element="pump")
    (read,) = check_submergence((inlet,), WATER, Choice(), LAYOUT)
    # rings of 0.6, 1.2 and 2.4 m: the vortex at 1.5 m is inside the last
    assert [ring.circulation for ring in read.rings] == [0.0, 0.0, pytest.approx(-0.4, rel=1e-12)]
    assert read.circulation == pytest.approx(-0.4, rel=1e-12)
    (given,) = check_submergence((replace(inlet, circulation=0.1),), WATER, Choice(), LAYOUT)
    assert given.circulation == 0.1
    assert given.vortex is not None
    assert given.vortex.circulation == 0.1


def test_remembered_rule_without_circulation_says_so():
    choice = Choice(rules=("jain-raju-garde",), from_memory=True)
    still = replace(LAYOUT, elements=LAYOUT.elements[:1])
    reasons = [
        check_submergence((inlet,), WATER, choice, layout)[0].rules[0].reason
        for inlet, layout in ((PIPE, None), (replace(PIPE, element="pump"), still))
    ]
    assert reasons == ["the circulation is not known", "frictionless flow has no circulation here"]


def codes(inlet, choice=Choice(), layout=None):  # noqa: B008  (a frozen value)
    return {notice.code for notice in inlet_notices(check_submergence((inlet,), WATER, choice, layout))}


def test_what_is_said_with_the_numbers():
    bell = replace(PIPE, kind=InletKind.BELL)
    assert codes(PIPE) == {"regulator-decides"}
    assert codes(replace(PIPE, submergence=0.8)) == {"regulator-decides", "submergence-short"}
    assert codes(replace(PIPE, element="pump"), layout=LAYOUT) == {
        "regulator-decides",
        "swirl-underestimated",
    }
    narrow = replace(PIPE, circulation=0.5, core_radius=0.01)
    assert codes(narrow) == {"regulator-decides", "air-could-be-drawn"}
    remembered = Choice(from_memory=True)
    assert codes(bell, remembered) == {"regulator-decides"}  # 1.77 m/s is within 0.9 to 2.4
    fast = replace(bell, discharge=0.9, submergence=9.0)
    assert codes(fast, remembered) == {"regulator-decides", "inlet-velocity-out-of-band"}
    assert "criterion-from-memory" in codes(PIPE, remembered)


@pytest.mark.parametrize(
    ("discharge", "least", "largest"),
    # "below 315 L/s", "315 to 1260 L/s", "above 1260 L/s": both ends are in the middle band
    [
        (0.315 * (1 - 1e-9), 0.6, 2.7),
        (0.315, 0.9, 2.4),
        (0.315 * (1 + 1e-9), 0.9, 2.4),
        (1.26 * (1 - 1e-9), 0.9, 2.4),
        (1.26, 0.9, 2.4),
        (1.26 * (1 + 1e-9), 1.2, 2.1),
    ],
)
def test_velocity_bands_change_at_their_discharges(discharge, least, largest):
    # 315 and 1260 L/s (from memory)
    bell = replace(PIPE, kind=InletKind.BELL, discharge=discharge)
    (check,) = check_submergence((bell,), WATER, Choice(from_memory=True))
    assert check.band is not None
    assert (check.band.least, check.band.largest) == (least, largest)


@pytest.mark.parametrize(("each", "reasons"), [(2.4, 0), (2.6, 1), (3.3, 2)])
def test_large_stations_call_for_a_physical_model(each, reasons):
    # 2520 L/s an inlet, 6310 L/s a station (from memory)
    inlet = replace(PIPE, discharge=each, height=2.0, submergence=9.0)
    pair = (inlet, replace(inlet, name="other"))
    checks = check_submergence(pair, WATER, Choice(from_memory=True))
    assert [len(check.findings) for check in checks] == [reasons, reasons]
    assert [check.findings for check in check_submergence(pair, WATER, Choice())] == [(), ()]


def test_catalogues_say_how_each_entry_is_known():
    assert {rule.standing for rule in RULES} == set(Standing)
    assert {threshold.standing for threshold in THRESHOLDS} == set(Standing)
    assert all(NOT_LISTED.values())
    assert len({rule.id for rule in RULES}) == len(RULES)

"""Screen criteria: exact units, permanent names, and honesty about what was read."""

import re
from fractions import Fraction

import pytest

from forebay.trade.criteria import DEFINITIONS, NOT_LISTED, SI_FACTORS, Confidence, Criterion, Quantity
from forebay.trade.criteria_catalogue import CRITERIA, list_criteria

BY_ID = {criterion.id: criterion for criterion in CRITERIA}


# feet per second of the documents, in metres per second to the four places of conversion tables
@pytest.mark.parametrize(
    ("feet", "metres"),
    [
        ("0.0825", 0.0251),
        ("0.2", 0.0610),
        ("0.33", 0.1006),
        ("0.4", 0.1219),
        ("0.5", 0.1524),
        ("0.8", 0.2438),
    ],
)
def test_table_of_feet_per_second(feet, metres):
    limits = {c.limit_si for c in CRITERIA if c.unit == "ft/s" and Fraction(c.limit) == Fraction(feet)}
    assert limits
    assert all(round(limit, 4) == metres for limit in limits)


@pytest.mark.parametrize(
    ("name", "exact", "unit"),
    [
        ("cdfg-river-approach", 0.100584, "m/s"),
        ("epa-new-10mgd-through-slot", 0.1524, "m/s"),
        ("nmfs-fry-woven-opening", 0.00238125, "m"),  # 3/32 in
        ("nmfs-fry-wire-opening", 0.00175006, "m"),
        ("nmfs-fingerling-opening", 0.00635, "m"),
        ("dfo-1995-scope", 0.125, "m3/s"),
        ("epa-new-river-share", 0.05, "1"),
        ("eels-2009-unscreened-flow", 20 / 86400, "m3/s"),
    ],
)
def test_conversion_is_exact(name, exact, unit):
    assert BY_ID[name].limit_si == exact
    assert BY_ID[name].unit_si == unit


# what the text of the document itself was read for
READ = {
    "epa-new-10mgd-through-slot",
    "epa-new-2mgd-through-slot",
    "epa-new-river-share",
    "epa-new-tidal-share",
    "epa-2004-through-slot",
    "epa-2004-wedge-wire-through-slot",
    "nmfs-sw-pump-active-approach",
    "nmfs-sw-pump-passive-approach",
    "nmfs-west-active-approach",
    "cdfg-river-approach",
    "cdfg-smelt-approach",
    "cdfg-open-area",
    "adfg-approach",
    "adfg-opening",
    "adfg-sensitive-opening",
    "dfo-1995-scope",
    "bay-of-plenty-through-slot",
    "bay-of-plenty-tidal-opening",
    "bay-of-plenty-opening",
    "eels-2009-unscreened-flow",
    "wisconsin-design-through-slot",
    "wisconsin-actual-through-slot",
}


def test_exactly_what_was_read_is_marked_so():
    assert {c.id for c in CRITERIA if c.confidence is Confidence.DOCUMENT_READ} == READ


def test_remembered_limits_can_be_left_out():
    assert {c.id for c in list_criteria(from_memory=False)} == READ
    assert list_criteria() == CRITERIA


def test_names_differ_and_are_kebab_case():
    assert len(BY_ID) == len(CRITERIA)
    assert all(re.fullmatch(r"[a-z0-9]+(-[a-z0-9]+)*", name) for name in BY_ID)


@pytest.mark.parametrize("criterion", CRITERIA, ids=lambda criterion: criterion.id)
def test_record_is_complete(criterion: Criterion):
    assert criterion.body
    assert criterion.document
    assert criterion.jurisdiction
    assert criterion.applies_to
    assert criterion.definition == DEFINITIONS[criterion.quantity]
    assert criterion.limit_si > 0.0
    assert criterion.limit_own == pytest.approx(
        criterion.limit_si / float(SI_FACTORS[criterion.unit][1]), rel=1e-15
    )
    assert criterion.unit in SI_FACTORS
    assert criterion.year is None or str(criterion.year) in criterion.source
    assert criterion.source.startswith(criterion.body)


def test_slot_and_approach_limits_are_kept_apart():
    # 0.5 ft/s through the slots is 0.25 ft/s of approach at half open area: never the same quantity
    slot = BY_ID["epa-new-10mgd-through-slot"]
    assert slot.quantity is Quantity.MAX_THROUGH_SLOT
    assert 0.5 * slot.limit_si < BY_ID["nmfs-sw-pump-active-approach"].limit_si < slot.limit_si


def test_every_quantity_is_defined_and_unconfirmed_documents_say_why():
    assert set(DEFINITIONS) == set(Quantity)
    assert all(NOT_LISTED.values())


def test_areas_of_the_canadian_guideline():
    # area = flow / velocity at 125 L/s [m2]; own arithmetic
    scope = BY_ID["dfo-1995-scope"].limit_si
    assert scope / BY_ID["dfo-1995-subcarangiform-approach"].limit_si == pytest.approx(1.136, abs=5e-4)
    assert scope / BY_ID["dfo-1995-anguilliform-approach"].limit_si == pytest.approx(3.29, abs=5e-3)

"""An assessment is the answers of its parts, and each part stands by itself."""

from dataclasses import fields

import numpy as np
import pytest

from forebay.flow.errors import ElementOnLandError
from forebay.flow.layout import Ambient, Layout, Sink, Source, StraightBank, Water
from forebay.workflows import assessment as module
from forebay.workflows.assessment import Questions, assess_layout
from forebay.workflows.parts import INTERNAL_ERROR, PartStatus
from forebay.workflows.withdrawal import trace_withdrawal

OUTFALL = Source("outfall", 3 + 0j, 2.0)
INTAKE = Sink("intake", 0j, 2.0)


def a_site(*elements, **changes):
    values = {"depth": 4.0, "water": Water(12.0, 0.0), "ambient": Ambient(0.1 + 0j), "elements": elements}
    return Layout(**{**values, **changes})


def statuses(assessment):
    return {field.name: getattr(assessment, field.name).status for field in fields(assessment)}


def test_parts_that_nobody_asked_for_say_why():
    assessment = assess_layout(a_site())
    assert statuses(assessment) == {
        "flow": PartStatus.OK,
        "stagnation": PartStatus.OK,
        "withdrawal": PartStatus.NOT_ASKED,
        "recirculation": PartStatus.NOT_ASKED,
        "transects": PartStatus.NOT_ASKED,
        "field": PartStatus.NOT_ASKED,
    }
    assert assessment.withdrawal.reason == module.NO_INTAKE
    assert assessment.field.reason == module.NO_POINTS


def test_shares_are_those_of_the_withdrawal():
    site = a_site(INTAKE, OUTFALL)
    answer = assess_layout(site).withdrawal.answer
    assert answer is not None
    assert answer[0].shares == trace_withdrawal(site).intakes[0].shares


def test_recirculation_adds_up_to_the_share_of_the_intake():
    assessment = assess_layout(a_site(INTAKE, OUTFALL))
    assert assessment.recirculation.answer is not None
    assert assessment.withdrawal.answer is not None
    (found,) = assessment.recirculation.answer
    (intake,) = assessment.withdrawal.answer
    assert (found.intake, found.outfall) == ("intake", "outfall")
    assert found.share == intake.recirculation_share
    assert found.discharge == pytest.approx(found.share * 2.0, rel=1e-15)  # one product


def test_a_failing_part_leaves_the_others(monkeypatch):
    def fail(*_):
        raise ZeroDivisionError

    monkeypatch.setattr(module, "sample_field", fail)
    assessment = assess_layout(a_site(INTAKE, OUTFALL), Questions(points=np.array([10 + 5j])))
    assert assessment.field.problem == INTERNAL_ERROR
    others = {status for name, status in statuses(assessment).items() if name not in {"field", "transects"}}
    assert others == {PartStatus.OK}


def test_parts_that_stand_on_a_failed_search_share_its_fate(monkeypatch):
    def fail(*_):
        raise ZeroDivisionError

    monkeypatch.setattr(module, "search_model", fail)
    assessment = assess_layout(a_site(INTAKE, OUTFALL))
    for name in ("stagnation", "withdrawal", "recirculation"):
        assert getattr(assessment, name).problem == INTERNAL_ERROR
    assert assessment.flow.status is PartStatus.OK


def test_a_layout_that_cannot_be_is_no_part():
    bank = StraightBank(0j, 1 + 0j)
    with pytest.raises(ElementOnLandError):
        assess_layout(a_site(Sink("dry", -5j, 1.0), shore=bank))

"""A part of an assessment has an answer, or says why it has none."""

import logging

import pytest

from forebay.flow.errors import ElementOnLandError, UnknownNameError
from forebay.workflows.parts import INTERNAL_ERROR, Part, PartStatus, attempt


def fail(error):
    raise error


def test_an_answer_is_kept():
    assert attempt(lambda: 7) == Part(PartStatus.OK, 7)


def test_a_wrong_request_gives_its_code_and_place():
    part = attempt(lambda: fail(UnknownNameError("no such sink", ("intakes", 2))))
    assert (part.status, part.problem, part.reason) == (PartStatus.FAILED, "unknown-name", "no such sink")
    assert part.path == ("intakes", 2)


def test_the_place_of_a_wrong_layout_leads_through_the_layout():
    part = attempt(lambda: fail(ElementOnLandError("dry", ("elements", 0, "at"))))
    assert part.path == ("layout", "elements", 0, "at")


def test_a_failure_of_ours_is_logged_and_told_without_its_text(caplog):
    with caplog.at_level(logging.ERROR):
        part = attempt(lambda: fail(ZeroDivisionError("inside")))
    assert (part.status, part.problem) == (PartStatus.FAILED, INTERNAL_ERROR)
    assert "inside" not in str(part.reason)
    assert "inside" in caplog.text


def test_the_end_of_the_process_is_no_failure_of_a_part():
    with pytest.raises(KeyboardInterrupt):
        attempt(lambda: fail(KeyboardInterrupt()))


def test_what_nobody_asked_for_says_so():
    part = Part[int].not_asked("no points")
    assert (part.status, part.answer, part.reason) == (PartStatus.NOT_ASKED, None, "no points")

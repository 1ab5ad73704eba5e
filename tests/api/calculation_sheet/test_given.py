"""Inputs of a sheet: everything that a request gives or leaves out is in it once, with its unit."""

from typing import Any

import pytest

from forebay.api.calculation_sheet.given import (
    Reading,
    absent_in,
    lists_in,
    number_text,
    value_text,
    values_of,
)
from forebay.api.schemas.assessment import AssessmentRequest
from forebay.api.units import UnitSystem
from support.http import a_layout, example

SI = Reading(UnitSystem.SI)


def a_request(**body: Any) -> AssessmentRequest:
    return AssessmentRequest.model_validate({"layout": a_layout()} | body)


def read(model, reading=SI):
    return {given.name: given for given in values_of(model, reading)}


def test_values_come_with_unit_and_origin():
    values = read(a_request().layout)
    assert values["depth"] == ("depth", "4", "m", False)
    assert values["ambient velocity"] == ("ambient velocity", "(0.35, 0)", "m/s", False)
    assert values["water temperature"] == ("water temperature", "10", "°C", True)
    assert values["shore kind"].value == "open-water"


def test_units_are_those_of_the_client():
    values = read(a_request(unit_system="us").layout, Reading(UnitSystem.US))
    assert values["depth"].unit == "ft"
    # the default of 10 degC is one in SI whatever the client's units: 10 degC = 50 degF
    assert (values["water temperature"].value, values["water temperature"].unit) == ("50", "°F")


def test_a_discharge_keeps_the_unit_it_was_given_in():
    sink = {"kind": "sink", "name": "s", "at": [0, 0], "discharge": {"value": 12, "unit": "ML/d"}}
    values = read(a_request(layout=a_layout(elements=[sink])).layout.elements[0])
    assert values["discharge"][1:] == ("12", "ML/d", False)


def test_what_is_absent_is_named():
    assert {"bed friction", "depth range"} <= set(absent_in(a_request().layout))


def test_lists_of_models_are_left_to_tables():
    layout = a_request().layout
    assert [(name, len(things)) for name, things in lists_in(layout)] == [("elements", 1)]
    assert "elements" not in read(layout)


def scalars(model):
    """Every number and text of a request as it was sent, whatever holds it."""
    if isinstance(model, dict):
        for value in model.values():
            yield from scalars(value)
    elif isinstance(model, list):
        for value in model:
            yield from scalars(value)
    else:
        yield model


def test_nothing_of_a_request_is_lost():
    body = example("assessLayout")
    del body["sheet"]
    request = AssessmentRequest.model_validate(body)
    row = Reading(UnitSystem.SI, in_row=True)
    values = [
        *values_of(request, row),
        *(v for _, many in lists_in(request) for m in many for v in values_of(m, row)),
    ]
    text = " ".join(given.value for given in values)
    for value in scalars(body):
        assert value_text(value) in text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (4.0, "4"),
        (-2.5, "−2.5"),
        (True, "yes"),
        ([1.0, 2.0], "(1, 2)"),
        ([[0, 1], [2, 3]], "(0, 1); (2, 3)"),
        ([[float(i), 0.0] for i in range(45)], "and 5 more"),
        ({"a": 1}, "a 1"),
    ],
    ids=["whole", "negative", "yes", "pair", "pairs", "many", "members"],
)
def test_values_are_written_as_given(value, text):
    assert value_text(value).endswith(text)


def test_numbers_keep_every_digit():
    assert float(number_text(0.1 + 0.2)) == 0.1 + 0.2

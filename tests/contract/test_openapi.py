"""The OpenAPI document: committed, valid, complete, and a unit, an example and bounds on its numbers."""

import json

import pytest
from openapi_spec_validator import validate

from forebay.api.problems import MEDIA_TYPE, catalogue, flow_errors
from forebay.api.routers.registry import OPERATIONS
from forebay.app import create_app
from forebay.flow.errors import FlowError
from forebay.settings import Settings
from support.tree import ROOT

DOCUMENT = create_app(Settings(workers=1)).openapi()
SCHEMAS = DOCUMENT["components"]["schemas"]

OPERATION_IDS = {
    "sampleField",
    "searchStagnation",
    "integrateContour",
    "computeStress",
    "traceWithdrawal",
    "reviewLayout",
    "assessLayout",
    "drawFlowNet",
}
"""Promised to clients; a renamed one breaks every generated client."""


def test_committed_document_is_the_generated_one():
    committed = json.loads((ROOT / "openapi" / "openapi.json").read_text(encoding="utf-8"))
    assert committed == DOCUMENT, "run `forebay openapi > openapi/openapi.json`"


def test_document_is_valid():
    assert DOCUMENT["openapi"].startswith("3.1")
    validate(DOCUMENT)


def test_operation_ids_are_the_promised_ones():
    assert set(OPERATIONS) == OPERATION_IDS
    for operation in OPERATIONS.values():
        assert DOCUMENT["paths"][operation.path]["post"]["operationId"] == operation.operation_id


def test_operation_ids_are_unique():
    ids = [operation["operationId"] for item in DOCUMENT["paths"].values() for operation in item.values()]
    assert len(set(ids)) == len(ids)


def test_document_says_what_the_answers_are_not_for():
    text = " ".join(DOCUMENT["info"]["description"].split())
    assert "Screening level" in text
    assert "not for the safety of divers, swimmers or craft" in text
    assert "licensed engineers decide" in text


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_every_failure_of_a_compute_route_is_declared(operation):
    responses = DOCUMENT["paths"][operation.path]["post"]["responses"]
    assert set(responses) == {"200", "400", "406", "413", "415", "422", "500", "503", "504"}
    for status, response in responses.items():
        if status != "200":
            assert list(response["content"]) == [MEDIA_TYPE]


@pytest.mark.parametrize("code", catalogue())
def test_every_problem_code_is_documented(code):
    status = str(catalogue()[code].status)
    described = [
        response["description"]
        for item in DOCUMENT["paths"].values()
        for operation in item.values()
        for found, response in operation["responses"].items()
        if found == status
    ]
    assert described or status in {"404", "405"}
    assert all(f"`{code}`" in text for text in described if text != "Problem")


def test_every_flow_error_has_a_code_of_its_own():
    def leaves(kind):
        below = kind.__subclasses__()
        return [leaf for inner in below for leaf in leaves(inner)] if below else [kind]

    kinds = leaves(FlowError)
    assert {kind.code for kind in kinds} == set(flow_errors())
    assert len({kind.code for kind in kinds}) == len(kinds)
    assert not set(flow_errors()) & {code for code in catalogue() if catalogue()[code].status != 422}


def numbers(schema, path, unit=None):
    """Every schema of a number with its place, and whether a unit stands on it or on what holds it."""
    unit = schema.get("unit", unit)
    if schema.get("type") in ("number", "integer"):
        yield path, schema, unit
    for name, inner in schema.get("properties", {}).items():
        yield from numbers(inner, f"{path}/{name}")
    for key in ("items", "additionalProperties"):
        if isinstance(schema.get(key), dict):
            yield from numbers(schema[key], f"{path}/{key}", unit)
    for key in ("anyOf", "oneOf", "allOf", "prefixItems"):
        for index, inner in enumerate(schema.get(key, [])):
            merged = (
                inner if "examples" in inner else inner | {k: v for k, v in schema.items() if k == "examples"}
            )
            yield from numbers(merged, f"{path}/{key}/{index}", unit)


def all_numbers():
    for name, schema in SCHEMAS.items():
        yield from numbers(schema, name)
    for path, item in DOCUMENT["paths"].items():
        for operation in item.values():
            for parameter in operation.get("parameters", []):
                yield from numbers(parameter["schema"], f"{path}?{parameter['name']}")


NUMBERS = list(all_numbers())


def reachable(name, seen):
    """Names of the schemas that a schema refers to, itself included."""
    if name not in seen:
        seen.add(name)
        for part in json.dumps(SCHEMAS[name]).split('"#/components/schemas/')[1:]:
            reachable(part.split('"')[0], seen)
    return seen


REQUESTS = set().union(*(reachable(operation.request.__name__, set()) for operation in OPERATIONS.values()))


@pytest.mark.parametrize(("place", "schema", "unit"), NUMBERS, ids=[place for place, _, _ in NUMBERS])
def test_every_number_has_a_unit_and_an_example(place, schema, unit):
    assert unit
    assert schema.get("examples")


ASKED = [(place, schema) for place, schema, _ in NUMBERS if place.split("/")[0] in REQUESTS or "?" in place]


@pytest.mark.parametrize(("place", "schema"), ASKED, ids=[place for place, _ in ASKED])
def test_every_number_of_a_request_has_bounds_that_hold_its_example(place, schema):
    assert all(
        schema["minimum"] <= value <= schema["maximum"]
        for value in schema["examples"]
        if isinstance(value, int | float)
    )


def test_the_walk_finds_numbers():
    # so that the tests above cannot pass by looking at nothing
    assert len(NUMBERS) > 100
    assert len(ASKED) > 30


@pytest.mark.parametrize("name", sorted(REQUESTS))
def test_requests_forbid_unknown_fields(name):
    if SCHEMAS[name].get("type") == "object":
        assert SCHEMAS[name]["additionalProperties"] is False


def test_kinds_of_another_issue_are_not_in_the_schema():
    text = json.dumps(DOCUMENT)
    assert '"surveyed"' not in text
    assert '"outline"' not in text

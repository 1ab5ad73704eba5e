"""The OpenAPI document: committed, valid, complete, and a unit, an example and bounds on its numbers."""

import json
import re

import pytest
from openapi_spec_validator import validate
from starlette.testclient import TestClient

from forebay.api.examples import request_example
from forebay.api.problems import MEDIA_TYPE, PROXY_PROBLEMS, catalogue, flow_errors
from forebay.api.routers.registry import OPERATIONS
from forebay.app import create_app
from forebay.flow.errors import FlowError
from forebay.settings import Settings
from support.tree import ROOT

DOCUMENT = create_app(Settings(workers=1)).openapi()
SCHEMAS = DOCUMENT["components"]["schemas"]

PROMISED = {
    "sampleField",
    "findInfluenceZone",
    "searchStagnation",
    "integrateContour",
    "computeStress",
    "traceWithdrawal",
    "checkScreen",
    "checkSubmergence",
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


def operations():
    """Every operation of the document with its path and method."""
    return [
        (path, method, operation)
        for path, item in DOCUMENT["paths"].items()
        for method, operation in item.items()
    ]


def named(triple):
    return triple[2]["operationId"]


def test_promised_operation_ids_are_there():
    assert set(OPERATIONS) >= PROMISED


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_operation_id_is_the_one_of_the_registry(operation):
    assert DOCUMENT["paths"][operation.path]["post"]["operationId"] == operation.operation_id


def test_operation_ids_are_unique():
    ids = [named(triple) for triple in operations()]
    assert len(set(ids)) == len(ids)
    assert all(re.fullmatch(r"[a-z]+([A-Z][a-z]+)+", name) for name in ids)


@pytest.mark.parametrize("triple", operations(), ids=named)
def test_operation_says_what_it_is_and_where_it_belongs(triple):
    _, _, operation = triple
    assert operation["summary"]
    (tag,) = operation["tags"]
    assert tag in {known["name"] for known in DOCUMENT["tags"]}


def test_each_tag_is_used():
    assert {tag["name"] for tag in DOCUMENT["tags"]} == {t for _, _, o in operations() for t in o["tags"]}


@pytest.mark.parametrize("triple", operations(), ids=named)
def test_what_can_fail_anywhere_is_declared(triple):
    _, _, operation = triple
    assert {"200", "413", "500"} <= set(operation["responses"])
    statuses = {str(kind.status) for kind in catalogue().values()}
    access = {"401", "403", "429"} & statuses
    is_open = operation.get("security") == []
    assert set(operation["responses"]) & access == (set() if is_open else access)
    for status, response in operation["responses"].items():
        if status != "200":
            assert list(response["content"]) == [MEDIA_TYPE]
            assert response["description"] != "Problem"
            assert response["content"][MEDIA_TYPE]["example"]["status"] == int(status)


@pytest.mark.parametrize("triple", operations(), ids=named)
def test_parameters_have_examples_or_lists_of_values(triple):
    for parameter in triple[2].get("parameters", []):
        schema = parameter["schema"]
        choices = SCHEMAS[schema["$ref"].rsplit("/", 1)[1]] if "$ref" in schema else schema
        assert choices.get("examples") or choices.get("enum"), parameter["name"]


@pytest.mark.parametrize("triple", operations(), ids=named)
def test_declared_access_is_the_one_that_is_asked_for(guarded_client, triple):
    path, method, operation = triple
    answer = guarded_client.request(
        method, path.replace("{code}", "busy"), json={} if method == "post" else None
    )
    assert (answer.status_code == 401) is (operation.get("security") != [])


@pytest.fixture(scope="module")
def guarded_client():
    return TestClient(create_app(Settings(workers=1, tokens=("a-token-that-is-long-enough",))))


def test_a_token_is_asked_for_only_where_there_are_tokens():
    assert DOCUMENT["security"] == [{}, {"bearerToken": []}]


def test_addresses_are_relative_so_that_they_lead_below_a_prefix():
    assert [server["url"] for server in DOCUMENT["servers"]] == ["."]


def test_a_review_leads_to_operations_that_take_its_body():
    responses = DOCUMENT["paths"]["/v1/layout/review"]["post"]["responses"]
    example = request_example("reviewLayout")
    assert responses["200"]["links"]
    for link in responses["200"]["links"].values():
        assert link["requestBody"] == "$request.body"
        OPERATIONS[link["operationId"]].request.model_validate(example)


def unions(part):
    """Every choice between several named kinds."""
    if isinstance(part, dict):
        choices = part.get("oneOf", [])
        kinds = [SCHEMAS[c["$ref"].rsplit("/", 1)[1]] for c in choices if "$ref" in c]
        if len(kinds) > 1 and all("kind" in kind.get("properties", {}) for kind in kinds):
            yield part
        for inner in part.values():
            yield from unions(inner)
    elif isinstance(part, list):
        for inner in part:
            yield from unions(inner)


def test_every_choice_of_kinds_has_a_discriminator():
    found = list(unions(SCHEMAS))
    assert len(found) >= 2  # shores and elements
    for union in found:
        assert union["discriminator"]["propertyName"] == "kind"
        assert len(union["discriminator"]["mapping"]) == len(union["oneOf"])


def targets(part):
    """Every schema that some discriminator leads to, by name."""
    inner = part.values() if isinstance(part, dict) else part if isinstance(part, list) else ()
    if isinstance(part, dict):
        yield from (
            name.rsplit("/", 1)[1] for name in part.get("discriminator", {}).get("mapping", {}).values()
        )
    for further in inner:
        yield from targets(further)


def test_discriminators_lead_to_objects_only():
    # generators of typed clients add the kind to each of them, which they cannot to a choice of objects
    assert {SCHEMAS[name].get("type") for name in targets(SCHEMAS)} == {"object"}


def test_kinds_without_a_discriminator_are_told_apart_by_a_constant():
    assert {way["properties"]["kind"]["const"] for way in SCHEMAS["Outline"]["anyOf"]} == {"outline"}
    assert SCHEMAS["Pier"]["properties"]["kind"]["const"] == "pier"


def test_document_says_what_the_answers_are_not_for():
    text = " ".join(DOCUMENT["info"]["description"].split())
    assert "Screening level" in text
    assert "not for the safety of divers, swimmers or craft" in text
    assert "licensed engineers decide" in text


@pytest.mark.parametrize("operation", OPERATIONS.values(), ids=OPERATIONS)
def test_every_failure_of_a_compute_route_is_declared(operation):
    responses = DOCUMENT["paths"][operation.path]["post"]["responses"]
    assert set(responses) >= {"200", "400", "406", "413", "415", "422", "500", "503", "504"}


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
    assert described or status in {"404", "405"} or code in PROXY_PROBLEMS
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
    unit = schema.get("x-unit", unit)
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
    for part in (SCHEMAS[name], *SCHEMAS[name].get("anyOf", ())):
        if part.get("type") == "object":
            assert part["additionalProperties"] is False

"""Every operation under requests made from its schema and against it: each answer is one that is declared.

All checks of the library hold. One is made exact: a request that fits the schema must be answered, unless
what it describes cannot be computed (a problem with a code of its own) or breaks a rule between values that
JSON Schema has no words for; those rules are listed here, so that a new one is a decision.

Set EXAMPLES for another number of requests of each kind than the 300 of the slow test.
"""

import copy
import os
import re

import pytest
import schemathesis
from hypothesis import HealthCheck, Phase, given, settings
from schemathesis import GenerationMode
from schemathesis.core.failures import ServerError
from schemathesis.openapi.checks import RejectedPositiveData

from forebay.api.examples import OPEN_WATER
from forebay.api.problems import flow_errors
from forebay.app import create_app
from forebay.settings import Settings
from support.running import Running

RULES = (
    "A window runs from smaller to larger in x and in y",
    "`[xz]` (and `y` differ|differs) in length",
    r"A discharge (is at most|should be from \S+ to) \S+ m3/s",
    "A direction needs a length: both components are zero",
    "Heights stand in every point, or in `z`, or nowhere",
    "Heights .* go with the model point-intake-3d",
    "The water must stand above the inlet's level",
    # fields that exclude one another or go together, where each may also be null
    "Either `wind` or `wind_speed`",
    "A slot has height and width, any other a diameter",
    "discharge or element is needed",
    "Either submergence, or surface_level and level",
    "`width` and `height` go together",
    "At least one limit",
)
"""Rules between values of one request, as patterns of the refusal's text."""

LIMITS = {
    "workers": "1",
    "max_points": "100000",
    "max_pairs": "2000000",
    "max_elements": "20",
    "deadline": "5",
}
"""Limits under which no request takes long: what is looked for here does not depend on size."""

PATIENCE = 60.0
"""Longest wait for an answer [s]: the deadline, and a machine that does other things beside."""

PROMISES = ("not-ready", "busy", "deadline-exceeded")
"""Problems with a status from 500 on by which the service keeps its word."""


def document():
    """The contract, with a small site in its examples: the demonstration takes ten times as long."""
    contract = copy.deepcopy(create_app(Settings()).openapi())
    for item in contract["paths"].values():
        for content in item.get("post", {}).get("requestBody", {}).get("content", {}).values():
            if "layout" in content.get("example", {}):
                content["example"]["layout"] = OPEN_WATER
    return contract


def narrowed(contract):
    """The contract less what the rules between values mostly refuse; what fits it fits the whole one too."""
    schemas = contract["components"]["schemas"]
    given = ("name", "kind", "discharge", "submergence")
    inlet, sizes = schemas["Inlet"]["properties"], {"slot": ("height", "width"), "bell": ("diameter",)}
    schemas["Inlet"] = {
        "anyOf": [
            a_closed_object({name: inlet[name] for name in (*given, *size)} | {"kind": {"const": kind}})
            for kind, size in sizes.items()
        ]
    }
    limits = {name: schemas["OwnCriterion"]["properties"][name] for name in ("name", "max_approach")}
    schemas["OwnCriterion"] = a_closed_object(limits)
    schemas["Screen"]["anyOf"] = [way for way in schemas["Screen"]["anyOf"] if "face" in way["required"]]
    del schemas["Layout"]["properties"]["wind"]
    return contract


def a_closed_object(properties):
    """An object with all of these properties, none of them null."""
    inner = {name: schema.get("anyOf", [schema])[0] for name, schema in properties.items()}
    return {
        "type": "object",
        "properties": inner,
        "required": list(inner),
        "additionalProperties": False,
    }


def can_be_wrong(operation):
    """Whether a request can miss the schema: any text is a part of a path."""
    return "requestBody" in operation or any(
        parameter["in"] == "query" for parameter in operation.get("parameters", ())
    )


SCHEMAS = {
    "whole": schemathesis.openapi.from_dict(document()),
    "narrowed": schemathesis.openapi.from_dict(narrowed(document())),
}

OPERATIONS = [
    (name, path, method.upper(), mode)
    for name, schema in SCHEMAS.items()
    for path, item in schema.raw_schema["paths"].items()
    for method, operation in item.items()
    for mode in GenerationMode
    if (name == "whole" and (mode.is_positive or can_be_wrong(operation)))
    or (name == "narrowed" and mode.is_positive and "requestBody" in operation)
]
"""Every operation, once under requests that fit its schema and once under requests that do not; and once
under requests of which more than a few can be computed."""


def code_of(response):
    return response.json()["type"].removeprefix("/problems/")


def is_impossible(response):
    """Whether a refusal says that what was described cannot be computed, however well it was written."""
    code, texts = code_of(response), [error["detail"] for error in response.json().get("errors", ())]
    breaks_rules = texts and all(any(re.search(rule, text) for rule in RULES) for text in texts)
    return code in flow_errors() or (code == "invalid-request" and breaks_rules)


def filter_failure(context, failure, case, response):
    """Whether a failure of a check is one."""
    if isinstance(failure, ServerError):
        return code_of(response) not in PROMISES
    refused = isinstance(failure, RejectedPositiveData) and response.status_code == 422
    return not (refused and is_impossible(response))


for schema in SCHEMAS.values():
    schema.hook(filter_failure)


@pytest.fixture(scope="module")
def address(tmp_path_factory):
    """Of a running service: made for each call, as the library does with an app, it would never be ready."""
    service = Running(tmp_path_factory.mktemp("fuzz") / "service.log", **LIMITS)
    try:
        service.wait_until_ready()
        yield service.address
    finally:
        service.stop()


def check(address, kind, *, examples):
    """Send so many requests of a kind, the same every time, and check each answer."""

    schema, path, method, mode = kind

    @given(case=SCHEMAS[schema][path][method].as_strategy(generation_mode=mode))
    @settings(
        max_examples=examples,
        deadline=None,
        derandomize=True,
        database=None,
        phases=[Phase.generate],
        suppress_health_check=list(HealthCheck),
    )
    def send(case):
        case.call_and_validate(base_url=address, timeout=PATIENCE)

    send()


def called(kind):
    return "-".join(map(str, kind[:3])) + f"-{kind[3].value}"


@pytest.mark.parametrize("kind", OPERATIONS, ids=called)
def test_answers_are_the_declared_ones(address, kind):
    check(address, kind, examples=8)


@pytest.mark.slow
@pytest.mark.parametrize("kind", OPERATIONS, ids=called)
def test_answers_are_the_declared_ones_at_length(address, kind):
    check(address, kind, examples=int(os.environ.get("EXAMPLES", "300")))

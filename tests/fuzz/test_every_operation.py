"""Every operation under requests made from its schema and against it: each answer is one that is declared.

All checks of the library hold. One is made exact: a request that fits the schema must be answered, unless
what it describes cannot be computed (a problem with a code of its own) or breaks a rule between values that
JSON Schema has no words for; those rules are listed here, so that a new one is a decision.
"""

import copy
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
    "`x` and `y` differ in length",
    r"A discharge should be from \S+ to \S+ m3/s",
)
"""Rules between values of one request, as patterns of the refusal's text."""

LIMITS = {
    "workers": "1",
    "max_points": "2000",
    "max_pairs": "200000",
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


SCHEMA = schemathesis.openapi.from_dict(document())

OPERATIONS = [
    (path, method.upper(), mode)
    for path, item in SCHEMA.raw_schema["paths"].items()
    for method, operation in item.items()
    for mode in GenerationMode
    if mode.is_positive or "requestBody" in operation or operation.get("parameters")
]
"""Every operation, once under requests that fit its schema and once under requests that do not."""


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


SCHEMA.hook(filter_failure)


@pytest.fixture(scope="module")
def address(tmp_path_factory):
    """Of a running service: made for each call, as the library does with an app, it would never be ready."""
    service = Running(tmp_path_factory.mktemp("fuzz") / "service.log", **LIMITS)
    try:
        service.wait_until_ready()
        yield service.address
    finally:
        service.stop()


def check(address, path, method, mode, *, examples):
    """Send so many requests of a kind, the same every time, and check each answer."""

    @given(case=SCHEMA[path][method].as_strategy(generation_mode=mode))
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


@pytest.mark.slow  # to make up bodies of so large a contract takes a quarter of an hour
@pytest.mark.parametrize(("path", "method", "mode"), OPERATIONS)
def test_answers_are_the_declared_ones(address, path, method, mode):
    check(address, path, method, mode, examples=8)


@pytest.mark.slow
@pytest.mark.parametrize(("path", "method", "mode"), OPERATIONS)
def test_answers_are_the_declared_ones_at_length(address, path, method, mode):
    check(address, path, method, mode, examples=300)

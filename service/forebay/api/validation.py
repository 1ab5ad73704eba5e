"""What is wrong with a body: validation errors as a problem with JSON pointers, echoing nothing of it."""

from collections.abc import Sequence
from typing import Any

from pydantic import ValidationError
from pydantic_core import ErrorDetails, from_json

from forebay.api.problems import MOST_ERRORS, Problem, pointer
from forebay.flow.errors import Path

MISSING = object()
"""Stands for a member that a document does not have."""

LONGEST_DETAIL = 300
"""Characters of one error's text."""

OWN_WORDS = {
    "union_tag_invalid": "Unknown kind; expected one of {expected_tags}",
    "union_tag_not_found": "Missing field",
    "extra_forbidden": "Unknown field",
    "missing": "Missing field",
}
"""Texts for the error types whose own text repeats the input or says less."""


def problem_of(error: ValidationError, body: bytes) -> Problem:
    """Problem of a failed validation: 400 if the body is not JSON, 422 with pointers otherwise."""
    count = error.error_count()
    details = error.errors(include_url=False, include_input=False)[:MOST_ERRORS]
    if details[0]["type"] == "json_invalid":
        return Problem("malformed-json", _where_json_ends(details[0]))
    document = from_json(body)
    errors = tuple(
        {"pointer": pointer(_place(detail, document)), "detail": _text(detail)} for detail in details
    )
    listed = "" if count <= MOST_ERRORS else f", of which {MOST_ERRORS} are listed"
    return Problem(
        "invalid-request", f"{count} error{'s' * (count > 1)} in the request{listed}", errors=errors
    )


def locate(location: Path, document: Any) -> Path:  # noqa: ANN401
    """Steps of a validation error's location that exist in the document, plus a missing last member.

    Locations hold tags of unions and names of validators too; a client knows neither.
    """
    steps: list[str | int] = []
    here = document
    last = len(location) - 1
    for i, step in enumerate(location):
        inner = _member(here, step)
        if inner is not MISSING:
            here = inner
            steps.append(step)
        elif i == last and isinstance(here, dict) and isinstance(step, str):
            steps.append(step)
    return tuple(steps)


def _member(value: Any, step: str | int) -> Any:  # noqa: ANN401
    if isinstance(value, dict) and isinstance(step, str):
        return value.get(step, MISSING)
    if isinstance(value, list) and isinstance(step, int) and 0 <= step < len(value):
        return value[step]
    return MISSING


def _place(detail: ErrorDetails, document: Any) -> Path:  # noqa: ANN401
    steps = locate(detail["loc"], document)
    return (*steps, "kind") if detail["type"].startswith("union_tag") else steps


def _where_json_ends(detail: ErrorDetails) -> str:
    text = str(detail.get("ctx", {}).get("error", "invalid"))
    return f"The body is not valid JSON: {text}"[:LONGEST_DETAIL]


def _text(detail: ErrorDetails) -> str:
    words = OWN_WORDS.get(detail["type"])
    text = detail["msg"] if words is None else words.format(**detail.get("ctx", {}))
    return text[:LONGEST_DETAIL]


def problem_of_query(details: Sequence[Any]) -> Problem:
    """Problem of query parameters that do not fit."""
    errors = tuple(
        {"parameter": str(detail["loc"][-1]), "detail": str(detail["msg"])[:LONGEST_DETAIL]}
        for detail in details
    )
    return Problem(
        "invalid-request", f"{len(errors)} error{'s' * (len(errors) > 1)} in the query", errors=errors
    )

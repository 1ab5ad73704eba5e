"""What is wrong with a body: validation errors as a problem with JSON pointers, echoing nothing of it."""

from collections.abc import Sequence
from typing import Any

from pydantic import ValidationError
from pydantic_core import ErrorDetails

from forebay.api.problems import LONGEST_TOKEN, MOST_ERRORS, Problem, pointer
from forebay.flow.errors import Path

UNIONS = frozenset({"shore", "fluid", "discharge", "passing_discharge"})
"""Members whose value is of one of several kinds."""

LISTS_OF_UNIONS = frozenset({"elements", "criteria", "structures"})
"""Members whose items are each of one of several kinds."""

LONGEST_DETAIL = 300
"""Characters of one error's text."""

OWN_WORDS = {
    "union_tag_invalid": "Unknown kind; expected one of {expected_tags}",
    "union_tag_not_found": "Missing field",
    "extra_forbidden": "Unknown field",
    "missing": "Missing field",
}
"""Texts for the error types whose own text repeats the input or says less."""


def problem_of(error: ValidationError) -> Problem:
    """Problem of a failed validation: 400 if the body is not JSON, 422 with pointers otherwise."""
    count = error.error_count()
    details = error.errors(include_url=False, include_input=False)[:MOST_ERRORS]
    if details[0]["type"] == "json_invalid":
        return Problem("malformed-json", _where_json_ends(details[0]))
    errors = tuple({"pointer": pointer(_place(detail)), "detail": _text(detail)} for detail in details)
    listed = "" if count <= MOST_ERRORS else f", of which {MOST_ERRORS} are listed"
    return Problem(
        "invalid-request", f"{count} error{'s' * (count > 1)} in the request{listed}", errors=errors
    )


def without_tags(location: Path) -> Path:
    """Steps of a validation error's location without the tags of unions, which are no members of the body.

    A tag stands after `shore`, `fluid` and `discharge`, and after the index of an element or structure.
    """
    before = ("", "", *location)
    return tuple(
        step
        for twice, once, step in zip(before, before[1:], location, strict=False)
        if once not in UNIONS and not (twice in LISTS_OF_UNIONS and isinstance(once, int))
    )


def _place(detail: ErrorDetails) -> Path:
    steps = without_tags(detail["loc"])
    return (*steps, "kind") if detail["type"].startswith("union_tag") else steps


def _where_json_ends(detail: ErrorDetails) -> str:
    text = str(detail.get("ctx", {}).get("error", "invalid"))
    return f"The body is not valid JSON: {text}"[:LONGEST_DETAIL]


def _text(detail: ErrorDetails) -> str:
    words = OWN_WORDS.get(detail["type"])
    text = detail["msg"] if words is None else words.format(**detail.get("ctx", {}))
    return text[:LONGEST_DETAIL]


def require_known_once(given: Sequence[tuple[str, str]], known: Sequence[str]) -> None:
    """Refuse query parameters that a route does not have, and repeated ones, of which one would be lost.

    Raises Problem invalid-request that names each.
    """
    names = [name for name, _ in given]
    faults = {name: "Unknown parameter" for name in names if name not in known}
    faults |= {name: "Given more than once" for name in known if names.count(name) > 1}
    if faults:
        raise problem_of_query(
            [{"loc": (name[:LONGEST_TOKEN],), "msg": text} for name, text in faults.items()]
        )


def problem_of_query(details: Sequence[Any]) -> Problem:
    """Problem of query parameters that do not fit."""
    errors = tuple(
        {"parameter": str(detail["loc"][-1]), "detail": str(detail["msg"])[:LONGEST_DETAIL]}
        for detail in details
    )
    return Problem(
        "invalid-request", f"{len(errors)} error{'s' * (len(errors) > 1)} in the query", errors=errors
    )

"""What is to go says since when and until when, and goes in time."""

import re

import pytest

from forebay import __version__
from forebay.app import create_app
from forebay.settings import Settings

DOCUMENT = create_app(Settings(workers=1)).openapi()


def marked(part, place="#"):
    """Every part of a document that is marked as deprecated, with its place."""
    if isinstance(part, dict):
        if part.get("deprecated") is True:
            yield place, part
        for key, inner in part.items():
            yield from marked(inner, f"{place}/{key}")
    elif isinstance(part, list):
        for index, inner in enumerate(part):
            yield from marked(inner, f"{place}/{index}")


def version(text):
    """Version as numbers that can be compared."""
    found = re.fullmatch(r"(\d+)\.(\d+)\.(\d+)", text)
    assert found, f"{text} is no version"
    return tuple(int(number) for number in found.groups())


def faults(document, current):
    """Why the deprecations of a document do not keep the policy, by place."""
    found = {}
    for place, part in marked(document):
        if not {"x-deprecated-in", "x-removed-in", "description"} <= set(part):
            found[place] = "says not since when, until when or what instead"
            continue
        since, until = version(part["x-deprecated-in"]), version(part["x-removed-in"])
        if until[:2] <= since[:2]:
            found[place] = "goes without a minor release between"
        elif version(current) >= until:
            found[place] = "has had its time: remove it"
    return found


def test_policy_is_kept():
    assert faults(DOCUMENT, __version__) == {}


def a_mark(since, until):
    return {"deprecated": True, "x-deprecated-in": since, "x-removed-in": until, "description": "use b"}


@pytest.mark.parametrize(
    ("part", "current", "is_kept"),
    [
        (a_mark("0.2.0", "0.3.0"), "0.2.0", True),
        (a_mark("0.2.0", "0.3.0"), "0.2.9", True),
        (a_mark("0.2.0", "0.3.0"), "0.3.0", False),
        (a_mark("0.2.0", "1.0.0"), "1.0.1", False),
        (a_mark("0.2.0", "0.2.1"), "0.2.0", False),
        ({"deprecated": True}, "0.1.0", False),
        ({"deprecated": False}, "0.1.0", True),
    ],
)
def test_policy_can_be_broken(part, current, is_kept):
    document = {"components": {"schemas": {"A": {"properties": {"a": part}}}}}
    assert (faults(document, current) == {}) is is_kept

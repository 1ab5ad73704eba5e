"""From the models' JSON Schema to what linters and generators of clients take as OpenAPI 3.1.

* `unit` becomes `x-unit`: OpenAPI keeps names without `x-` for itself.
* A default that is an object is told in the description: generators of typed clients cannot write one.
* A discriminator leads to objects only. Where one of several kinds is itself a choice of objects, there is
  none: the constant `kind` of each of them tells them apart.
"""

import json
from collections.abc import Iterator
from typing import Any

VALUES = frozenset({"const", "default", "enum", "example", "examples", "mapping"})
"""Keywords that hold values, in which nothing is a keyword."""

NAMED = frozenset({"properties", "$defs", "patternProperties", "dependentSchemas"})
"""Keywords that hold schemas by names of the user's."""


def translated(part: Any) -> Any:  # noqa: ANN401  (any part of a document)
    """Copy of a schema, or of a part of the document with schemas in it, in OpenAPI's dialect."""
    match part:
        case dict():
            return _with_words_for_default({_name(key): _inner(key, value) for key, value in part.items()})
        case list():
            return [translated(item) for item in part]
        case _:
            return part


def settle_discriminators(schemas: dict[str, Any]) -> None:
    """Leave out every discriminator of the components that leads to something other than an object."""
    objects = {f"#/components/schemas/{name}" for name, schema in schemas.items() if "properties" in schema}
    for part in _parts(schemas):
        if not objects.issuperset(part.get("discriminator", {}).get("mapping", {}).values()):
            del part["discriminator"]


def _parts(part: Any) -> Iterator[dict[str, Any]]:  # noqa: ANN401
    """Every mapping in a part of the document, outer ones first."""
    if isinstance(part, dict):
        yield part
    for inner in part.values() if isinstance(part, dict) else part if isinstance(part, list) else ():
        yield from _parts(inner)


def _inner(key: str, value: Any) -> Any:  # noqa: ANN401
    if key in VALUES:
        return value
    if key in NAMED and isinstance(value, dict):
        return {name: translated(schema) for name, schema in value.items()}
    return translated(value)


def _name(key: str) -> str:
    return "x-unit" if key == "unit" else key


def _with_words_for_default(schema: dict[str, Any]) -> dict[str, Any]:
    default = schema.get("default")
    if not isinstance(default, dict):
        return schema
    text = f"{schema.get('description', '')}; by default {json.dumps(default)}".lstrip("; ")
    return {key: value for key, value in schema.items() if key != "default"} | {"description": text}

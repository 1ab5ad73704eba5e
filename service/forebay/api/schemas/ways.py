"""Requests that say one thing in exactly one of several ways, as OpenAPI says it: a choice of closed objects.

JSON Schema could also say this by lists of required names beside the properties; generators of clients and
linters understand only objects that are complete in themselves. Fields of the other ways are null or absent,
so that no two of the objects have an instance in common.
"""

from collections.abc import Callable, Mapping
from types import MappingProxyType
from typing import Any

Json = dict[str, Any]

NONE: Mapping[str, str] = MappingProxyType({})


def describe_ways(
    *ways: tuple[str, ...], shared: frozenset[str] = frozenset(), only: Mapping[str, str] = NONE
) -> Callable[[Json], None]:
    """What `json_schema_extra` does to the schema of a model whose fields exclude one another.

    ways : fields that go together; a request uses all of one way and none of another; a way may be empty
    shared : fields of a way that other ways may use too
    only : fields of their own that are free in the way named and have their default in every other
    """
    exclusive = {name for way in ways for name in way} - shared

    def rewrite(schema: Json) -> None:
        properties: Json = schema.pop("properties")
        required: list[str] = schema.pop("required", [])
        del schema["type"], schema["additionalProperties"]

        def member(name: str, way: tuple[str, ...]) -> Json:
            if name in way:
                return _without_null(properties[name])
            if name in exclusive:
                return {"type": "null", "description": f"Not with {' and '.join(way) or 'the rest alone'}"}
            if name in only and only[name] not in way:
                default = properties[name]["default"]
                return {**properties[name], "enum": [default], "description": f"Belongs to {only[name]}"}
            return dict(properties[name])

        schema["anyOf"] = [
            {
                "title": schema["title"] + _ending(way),
                "type": "object",
                "additionalProperties": False,
                "properties": {name: member(name, way) for name in properties},
                "required": [*required, *way],
            }
            for way in ways
        ]

    return rewrite


def _ending(way: tuple[str, ...]) -> str:
    """What the name of a way adds to the name of the model."""
    return "By" + "And".join(part.title().replace("_", "") for part in way) if way else "Alone"


def _without_null(schema: Json) -> Json:
    """Schema of a field that is required here: null and the default are gone."""
    kept = {key: value for key, value in schema.items() if key not in {"default", "anyOf"}}
    inner = [choice for choice in schema.get("anyOf", ()) if choice != {"type": "null"}]
    return {**inner[0], **kept} if len(inner) == 1 else schema

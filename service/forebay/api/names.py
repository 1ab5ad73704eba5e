"""Names that a request may not use: words that answers need for themselves, and names used twice."""

from collections.abc import Mapping, Sequence
from typing import Protocol

from forebay.flow.errors import FlowError, LayoutError, Path

RESERVED = frozenset(
    {
        "ambient",
        "upstream",
        "downstream",
        "open-end",
        "unresolved",
        "water",
        "vertex",
        "bank",
        "right bank",
        "left bank",
        "first bank",
        "second bank",
        "closed end",
        "near end",
        "far end",
    }
)
"""Words by which answers say where water comes from or where something stands."""


FAR_ENDS = frozenset({"upstream", "downstream", "open-end"})
"""Words for the far ends of other shores, by which open edges may be called."""


class ReservedNameError(LayoutError):
    """An element or structure has a name that answers use for a bank, an end or the water itself."""

    code = "reserved-name"
    title = "The name is a word that answers need for themselves"


class RepeatedNameError(FlowError):
    """Two contours, transects or states share a name, so that their answers could not be told apart."""

    code = "repeated-name"
    title = "Names within a request must differ"


class Named(Protocol):
    """Anything with a name."""

    @property
    def name(self) -> str:
        """Its name."""
        ...


def refuse_reserved(
    parts: Mapping[str, Sequence[Named]], above: Path = (), *, allowed: frozenset[str] = frozenset()
) -> None:
    """Raise ReservedNameError if something in the parts of a layout has such a name.

    above : path of what holds the parts; that of the error is (*above, part, index, "name")
    allowed : words that mean these very things, such as far ends of the water
    """
    for part, things in parts.items():
        for index, thing in enumerate(things):
            if thing.name in RESERVED - allowed:
                raise ReservedNameError("answers use this word for themselves", (*above, part, index, "name"))


def refuse_repeated(things: Sequence[Named], field: str) -> None:
    """Raise RepeatedNameError, path (field, index, "name"), if two of a request's things share a name."""
    seen: set[str] = set()
    for index, thing in enumerate(things):
        if thing.name in seen:
            raise RepeatedNameError("another one before it has this name", (field, index, "name"))
        seen.add(thing.name)

"""HTML from text: everything is escaped but what is HTML already."""

import re
from collections.abc import Iterable
from html import escape
from typing import Final

VOID: Final = frozenset({"br", "col", "img", "meta"})
"""Elements without content and without an end tag."""

SAFE: Final = frozenset(" ,-_0123456789ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz")
"""Characters that mean themselves in a string of a style sheet."""

RAISED: Final = re.compile("[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+")
LOWERED: Final = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789−")


class Html(str):
    """Text that is HTML already; any other `str` is text and is escaped where it becomes part of HTML."""

    __slots__ = ()


def element(name: str, /, *children: str, **attributes: str) -> Html:
    """An element with its children; `class_` is the attribute class."""
    written = "".join(f' {key.rstrip("_")}="{escape(value)}"' for key, value in attributes.items() if value)
    if name in VOID:
        return Html(f"<{name}{written}>")
    return Html(f"<{name}{written}>{joined(children)}</{name}>")


def joined(parts: Iterable[str], between: str = "") -> Html:
    """Parts one after the other, text among them escaped."""
    return Html(between.join(part if isinstance(part, Html) else written(part) for part in parts))


def written(text: str) -> Html:
    """Text escaped, its raised digits as digits that are raised: few faces draw all of them alike."""
    return Html(RAISED.sub(lambda run: f"<sup>{run.group().translate(LOWERED)}</sup>", escape(text)))


def items(texts: Iterable[str], *, ordered: bool = False) -> Html:
    """Each text as an item of a list."""
    return element("ol" if ordered else "ul", *(element("li", text) for text in texts))


def section(title: str, *children: str) -> Html:
    """A section with its heading; nothing without content."""
    content = joined(children)
    return element("section", element("h2", title), content) if content else Html()


def style_string(text: str) -> str:
    """Text as a string of a style sheet, quotes included."""
    return '"' + "".join(c if c in SAFE else f"\\{ord(c):x} " for c in text) + '"'

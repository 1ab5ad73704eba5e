"""Warnings as a client reads them."""

from collections.abc import Iterable
from typing import Any, Protocol

from forebay.api.numbers import round_number
from forebay.api.problems import API_NAMES, pointer
from forebay.flow.errors import Path


class Notice(Protocol):
    """What a warning of the catalogue says about one layout or answer."""

    @property
    def code(self) -> str:
        """Permanent kebab-case name."""
        ...

    @property
    def severity(self) -> str:
        """One of note, caution, unsafe-to-use."""
        ...

    @property
    def message(self) -> str:
        """What an engineer reads."""
        ...

    @property
    def path(self) -> Path:
        """Steps from the layout to what it is about."""
        ...

    @property
    def value(self) -> float | None:
        """Number that was compared."""
        ...

    @property
    def limit(self) -> float | None:
        """Number it was compared with."""
        ...

    @property
    def source(self) -> str:
        """Where the limit is published."""
        ...


def written_warnings(notices: Iterable[Notice], digits: int) -> list[dict[str, Any]]:
    """Warnings of an answer; `pointer` leads into the request, numbers are in SI as in the message."""
    return [
        {
            "code": notice.code,
            "severity": str(notice.severity),
            "message": notice.message,
            "pointer": pointer(_in_request(notice.path)),
            "value": _number(notice.value, digits),
            "limit": _number(notice.limit, digits),
            "source": notice.source,
        }
        for notice in notices
    ]


def _in_request(path: Path) -> Path:
    return ("layout", *(API_NAMES.get(step, step) if isinstance(step, str) else step for step in path))


def _number(value: float | None, digits: int) -> float | None:
    return None if value is None else round_number(float(value), digits)

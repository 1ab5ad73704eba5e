"""Warnings as a client reads them."""

from collections.abc import Iterable
from functools import lru_cache
from typing import Any, Protocol

from typing_extensions import override

from forebay.api.numbers import round_number
from forebay.api.problems import API_NAMES, pointer
from forebay.api.units import UnitSystem
from forebay.flow.errors import Path


class Notice(Protocol):
    """What a warning of the catalogue says about one layout or answer."""

    @override
    def __hash__(self) -> int:
        """Equal ones are written once."""
        ...

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
        """Steps to what it is about."""
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
    def unit(self) -> str | None:
        """UCUM code of both in SI."""
        ...

    @property
    def in_layout(self) -> bool:
        """Whether `path` starts at the layout, not at the request."""
        ...

    @property
    def source(self) -> str:
        """Where the limit is published."""
        ...


def written_warnings(notices: Iterable[Notice], system: UnitSystem, digits: int) -> list[dict[str, Any]]:
    """Warnings of an answer; `pointer` leads into the request, `unit` is that of `value` and `limit`."""
    return [_written(notice, system, digits) for notice in notices]


@lru_cache(maxsize=4096)
def _written(notice: Notice, system: UnitSystem, digits: int) -> dict[str, Any]:
    """One warning, written once for all the answers that carry it."""
    return {
        "code": notice.code,
        "severity": str(notice.severity),
        "message": notice.message,
        "pointer": pointer(_in_request(notice)),
        "value": _number(notice.value, notice, system, digits),
        "limit": _number(notice.limit, notice, system, digits),
        "unit": None if notice.unit is None else system.code(notice.unit),
        "source": notice.source,
    }


def _in_request(notice: Notice) -> Path:
    steps = (API_NAMES.get(step, step) if isinstance(step, str) else step for step in notice.path)
    return ("layout", *steps) if notice.in_layout else tuple(steps)


def _number(value: float | None, notice: Notice, system: UnitSystem, digits: int) -> float | None:
    if value is None:
        return None
    return round_number(system.write(float(value), notice.unit or "1"), digits)

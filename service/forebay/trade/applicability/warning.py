"""What a warning is: an entry of the catalogue, and its occurrence at a site."""

from dataclasses import dataclass, replace
from enum import StrEnum

from forebay.flow.errors import Path


class Severity(StrEnum):
    """How much a warning takes away from a number."""

    NOTE = "note"
    CAUTION = "caution"
    UNSAFE_TO_USE = "unsafe-to-use"


@dataclass(frozen=True, slots=True)
class ApplicabilityWarning:
    """A number was computed, but this is where it should not be trusted.

    code : permanent name;  severity : how serious;  message : what an engineer reads, in SI
    path : steps to what it is about, from the layout if `in_layout`, else from the request
    value, limit : what was compared, in `unit`, None if there is nothing to compare
    unit : UCUM code of value and limit, "1" for pure numbers, None without either
    source : where the limit is published
    """

    code: str
    severity: Severity
    message: str
    path: Path
    value: float | None
    limit: float | None
    source: str
    unit: str | None = None
    in_layout: bool = True


@dataclass(frozen=True, slots=True)
class WarningKind:
    """Entry of the catalogue.

    meaning : what is wrong with the numbers;  threshold : when it is raised;  formula : what is compared
    unit : UCUM code of what is compared, "1" for pure numbers, None if nothing is
    """

    code: str
    severity: Severity
    meaning: str
    threshold: str
    formula: str
    source: str
    unit: str | None = None

    def raised(
        self, message: str, path: Path = (), *, value: float | None = None, limit: float | None = None
    ) -> ApplicabilityWarning:
        """An occurrence of this kind."""
        unit = None if value is None and limit is None else self.unit
        return ApplicabilityWarning(
            self.code, self.severity, message, path, value, limit, self.source, unit=unit
        )

    def raised_in_request(
        self, message: str, path: Path = (), *, value: float | None = None, limit: float | None = None
    ) -> ApplicabilityWarning:
        """The same with a path from the request."""
        return replace(self.raised(message, path, value=value, limit=limit), in_layout=False)

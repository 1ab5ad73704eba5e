"""What a warning is: an entry of the catalogue, and its occurrence at a site."""

from dataclasses import dataclass
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
    path : steps from the layout to what it is about
    value, limit : what was compared, in the unit that the message names, None if there is nothing to compare
    source : where the limit is published
    """

    code: str
    severity: Severity
    message: str
    path: Path
    value: float | None
    limit: float | None
    source: str


@dataclass(frozen=True, slots=True)
class WarningKind:
    """Entry of the catalogue.

    meaning : what is wrong with the numbers;  threshold : when it is raised;  formula : what is compared
    """

    code: str
    severity: Severity
    meaning: str
    threshold: str
    formula: str
    source: str

    def raised(
        self, message: str, path: Path = (), *, value: float | None = None, limit: float | None = None
    ) -> ApplicabilityWarning:
        """An occurrence of this kind."""
        return ApplicabilityWarning(self.code, self.severity, message, path, value, limit, self.source)

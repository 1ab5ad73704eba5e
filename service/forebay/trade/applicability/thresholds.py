"""Thresholds of exposure whose publication was not read."""

from collections.abc import Iterator, Sequence

from forebay.trade.applicability.site import Site
from forebay.trade.applicability.warning import ApplicabilityWarning, Severity, WarningKind
from forebay.trade.exposure import Confidence, Threshold

THRESHOLD_FROM_MEMORY = WarningKind(
    code="threshold-from-memory",
    severity=Severity.CAUTION,
    meaning="a threshold of exposure is quoted from memory or from another text: read its publication",
    threshold="confidence from-memory",
    formula="none",
    source="convention of this service",
)


def threshold_from_memory(site: Site) -> Iterator[ApplicabilityWarning]:
    """Thresholds in the answer that are quoted from memory."""
    yield from from_memory(site.readings.thresholds)


def from_memory(thresholds: Sequence[Threshold]) -> tuple[ApplicabilityWarning, ...]:
    """The caution about thresholds quoted from memory; path from the request."""
    unread = [t.id for t in thresholds if t.confidence is Confidence.FROM_MEMORY]
    if not unread:
        return ()
    message = f"From memory, not from the publication itself: {', '.join(unread)}."
    return (THRESHOLD_FROM_MEMORY.raised_in_request(message, ("exposure",)),)

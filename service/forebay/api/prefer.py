"""The header Prefer (RFC 7240): how long a client is willing to wait."""

import re

WAIT = re.compile(r'(?:^|,)\s*wait\s*=\s*"?(\d{1,9})"?\s*(?:;[^,]*)?(?=,|$)', re.IGNORECASE)
"""The preference `wait`, in whole seconds."""


def patience_in(prefer: str | None) -> float | None:
    """Seconds that a client is willing to wait; None if it says nothing that can be understood."""
    found = WAIT.search(prefer or "")
    return None if found is None else float(found.group(1))

"""The envelope as JSON, the default of every route with a result."""

from forebay.api.envelope import encode
from forebay.api.media import JSON
from forebay.api.outcome import Answered, Encoder, Reply


def encode_envelope(answered: Answered) -> Reply:
    """Result, units, warnings, provenance; a value that does not exist is null."""
    return Reply(JSON, encode(answered.document), {})


ENVELOPE = Encoder(JSON, encode_envelope, "Result, units, warnings and provenance")

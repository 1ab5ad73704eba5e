"""JSON Lines: an answer that is a list, one item a line, so that a reader need not hold all of it."""

from collections.abc import Iterator
from functools import partial

from forebay.api.envelope import encode
from forebay.api.media import JSON_LINES
from forebay.api.outcome import Answered, Encoder, Reply


def json_lines(items: str) -> tuple[Encoder, ...]:
    """Encoders of an answer whose result holds the list `items`, one for each name of the media type."""
    return tuple(
        Encoder(
            media_type,
            partial(encode_lines, items=items, media_type=media_type),
            f"First the envelope without `{items}`, then a line for each of them",
            {"type": "string"},
        )
        for media_type in JSON_LINES
    )


def encode_lines(answered: Answered, items: str, media_type: str) -> Reply:
    """The envelope without its list, then each item of the list as it stands in the envelope."""
    body = b"".join(line + b"\n" for line in _lines(answered, items))
    return Reply(media_type, body, {})


def _lines(answered: Answered, items: str) -> Iterator[bytes]:
    result = answered.document["result"]
    rest = {name: value for name, value in result.items() if name != items}
    yield encode(answered.document | {"result": rest})
    yield from map(encode, result[items])

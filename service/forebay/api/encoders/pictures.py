"""Pictures, which are drawn where they are computed: an encoder only labels the bytes."""

from functools import partial

from forebay.api.media import PNG, SVG
from forebay.api.outcome import Answered, Encoder, Reply, warning_header


def encode_picture(answered: Answered, media_type: str) -> Reply:
    """Bytes of the picture; the codes of the warnings travel in Forebay-Warnings."""
    if answered.outcome.picture is None:
        raise TypeError(f"nothing was drawn for {media_type}")
    return Reply(media_type, answered.outcome.picture, warning_header(answered))


PICTURES = (
    Encoder(SVG, partial(encode_picture, media_type=SVG), "Vector graphics"),
    Encoder(PNG, partial(encode_picture, media_type=PNG), "Pixels"),
)

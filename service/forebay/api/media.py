"""Media types: which one an Accept header asks for, and whether a body can be read."""

from forebay.api.problems import Problem

JSON = "application/json"
CSV = "text/csv"
SVG = "image/svg+xml"
COLUMNS = "application/octet-stream"
"""A line of JSON and raw columns after it, in bodies."""
PNG = "image/png"
HTML = "text/html"
PDF = "application/pdf"
NPY = "application/x-npy"
ARROW = "application/vnd.apache.arrow.stream"
GEOJSON = "application/geo+json"
COVERAGE = "application/prs.coverage+json"
JSON_LINES = ("application/jsonl", "application/x-ndjson")
"""Two names of one format, neither registered, both in use."""


def negotiate(accept: str | None, offered: tuple[str, ...]) -> str:
    """Offered media type that Accept prefers (RFC 9110, 12.5.1); the first offered one wins a tie.

    Raises Problem not-acceptable if it accepts none of them.
    """
    if not accept or not accept.strip():
        return offered[0]
    ranges = [_media_range(part) for part in accept.split(",")[:64] if part.strip()]
    best = max(offered, key=lambda media_type: _quality(media_type, ranges))
    if _quality(best, ranges) <= 0.0:
        raise Problem(
            "not-acceptable",
            "This route answers none of the media types in Accept",
            facts={"offered": list(offered)},
        )
    return best


def _media_range(part: str) -> tuple[str, float]:
    name, *parameters = (piece.strip() for piece in part.split(";"))
    quality = next((text[2:] for text in parameters if text.lower().startswith("q=")), "1")
    try:
        return name.lower(), min(max(float(quality), 0.0), 1.0)
    except ValueError:
        return name.lower(), 0.0


def _quality(media_type: str, ranges: list[tuple[str, float]]) -> float:
    family = media_type.split("/", maxsplit=1)[0]
    for wanted in (media_type, f"{family}/*", "*/*"):
        qualities = [quality for name, quality in ranges if name == wanted]
        if qualities:
            return max(qualities)
    return 0.0


def body_type(content_type: str | None, content_encoding: str | None, readable: tuple[str, ...]) -> str:
    """Media type of a body, one of the readable ones (a missing type counts as JSON).

    Raises Problem unsupported-media-type for any other, for text not in UTF-8 and for compressed bodies.
    """
    if content_encoding and content_encoding.strip().lower() != "identity":
        raise Problem(
            "unsupported-media-type",
            "Compressed bodies are not read",
            headers={"Accept-Encoding": "identity"},
        )
    name, *parameters = (piece.strip().lower() for piece in (content_type or JSON).split(";"))
    charsets = [
        text.removeprefix("charset=").strip('"') for text in parameters if text.startswith("charset=")
    ]
    if name not in readable or any(charset not in {"utf-8", "utf8", "us-ascii"} for charset in charsets):
        raise Problem(
            "unsupported-media-type",
            f"The body must be {' or '.join(readable)}, text in UTF-8",
            headers={"Accept-Post": ", ".join(readable)},
        )
    return name

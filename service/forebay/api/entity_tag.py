"""Entity tags: an answer is a function of the request and the version, so its tag is known before it is."""

from hashlib import blake2b

import anyio

from forebay import __version__

REVALIDATED = {"Cache-Control": "private, no-cache"}
"""A client may keep the answer, and asks with If-None-Match whether it still holds."""

TAG_BYTES = 16
"""Length of a digest [bytes]: two requests of one route share it by chance once in 10^38."""

IN_THREAD = 2**20
"""Bytes from which a digest is made in a thread: one takes about a millisecond."""


def entity_tag(*parts: str | bytes) -> str:
    """Strong tag of what follows from these parts in this version; the same for the same bytes."""
    digest = blake2b(__version__.encode(), digest_size=TAG_BYTES)
    for part in parts:
        content = part.encode() if isinstance(part, str) else part
        digest.update(len(content).to_bytes(8, "big"))
        digest.update(content)
    return f'"{digest.hexdigest()}"'


async def tag_of(*parts: str | bytes) -> str:
    """The same, made in a thread where there is much to read, so that the event loop goes on."""
    if sum(map(len, parts)) < IN_THREAD:
        return entity_tag(*parts)
    return await anyio.to_thread.run_sync(entity_tag, *parts)


def encoded_tag(tag: str, encoding: str) -> str:
    """Tag of the same answer in a content encoding, whose bytes differ."""
    return f'{tag[:-1]}-{encoding}"'


def is_known(tag: str, if_none_match: str | None) -> bool:
    """Whether a client says that it holds the answer, in whichever content encoding."""
    if not if_none_match:
        return False
    held = (part.strip().removeprefix("W/") for part in if_none_match.split(",")[:64])
    return any(part in {"*", tag} or part.startswith(f"{tag[:-1]}-") for part in held)

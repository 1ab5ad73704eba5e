"""Who may compute: bearer tokens (RFC 6750) from the settings, and how much of it at a time."""

import hmac
import logging
import re
import time
from collections import Counter
from collections.abc import Callable
from hashlib import sha256
from pathlib import Path

from starlette.datastructures import Headers
from starlette.types import ASGIApp, Receive, Scope, Send

from forebay.api.problems import Problem

LOG = logging.getLogger("forebay")

OPEN = ("/livez", "/readyz", "/problems/", "/docs", "/docs-assets/", "/openapi.json")
"""Beginnings of the addresses that need no token: they compute nothing and say nothing of anybody's work."""

CHALLENGE = {"WWW-Authenticate": 'Bearer realm="forebay"'}

RETRY_AFTER = {"Retry-After": "1"}

LOOK_AGAIN = 1.0
"""Time between two looks at the file of tokens [s]."""

TOKEN = re.compile(r"[A-Za-z0-9._~+/=-]{16,200}")
"""A line of the file that is a token; empty lines and those that begin with # are none."""


class Tokens:
    """The tokens in force: those of the settings and of a file, which is read again when it changes."""

    def __init__(
        self, fixed: tuple[str, ...], file: Path | None, *, clock: Callable[[], float] = time.monotonic
    ) -> None:
        self._fixed = frozenset(map(_digest, fixed))
        self._file = file
        self._clock = clock
        self._stamp: tuple[int, int, int] | None = None
        self._looked = -LOOK_AGAIN
        self._digests = self._fixed
        self._renew()

    @property
    def is_needed(self) -> bool:
        """Whether a token is asked for."""
        return self._file is not None or bool(self._fixed)

    def holder(self, authorization: str | None) -> str | None:
        """Short name of the token in an Authorization header, for counting; None if it is none of ours.

        Every token in force is compared, each in constant time.
        """
        scheme, _, token = (authorization or "").partition(" ")
        given = _digest(token.strip())
        self._renew()
        matches = [known for known in self._digests if hmac.compare_digest(known, given)]
        return matches[0][:8].hex() if matches and scheme.lower() == "bearer" else None

    def _renew(self) -> None:
        """Read the file again if it has changed; while it cannot be read the tokens stay what they were."""
        now = self._clock()
        if self._file is None or now - self._looked < LOOK_AGAIN:
            return
        self._looked = now
        try:
            state = self._file.stat()
            stamp = (state.st_mtime_ns, state.st_size, state.st_ino)
            if stamp != self._stamp:
                lines = self._file.read_text(encoding="utf-8").split()
                found = frozenset(_digest(line) for line in lines if TOKEN.fullmatch(line))
                self._digests, self._stamp = self._fixed | found, stamp
                LOG.info("%d tokens in force", len(self._digests))
        except (OSError, UnicodeDecodeError) as error:
            LOG.warning("the file of tokens cannot be read: %s", type(error).__name__)


def _digest(token: str) -> bytes:
    return sha256(token.encode()).digest()


class Access:
    """Lets in who has a token, and of each token so many computations at a time."""

    def __init__(self, app: ASGIApp, tokens: Tokens, concurrency: int) -> None:
        self.app = app
        self.tokens = tokens
        self.concurrency = concurrency
        self.running: Counter[str] = Counter()

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request, if its token is one of ours.

        Raises Problem token-missing or too-many-requests.
        """
        if scope["type"] != "http" or not self.tokens.is_needed or _is_open(scope):
            await self.app(scope, receive, send)
            return
        holder = self.tokens.holder(Headers(scope=scope).get("authorization"))
        if holder is None:
            raise Problem("token-missing", "No token, or none that is in force", headers=CHALLENGE)
        if scope["method"] != "POST":
            await self.app(scope, receive, send)
            return
        if self.running[holder] >= self.concurrency:
            detail = f"{self.concurrency} computations of this token are running"
            raise Problem("too-many-requests", detail, headers=RETRY_AFTER, facts={"limit": self.concurrency})
        self.running[holder] += 1
        try:
            await self.app(scope, receive, send)
        finally:
            self.running[holder] -= 1


def _is_open(scope: Scope) -> bool:
    path = scope["path"].removeprefix(scope.get("root_path", ""))
    return path == "/" or str(path).startswith(OPEN) or scope["method"] == "OPTIONS"

"""Guards round the application, pure ASGI: request ids, standing headers, last errors, CORS."""

import logging
import re
import uuid
from collections.abc import Iterable

import orjson
from starlette.datastructures import Headers, MutableHeaders
from starlette.requests import ClientDisconnect
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from forebay.api.problems import MEDIA_TYPE, Problem

LOG = logging.getLogger("forebay")

REQUEST_ID = re.compile(r"[A-Za-z0-9._-]{1,80}")
"""Request ids taken over from a client; others would not be safe to log."""

HEADER_LIST = re.compile(r"[A-Za-z0-9!#$%&'*+.^_`|~, -]{1,1000}")
"""Header names that a preflight may ask for: all are allowed, none means anything without credentials."""

SECURITY_HEADERS = {
    "Cache-Control": "no-store",
    "X-Content-Type-Options": "nosniff",
    "X-Frame-Options": "DENY",
    "Referrer-Policy": "no-referrer",
    "Cross-Origin-Opener-Policy": "same-origin",
    "Content-Security-Policy": "default-src 'none'; frame-ancestors 'none'",
}
"""Headers of every answer; a page sets its own policy and cacheable answers their own Cache-Control."""

EXPOSED = (
    "Retry-After, X-Request-ID, Server-Timing, Allow, ETag, Preference-Applied, WWW-Authenticate, "
    "Forebay-Units, Forebay-Statuses, Forebay-Warnings"
)
"""Headers that a page of another origin may read."""


def problem_message(problem: Problem, request_id: str) -> tuple[Message, Message]:
    """ASGI messages of a problem."""
    body = orjson.dumps(problem.body(request_id))
    headers = {"Content-Type": MEDIA_TYPE, "Content-Length": str(len(body)), **problem.headers}
    raw = [(name.lower().encode("latin-1"), value.encode("latin-1")) for name, value in headers.items()]
    start = {"type": "http.response.start", "status": problem.status, "headers": raw}
    return start, {"type": "http.response.body", "body": body}


def request_id_of(scope: Scope) -> str:
    """Id of a request, set by RequestIds."""
    return str(scope.get("state", {}).get("request_id", "unknown"))


class RequestIds:
    """Gives each request an id, each answer its standing headers, and HEAD the headers of GET."""

    def __init__(self, app: ASGIApp) -> None:
        self.app = app

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request with its id and standing headers."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        asked = Headers(scope=scope).get("x-request-id", "")
        request_id = asked if REQUEST_ID.fullmatch(asked) else str(uuid.uuid4())
        scope.setdefault("state", {})["request_id"] = request_id
        headless = scope["method"] == "HEAD"

        async def send_with_headers(message: Message) -> None:
            if message["type"] == "http.response.start":
                headers = MutableHeaders(scope=message)
                headers["X-Request-ID"] = request_id
                for name, value in SECURITY_HEADERS.items():
                    headers.setdefault(name, value)
                headers.add_vary_header("Accept")
            elif headless and message["type"] == "http.response.body":
                message = {**message, "body": b""}
            await send(message)

        inner = {**scope, "method": "GET"} if headless else scope
        await self.app(inner, receive, send_with_headers)


class LastErrors:
    """Turns whatever else went wrong into a problem: our own faults are logged once, without their inside."""

    def __init__(self, app: ASGIApp) -> None:
        self.app = app

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request, whatever happens."""
        started = False

        async def watched(message: Message) -> None:
            nonlocal started
            started = started or message["type"] == "http.response.start"
            await send(message)

        try:
            await self.app(scope, receive, watched)
        except ClientDisconnect:
            LOG.info("client left, request %s", request_id_of(scope))
        except Exception as error:
            if scope["type"] != "http" or started:
                raise
            await _answer(scope, send, error)


async def _answer(scope: Scope, send: Send, error: Exception) -> None:
    request_id = request_id_of(scope)
    if isinstance(error, Problem):
        problem = error
    else:
        LOG.error("internal error, request %s", request_id, exc_info=error)
        problem = Problem("internal-error", "The service failed; the request id identifies the log entry")
    for message in problem_message(problem, request_id):
        await send(message)


class CrossOrigin:
    """Lets pages of the allowed origins read every answer, errors included (CORS, no credentials)."""

    def __init__(self, app: ASGIApp, origins: Iterable[str]) -> None:
        self.app = app
        self.origins = frozenset(origins)

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request, readable for its origin if allowed."""
        headers = Headers(scope=scope) if scope["type"] == "http" else Headers()
        origin = headers.get("origin")
        allowed = origin is not None and ("*" in self.origins or origin in self.origins)
        if not allowed or origin is None:
            await self.app(scope, receive, send)
            return
        grant = {"Access-Control-Allow-Origin": "*" if "*" in self.origins else origin}
        if scope["method"] == "OPTIONS" and "access-control-request-method" in headers:
            await _preflight(grant, headers.get("access-control-request-headers", ""), send)
            return

        async def granted(message: Message) -> None:
            if message["type"] == "http.response.start":
                answer = MutableHeaders(scope=message)
                answer.update({**grant, "Access-Control-Expose-Headers": EXPOSED})
                answer.add_vary_header("Origin")
            await send(message)

        await self.app(scope, receive, granted)


async def _preflight(grant: dict[str, str], wanted: str, send: Send) -> None:
    headers = {
        **grant,
        "Access-Control-Allow-Methods": "GET, HEAD, POST, OPTIONS",
        "Access-Control-Max-Age": "600",
        "Vary": "Origin, Access-Control-Request-Headers",
    }
    if HEADER_LIST.fullmatch(wanted):
        headers["Access-Control-Allow-Headers"] = wanted
    raw = [(name.lower().encode("latin-1"), value.encode("latin-1")) for name, value in headers.items()]
    await send({"type": "http.response.start", "status": 204, "headers": raw})
    await send({"type": "http.response.body", "body": b""})

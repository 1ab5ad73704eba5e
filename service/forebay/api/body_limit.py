"""The limit on bodies: counted while they arrive; what exceeds it is refused and its rest thrown away."""

import asyncio

from starlette.datastructures import Headers
from starlette.types import ASGIApp, Message, Receive, Scope, Send

from forebay.api.guard import problem_message, request_id_of
from forebay.api.problems import Problem

DRAIN_SECONDS = 20.0
"""Longest time for which the rest of a refused body is thrown away [s]."""

DRAIN_LIMITS = 4
"""Most that is thrown away, in limits: beyond it the connection is cut."""


STALL_SECONDS = 20.0
"""Longest time without a byte of a body that is not whole yet [s]."""


class BodyTooLarge(Exception):  # noqa: N818  (never leaves this module)
    """The body exceeds the limit."""


class Body:
    """A body on its way in, counted."""

    def __init__(self, receive: Receive, limit: int) -> None:
        self._receive = receive
        self._limit = limit
        self.size = 0
        self.is_over = False

    async def next(self) -> Message:
        """Next message of the request, whatever its size."""
        message = await self._receive()
        self.size += len(message.get("body", b""))
        self.is_over = message["type"] != "http.request" or not message.get("more_body", False)
        return message

    async def next_within_limit(self) -> Message:
        """Next message of the request.

        Raises BodyTooLarge, or Problem body-timeout if a body that is not whole stops coming.
        """
        try:
            async with asyncio.timeout(None if self.is_over else STALL_SECONDS):
                message = await self.next()
        except TimeoutError:
            facts = {"limit": STALL_SECONDS}
            detail = f"Nothing of the body came for {STALL_SECONDS:g} s"
            raise Problem("body-timeout", detail, headers={"Connection": "close"}, facts=facts) from None
        if self.size > self._limit:
            raise BodyTooLarge
        return message

    async def drain(self) -> None:
        """Throw the rest away: a client that sends everything before it reads could not hear us otherwise."""
        try:
            async with asyncio.timeout(DRAIN_SECONDS):
                while not self.is_over and self.size <= DRAIN_LIMITS * self._limit:
                    await self.next()
        except TimeoutError:
            return


class BodyLimit:
    """Counts the body while it arrives and stops at the limit, before anything reads it."""

    def __init__(self, app: ASGIApp, limit: int) -> None:
        self.app = app
        self.limit = limit

    async def __call__(self, scope: Scope, receive: Receive, send: Send) -> None:
        """Answer one request whose body stays within the limit, refuse any other."""
        if scope["type"] != "http":
            await self.app(scope, receive, send)
            return
        body = Body(receive, self.limit)
        declared = Headers(scope=scope).get("content-length", "0")
        if declared.isdecimal() and int(declared[:20]) > self.limit:
            await self._refuse(scope, body, send)
            return
        try:
            await self.app(scope, body.next_within_limit, send)
        except BodyTooLarge:
            await self._refuse(scope, body, send)

    async def _refuse(self, scope: Scope, body: Body, send: Send) -> None:
        """Answer at once, for who listens while sending; take the rest in, for who does not."""
        problem = Problem(
            "body-too-large",
            f"The body exceeds {self.limit} bytes",
            headers={"Connection": "close"},
            facts={"limit": self.limit},
        )
        start, content = problem_message(problem, request_id_of(scope))
        await send(start)
        await send({**content, "more_body": True})
        await body.drain()
        await send({"type": "http.response.body", "body": b""})

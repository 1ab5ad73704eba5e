"""Readiness: every kernel is compiled here and in a worker process before the service says so."""

import asyncio
import logging
from functools import partial
from typing import Any

import orjson

from forebay.api.examples import rehearsals
from forebay.api.media import JSON
from forebay.api.operation import Operation, perform
from forebay.api.outcome import Reply
from forebay.api.routers.registry import OPERATIONS
from forebay.api.work import Workshop

LONGEST_COMPILATION = 600.0
"""Longest first run of one example [s]: on a fresh machine it compiles its kernels."""

LOG = logging.getLogger("forebay")


class Readiness:
    """Runs examples of every operation once, in a thread and in a worker process."""

    def __init__(self, workshop: Workshop) -> None:
        self._workshop = workshop
        self._task: asyncio.Task[None] | None = None
        self.is_ready = False
        self.detail = "Kernels are being prepared"

    def start(self) -> None:
        """Begin without waiting, so that the service answers /livez meanwhile."""
        self._task = asyncio.create_task(self._prepare())

    async def stop(self) -> None:
        """Give up what is still being prepared."""
        self.is_ready = False
        if self._task is not None:
            self._task.cancel()
            await asyncio.gather(self._task, return_exceptions=True)

    async def _prepare(self) -> None:
        try:
            for operation in OPERATIONS.values():
                for request in rehearsals(operation.operation_id):
                    await self._rehearse(operation, orjson.dumps(request))
        except Exception:
            self.detail = "Preparation failed; the log says why"
            LOG.exception("preparation failed")
            return
        self.is_ready = True

    async def _rehearse(self, operation: Operation[Any], body: bytes) -> None:
        media_type = operation.media_types[0]
        reply = await self._workshop.in_process(
            operation.operation_id, body, media_type, deadline=LONGEST_COMPILATION
        )
        if JSON in operation.media_types:  # pictures are drawn in worker processes only
            work = partial(perform, operation, body, media_type, limits=self._workshop.limits)
            await self._workshop.in_thread(work)
        if not isinstance(reply, Reply):
            raise TypeError(f"the example of {operation.operation_id} is refused: {reply}")

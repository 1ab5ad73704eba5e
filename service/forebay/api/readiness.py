"""Readiness: kernels compiled here and in a worker process, a worker that answers, no end in sight."""

import asyncio
import logging
from collections.abc import Mapping
from functools import partial
from typing import Any

import orjson

from forebay.api.examples import rehearsals
from forebay.api.media import JSON
from forebay.api.operation import Job, Operation, perform
from forebay.api.outcome import Reply
from forebay.api.problems import Problem
from forebay.api.work import Workshop
from forebay.flow.errors import TooLargeError

LONGEST_COMPILATION = 600.0
"""Longest first run of one example [s]: on a fresh machine it compiles its kernels."""

INTERVAL = 5.0
"""Time between two questions to a worker process [s]."""

PATIENCE = 5.0
"""Time in which an idle worker process answers or is taken for dead [s]."""

LOG = logging.getLogger("forebay")


class Readiness:
    """Runs examples of every operation once, in a thread and in a worker process, then watches.

    operations : the compute operations by their ids
    detail : why the service is not ready, None if it is;  is_draining : whether it is about to stop
    """

    def __init__(self, workshop: Workshop, operations: Mapping[str, Operation[Any]]) -> None:
        self._workshop = workshop
        self._operations = operations
        self._task: asyncio.Task[None] | None = None
        self.detail: str | None = "Kernels are being prepared"
        self.is_draining = False

    def start(self) -> None:
        """Begin without waiting, so that the service answers /livez meanwhile."""
        self._task = asyncio.create_task(self._prepare_and_watch())

    def drain(self) -> None:
        """Say that the service stops, while it still answers."""
        self.is_draining = True
        self.detail = "The service is stopping"
        if self._task is not None:
            self._task.cancel()

    async def stop(self) -> None:
        """Give up what is still being prepared."""
        self.drain()
        if self._task is not None:
            await asyncio.gather(self._task, return_exceptions=True)

    async def _prepare_and_watch(self) -> None:
        try:
            for operation in self._operations.values():
                for request in rehearsals(operation.operation_id):
                    await self._rehearse(operation, orjson.dumps(request))
        except Exception:
            self.detail = "Preparation failed; the log says why"
            LOG.exception("preparation failed")
            return
        while True:
            answers = await self._workshop.answers(PATIENCE)
            self.detail = None if answers else "No worker process answers"
            await asyncio.sleep(INTERVAL)

    async def _rehearse(self, operation: Operation[Any], body: bytes) -> None:
        media_type = operation.media_types[0]
        job = Job(operation, body, media_type)
        reply = await self._workshop.in_process(job, deadline=LONGEST_COMPILATION)
        if isinstance(reply, Problem) and reply.code == TooLargeError.code:
            LOG.warning("%s is not prepared: its example exceeds the limits", operation.operation_id)
            return
        if JSON in operation.media_types:  # pictures are drawn in worker processes only
            work = partial(perform, operation, body, media_type, limits=self._workshop.limits)
            await self._workshop.in_thread(work)
        if not isinstance(reply, Reply):
            raise TypeError(f"the example of {operation.operation_id} is refused: {reply}")

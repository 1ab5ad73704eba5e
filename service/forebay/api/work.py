"""Where computations run: in the event loop, in a thread, or in a process that a deadline can kill."""

import asyncio
import multiprocessing
from collections.abc import Callable
from concurrent.futures import CancelledError
from functools import partial
from typing import Any

import anyio
from pebble import ProcessExpired, ProcessPool

from forebay.api.limits import Limits
from forebay.api.operation import Deferred, Operation, perform
from forebay.api.outcome import Reply
from forebay.api.problems import Problem

INLINE_BODY = 16 * 1024
"""Bytes of a body that is read and answered in the event loop, if its computation is short too."""

INLINE_WORK = 100_000
"""Work done in the event loop, in pairs of element and point: a millisecond."""

THREAD_BODY = 1024 * 1024
"""Bytes of a body that is read in a thread."""

THREAD_WORK = 20_000_000
"""Work done in a thread, which nothing can stop, in pairs: a fraction of a second."""

THREADS = 4
"""Computations in threads at a time; the framework's own threads stay free."""

RETRY_AFTER = "1"
"""Seconds after which a refused client may try again."""


def run_operation(operation_id: str, body: bytes, media_type: str, limits: Limits) -> Reply | Problem:
    """Answer of one operation, looked up by name; the entry point of the worker processes."""
    from forebay.api.routers.registry import OPERATIONS  # noqa: PLC0415  (the registry imports this module)

    reply = perform(OPERATIONS[operation_id], body, media_type, limits=limits)
    if isinstance(reply, Deferred):
        raise TypeError("a computation without an allowance was deferred")
    return reply


class Workshop:
    """Runs operations: short ones at once, long ones in worker processes with a deadline."""

    def __init__(self, limits: Limits) -> None:
        self.limits = limits
        self.waiting = 0
        self._limiter: anyio.CapacityLimiter | None = None
        self._pool: ProcessPool | None = None

    async def run(self, operation: Operation[Any], body: bytes, media_type: str) -> Reply | Problem:
        """Answer of a body.

        Raises Problem busy, or deadline-exceeded.
        """
        attempt = partial(perform, operation, body, media_type, limits=self.limits)
        reply: Reply | Problem | Deferred = Deferred()
        if len(body) <= INLINE_BODY:
            reply = attempt(allowance=INLINE_WORK)
        if isinstance(reply, Deferred) and len(body) <= THREAD_BODY:
            reply = await self.in_thread(partial(attempt, allowance=THREAD_WORK))
        if isinstance(reply, Deferred):
            reply = await self.in_process(operation.operation_id, body, media_type)
        return reply

    async def in_thread(self, work: Callable[[], Reply | Problem | Deferred]) -> Reply | Problem | Deferred:
        """Result of a short computation in one of a few threads of our own."""
        if self._limiter is None:
            self._limiter = anyio.CapacityLimiter(THREADS)
        return await anyio.to_thread.run_sync(work, limiter=self._limiter)

    async def in_process(
        self, operation_id: str, body: bytes, media_type: str, *, deadline: float | None = None
    ) -> Reply | Problem:
        """Result of a long computation, stopped at the deadline, by default the limits'.

        The deadline counts from now on: a client that waits for a worker waits no longer than one that has
        one. The process of a computation that is stopped is killed.
        """
        if self.waiting >= self.limits.workers + self.limits.queue:
            raise Problem("busy", "Every worker and the queue are full", headers={"Retry-After": RETRY_AFTER})
        self.waiting += 1
        try:
            arguments = (operation_id, body, media_type, self.limits)
            return await self._scheduled(arguments, self.limits.deadline if deadline is None else deadline)
        finally:
            self.waiting -= 1

    async def _scheduled(self, arguments: tuple[str, bytes, str, Limits], deadline: float) -> Reply | Problem:
        future = self._open_pool().schedule(run_operation, args=arguments)
        try:
            async with asyncio.timeout(deadline):  # cancels the future, on which the pool kills its process
                reply: Reply | Problem = await asyncio.wrap_future(future)
        except TimeoutError:
            detail = f"Stopped {deadline:g} s after it was asked for, waiting for a worker included"
            raise Problem("deadline-exceeded", detail, facts={"deadline": deadline}) from None
        except (ProcessExpired, CancelledError) as error:
            raise RuntimeError(f"a worker process ended during {arguments[0]}") from error
        return reply

    def _open_pool(self) -> ProcessPool:
        if self._pool is not None and not self._pool.active:
            self.close()  # a pool whose workers could not start never recovers
        if self._pool is None:
            context = multiprocessing.get_context("forkserver")
            context.set_forkserver_preload(["forebay.api.routers.registry"])
            self._pool = ProcessPool(max_workers=self.limits.workers, context=context)
        return self._pool

    def close(self) -> None:
        """Stop every worker at once."""
        if self._pool is not None:
            self._pool.stop()  # type: ignore[no-untyped-call]
            self._pool.join()
            self._pool = None

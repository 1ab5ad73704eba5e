"""Where computations run: in the event loop, in a thread, or in a process that a deadline can kill."""

import asyncio
from collections.abc import Awaitable, Callable
from functools import partial
from typing import TypeVar

import anyio
from starlette.requests import ClientDisconnect

from forebay.api.expense import Ledger
from forebay.api.limits import Limits, Tier
from forebay.api.operation import Deferred, Job, perform
from forebay.api.outcome import Reply
from forebay.api.pool import RETRY_AFTER, WorkerPool
from forebay.api.problems import Problem
from forebay.api.worker import answer, run_operation

T = TypeVar("T")

THREADS = 4
"""Computations in threads at a time; the framework's own threads stay free."""

Attempt = Callable[[], Reply | Problem | Deferred]


class Workshop:
    """Runs operations: short ones at once, long ones in worker processes with a deadline.

    waiting : computations given to worker processes and not yet back
    ledger : what the answers have cost
    """

    def __init__(self, limits: Limits) -> None:
        self.limits = limits
        self.waiting = 0
        self.pool = WorkerPool(limits)
        self.ledger = Ledger()
        self._limiter: anyio.CapacityLimiter | None = None

    async def run(self, job: Job) -> Reply | Problem:
        """Answer of a job.

        Raises Problem busy, deadline-exceeded, memory-exceeded or worker-lost.
        """
        given = (job.operation, job.body, job.media_type, job.content_type)
        attempt = partial(perform, *given, limits=self.limits)
        reply: Reply | Problem | Deferred = Deferred()
        if len(job.body) <= Tier.INLINE.body:
            reply = attempt(allowance=Tier.INLINE.work)
        if isinstance(reply, Deferred) and len(job.body) <= Tier.THREAD.body:
            reply = await self.in_thread(partial(attempt, allowance=Tier.THREAD.work))
        if isinstance(reply, Deferred):
            reply = await self.in_process(job)
        if isinstance(reply, Reply) and reply.expense is not None:
            self.ledger.note(reply.expense)
        return reply

    async def in_thread(self, work: Attempt) -> Reply | Problem | Deferred:
        """Result of a short computation in one of a few threads of our own."""
        if self._limiter is None:
            self._limiter = anyio.CapacityLimiter(THREADS)
        return await anyio.to_thread.run_sync(work, limiter=self._limiter)

    def deadline(self, patience: float | None) -> float:
        """Longest time for a client's computation [s]: the limits', or less if it wants to wait less."""
        return self.limits.deadline if patience is None else min(patience, self.limits.deadline)

    async def in_process(self, job: Job, *, deadline: float | None = None) -> Reply | Problem:
        """Result of a long computation, stopped at the deadline or when its client leaves.

        The deadline counts from now on: a client that waits for a worker waits no longer than one that has
        one. The process of a computation that is stopped is killed.
        """
        if self.waiting >= self.limits.workers + self.limits.queue:
            raise Problem("busy", "Every worker and the queue are full", headers={"Retry-After": RETRY_AFTER})
        allowed = self.deadline(job.patience) if deadline is None else deadline
        arguments = (
            job.operation.operation_id,
            job.body,
            job.media_type,
            job.content_type,
            self.limits,
        )
        self.waiting += 1
        try:
            async with asyncio.timeout(allowed):  # cancels the work, on which its process is killed
                return await self._while_wanted(self.pool.run(run_operation, *arguments), job.has_left)
        except TimeoutError:
            self.pool.ended["deadline"] += 1
            detail = f"Stopped {allowed:g} s after it was asked for, waiting for a worker included"
            raise Problem("deadline-exceeded", detail, facts={"deadline": allowed}) from None
        finally:
            self.waiting -= 1

    async def _while_wanted(self, work: Awaitable[T], has_left: Callable[[], Awaitable[None]]) -> T:
        """Result of the work, which is cancelled when its client leaves."""
        working, watching = asyncio.ensure_future(work), asyncio.ensure_future(has_left())
        try:
            await asyncio.wait({working, watching}, return_when=asyncio.FIRST_COMPLETED)
            if working.done():
                return working.result()
            self.pool.ended["client"] += 1
            raise ClientDisconnect
        finally:
            for task in (working, watching):
                task.cancel()
            await asyncio.gather(working, watching, return_exceptions=True)

    async def answers(self, patience: float) -> bool:
        """Whether a worker process answers in time; a busy one is taken to."""
        if self.waiting > 0:
            return True
        try:
            async with asyncio.timeout(patience):
                return await self.pool.run(answer) > 0
        except (TimeoutError, Problem, RuntimeError):
            return False

    def close(self) -> None:
        """Stop every worker at once."""
        self.pool.close()

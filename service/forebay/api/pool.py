"""Worker processes: started on demand, killed when nobody waits for them, replaced when they end."""

import asyncio
import multiprocessing
from collections import Counter
from collections.abc import Callable
from concurrent.futures import CancelledError
from typing import Any, TypeVar

from pebble import ProcessExpired, ProcessPool

from forebay.api.limits import Limits
from forebay.api.problems import Problem
from forebay.api.worker import OUT_OF_MEMORY, start_worker

T = TypeVar("T")

ATTEMPTS = 2
"""Times that a computation is begun if its worker ends: answers are pure, so a second try does no harm."""

RETRY_AFTER = "1"
"""Seconds after which a refused client may try again."""


class WorkerPool:
    """As many worker processes as the limits say.

    ended : workers that ended before their work did, by reason
    """

    def __init__(self, limits: Limits) -> None:
        self.limits = limits
        self.ended: Counter[str] = Counter()
        self._pool: ProcessPool | None = None

    async def run(self, work: Callable[..., T], *arguments: Any) -> T:  # noqa: ANN401
        """Result of a function in a worker; cancelled, the worker is killed.

        Raises Problem memory-exceeded, or worker-lost.
        """
        for _ in range(ATTEMPTS):
            future = self._open().schedule(work, args=arguments)
            try:
                result: T = await asyncio.wrap_future(future)
            except ProcessExpired as end:
                self._note(end.exitcode)
            except CancelledError as error:
                raise RuntimeError("the worker processes were stopped") from error
            else:
                return result
        headers = {"Retry-After": RETRY_AFTER}
        raise Problem("worker-lost", f"Begun {ATTEMPTS} times; each worker was lost", headers=headers)

    def _note(self, exit_code: int) -> None:
        if exit_code != OUT_OF_MEMORY:
            self.ended["lost"] += 1
            return
        self.ended["memory"] += 1
        limit = self.limits.worker_memory
        raise Problem("memory-exceeded", f"A worker may have {limit} bytes of memory", facts={"limit": limit})

    def _open(self) -> ProcessPool:
        if self._pool is not None and not self._pool.active:
            self.close()  # a pool whose workers could not start never recovers
        if self._pool is None:
            context = multiprocessing.get_context("forkserver")
            context.set_forkserver_preload(["forebay.api.routers.registry"])
            self._pool = ProcessPool(
                max_workers=self.limits.workers,
                context=context,
                initializer=start_worker,
                initargs=(self.limits.worker_memory,),
            )
        return self._pool

    def close(self) -> None:
        """Stop every worker at once."""
        if self._pool is not None:
            self._pool.stop()  # type: ignore[no-untyped-call]
            self._pool.join()
            self._pool = None

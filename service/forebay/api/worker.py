"""What runs inside a worker process: its memory limit, its entry point, and how it ends without memory."""

import gc
import os
import resource

from forebay.api.limits import Limits
from forebay.api.operation import Deferred, perform
from forebay.api.outcome import Reply
from forebay.api.problems import Problem
from forebay.kernel_cache import pass_over_full_disks

OUT_OF_MEMORY = 77
"""Exit code of a worker that met its memory limit: its caller learns of it, and a fresh one follows."""


def start_worker(memory: int) -> None:
    """Limit the memory of this process; the deadlines of its caller limit its time."""
    pass_over_full_disks()
    _, hardest = resource.getrlimit(resource.RLIMIT_DATA)
    allowed = memory if hardest == resource.RLIM_INFINITY else min(memory, hardest)
    resource.setrlimit(resource.RLIMIT_DATA, (allowed, hardest))
    gc.freeze()  # what was imported before stays; looking through it again frees nothing


def run_operation(
    operation_id: str, body: bytes, media_type: str, content_type: str, limits: Limits
) -> Reply | Problem:
    """Answer of one operation, looked up by name."""
    from forebay.api.routers.registry import OPERATIONS  # noqa: PLC0415  (the registry imports this module)

    try:
        reply = perform(OPERATIONS[operation_id], body, media_type, content_type, limits=limits)
    except MemoryError:
        os._exit(OUT_OF_MEMORY)
    if isinstance(reply, Deferred):
        raise TypeError("a computation without an allowance was deferred")
    return reply


def answer() -> int:
    """Process id of a worker that is alive."""
    return os.getpid()

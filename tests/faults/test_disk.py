"""Disks that fill up while the service runs: what cannot be written is lost, and nothing else.

A limit on the size of files stands in for the disk: files can be made and read; a write beyond it fails.
"""

import http.client
import resource
from collections.abc import Iterable
from contextlib import contextmanager

from forebay.api.examples import request_example
from forebay.api.routers.registry import OPERATIONS
from forebay.demo.child import LOOPBACK
from support.http import SAMPLE, a_sample, assert_problem
from support.running import eventually, memory_of

GROWTH = 2**24
"""Most that the service may grow by meanwhile [bytes]: what waits for room is bounded."""


@contextmanager
def no_room(processes: Iterable[int], size=0):
    """Let processes write files up to this size only; those that they start too."""
    known = {process: resource.prlimit(process, resource.RLIMIT_FSIZE) for process in processes}
    for process, (_, hardest) in known.items():
        resource.prlimit(process, resource.RLIMIT_FSIZE, (size, hardest))
    yield
    for process, limit in known.items():
        resource.prlimit(process, resource.RLIMIT_FSIZE, limit)


def statuses(service, count):
    """Statuses of so many small requests on one connection."""
    connection = http.client.HTTPConnection(LOOPBACK, service.port, timeout=60.0)
    for _ in range(count):
        connection.request("GET", "/livez")
        answer = connection.getresponse()
        answer.read()
        yield answer.status
    connection.close()


def test_log_on_a_full_disk_stops_nobody_and_goes_on_later(service):
    process = service.process.pid
    service.get("/livez")
    with no_room([process], service.log.stat().st_size):
        before = memory_of(process)
        assert set(statuses(service, 3000)) == {200}  # half a megabyte of lines
        assert service.post(SAMPLE, a_sample()).status_code == 200
        assert memory_of(process) - before < GROWTH
        assert service.get("/readyz").status_code == 200
    assert service.get("/livez", **{"X-Request-ID": "room-again"}).status_code == 200
    eventually(lambda: b"room-again" in service.log.read_bytes(), 5.0)


def ask(service, name, kind):
    return service.post(OPERATIONS[name].path, request_example(name), Accept=kind)


def test_everything_but_a_pdf_is_answered_where_nothing_can_be_written(service):
    kinds = [(name, kind) for name, operation in OPERATIONS.items() for kind in operation.media_types[:1]]
    with no_room([service.process.pid, *service.descendants()]):
        for name, kind in [*kinds, ("drawFlowNet", "image/png"), ("assessLayout", "text/html")]:
            answer = ask(service, name, kind)
            assert answer.status_code == 200, (name, answer.text[:500])
            assert answer.headers["content-type"].startswith(kind)
        # fonts of a PDF go through temporary files: those who run the service have to make room
        assert_problem(ask(service, "assessLayout", "application/pdf"), 500, "internal-error")
    # set at leisure on a crowded machine, it may meet the deadline
    assert ask(service, "assessLayout", "application/pdf").status_code in {200, 504}

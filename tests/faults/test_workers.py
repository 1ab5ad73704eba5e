"""Workers that are killed, run out of memory or lose their client: nobody else notices."""

import os
import signal
import threading
import time
from functools import partial

import orjson
import pytest

from support.heavy import FREED, HEAVY, QUEUED, begin
from support.http import SAMPLE, a_sample, assert_problem
from support.running import eventually

MEMORY = 3 * 2**28
"""Memory of a worker that is enough for small requests [bytes]."""


def test_computation_of_a_killed_worker_is_begun_again(service):
    lost = service.ended("lost")
    future = begin(service)
    os.kill(service.busy_worker(), signal.SIGKILL)
    response = future.result()
    assert response.status_code == 200, response.text[:500]
    assert service.ended("lost") == lost + 1
    assert service.post(SAMPLE, QUEUED).status_code == 200


def has_lost(service, count):
    return service.ended("lost") == count


def test_worker_that_is_killed_twice_is_a_problem_to_retry(service):
    future = begin(service)
    for _ in range(2):
        wanted = service.ended("lost") + 1
        os.kill(service.busy_worker(), signal.SIGKILL)
        eventually(partial(has_lost, service, wanted), 20.0)
        time.sleep(0.2)  # the next one is started and takes the work
    response = future.result()
    assert_problem(response, 503, "worker-lost")
    assert int(response.headers["retry-after"]) >= 1
    assert service.post(SAMPLE, QUEUED).status_code == 200


@pytest.mark.slow
def test_worker_out_of_memory_is_replaced(another):
    small = another(workers="1", worker_memory=str(MEMORY), max_points="6000000")
    small.wait_until_ready()
    everything = ["potential", "stream_function", "vorticity", "acceleration_x", "acceleration_y"]
    greedy = a_sample(
        at={"grid": {"x": [0, 90], "nx": 2500, "y": [10, 90], "ny": 2000}}, quantities=everything
    )
    problem = assert_problem(small.post(SAMPLE, greedy), 422, "memory-exceeded")
    assert problem["limit"] == MEMORY
    assert small.ended("memory") == 1
    assert small.post(SAMPLE, QUEUED).status_code == 200


@pytest.mark.parametrize("patience", ["1", "0"])
def test_deadline_of_the_client_frees_the_worker(service, patience):
    started = time.monotonic()
    response = service.post(SAMPLE, HEAVY, Prefer=f"wait={patience}")
    if response.status_code == 200:
        pytest.skip("this machine is fast enough for the heavy request")
    assert_problem(response, 504, "deadline-exceeded")
    assert time.monotonic() - started < float(patience) + FREED
    assert eventually(lambda: service.metric("forebay_computations_waiting_or_running") == 0, FREED) < FREED


def leave(service, body, *, share=1.0, wait=0.0):
    """Send a share of a request, wait, and cut the connection."""
    content = orjson.dumps(body)
    head = (
        f"POST {SAMPLE} HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\n"
        f"Content-Length: {len(content)}\r\n\r\n"
    )
    with service.connect() as connection:
        connection.sendall(head.encode() + content[: int(share * len(content))])
        time.sleep(wait)


def test_work_of_a_client_that_has_left_is_stopped(service):
    gone = service.ended("client")
    leave(service, HEAVY, wait=0.4)
    eventually(lambda: service.ended("client") == gone + 1, FREED)
    assert service.metric("forebay_computations_waiting_or_running") == 0
    started = time.monotonic()
    assert service.post(SAMPLE, QUEUED).status_code == 200
    # a new worker within tens of milliseconds and a fraction of a second of work; 20 s on a crowded machine
    assert time.monotonic() - started < 20.0


def test_client_that_leaves_the_queue_leaves_its_place(service):
    future = begin(service)
    leave(service, HEAVY, wait=0.3)
    eventually(lambda: service.metric("forebay_queue_length") == 0, FREED)
    assert future.result().status_code == 200


@pytest.mark.parametrize("share", [0.0, 0.5])
def test_client_that_leaves_while_it_sends_leaves_nothing(service, share):
    leave(service, HEAVY, share=share, wait=0.05)
    eventually(lambda: service.metric("forebay_requests_running") == 1, FREED)  # the one that asks
    assert service.post(SAMPLE, a_sample()).status_code == 200


def test_queue_that_overflows_refuses_work_but_nothing_else(service):
    answers: list[int] = []

    def ask():
        answers.append(service.post(SAMPLE, HEAVY).status_code)

    threads = [threading.Thread(target=ask) for _ in range(2)]  # one works, one waits: full
    for thread in threads:
        thread.start()
    eventually(lambda: service.metric("forebay_computations_waiting_or_running") == 2, 10.0)
    refused = service.post(SAMPLE, HEAVY)
    assert_problem(refused, 503, "busy")
    assert int(refused.headers["retry-after"]) >= 1
    assert service.post(SAMPLE, a_sample()).status_code == 200
    for path in ("/livez", "/v1/limits", "/metrics"):
        assert service.get(path).status_code == 200
    for thread in threads:
        thread.join()
    assert answers == [200, 200]

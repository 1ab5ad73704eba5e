"""Where work runs and what stops it: deadline, full queue, our own failures, readiness."""

import asyncio
import logging
import subprocess
import sys
from collections import Counter

import orjson
import pytest
from starlette.testclient import TestClient

from forebay.api.examples import RINGED
from forebay.api.expense import Expense, Ledger, MemoState
from forebay.api.limits import Limits
from forebay.api.media import JSON
from forebay.api.operation import Job
from forebay.api.outcome import Reply
from forebay.api.prefer import patience_in
from forebay.api.problems import Problem
from forebay.api.readiness import Readiness
from forebay.api.routers.registry import OPERATIONS
from forebay.api.work import Workshop
from forebay.app import create_app
from forebay.settings import Settings
from support.http import SAMPLE, a_sample, assert_problem, example
from support.running import eventually

LENGTHY = a_sample(at={"grid": {"x": [0, 1], "nx": 1000, "y": [10, 11], "ny": 900}})
"""Takes a good part of a second, far longer than the deadline below."""


def test_deadline_stops_the_work(ready_client):
    impatient = create_app(Settings(workers=1, deadline=0.02))
    with TestClient(impatient, raise_server_exceptions=False, headers={"Origin": "x"}) as client:
        problem = assert_problem(client.post(SAMPLE, json=LENGTHY), 504, "deadline-exceeded")
        assert problem["deadline"] == 0.02
        assert client.post(SAMPLE, json=a_sample()).status_code == 200


def test_deadline_counts_from_the_request():
    # one worker, so that the second request would have to wait for the first one's end
    async def both():
        workshop = Workshop(Limits.of(Settings(workers=1, deadline=1.0)))
        job = Job(OPERATIONS["traceWithdrawal"], orjson.dumps(example("traceWithdrawal")), JSON)
        slow = workshop.in_process(job, deadline=600.0)
        try:
            first = asyncio.create_task(slow)
            await asyncio.sleep(0)  # hands the first one over
            assert workshop.waiting == 1
            with pytest.raises(Problem) as raised:
                await workshop.in_process(job, deadline=1e-3)
            assert not first.done()
            reply = await first
            again = await workshop.in_process(job, deadline=600.0)
        finally:
            workshop.close()
        return raised.value, reply, again

    problem, reply, again = asyncio.run(both())
    assert problem.code == "deadline-exceeded"
    assert "waiting for a worker included" in problem.detail
    assert isinstance(reply, Reply)
    assert isinstance(again, Reply)


def test_full_queue_is_busy(app, ready_client, monkeypatch):
    monkeypatch.setattr(app.state.workshop, "waiting", app.state.limits.workers + app.state.limits.queue)
    response = ready_client.post(SAMPLE, json=LENGTHY)
    assert_problem(response, 503, "busy")
    assert int(response.headers["retry-after"]) >= 1
    assert ready_client.post(SAMPLE, json=a_sample()).status_code == 200


def test_our_own_failure_is_logged_once_and_says_nothing(client, monkeypatch, caplog):
    def fail(*_arguments, **_options):
        raise RuntimeError("secret inside")

    monkeypatch.setattr("forebay.api.work.perform", fail)
    with caplog.at_level(logging.ERROR, logger="forebay"):
        response = client.post(SAMPLE, json=a_sample())
    assert_problem(response, 500, "internal-error")
    assert "secret" not in response.text
    assert len(caplog.records) == 1
    assert response.headers["x-request-id"] in caplog.text
    assert "secret inside" in caplog.text


def test_not_ready_before_the_kernels_are():
    cold = create_app(Settings(workers=1))
    client = TestClient(cold, raise_server_exceptions=False, headers={"Origin": "x"})
    response = client.get("/readyz")
    assert_problem(response, 503, "not-ready")
    assert response.headers["retry-after"] == "1"
    assert client.get("/livez").status_code == 200


def test_limits_below_an_example_leave_it_out_of_the_preparation(monkeypatch, caplog):
    monkeypatch.setattr("forebay.api.readiness.rehearsals", lambda operation: [example(operation)])
    app = create_app(Settings(workers=1, max_elements=1))
    only = {"sampleField": OPERATIONS["sampleField"]}
    app.state.readiness = Readiness(app.state.workshop, only)
    with TestClient(app) as client:
        eventually(lambda: client.get("/readyz").status_code == 200, 120.0)
    assert "sampleField is not prepared" in caplog.text


def test_failed_preparation_keeps_the_service_not_ready(monkeypatch, caplog):
    monkeypatch.setattr("forebay.api.readiness.rehearsals", lambda _operation: [{}])
    broken = create_app(Settings(workers=1))
    with TestClient(broken, headers={"Origin": "x"}) as client:
        while "preparation failed" not in caplog.text:
            assert client.get("/livez").status_code == 200
        problem = assert_problem(client.get("/readyz"), 503, "not-ready")
    assert "failed" in problem["detail"]


def test_ready_once_every_example_was_answered(ready_client):
    assert ready_client.get("/readyz").json() == {"status": "pass"}


def test_metrics_count_by_route(ready_client):
    ready_client.get("/never/mind/this")
    ready_client.post(SAMPLE, json=a_sample())
    text = ready_client.get("/metrics").text
    assert 'forebay_requests_total{method="POST",route="/v1/field/sample",status="200"}' in text
    assert "/never" not in text
    assert "forebay_request_seconds_bucket" in text


def counted(client):
    """Values of /metrics by their names with labels."""
    lines = (line.rsplit(" ", 1) for line in client.get("/metrics").text.splitlines() if line[0] != "#")
    return Counter({name: float(value) for name, value in lines})


def test_metrics_count_pairs_wherever_they_are_worked_through(ready_client):
    before = counted(ready_client)
    ready_client.post(SAMPLE, json=a_sample())  # two points and one element
    ready_client.post(SAMPLE, json=LENGTHY)  # 900 000 and one, in a worker
    grown = counted(ready_client)
    grown.subtract(before)
    # checking a layout counts as some pairs for each element too
    assert 900_002 <= grown['forebay_kernel_pairs_total{operation="sampleField"}'] < 902_000


def test_metrics_count_what_memos_of_a_worker_save(ready_client):
    basin = RINGED | {"tolerance": 1.25e-3}  # no other test solves to it
    many = {"layout": basin, "at": {"grid": {"x": [10, 80], "nx": 800, "y": [20, 40], "ny": 700}}}
    growth = []
    for _ in range(2):
        before = counted(ready_client)
        assert ready_client.post(SAMPLE, json=many).status_code == 200
        grown = counted(ready_client)
        grown.subtract(before)
        growth.append(grown)
    first, again = growth
    assert first['forebay_memo_misses_total{memo="reviews"}'] == 1
    assert again['forebay_memo_misses_total{memo="reviews"}'] == 0
    assert again['forebay_memo_hits_total{memo="reviews"}'] >= 1
    assert counted(ready_client)["forebay_memo_bytes"] > 0


def test_counters_of_workers_never_fall_and_the_memory_of_ended_ones_is_free():
    ledger = Ledger()
    start = ledger.memos()["walls"]
    child = subprocess.Popen([sys.executable, "-c", "input()"], stdin=subprocess.PIPE)
    with child:
        ledger.note(Expense("a", 5, child.pid, {"walls": MemoState(3, 2, 100)}))
        ledger.note(Expense("a", 7, child.pid, {"walls": MemoState(4, 2, 100)}))
        assert ledger.pairs == {"a": 12}
        # counters that have fallen are those of another process with the same id
        ledger.note(Expense("b", 1, child.pid, {"walls": MemoState(1, 1, 50)}))
        grown = [now - then for now, then in zip(ledger.memos()["walls"], start, strict=True)]
        assert grown == [5, 3, 50]
        child.kill()
    grown = [now - then for now, then in zip(ledger.memos()["walls"], start, strict=True)]
    assert grown == [5, 3, 0]


@pytest.mark.parametrize("accept", ["text/plain", "application/openmetrics-text; version=1.0.0"])
def test_metrics_come_in_both_formats(client, accept):
    assert (
        client.get("/metrics", headers={"Accept": accept})
        .headers["content-type"]
        .startswith(accept.split(";")[0])
    )


@pytest.mark.parametrize(
    ("prefer", "patience"),
    [
        ("wait=10", 10.0),
        ("respond-async, wait=3", 3.0),
        ('Wait = "7"; x=1, handling=lenient', 7.0),
        ("wait=0", 0.0),
        ("wait=-1", None),
        ("wait=soon", None),
        ("await=5", None),
        ("", None),
        (None, None),
    ],
)
def test_patience_is_read_as_rfc_7240_writes_it(prefer, patience):
    assert patience_in(prefer) == patience


def test_client_may_wait_less_but_not_more(ready_client, app):
    response = ready_client.post(SAMPLE, json=LENGTHY, headers={"Prefer": "wait=0"})
    assert assert_problem(response, 504, "deadline-exceeded")["deadline"] == 0
    long = ready_client.post(SAMPLE, json=a_sample(), headers={"Prefer": "wait=1000000"})
    assert long.headers["preference-applied"] == f"wait={app.state.limits.deadline:.0f}"


def test_readiness_turns_when_draining_begins_and_liveness_stays():
    stopping = create_app(Settings(workers=1))
    client = TestClient(stopping, headers={"Origin": "x"})
    stopping.state.readiness.detail = None
    assert client.get("/readyz").status_code == 200
    stopping.state.readiness.drain()
    problem = assert_problem(client.get("/readyz"), 503, "not-ready")
    assert "stopping" in problem["detail"]
    assert client.get("/livez").status_code == 200


def test_metrics_show_work_and_the_reasons_for_which_workers_ended(ready_client):
    ready_client.post(SAMPLE, json=LENGTHY, headers={"Prefer": "wait=0"})
    text = ready_client.get("/metrics").text
    ended = {
        line.split()[0]: float(line.split()[1])
        for line in text.splitlines()
        if "workers_ended_total{" in line
    }
    assert ended['forebay_workers_ended_total{reason="deadline"}'] >= 1
    assert set(ended) == {
        f'forebay_workers_ended_total{{reason="{reason}"}}'
        for reason in ("deadline", "client", "memory", "lost")
    }
    for name in ("forebay_workers_busy", "forebay_queue_length", "forebay_sent_bytes_total"):
        assert name in text

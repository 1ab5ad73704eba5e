"""Ends and changes of a running service: nothing that was accepted is lost."""

import http.client
import json
import signal
import threading
import time

import pytest

from forebay.demo.child import LOOPBACK
from support.heavy import QUEUED
from support.http import SAMPLE, a_sample
from support.running import eventually

DRAIN = 5.0
"""Time between SIGTERM and the end of listening [s]."""


@pytest.mark.slow
def test_sigterm_under_load_loses_no_request(another):
    service = another(workers="1", queue="50", drain=str(DRAIN))
    service.wait_until_ready()
    lost, answered = [], []
    stopping = threading.Event()

    def ask(body):
        while not stopping.is_set():
            connection = http.client.HTTPConnection(LOOPBACK, service.port, timeout=60.0)
            try:
                connection.request("POST", SAMPLE, json.dumps(body), {"Content-Type": "application/json"})
                response = connection.getresponse()
                response.read()
                answered.append(response.status)
            except (http.client.HTTPException, OSError) as error:
                lost.append(repr(error))
            finally:
                connection.close()

    threads = [
        threading.Thread(target=ask, args=(body,)) for body in (a_sample(), a_sample(), QUEUED, QUEUED)
    ]
    for thread in threads:
        thread.start()
    time.sleep(1.0)
    service.process.send_signal(signal.SIGTERM)
    # as a proxy does that asks for readiness: from then on nothing new is sent here
    eventually(lambda: "stopping" in service.get("/readyz").json()["detail"], DRAIN)
    stopping.set()
    for thread in threads:
        thread.join()
    service.process.wait(timeout=DRAIN + 15)  # and the ten seconds that requests have to end
    assert len(answered) > 10
    assert set(answered) == {200}
    assert not lost
    assert not service.descendants()


def test_token_that_is_replaced_works_at_once_and_the_old_one_no_longer(another, tmp_path):
    file = tmp_path / "tokens"
    old, new = "the-old-token-of-the-test", "the-new-token-of-the-test"
    file.write_text(old, encoding="utf-8")
    service = another(workers="1", tokens_file=str(file))
    eventually(service.is_alive, 120.0)

    def status(token):
        return service.get("/v1/limits", Authorization=f"Bearer {token}").status_code

    assert (status(old), status(new)) == (200, 401)
    file.write_text(new, encoding="utf-8")
    # the file is looked at once a second
    eventually(lambda: status(new) == 200, 3.0)
    assert status(old) == 401
    assert old not in service.log.read_text(encoding="utf-8")


def test_address_that_others_reach_is_refused_without_tokens(another):
    service = another(host="0.0.0.0", anonymous="false")  # noqa: S104  (it must not listen)
    assert service.process.wait(timeout=60) == 2
    text = service.log.read_text(encoding="utf-8")
    assert "FOREBAY_TOKENS_FILE" in text
    assert "Traceback" not in text

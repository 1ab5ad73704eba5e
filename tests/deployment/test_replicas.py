"""Two replicas behind the real proxy: below a prefix, and nothing lost when one dies or all are restarted.

A proxy can ask another replica until an answer has begun. An answer that is cut while it is on its way, which
only a killed replica does, is asked for again by the client, as README.md tells clients to.
"""

import http.client
import json
import threading
import time
from urllib.request import Request, urlopen

import pytest

from forebay.api.examples import OPEN_WATER, request_example
from forebay.api.routers.registry import OPERATIONS
from forebay.demo.child import LOOPBACK
from support.proxy import PREFIX, Proxy, Replica, program

pytestmark = [pytest.mark.skipif(program() is None, reason="no nginx on this machine"), pytest.mark.slow]


@pytest.fixture(scope="module")
def replicas(tmp_path_factory):
    folder = tmp_path_factory.mktemp("replicas")
    pair = [Replica(folder / f"{name}.log", root_path=PREFIX) for name in ("one", "two")]
    for replica in pair:
        replica.start()
    yield pair
    for replica in pair:
        replica.stop()


@pytest.fixture
def proxy(replicas, tmp_path):
    for replica in replicas:
        if replica.process is None:
            replica.start()
    with Proxy(tmp_path, [replica.address for replica in replicas]) as running:
        yield running


class Load:
    """Clients that ask one after the other, each for the field at a place of its own, until told to stop."""

    def __init__(self, port, clients=4):
        self.port = port
        self.answered = 0
        self.cut = 0
        self.wrong = []
        self._ended = threading.Event()
        self._threads = [threading.Thread(target=self._ask, args=(i,)) for i in range(clients)]

    def __enter__(self):
        for thread in self._threads:
            thread.start()
        return self

    def __exit__(self, *_):
        self._ended.set()
        for thread in self._threads:
            thread.join()

    def _ask(self, client):
        connection = http.client.HTTPConnection(LOOPBACK, self.port, timeout=60.0)
        place = 0.0
        while not self._ended.is_set():
            place += 1.0
            body = json.dumps({"layout": OPEN_WATER, "at": {"x": [place], "y": [float(client)]}})
            try:
                connection.request("POST", f"{PREFIX}/v1/field/sample", body)
                answer = connection.getresponse()
                content = answer.read()
                if answer.status == 200 and json.loads(content)["result"]["x"] == [place]:
                    self.answered += 1
                else:
                    self.wrong.append(content[:500])
            except http.client.IncompleteRead:
                self.cut += 1
                place -= 1.0
                connection.close()
            except (OSError, http.client.HTTPException, ValueError) as error:
                self.wrong.append(repr(error))
                connection.close()
        connection.close()

    def await_more(self, count):
        """Wait until `count` more requests have been answered."""
        goal, deadline = self.answered + count, time.monotonic() + 60.0
        while self.answered < goal and not self.wrong:
            assert time.monotonic() < deadline, f"{self.answered} of {goal}"
            time.sleep(0.01)


def used(proxy):
    """Replicas that have answered, by the proxy's log."""
    lines = (proxy.folder / "access.log").read_text(encoding="utf-8").splitlines()
    return {address for line in lines for address in json.loads(line)["replica"].split(", ")}


def test_every_operation_is_reached_below_the_prefix(proxy):
    with urlopen(f"{proxy.address}/openapi.json", timeout=60.0) as answer:
        document = json.load(answer)
    # the server is relative to the document, so what it lists is below the prefix too
    assert [server["url"] for server in document["servers"]] == ["."]
    for path in (operation.path for operation in OPERATIONS.values()):
        assert path in document["paths"]
    body = json.dumps(request_example("reviewLayout")).encode()
    review = Request(f"{proxy.address}/v1/layout/review", body, {"Content-Type": "application/json"})
    with urlopen(review, timeout=60.0) as answer:
        assert json.load(answer)["provenance"]["service"] == "forebay"


def test_type_of_a_problem_answers_at_the_root_of_the_host(proxy):
    connection = http.client.HTTPConnection(LOOPBACK, proxy.port, timeout=60.0)
    connection.request("GET", f"{PREFIX}/v1/nothing")
    problem = json.loads(connection.getresponse().read())
    connection.close()
    with urlopen(proxy.root + problem["type"], timeout=60.0) as answer:
        assert json.load(answer)["title"] == problem["title"]


def test_both_replicas_answer(proxy, replicas):
    with Load(proxy.port) as load:
        load.await_more(100)
    assert not load.wrong
    assert used(proxy) == {replica.address for replica in replicas}


def test_nothing_is_lost_when_a_replica_is_killed(proxy, replicas):
    with Load(proxy.port) as load:
        load.await_more(50)
        replicas[0].kill()
        load.await_more(200)
    assert not load.wrong
    assert load.cut <= 4  # at most what each client was being sent at that moment
    assert load.answered >= 250


def test_rolling_restart_loses_nothing(proxy, replicas):
    with Load(proxy.port) as load:
        load.await_more(50)
        for replica in replicas:
            replica.stop()
            load.await_more(50)
            replica.start()
            load.await_more(50)
    assert not load.wrong
    assert load.cut == 0
    assert load.answered >= 250

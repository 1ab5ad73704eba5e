"""Requests that keep a worker busy."""

from concurrent.futures import Future, ThreadPoolExecutor

import httpx2

from support.http import SAMPLE, Json, a_sample
from support.running import Running, eventually

FREED = 5.0
"""Longest time until a worker without a client is gone [s]: 0.1 is the target, more for a crowded machine."""

HEAVY: Json = {
    "layout": {
        "depth": 4.0,
        "ambient": {"velocity": [0.3, 0.0]},
        "elements": [
            {"kind": "sink", "name": f"s{k}", "at": [10.0 * k, 3.0], "discharge": 0.1} for k in range(400)
        ],
    },
    "at": {"grid": {"x": [0, 4000], "nx": 700, "y": [10, 90], "ny": 700}},
}
"""Two hundred million pairs: a second of a worker's time, or more."""

QUEUED: Json = a_sample(at={"grid": {"x": [0, 90], "nx": 2000, "y": [10, 90], "ny": 200}})
"""Goes to a worker for the size of its answer, and takes a fraction of a second."""

LARGE: Json = a_sample(at={"grid": {"x": [0, 90], "nx": 1000, "y": [10, 90], "ny": 900}}, digits=17)
"""An answer of tens of megabytes."""


def begin(service: Running, body: Json = HEAVY, **headers: str) -> Future[httpx2.Response]:
    """Ask in a thread, and wait until a worker has the work."""
    future = ThreadPoolExecutor(1).submit(service.post, SAMPLE, body, **headers)
    eventually(lambda: service.metric("forebay_workers_busy") == 1, 10.0)
    return future

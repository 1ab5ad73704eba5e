"""Mixed requests at saturation for `LOAD_SECONDS`, by default ten minutes; prints its measures."""

import os
from statistics import median

import pytest

from forebay.demo.child import Service
from load.saturation import saturate, small_and_empty

pytestmark = pytest.mark.slow

SECONDS = float(os.environ.get("LOAD_SECONDS", "600"))

CLIENTS = 24
"""More than a small machine can serve at a time."""

LIVEZ = 0.06
"""Target of the 99th percentile of /livez while large jobs run [s], on a machine with nothing else to do."""


@pytest.mark.parametrize("workers", [1, 2])
def test_service_holds_at_saturation(workers, tmp_path, monkeypatch, capsys):
    monkeypatch.setenv("FOREBAY_WORKERS", str(workers))
    with Service(tmp_path / "service.log", port=0) as service:
        small, empty = small_and_empty(service.port, seconds=min(10.0, SECONDS / 10))
        tally = saturate(service.port, service.process.pid, seconds=SECONDS, clients=CLIENTS)
    quarter = len(tally.memory) // 4
    early, late = median(tally.memory[quarter : 2 * quarter]), median(tally.memory[-quarter:])
    with capsys.disabled():
        print(f"\n{workers} workers, {SECONDS:g} s: {dict(tally.statuses)}")
        print(f"{sum(tally.statuses.values()) / SECONDS:.0f} requests/s of the mix")
        print(f"{small:.0f}/s small ones alone, {small / empty:.2f} of the empty route")
        print(f"/livez p50 {1e3 * tally.quantile(0.5):.0f} ms, p99 {1e3 * tally.quantile(0.99):.0f} ms")
        print(f"memory {early / 2**20:.0f} MiB early, {late / 2**20:.0f} MiB late")
    assert tally.surprises == []
    assert tally.statuses[200] > 0
    # flat: no more than a tenth between the second quarter and the last, which is one worker's arrays
    assert late <= 1.1 * early
    # all clients of the test share the processors with the service: ten times the target of a free machine
    assert tally.quantile(0.99) <= 10 * LIVEZ

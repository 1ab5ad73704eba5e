"""The time of day jumps by years, forth and back: deadlines, readiness and tokens keep their time."""

import shutil
import subprocess
import time
from datetime import UTC, datetime, timedelta
from pathlib import Path

import orjson
import pytest

from support.heavy import FREED, QUEUED, begin
from support.http import SAMPLE, assert_problem
from support.running import eventually
from support.tree import PACKAGE

COMPILER = shutil.which("cc")

YEARS = 5 * 365 * 86400
"""A jump [s]; of a deadline that is counted in the time of day, either way is the end."""

WATCHED = 6.0
"""More than the time between two questions whether a worker answers [s]."""


@pytest.fixture
def clocked(another, tmp_path):
    """A ready service, and how to put its clocks off by so many seconds."""
    if COMPILER is None:
        pytest.skip("no C compiler on this machine")
    library, offset = tmp_path / "jumping_clock.so", tmp_path / "offset"
    source = Path(__file__).with_name("jumping_clock.c")
    subprocess.run([COMPILER, "-shared", "-fPIC", "-O1", "-o", library, source, "-ldl"], check=True)
    offset.write_bytes(bytes(8))
    environment = {"LD_PRELOAD": str(library), "CLOCK_OFFSET": str(offset)}
    service = another(environment, workers="1", queue="1", deadline="60")
    service.wait_until_ready()

    def put_off(seconds):
        with offset.open("r+b") as file:  # the same file, which the service has before its eyes
            file.write(seconds.to_bytes(8, "little", signed=True))

    return service, put_off


def time_of_day(service):
    """What the service takes for the time of day: that of its last line in the log."""
    eventually(lambda: service.log.read_bytes().endswith(b"\n"), 5.0)
    last = orjson.loads(service.log.read_bytes().splitlines()[-1])
    return datetime.fromisoformat(last["time"])


@pytest.mark.parametrize("direction", [1, -1])
def test_jump_ends_no_work_and_delays_no_end(clocked, direction):
    service, put_off = clocked
    future = begin(service)
    put_off(direction * YEARS)
    assert future.result().status_code == 200
    there = datetime.now(UTC) + timedelta(seconds=direction * YEARS)
    assert abs(time_of_day(service) - there) < timedelta(minutes=5)  # it has jumped indeed

    waiting = begin(service, Prefer="wait=1")
    put_off(0)
    started = time.monotonic()
    if waiting.result().status_code != 200:  # a fast machine is done within the second
        assert_problem(waiting.result(), 504, "deadline-exceeded")
    assert time.monotonic() - started < 1.0 + FREED

    ends = time.monotonic() + WATCHED
    while time.monotonic() < ends:
        assert service.get("/readyz").status_code == 200
        time.sleep(0.2)
    assert service.post(SAMPLE, QUEUED).status_code == 200


@pytest.mark.parametrize("path", sorted((PACKAGE / "api").rglob("*.py")), ids=lambda path: path.name)
def test_no_time_is_taken_from_a_clock_that_can_jump(path):
    # deadlines, drains and the age of tokens are counted on monotonic clocks; the log and the
    # date on a calculation sheet alone tell the time
    text = path.read_text(encoding="utf-8")
    assert "time.time(" not in text
    assert ("datetime.now" not in text and "utcnow" not in text) or path.name in {
        "request_log.py",
        "sheet.py",
    }

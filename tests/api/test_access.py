"""Bearer tokens: who may compute, how much at a time, and tokens that change while the service runs."""

import asyncio
import os

import pytest
from starlette.testclient import TestClient

from forebay.api.access import LOOK_AGAIN, Access, Tokens
from forebay.api.problems import Problem
from forebay.app import create_app
from forebay.settings import Settings
from support.http import SAMPLE, a_sample, assert_problem

FIRST, SECOND = "first-token-of-the-test", "second-token-of-the-test"


def bearer(token):
    return {"Authorization": f"Bearer {token}"}


@pytest.fixture(scope="module")
def guarded():
    return TestClient(create_app(Settings(workers=1, tokens=(FIRST, SECOND))), headers={"Origin": "x"})


@pytest.mark.parametrize("token", [FIRST, SECOND])
def test_each_token_lets_in(guarded, token):
    assert guarded.post(SAMPLE, json=a_sample(), headers=bearer(token)).status_code == 200
    assert guarded.get("/v1/limits", headers=bearer(token)).status_code == 200


@pytest.mark.parametrize(
    "headers",
    [
        {},
        bearer("another-token-altogether"),
        bearer(FIRST[:-1]),
        {"Authorization": f"Basic {FIRST}"},
        bearer(""),
    ],
)
@pytest.mark.parametrize("path", [SAMPLE, "/v1/limits", "/metrics"])
def test_others_are_asked_for_one(guarded, headers, path):
    response = guarded.request("POST" if path == SAMPLE else "GET", path, headers=headers)
    assert_problem(response, 401, "token-missing")
    assert response.headers["www-authenticate"].startswith("Bearer")
    assert FIRST not in response.text


@pytest.mark.parametrize("path", ["/livez", "/problems/token-missing", "/docs", "/openapi.json", "/"])
def test_what_computes_nothing_is_open(guarded, path):
    assert guarded.get(path, follow_redirects=False).status_code == 200


def test_preflight_needs_no_token(guarded):
    response = guarded.options(SAMPLE, headers={"Access-Control-Request-Method": "POST"})
    assert response.status_code == 204


def test_file_is_read_again_when_it_changes(tmp_path):
    file, now = tmp_path / "tokens", [0.0]
    file.write_text(f"# those in force\n{FIRST}\n", encoding="utf-8")
    tokens = Tokens((), file, clock=lambda: now[0])
    assert tokens.holder(f"Bearer {FIRST}")
    file.write_text(f"{SECOND}\n", encoding="utf-8")
    os.utime(file, ns=(1, 1))  # a clock that jumped back makes no difference
    assert tokens.holder(f"Bearer {FIRST}")  # not looked at yet
    now[0] += LOOK_AGAIN
    assert tokens.holder(f"Bearer {FIRST}") is None
    assert tokens.holder(f"Bearer {SECOND}")
    file.unlink()
    now[0] += LOOK_AGAIN
    assert tokens.holder(f"Bearer {SECOND}")  # a file that is being replaced locks nobody out


def test_empty_file_lets_nobody_in(tmp_path):
    (tmp_path / "tokens").touch()
    tokens = Tokens((), tmp_path / "tokens")
    assert tokens.is_needed
    assert tokens.holder("Bearer ") is None


def test_one_token_has_so_many_computations_at_a_time():
    async def both():
        released = asyncio.Event()

        async def slow(scope, receive, send):
            await released.wait()

        access = Access(slow, Tokens((FIRST, SECOND), None), 1)

        def ask(token):
            headers = [(b"authorization", f"Bearer {token}".encode())]
            scope = {"type": "http", "path": SAMPLE, "method": "POST", "headers": headers}
            return access(scope, None, None)  # type: ignore[arg-type]

        first = asyncio.create_task(ask(FIRST))
        await asyncio.sleep(0)
        with pytest.raises(Problem) as refused:
            await ask(FIRST)
        other = asyncio.create_task(ask(SECOND))
        await asyncio.sleep(0)
        released.set()
        await asyncio.gather(first, other)
        await ask(FIRST)
        return refused.value

    problem = asyncio.run(both())
    assert problem.code == "too-many-requests"
    assert int(problem.headers["Retry-After"]) >= 1

"""Assess a file with the service's own application, in this process and without a network."""

import asyncio
import json
from collections.abc import Mapping, MutableMapping, Sequence
from pathlib import Path
from typing import Any

from forebay.api.media import HTML, JSON, PDF
from forebay.app import Application, create_app
from forebay.report import engineers_table
from forebay.settings import Settings

ROUTE = "/v1/assessment"

DEADLINE = 3600.0
"""Longest computation [s]: nobody else waits here, and Ctrl-C is at hand."""


class FileError(Exception):
    """A file cannot be assessed; the text says why, line by line."""


SHEET_TYPES = {".pdf": PDF, ".html": HTML}
"""Media type of a calculation sheet by the end of its file's name."""


def assess_file(path: Path, sheet: Path | None = None) -> str:
    """Engineer's table of the layout or assessment request in a file.

    With `sheet` the calculation sheet is written there too, as PDF or HTML by the end of its name.

    Raises
    ------
    FileError : one of the files cannot be used, or the request in it is wrong
    """
    request = as_request(read_json(path))
    media_types = [JSON] if sheet is None else [JSON, sheet_type(sheet)]
    answers = asyncio.run(post(ROUTE, request, media_types))
    for status, content in answers:
        if status != 200:
            raise FileError(problem_text(path, json.loads(content)))
    if sheet is not None:
        write_sheet(sheet, answers[1][1])
    return engineers_table(request, json.loads(answers[0][1]))


def sheet_type(sheet: Path) -> str:
    """Media type by which a file is written."""
    if sheet.suffix.lower() not in SHEET_TYPES:
        raise FileError(f"{sheet}: a sheet is written to a file that ends in {' or '.join(SHEET_TYPES)}")
    return SHEET_TYPES[sheet.suffix.lower()]


def write_sheet(sheet: Path, content: bytes) -> None:
    """Write a sheet to its file."""
    try:
        sheet.write_bytes(content)
    except OSError as error:
        raise FileError(f"{sheet}: {error.strerror}") from error


def read_json(path: Path) -> dict[str, Any]:
    """Content of a file that must hold one JSON object."""
    try:
        content = json.loads(path.read_text(encoding="utf-8"))
    except OSError as error:
        raise FileError(f"{path}: {error.strerror}") from error
    except ValueError as error:
        raise FileError(f"{path}: not JSON: {error}") from error
    if not isinstance(content, dict):
        raise FileError(f"{path}: a JSON object was expected")
    return content


def as_request(content: dict[str, Any]) -> dict[str, Any]:
    """Body of an assessment: a bare layout, known by its `depth`, is wrapped."""
    return {"layout": content} if "depth" in content and "layout" not in content else content


def problem_text(path: Path, problem: Mapping[str, Any]) -> str:
    """Problem details as lines: the title, then one line for each place at fault."""
    lines = [f"{path}: {problem['title']}"]
    errors = problem.get("errors") or [{"pointer": "", "detail": problem.get("detail", "")}]
    lines += [f"  {error.get('pointer', '')}: {error['detail']}" for error in errors]
    return "\n".join(lines)


async def post(route: str, body: Mapping[str, Any], media_types: Sequence[str]) -> list[tuple[int, bytes]]:
    """Status and answer of the application to a POST in each media type, handed over without a socket.

    The application is not started: nobody asks whether it is ready, so that nothing is rehearsed.
    """
    app = create_app(Settings.from_environment().model_copy(update={"deadline": DEADLINE}))
    payload = json.dumps(body).encode()
    try:
        return [await answer_of(app, route, payload, media_type) for media_type in media_types]
    finally:
        app.state.workshop.close()


async def answer_of(app: Application, route: str, payload: bytes, accept: str) -> tuple[int, bytes]:
    """Status and answer of an application to one POST."""
    sent: list[MutableMapping[str, Any]] = []
    waiting: list[MutableMapping[str, Any]] = [{"type": "http.request", "body": payload, "more_body": False}]

    async def receive() -> MutableMapping[str, Any]:
        if waiting:
            return waiting.pop()
        await asyncio.Event().wait()  # the client stays connected for as long as it takes
        raise AssertionError

    async def send(message: MutableMapping[str, Any]) -> None:
        sent.append(message)

    await app(scope(route, len(payload), accept), receive, send)
    content = b"".join(message.get("body", b"") for message in sent)
    return int(sent[0]["status"]), content


def scope(route: str, length: int, accept: str) -> dict[str, Any]:
    """What the application learns of a request before its body."""
    headers = [
        (b"host", b"localhost"),
        (b"content-type", b"application/json"),
        (b"content-length", str(length).encode()),
        (b"accept", accept.encode()),
    ]
    return {
        "type": "http",
        "asgi": {"version": "3.0"},
        "http_version": "1.1",
        "method": "POST",
        "scheme": "http",
        "path": route,
        "raw_path": route.encode(),
        "query_string": b"",
        "root_path": "",
        "headers": headers,
        "client": ("127.0.0.1", 0),
        "server": ("127.0.0.1", 0),
    }

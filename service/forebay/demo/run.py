"""Start the service on loopback, assess the invented site over HTTP, draw it, say where everything is."""

import json
from contextlib import suppress
from pathlib import Path
from typing import Any
from urllib.error import HTTPError
from urllib.request import Request, urlopen

from forebay.api.examples import request_example
from forebay.demo.child import Service
from forebay.report import engineers_table
from forebay.settings import Settings

WAIT = 900.0
"""Longest wait for an answer [s]: the first one may have to compile, on a machine that is busy."""

INTRODUCTION = """\
The site is invented. In a dry summer a power station on the right bank of a river draws its cooling water
through screens along the bank and returns it 30 m downstream. A town draws further down, below a
bridge; on the far bank a farm draws below a treatment works. Whose water does each of them get?"""


def run_demo(output: Path, *, keep: bool) -> int:
    """Whole demonstration; the value is the exit code. The picture and the service's log go to `output`."""
    output.mkdir(parents=True, exist_ok=True)
    print("Starting the service; the first start on a machine compiles for some minutes.", flush=True)
    with Service(output / "service.log", Settings.from_environment().port) as service:
        print(f"Service started on {service.address}\n\n{INTRODUCTION}\n", flush=True)
        request = request_example("assessLayout")
        answer = json.loads(post(f"{service.address}/v1/assessment", request, accept="application/json"))
        print(engineers_table(request, answer))
        picture = output / "flow-net.svg"
        body = {"layout": request["layout"]}
        picture.write_bytes(post(f"{service.address}/v1/chart/flow-net", body, accept="image/svg+xml"))
        sheets = write_sheets(output, f"{service.address}/v1/assessment", request)
        print(f"\nPicture: {picture}\nSheet:   {sheets}\nAnswer:  {write_answer(output, answer)}")
        if keep:
            stay(service)
        else:
            print("Service: stopped; `forebay demo --keep` leaves it up, with its docs at /docs")
    return 0


def write_sheets(output: Path, address: str, request: dict[str, Any]) -> str:
    """Paths of the files that now hold the calculation sheet, as HTML and, where this machine can, as PDF."""
    page = output / "calculation-sheet.html"
    page.write_bytes(post(address, request, accept="text/html"))
    paper = output / "calculation-sheet.pdf"
    try:
        paper.write_bytes(post(address, request, accept="application/pdf"))
    except HTTPError as error:
        return f"{page} (no PDF: {json.load(error)['detail']})"
    return f"{paper}, {page}"


def stay(service: Service) -> None:
    """Say where the service is, and return when it ends or the user interrupts."""
    with suppress(KeyboardInterrupt):
        print(f"Service: {service.address}\nDocs:    {service.address}/docs\nCtrl-C stops it.", flush=True)
        service.process.wait()


def post(address: str, body: dict[str, Any], *, accept: str) -> bytes:
    """Answer to a POST over HTTP."""
    headers = {"Content-Type": "application/json", "Accept": accept}
    request = Request(address, data=json.dumps(body).encode(), headers=headers, method="POST")
    with urlopen(request, timeout=WAIT) as response:
        content: bytes = response.read()
    return content


def write_answer(output: Path, answer: dict[str, Any]) -> Path:
    """Path of the file that now holds the whole answer."""
    path = output / "assessment.json"
    path.write_text(json.dumps(answer, indent=2), encoding="utf-8")
    return path

"""Every example of the README works as pasted, from the repository's root."""

import json
import re
import subprocess
import sys

import pytest

from support.readme import ADDRESS, blocks, blocks_under, curl_commands
from support.tree import ROOT

ROUTES = (
    "/v1/assessment",
    "/v1/chart/flow-net",
    "/v1/field/sample",
    "/v1/stagnation/search",
    "/v1/contour/integrate",
    "/v1/withdrawal/trace",
    "/v1/screen/check",
    "/v1/submergence/check",
    "/v1/stress/tensor",
    "/v1/criteria",
    "/v1/warnings",
    "/v1/limits",
    "/v1/water",
    "/livez",
    "/readyz",
    "/metrics",
    "/openapi.json",
)


MAGIC = {"flow-net.png": b"\x89PNG", "calculation-sheet.pdf": b"%PDF-"}
"""First bytes of the files that examples write."""

FILED = "From an empty file to a filed sheet"


@pytest.fixture
def folder(tmp_path):
    """Folder that looks like the repository's root to a command, and may be written to."""
    (tmp_path / "openapi").symlink_to(ROOT / "openapi")
    return tmp_path


def route(command):
    (path,) = re.findall(rf"{ADDRESS}(/[^\s'?]*)", command)
    return path


@pytest.mark.parametrize("command", curl_commands(), ids=route)
def test_curl_example_works(command, service, folder):
    pasted = command.replace(ADDRESS, service.address).replace("curl ", "curl --fail-with-body ", 1)
    outcome = subprocess.run(["bash", "-c", pasted], cwd=folder, capture_output=True, text=True, check=False)
    assert outcome.returncode == 0, outcome.stdout + outcome.stderr
    written = [path for path in folder.iterdir() if path.name in MAGIC]
    if written:
        assert all(path.read_bytes().startswith(MAGIC[path.name]) for path in written)
    elif route(command) != "/metrics":
        assert json.loads(outcome.stdout)
    else:
        assert "# HELP" in outcome.stdout


def test_each_route_has_a_curl_example():
    shown = {route(command) for command in curl_commands()}
    assert shown >= set(ROUTES)


def test_curl_examples_name_only_routes_of_the_contract():
    paths = json.loads((ROOT / "openapi" / "openapi.json").read_text(encoding="utf-8"))["paths"]
    assert {route(command) for command in curl_commands()} <= {*paths, "/openapi.json"}


def test_python_example_works(service, folder):
    (code,) = blocks("python")
    script = code.replace(ADDRESS, service.address)
    command = [sys.executable, "-W", "error", "-c", script]
    outcome = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)
    assert outcome.returncode == 0, outcome.stderr
    assert len(outcome.stdout.splitlines()) == 6


def test_an_empty_file_becomes_a_filed_sheet(folder):
    outcomes = []
    for block in blocks_under(FILED, "sh"):
        pasted = block.replace(".venv/bin/forebay", f"{sys.executable} -m forebay")
        outcomes.append(
            subprocess.run(["bash", "-c", pasted], cwd=folder, capture_output=True, text=True, check=False)
        )
    for outcome in outcomes:
        assert outcome.returncode == 0, outcome.stderr
        assert "new screens" in outcome.stdout
    assert "bed-friction-unknown" in outcomes[0].stdout
    assert "-unknown" not in outcomes[-1].stdout  # the second file gives what the first one's notes ask for
    assert "road tanker" in outcomes[-1].stdout
    assert (folder / "calculation-sheet.pdf").read_bytes().startswith(MAGIC["calculation-sheet.pdf"])


def test_assess_takes_the_layout_of_the_readme(folder):
    layout = next(block for block in blocks("json") if "town intake" in block)
    (folder / "layout.json").write_text(layout, encoding="utf-8")
    command = [sys.executable, "-m", "forebay", "assess", "layout.json"]
    outcome = subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)
    assert outcome.returncode == 0, outcome.stderr
    assert "town intake" in outcome.stdout

"""The examples of the page `how to call it` run as pasted, whatever language they are in."""

import csv
import io
import json
import re
import shutil
import subprocess
import sys
from html import unescape
from urllib.request import Request, urlopen

import pytest

ADDRESS = "http://127.0.0.1:8620"
"""Address that the examples name; in a browser the page puts its own there."""


@pytest.fixture(scope="module")
def examples(service):
    """Each example by its language, with the address of the running service."""
    with urlopen(f"{service.address}/docs/how-to-call", timeout=60.0) as answer:
        page = answer.read().decode()
    found = re.findall(r'<code class="([a-z-]+)">(.*?)</code>', page, re.DOTALL)
    return {language: unescape(text).replace(ADDRESS, service.address) for language, text in found}


def run(*command):
    outcome = subprocess.run(command, capture_output=True, text=True, check=False)
    assert outcome.returncode == 0, outcome.stdout + outcome.stderr
    return outcome.stdout


def test_page_has_all_languages(examples):
    assert set(examples) == {"curl", "python", "javascript", "r", "power-query", "cell"}


def test_curl(examples):
    answer = json.loads(run("bash", "-c", examples["curl"].replace("curl ", "curl --fail-with-body ", 1)))
    assert len(answer["result"]["u"]) == 2


def test_python(examples):
    first, *_ = run(sys.executable, "-W", "error", "-c", examples["python"]).splitlines()
    assert first.endswith("m/s")


@pytest.mark.skipif(shutil.which("node") is None, reason="no Node on this machine")
def test_javascript(examples):
    assert run("node", "--input-type=module", "--eval", examples["javascript"]).strip().endswith("m/s")


@pytest.mark.skipif(shutil.which("Rscript") is None, reason="no R on this machine")
def test_r(examples):
    header, *rows = run("Rscript", "--vanilla", "-e", examples["r"]).splitlines()
    assert {"x", "y", "u", "v"} <= set(header.split())
    assert len(rows) == 2


def test_spreadsheet_query_sends_what_the_service_takes(examples, service):
    # no spreadsheet here: its text of the body, its address and its headers are sent as it would send them
    query = examples["power-query"]
    (body,) = re.findall(r'Body = "(.*?)",\n    Answer', query, re.DOTALL)
    (address,) = re.findall(r'Web\.Contents\("(.*?)"', query)
    (accept,) = re.findall(r'Accept = "(.*?)"', query)
    (kind,) = re.findall(r'#"Content-Type" = "(.*?)"', query)
    request = Request(address, body.replace('""', '"').encode(), {"Accept": accept, "Content-Type": kind})
    with urlopen(request, timeout=60.0) as answer:
        rows = list(csv.DictReader(io.StringIO(answer.read().decode("utf-8"))))
    assert [float(row["x"]) for row in rows] == [-5.0, 5.0]


def test_spreadsheet_cell_reads_a_catalogue(examples):
    (address,) = re.findall(r'WEBSERVICE\("(.*?)"\)', examples["cell"])
    with urlopen(address, timeout=60.0) as answer:
        assert json.load(answer)["result"]["density"] > 990.0

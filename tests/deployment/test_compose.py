"""The compose file is valid and gives the service nothing it does not need."""

import re
import subprocess
import sys

import pytest
import yaml

from support.tree import ROOT

COMPOSE = ROOT / "docker-compose.yml"
DOCKERFILE = (ROOT / "service" / "Dockerfile").read_text(encoding="utf-8")
DOCUMENT = yaml.safe_load(COMPOSE.read_text(encoding="utf-8"))
SERVICE = DOCUMENT["services"]["forebay"]


def check_schema(path):
    command = [sys.executable, "-m", "check_jsonschema", "--builtin-schema", "vendor.compose-spec", str(path)]
    return subprocess.run(command, capture_output=True, text=True, check=False)


def test_compose_file_meets_the_compose_schema():
    outcome = check_schema(COMPOSE)
    assert outcome.returncode == 0, outcome.stdout + outcome.stderr


def test_the_schema_check_can_fail(tmp_path):
    wrong = tmp_path / "docker-compose.yml"
    wrong.write_text("services: {forebay: {imagge: forebay}}\n", encoding="utf-8")
    assert check_schema(wrong).returncode == 1


def test_service_is_confined():
    assert SERVICE["read_only"] is True
    assert SERVICE["cap_drop"] == ["ALL"]
    assert SERVICE["security_opt"] == ["no-new-privileges:true"]
    assert "privileged" not in SERVICE
    assert {"mem_limit", "cpus", "pids_limit"} <= set(SERVICE)


def test_service_is_published_on_loopback_only():
    assert all(port.startswith("127.0.0.1:") for port in SERVICE["ports"])


def test_health_is_readiness():
    assert "/readyz" in " ".join(SERVICE["healthcheck"]["test"])
    assert "/readyz" in DOCKERFILE


def test_image_runs_as_an_ordinary_user():
    assert re.findall(r"^USER (.*)$", DOCKERFILE, re.MULTILINE) == ["10001"]


@pytest.mark.parametrize(
    "name", ["NUMBA_CACHE_DIR", "MPLCONFIGDIR", "MALLOC_MMAP_THRESHOLD_", "MALLOC_TRIM_THRESHOLD_"]
)
def test_image_sets(name):
    assert re.search(rf"^\s*(?:ENV )?{name}=\S+", DOCKERFILE, re.MULTILINE)


def test_what_is_written_lies_on_writable_places():
    writable = {
        mount.split(":")[0]
        for mount in [*SERVICE["tmpfs"], *(v.split(":", 1)[1] for v in SERVICE["volumes"])]
    }
    for name in ("NUMBA_CACHE_DIR", "MPLCONFIGDIR"):
        (place,) = re.findall(rf"{name}=(\S+)", DOCKERFILE)
        assert any(place.startswith(f"{mount}/") for mount in writable)


def test_image_has_the_version_of_the_project():
    project = (ROOT / "pyproject.toml").read_text(encoding="utf-8")
    (version,) = re.findall(r'^version = "(.*)"$', project, re.MULTILINE)
    assert SERVICE["image"] == f"forebay:{version}"

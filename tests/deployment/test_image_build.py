"""The image built from its recipe and run, without a container engine and without an image registry."""

import json
import os
import shutil
import subprocess
from pathlib import Path

import pytest

from support.tree import ROOT

PROGRAMS = ("buildah", "debootstrap")

pytestmark = [
    pytest.mark.slow,
    pytest.mark.skipif(
        os.geteuid() != 0 or not all(shutil.which(name) for name in PROGRAMS),
        reason="the image is built by root with buildah and debootstrap",
    ),
]

ASK = """
import os, pathlib, forebay.demo.child as child
os.environ["FOREBAY_WORKERS"] = "1"
kernels = pathlib.Path(os.environ["NUMBA_CACHE_DIR"])
prepared = len(list(kernels.rglob("*.nbc")))
with child.Service(pathlib.Path("/tmp/service.log"), 0) as service:
    state = child.readiness(service.address)
print(os.getuid(), state, prepared, len(list(kernels.rglob("*.nbc"))))
"""
"""Run in the container: who runs there, whether the service becomes ready, kernels before and after."""


@pytest.fixture(scope="module")
def built(tmp_path_factory):
    """Folder of the build with its logs, and what the container printed."""
    folder = tmp_path_factory.mktemp("image")
    context = folder / "context"
    context.mkdir()
    archive = subprocess.run(["git", "archive", "HEAD"], cwd=ROOT, capture_output=True, check=True)
    subprocess.run(["tar", "-x", "-C", str(context)], input=archive.stdout, check=True)
    script = Path(__file__).with_name("build_without_engine.sh")
    command = ["bash", str(script), str(folder), str(context), "start", "python", "-c", ASK]
    outcome = subprocess.run(command, capture_output=True, text=True, check=False)
    log = folder / "build.log"
    told = log.read_text(encoding="utf-8")[-3000:] if log.exists() else ""
    assert outcome.returncode == 0, outcome.stderr[-3000:] + told
    return folder, outcome.stdout


def test_service_runs_as_an_ordinary_user_and_becomes_ready(built):
    user, ready, prepared, kernels = built[1].split()
    assert (user, ready) == ("10001", "ready")
    # the image holds every kernel that readiness asks for, so that none is compiled at the start
    assert int(prepared) > 50
    assert kernels == prepared


def test_image_says_how_it_is_run(built):
    config = json.loads((built[0] / "image.json").read_text(encoding="utf-8"))["Docker"]["config"]
    assert config["User"] == "10001"
    assert config["Entrypoint"] == ["start"]
    assert config["Cmd"][:2] == ["forebay", "serve"]
    assert config["StopSignal"] == "SIGTERM"
    assert "/readyz" in " ".join(config["Healthcheck"]["Test"])

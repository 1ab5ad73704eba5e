"""Node programs of tests/clients, which `npm ci` in that folder installs."""

import os
import shutil
import subprocess
from pathlib import Path

import pytest

from support.tree import ROOT

CLIENTS = ROOT / "tests" / "clients"
MODULES = CLIENTS / "node_modules"

needs_node = pytest.mark.skipif(
    shutil.which("node") is None or not MODULES.is_dir(),
    reason="no Node modules: run npm ci in tests/clients",
)


def run_node(program: str, *arguments: str, folder: Path) -> str:
    """What a program prints that ends well and without a warning; it asks nobody for updates."""
    path = MODULES / ".bin" / program
    command = ["node", *arguments] if program == "node" else [str(path), *arguments]
    quiet = {**os.environ, "REDOCLY_TELEMETRY": "off", "REDOCLY_SUPPRESS_UPDATE_NOTICE": "true", "CI": "true"}
    outcome = subprocess.run(command, cwd=folder, env=quiet, capture_output=True, text=True, check=False)
    said = outcome.stdout[-4000:] + outcome.stderr[-4000:]
    assert outcome.returncode == 0, said
    assert "⚠" not in said, said
    return outcome.stdout

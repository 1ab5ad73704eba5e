"""What pyproject, package, contract and README say of each other."""

import json
import tomllib

import pytest

import forebay
from support.tree import ROOT, relative

RUN = "python3 -m venv .venv && .venv/bin/pip install . && .venv/bin/forebay demo"
TEST = "python3 -m venv .venv && .venv/bin/pip install -e '.[test]' && .venv/bin/pytest"

TOP_LEVEL = {
    "README.md",
    "DEVELOPERS.md",
    "LICENSE",
    "pyproject.toml",
    "docker-compose.yml",
    "service",
    "openapi",
    "tests",
}

PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))


def test_package_has_the_version_of_the_project():
    assert forebay.__version__ == PROJECT["project"]["version"]


def test_contract_has_the_version_of_the_project():
    document = json.loads((ROOT / "openapi" / "openapi.json").read_text(encoding="utf-8"))
    assert document["info"]["version"] == PROJECT["project"]["version"]


def test_demo_layout_is_the_example_of_the_contract():
    packaged = (ROOT / "service" / "forebay" / "demo" / "layout.json").read_text(encoding="utf-8")
    assert packaged == (ROOT / "openapi" / "examples" / "layout.json").read_text(encoding="utf-8")


@pytest.mark.parametrize("command", [RUN, TEST], ids=["run", "test"])
def test_readme_gives_the_command(command):
    lines = (ROOT / "README.md").read_text(encoding="utf-8").splitlines()
    assert command in [line.strip() for line in lines]


def test_top_level_holds_only_what_it_should():
    made = {"build", "dist", "demo-output", "htmlcov"}
    there = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    assert there - made == TOP_LEVEL


@pytest.mark.parametrize("path", sorted((ROOT / "openapi" / "examples").glob("*.json")), ids=relative)
def test_example_is_json(path):
    assert json.loads(path.read_text(encoding="utf-8"))


def test_each_command_of_the_project_exists():
    assert PROJECT["project"]["scripts"] == {"forebay": "forebay.cli:main"}

"""The image's recipe: nothing unpinned, an ordinary user, written places known, ready when it says so."""

import re
import tomllib

import pytest
import yaml
from packaging.requirements import Requirement
from packaging.utils import canonicalize_name

from support.tree import ROOT

RECIPE = (ROOT / "service" / "Dockerfile").read_text(encoding="utf-8")
PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
COMPOSE = yaml.safe_load((ROOT / "docker-compose.yml").read_text(encoding="utf-8"))

ENTRY = re.compile(r"^([A-Za-z0-9._-]+)==(\S+)((?: \\\n    --hash=sha256:[0-9a-f]{64})+)$", re.MULTILINE)
"""A pinned requirement with its hashes."""


def pinned(name):
    """Versions by project, of a file in which every line belongs to an entry with hashes."""
    text = (ROOT / "service" / name).read_text(encoding="utf-8")
    entries = ENTRY.findall(text)
    assert ENTRY.sub("", text).strip() == ""
    return {canonicalize_name(project): version for project, version, _ in entries}


@pytest.mark.parametrize(
    ("file", "wanted"),
    [
        ("requirements.txt", PROJECT["project"]["dependencies"]),
        ("requirements.txt", PROJECT["project"]["optional-dependencies"]["arrow"]),
        ("requirements-build.txt", PROJECT["build-system"]["requires"]),
    ],
)
def test_pins_meet_the_project(file, wanted):
    versions = pinned(file)
    for text in wanted:
        requirement = Requirement(text)
        name = canonicalize_name(requirement.name)
        assert name in versions, "run service/deploy/pin.sh"
        assert requirement.specifier.contains(versions[name])


def test_image_installs_only_what_is_pinned():
    installs = re.findall(r"pip install (.*?)(?: \\\n    &&|\n[A-Z]|$)", RECIPE, re.DOTALL)
    assert len(installs) == 3
    for install in installs:
        assert "--require-hashes" in install or ("--no-deps" in install and "--no-index" in install)


def test_both_stages_have_one_base():
    assert len(set(re.findall(r"^FROM (\S+)", RECIPE, re.MULTILINE))) == 1


def test_image_runs_as_an_ordinary_user():
    assert re.findall(r"^USER (.*)$", RECIPE, re.MULTILINE) == ["10001"]
    assert RECIPE.index("USER 10001") > RECIPE.rindex("\nRUN ")


def test_health_is_readiness():
    assert "/readyz" in RECIPE.split("HEALTHCHECK", 1)[1]
    assert "/readyz" in " ".join(COMPOSE["services"]["forebay-1"]["healthcheck"]["test"])


def setting(name):
    (value,) = re.findall(rf"^\s*(?:ENV )?{name}=(\S+)", RECIPE, re.MULTILINE)
    return value


@pytest.mark.parametrize("name", ["MALLOC_MMAP_THRESHOLD_", "MALLOC_TRIM_THRESHOLD_", "MALLOC_ARENA_MAX"])
def test_image_gives_memory_back(name):
    assert setting(name)


@pytest.mark.parametrize("name", ["NUMBA_CACHE_DIR", "MPLCONFIGDIR", "XDG_CACHE_HOME"])
def test_what_is_written_lies_on_a_writable_place(name):
    cache = setting("CACHE")
    assert f"{setting(name)}/".startswith(f"{cache}/")
    assert any(mount.startswith(f"{cache}:") for mount in COMPOSE["services"]["forebay-1"]["tmpfs"])


@pytest.mark.parametrize("path", re.findall(r"^COPY (?!--from)(.*) \S+$", RECIPE, re.MULTILINE))
def test_what_is_copied_is_in_the_context(path):
    allowed = [
        line.removeprefix("!")
        for line in (ROOT / ".dockerignore").read_text(encoding="utf-8").splitlines()
        if line.startswith("!")
    ]
    for part in path.split():
        assert part in allowed
        assert (ROOT / part).exists()


def test_secrets_are_not_in_the_context():
    ignored = (ROOT / ".dockerignore").read_text(encoding="utf-8").splitlines()
    assert ignored[0] == "*"
    assert not any("tokens" in line for line in ignored)

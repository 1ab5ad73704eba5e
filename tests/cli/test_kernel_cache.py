"""Kernels are compiled wherever there is room, and the start says so where there is none."""

import os
import shutil
import subprocess
import sys
import tempfile

import pytest

from forebay.kernel_cache import VARIABLE, settle_kernel_cache
from forebay.settings import SettingsError
from support.tree import PACKAGE

COMPILED = """\
import sys
{settle}
from numba import njit
sys.path.insert(0, sys.argv[1])
from kernels import doubled
assert doubled(2.0) == 4.0
"""
"""Compiles a kernel that is to be kept beside its source."""

KERNEL = """\
from numba import njit

@njit(cache=True)
def doubled(x):
    return 2.0 * x
"""

SETTLE = """\
from pathlib import Path
from forebay.kernel_cache import settle_kernel_cache
print(settle_kernel_cache(sources=Path(sys.argv[1])))
"""


NO_ROOM = """\
import resource
resource.setrlimit(resource.RLIMIT_FSIZE, (0, resource.RLIM_INFINITY))
"""
"""As on a full disk: files can be made, and nothing written into them."""

REGARDLESS = """\
from forebay.kernel_cache import pass_over_full_disks
pass_over_full_disks()
pass_over_full_disks()
"""


@pytest.fixture
def sealed(tmp_path):
    """A folder of sources beside which nothing can be kept, whoever runs this: its cache is a file."""
    folder = tmp_path / "sources"
    folder.mkdir()
    (folder / "kernels.py").write_text(KERNEL, encoding="utf-8")
    (folder / "__pycache__").write_bytes(b"")
    return folder


@pytest.fixture
def temporary(tmp_path, monkeypatch):
    """A folder for temporary files of this test's own."""
    folder = tmp_path / "temporary"
    folder.mkdir()
    monkeypatch.setattr(tempfile, "tempdir", str(folder))
    return folder


def compiled(folder, settle, **variables):
    """Outcome of compiling the kernel in a process of its own, without a home."""
    environment = {k: v for k, v in os.environ.items() if k not in {VARIABLE, "XDG_CACHE_HOME"}}
    environment |= {"HOME": os.devnull, "TMPDIR": str(folder.parent), "PYTHONPATH": str(PACKAGE.parent)}
    command = [sys.executable, "-c", COMPILED.format(settle=settle), str(folder)]
    return subprocess.run(
        command, env=environment | variables, capture_output=True, text=True, check=False, cwd=folder.parent
    )


def test_compiler_alone_refuses_where_nothing_can_be_kept(sealed):
    outcome = compiled(sealed, "")
    assert outcome.returncode != 0
    assert "cannot cache" in outcome.stderr


@pytest.mark.parametrize("named", [{}, {VARIABLE: "/dev/null/kernels"}], ids=["sources", "named"])
def test_kernels_are_compiled_where_nothing_can_be_kept_and_nothing_is_left(sealed, named):
    outcome = compiled(sealed, SETTLE, **named)
    assert outcome.returncode == 0, outcome.stderr
    assert "compiled at every start" in outcome.stdout
    assert not list(sealed.parent.glob("forebay-kernels-*"))


def test_kernel_is_used_that_a_disk_full_since_the_start_cannot_keep(sealed, tmp_path):
    place = {VARIABLE: str(tmp_path / "kernels")}
    alone = compiled(sealed, NO_ROOM, **place)
    assert "OSError" in alone.stderr
    outcome = compiled(sealed, REGARDLESS + NO_ROOM, **place)
    assert outcome.returncode == 0, outcome.stderr
    assert outcome.stderr.count("could not be kept") == 1


def test_place_that_can_be_written_to_stays(sealed, tmp_path):
    environment = {VARIABLE: str(tmp_path / "kernels")}
    assert settle_kernel_cache(environment, sealed) is None
    assert environment == {VARIABLE: str(tmp_path / "kernels")}
    (sealed / "__pycache__").unlink()
    nothing: dict[str, str] = {}
    assert settle_kernel_cache(nothing, sealed) is None
    assert not nothing


def test_cache_of_the_user_is_next(sealed, tmp_path):
    environment = {"HOME": str(tmp_path)}
    assert settle_kernel_cache(environment, sealed) is None
    assert environment[VARIABLE] == str(tmp_path / ".cache" / "forebay" / "kernels")


def test_full_disk_is_passed_over(sealed, tmp_path, temporary, monkeypatch):
    full = tmp_path / "full"
    usage = shutil.disk_usage(tmp_path)

    def free(folder):
        return usage._replace(free=0 if full in folder.parents else 10**9)

    monkeypatch.setattr(shutil, "disk_usage", free)
    environment = {VARIABLE: str(full / "kernels")}
    assert "full" in str(settle_kernel_cache(environment, sealed))
    assert environment[VARIABLE].startswith(str(temporary))


def test_no_room_at_all_is_said(sealed, temporary, monkeypatch):
    usage = shutil.disk_usage(temporary)
    monkeypatch.setattr(shutil, "disk_usage", lambda _folder: usage._replace(free=0))
    with pytest.raises(SettingsError, match=f"set {VARIABLE}"):
        settle_kernel_cache({"HOME": os.devnull}, sealed)

"""Where compiled kernels are kept: settled before anything is compiled, so that no disk stands in the way.

The compiler keeps what it makes beside the source, or in NUMBA_CACHE_DIR. Where neither can be written to it
refuses to start, and on a full disk it fails at the first request. A disk that fills up later is passed over.
"""

import atexit
import logging
import os
import shutil
import tempfile
from collections.abc import MutableMapping
from importlib import import_module
from pathlib import Path
from typing import Any

from forebay.settings import SettingsError

LOG = logging.getLogger("forebay")

VARIABLE = "NUMBA_CACHE_DIR"
"""The compiler's own setting, read when it is imported."""

ROOM = 64 * 2**20
"""Free space that a place must have [bytes]: all kernels take some 8 MB, and other things grow meanwhile."""

SOURCES = Path(__file__).parent / "flow" / "kernels"


def settle_kernel_cache(
    environment: MutableMapping[str, str] = os.environ, sources: Path = SOURCES
) -> str | None:
    """Choose a place for compiled kernels; the value is a note if it does not outlast this process.

    The place named in the environment, the folders of the sources, and the user's cache are tried in turn;
    after them a temporary folder, which goes with this process, so that every start compiles anew.

    Raises
    ------
    SettingsError : there is no such place at all
    """
    named = environment.get(VARIABLE)
    if _has_room(Path(named) if named else sources / "__pycache__"):
        return None
    home = Path(environment.get("HOME") or os.devnull)
    kept = Path(environment.get("XDG_CACHE_HOME") or home / ".cache") / "forebay" / "kernels"
    if not named and _has_room(kept):
        environment[VARIABLE] = str(kept)
        return None
    environment[VARIABLE] = str(_temporary())
    return f"{named or sources} cannot be written to or is full: kernels are compiled at every start"


def pass_over_full_disks() -> None:
    """Use in this process what the compiler has made and cannot keep; by itself it raises instead."""
    caching = import_module("numba.core.caching")  # reads the environment, which must be settled before
    save = caching.Cache.save_overload

    def save_if_there_is_room(cache: Any, signature: Any, compiled: Any) -> None:  # noqa: ANN401
        try:
            save(cache, signature, compiled)
        except OSError as error:
            LOG.warning("a compiled kernel could not be kept: %s", error.strerror)

    if save.__name__ != save_if_there_is_room.__name__:
        caching.Cache.save_overload = save_if_there_is_room


def _has_room(folder: Path) -> bool:
    """Whether a folder is there or can be made, can be written to, and is on a disk with room."""
    try:
        folder.mkdir(parents=True, exist_ok=True)
        with tempfile.TemporaryFile(dir=folder) as file:
            file.write(bytes(4096))
            file.flush()
        return shutil.disk_usage(folder).free >= ROOM
    except OSError:
        return False


def _temporary() -> Path:
    try:
        folder = Path(tempfile.mkdtemp(prefix="forebay-kernels-"))
    except OSError as error:
        raise SettingsError(_nowhere()) from error
    atexit.register(shutil.rmtree, folder, ignore_errors=True)
    if not _has_room(folder):
        raise SettingsError(_nowhere())
    return folder


def _nowhere() -> str:
    return f"nowhere can compiled kernels be kept: set {VARIABLE} to a folder with {ROOM // 2**20} MiB free"

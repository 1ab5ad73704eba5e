"""Factorisations kept for the next flow on the same walls: a process-wide store bounded in bytes."""

from collections import OrderedDict
from collections.abc import Callable
from dataclasses import dataclass, field
from threading import Lock

from forebay.flow.sheets.system import System

DEFAULT_LIMIT = 512 * 1024 * 1024
"""Memory for factorisations [B]: one of 6000 unknowns takes 288 MB."""


@dataclass(slots=True)
class Memo:
    """Least recently used factorisations go first when `limit` [B] is exceeded; one larger is not kept.

    hits, misses : since the start;  size : memory in use [B]
    """

    limit: int = DEFAULT_LIMIT
    hits: int = 0
    misses: int = 0
    size: int = 0
    _kept: "OrderedDict[bytes, System]" = field(default_factory=OrderedDict)
    _lock: Lock = field(default_factory=Lock)

    def system(self, key: bytes, build: Callable[[], System]) -> System:
        """The factorisation with this key, built if it is not kept."""
        with self._lock:
            found = self._kept.get(key)
            if found is not None:
                self.hits += 1
                self._kept.move_to_end(key)
                return found
            self.misses += 1
        built = build()
        with self._lock:
            self._keep(key, built)
        return built

    def _keep(self, key: bytes, system: System) -> None:
        if system.bytes > self.limit or key in self._kept:
            return
        self._kept[key] = system
        self.size += system.bytes
        self._shrink()

    def _shrink(self) -> None:
        while self.size > self.limit:
            _, gone = self._kept.popitem(last=False)
            self.size -= gone.bytes

    def resize(self, limit: int) -> None:
        """Set the limit [B]; what no longer fits is dropped."""
        with self._lock:
            self.limit = limit
            self._shrink()

    def clear(self) -> None:
        """Drop everything; the counters stay."""
        with self._lock:
            self._kept.clear()
            self.size = 0


MEMO = Memo()
"""The store of this process."""

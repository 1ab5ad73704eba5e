"""Measure the targets of the design: `python -m tests.bench [name ...]`, one row each, ratios if any."""

import os
import sys
from collections.abc import Callable, Iterator
from importlib import import_module

from .timing import Measure

BENCHES = ("kernel", "json_path", "small_requests", "stagnation", "tracing", "sheets")
"""Modules of this folder; each has `measure() -> Iterator[Measure]`."""


def main(names: list[str]) -> int:
    """Run the named benches, by default all, and print a row for each measure; 1 if a target is missed."""
    rows: list[Measure] = []
    print(f"{os.cpu_count()} processors, load {os.getloadavg()[0]:.1f}: under load times are upper bounds")
    for name in names or BENCHES:
        try:
            measure: Callable[[], Iterator[Measure]] = import_module(f".{name}", __package__).measure
        except ModuleNotFoundError as error:
            print(f"{name}: not there ({error})")
            continue
        for row in measure():
            rows.append(row)
            print(row.line(), flush=True)
    missed = [row for row in rows if not row.is_met]
    print(f"\n{len(rows)} measures, {len(missed)} targets missed")
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))

"""Velocity kernels against the same sums in C, compiled with gcc -O3 in this run."""

import ctypes
import subprocess
import tempfile
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import numpy as np

from forebay.flow.kernels import periodic, rational

from .timing import Measure, interleaved

SIZES = ((1_000_000, 10), (100_000, 100), (100_000, 1000))
"""Points and elements."""

ALLOWED = 1.5


def _library(folder: str) -> ctypes.CDLL:
    """The C loops with strict IEEE arithmetic, as the program's own kernels have it."""
    target = Path(folder) / "kernel.so"
    source = Path(__file__).with_name("kernel.c")
    options = ["-O3", "-march=native", "-shared", "-fPIC", "-o", str(target), str(source), "-lm"]
    subprocess.run(["gcc", *options], check=True)
    return ctypes.CDLL(str(target))


def _in_c(
    function: Any, z: np.ndarray, s: np.ndarray, g: np.ndarray
) -> tuple[Callable[[], object], np.ndarray]:
    """Call on split arrays, and where the answer appears."""
    inputs = [np.ascontiguousarray(part) for a in (z, s, g) for part in (a.real, a.imag)]
    answer = np.empty((2, z.size))
    pointers = [ctypes.c_void_p(array.ctypes.data) for array in (*inputs, answer[0], answer[1])]

    def call() -> object:
        return function(ctypes.c_long(z.size), ctypes.c_long(s.size), *pointers), inputs

    return call, answer


def measure() -> Iterator[Measure]:
    """Time of our kernels over the time of C for three sizes, free water and channel."""
    generator = np.random.default_rng(1)
    with tempfile.TemporaryDirectory() as folder:
        library = _library(folder)
        for n, m in SIZES:
            z, s, g = (generator.normal(size=k) + 1j * generator.normal(size=k) for k in (n, m, m))
            yield _compare("open", library.free_sums, rational.velocity_sums, z, s, g)
            if n * m <= 10_000_000:
                yield _compare("channel", library.channel_sums, _channel, z, s, g)


def _channel(z: np.ndarray, s: np.ndarray, g: np.ndarray) -> object:
    return periodic.velocity_sums(z, s, g, 0.0)


def _compare(name: str, c_function: Any, ours: Any, z: np.ndarray, s: np.ndarray, g: np.ndarray) -> Measure:
    call, answer = _in_c(c_function, z, s, g)
    c_time, our_time = interleaved(call, lambda: ours(z, s, g))
    scale = np.abs(ours(z, s, g)).max()
    assert np.abs(ours(z, s, g) - (answer[0] + 1j * answer[1])).max() < 1e-10 * scale
    pairs = z.size * s.size
    remark = f"{1e9 * our_time / pairs:.2f} against {1e9 * c_time / pairs:.2f} ns a pair"
    return Measure(
        f"velocity, {name}, {z.size} points, {s.size} poles, over C",
        our_time / c_time,
        "-",
        ALLOWED,
        remark=remark,
    )

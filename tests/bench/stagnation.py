"""All stagnation points with their certificate, for layouts that are rational."""

from collections.abc import Iterator
from functools import partial

import numpy as np

from forebay.flow.layout import Ambient, Channel, Layout, OpenWater, Shore, Sink, Source, StraightBank, Vortex
from forebay.workflows.stagnation import search_stagnation

from .timing import Measure, best_of

CASES = ((100, 0.020), (1000, 2.0))
"""Elements and allowed time [s]."""

SHORES: dict[str, Shore] = {
    "open water": OpenWater(),
    "bank": StraightBank(0j, 1 + 0j),
    "channel": Channel(0j, 1 + 0j, 1000.0),
}


def _layout(count: int, shore: Shore) -> Layout:
    generator = np.random.default_rng(count)
    places = generator.uniform(1, 999, size=(count, 2)) @ np.array([1, 1j])
    strengths = generator.uniform(0.2, 3.0, size=count)
    kinds = (Source, Sink, Vortex)
    elements = tuple(
        kinds[k % 3](f"e{k}", complex(at), float(strength))
        for k, (at, strength) in enumerate(zip(places, strengths, strict=True))
    )
    return Layout(4.0, ambient=Ambient(0.3 + 0j), shore=shore, elements=elements)


def measure() -> Iterator[Measure]:
    """Time from the layout to the certified list."""
    for count, allowed in CASES:
        for name, shore in SHORES.items():
            layout = _layout(count, shore)
            result = search_stagnation(layout)
            remark = f"{result.found_count} of {result.expected_count}, complete: {result.complete}"
            repeats = 7 if count <= 100 else 1
            seconds = best_of(partial(search_stagnation, layout), repeats=repeats)
            what = f"stagnation points of {count} elements, {name}"
            yield Measure(what, seconds * 1e3, "ms", allowed * 1e3, remark=remark)

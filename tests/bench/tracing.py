"""Streamlines of a layout of 100 elements, and the shares of a site of the usual size."""

from functools import partial

import numpy as np
from scipy.integrate import solve_ivp

from forebay.flow.layout import Ambient, Layout, Sink, Source
from forebay.flow.model import compile_layout
from forebay.flow.surroundings import survey
from forebay.flow.traces import TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.workflows.withdrawal import trace_withdrawal

from .timing import Measure, best_of

LINES = 1000
SAMPLE = 5
"""Lines that the baseline traces; its time is scaled up to all of them."""


def _layout(count: int) -> Layout:
    generator = np.random.default_rng(0)
    places = generator.uniform(0, 1000, size=(count, 2)) @ np.array([1, 1j])
    discharges = generator.uniform(5, 40, size=count)
    elements = tuple(
        (Sink if k % 2 else Source)(f"e{k}", complex(at), float(discharge))
        for k, (at, discharge) in enumerate(zip(places, discharges, strict=True))
    )
    return Layout(1.0, ambient=Ambient(0.2 + 0j), elements=elements)


def _one_by_one(layout: Layout, seeds: np.ndarray) -> None:
    """Trace seeds with a library's integrator, a line at a time, numpy for the velocity."""
    points = [e for e in layout.elements if isinstance(e, Sink | Source)]
    places = np.array([e.at for e in points])
    strengths = np.array([e.discharge * (1 if isinstance(e, Source) else -1) for e in points]) / (2 * np.pi)
    sinks = places[strengths < 0]

    def heading(_: float, z: np.ndarray) -> list[float]:
        w = 0.2 + np.sum(strengths / (z[0] + 1j * z[1] - places))
        return [w.real / abs(w), -w.imag / abs(w)]

    def arrived(_: float, z: np.ndarray) -> float:
        return float(np.abs(z[0] + 1j * z[1] - sinks).min() - 0.05)

    arrived.terminal = True  # type: ignore[attr-defined]
    for seed in seeds:
        solve_ivp(heading, (0.0, 2000.0), [seed.real, seed.imag], rtol=1e-6, atol=1e-6, events=arrived)


def measure() -> list[Measure]:
    """Time for all lines, and as part of the time of a library's integrator."""
    layout = _layout(100)
    model = compile_layout(layout)
    surroundings = survey(model, np.empty(0, dtype=np.complex128))
    seeds = (-20 + 1j * np.linspace(1, 999, LINES)).astype(np.complex128)
    rules = TraceRules(tolerance=1e-4)
    run = partial(trace_streamlines, model, seeds, surroundings=surroundings, rules=rules)
    drift = float(np.abs(run().drift).max())
    seconds = best_of(run, repeats=5)
    slow = best_of(partial(_one_by_one, layout, seeds[:: LINES // SAMPLE]), repeats=1) * LINES / SAMPLE
    site = _layout(6)
    shares = best_of(partial(trace_withdrawal, site), repeats=3)
    what = f"{LINES} streamlines, 100 elements"
    return [
        Measure(what, seconds * 1e3, "ms", 500.0, remark=f"largest drift of psi {drift:.1e} m2/s"),
        Measure(f"{what}, over one by one", seconds / slow, "", 0.05),
        Measure("shares and zones of 3 intakes, 6 elements", shares * 1e3, "ms", 500.0),
    ]

"""Shares on solved walls: against closed forms, the same site with piers, and counted streamlines."""

from dataclasses import replace

import numpy as np
import pytest

from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.layout import (
    Ambient,
    Channel,
    EdgeProfile,
    Island,
    Layout,
    OpenEdge,
    Outline,
    Pier,
    Sink,
    Source,
    Surveyed,
)
from forebay.flow.model import compile_layout
from forebay.flow.surroundings import survey
from forebay.flow.traces import Stop, TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.workflows.withdrawal import trace_withdrawal

DEPTH = 10.0


def _ring(centre: complex, radius: float, count: int) -> tuple[complex, ...]:
    return tuple(complex(z) for z in centre + radius * np.exp(2j * np.pi * (np.arange(count) + 0.3) / count))


def _reach(*islands: Island) -> Surveyed:
    across = EdgeProfile.EQUIPOTENTIAL
    return Surveyed(
        outer=(0j, 400 + 0j, 400 + 100j, 100j),
        islands=islands,
        edges=(OpenEdge("upper", 3, 1, 100.0, across), OpenEdge("lower", 1, 1, None, across)),
    )


def _shares(layout: Layout, intake: str) -> tuple[dict[str, float], float, str]:
    found = next(one for one in trace_withdrawal(layout, None).intakes if one.name == intake)
    return {s.origin: s.share for s in found.shares}, found.share_error, found.status.value


@pytest.fixture(scope="module")
def busy() -> Layout:
    """Two intakes and two outfalls in a reach with an island."""
    return Layout(
        DEPTH,
        shore=_reach(Island("holm", _ring(200 + 50j, 15.0, 24)[::-1])),
        elements=(
            Sink("a", 300 + 60j, 20.0),
            Sink("b", 250 + 25j, 30.0),
            Source("p", 150 + 62j, 10.0),
            Source("q", 120 + 30j, 12.0),
        ),
    )


def test_shares_are_those_of_counted_streamlines(busy):
    """500 streamlines of equal flux from each intake, followed against the flow."""
    model = compile_layout(busy)
    around = survey(model, np.empty(0, dtype=np.complex128))
    count = 500
    for name in ("a", "b"):
        shares, error, status = _shares(busy, name)
        assert status == "ok"
        assert sum(shares.values()) == pytest.approx(1.0, abs=1e-12)
        site = around.sites.named(name)
        # equal angles are equal fluxes only at the sink itself; 1e-3 of the capture radius is near enough
        seeds = _circle(complex(around.sites.at[site]), 1e-3 * float(around.sites.radius[site]), count)
        traces = trace_streamlines(model, seeds, surroundings=around, rules=TraceRules(forward=False))
        told = [n for n, stop in zip(traces.names, traces.stops, strict=True) if stop in _ORIGINS]
        assert len(told) > 0.995 * count  # the rest ran into a wall within the boundary's residual
        for origin, share in shares.items():
            # counting is right to one streamline at each of the two divides of an origin
            assert abs(told.count(origin) / len(told) - share) < 3.0 / count + 5e-3 + error


_ORIGINS = (Stop.FAR_END, Stop.CAPTURED)


def _circle(at: complex, radius: float, count: int) -> ComplexArray:
    angles: FloatArray = 2.0 * np.pi * (np.arange(count) + 0.5) / count
    return np.asarray(at + radius * np.exp(1j * angles), dtype=np.complex128)


def test_error_holds_under_a_finer_solution(busy):
    for name in ("a", "b"):
        coarse, error, _ = _shares(replace(busy, tolerance=1e-3), name)
        fine, _, _ = _shares(replace(busy, tolerance=1e-5), name)
        for origin in coarse | fine:
            assert abs(coarse.get(origin, 0.0) - fine.get(origin, 0.0)) <= error


def test_outfall_below_and_above_a_many_sided_pier():
    """A 48-gon in a channel splits the plume of an outfall like a round pier does."""
    site = Layout(
        5.0,
        ambient=Ambient(0.3 + 0j),
        shore=Channel(0j, 1 + 0j, 60.0),
        elements=(Source("works", 20j, 3.0), Sink("town", 80 + 26j, 12.0)),
    )
    centre, radius = 40 + 22j, 5.0
    round_ = replace(site, structures=(Pier("pier", centre, radius),))
    cornered = replace(site, structures=(Outline("pier", _ring(centre, radius, 48)),))
    one, _, _ = _shares(round_, "town")
    other, error, status = _shares(cornered, "town")
    assert status == "ok"
    for origin in one | other:
        # the polygon is between 0 and 0.2 % narrower than the circle, which is 1e-2 m of 60 m of stream
        assert abs(one.get(origin, 0.0) - other.get(origin, 0.0)) < error + 5e-3

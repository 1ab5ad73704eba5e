"""Patches: against exact areas and quadratures, counted parcels, and their own halves."""

from itertools import pairwise
from math import acos, atan2, pi, sqrt

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq

from forebay.flow.arrivals.analysis import arrive
from forebay.flow.arrivals.findings import ArrivalRules
from forebay.flow.arrivals.release import AlongLine, FromOutfall, OverDisc, OverPolygon, Release
from forebay.flow.arrivals.result import Outcome, ReleaseStatus
from forebay.flow.arrivals.slices import wet_area
from forebay.flow.layout import (
    Ambient,
    Channel,
    Layout,
    LineSink,
    OpenWater,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.surroundings import survey
from forebay.flow.traces import Stop, TraceRules
from forebay.flow.tracing import trace_streamlines

U, Q = 0.5, 1.0
B = Q / (2.0 * pi * U)
ONE_SINK = Layout(depth=1.0, ambient=Ambient(U + 0j), elements=(Sink("intake", 0j, Q),))
BANK = StraightBank(0j, 1 + 0j)


def released(layout, *places, tolerance=1e-3):
    sinks = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    model = compile_layout(layout)
    releases = tuple(Release(f"r{k}", place) for k, place in enumerate(places))
    return arrive(model, search_model(model), releases, ArrivalRules(sinks, tolerance=tolerance))


def share_at(answer, name):
    return sum(arrival.share for arrival in answer.arrivals if arrival.at == name)


def edge(x):
    """Half-width of the captured strip, y = b angle(x + iy)."""
    return brentq(lambda y: y - B * atan2(y, x), 1e-12, B * pi)


def captured_part(x, radius):
    """Captured part of a disc on the axis about x < 0, far enough that both edges cross it."""

    def half(at):
        return min(edge(at), sqrt(max(0.0, radius**2 - (at - x) ** 2)))

    turns = [
        brentq(lambda at: edge(at) - sqrt(radius**2 - (at - x) ** 2), *ends)
        for ends in ((x - radius, x), (x, x + radius))
    ]
    cuts = [x - radius, *turns, x + radius]
    area = sum(quad(half, a, b, epsabs=1e-12)[0] for a, b in pairwise(cuts))
    return 2.0 * area / (pi * radius**2)


@pytest.mark.parametrize("tolerance", [1e-2, 1e-3, 1e-4])
def test_disc_across_both_dividing_streamlines(tolerance):
    answer = released(ONE_SINK, OverDisc(-10 + 0j, 2.0), tolerance=tolerance)[0]
    error = abs(share_at(answer, "intake") - captured_part(-10.0, 2.0))
    assert error <= answer.share_error <= tolerance  # the stated error covers the true one


def test_curve_of_a_disc_against_exact_times_of_parcels():
    # t U / b = -X + ln(sin a / sin(a - Y)) on 4e5 parcels in polar cells of equal area
    answer = released(ONE_SINK, OverDisc(-10 + 0j, 2.0))[0]
    rings, angles = np.meshgrid((np.arange(400) + 0.5) / 400, 2 * pi * (np.arange(1000) + 0.5) / 1000)
    z = (-10 + 2.0 * np.sqrt(rings) * np.exp(1j * angles)).ravel()
    x, y, angle = z.real / B, np.abs(z.imag) / B, np.arctan2(np.abs(z.imag), z.real)
    kept = angle > y
    times = B / U * (-x[kept] + np.log(np.sin(angle[kept]) / np.sin(angle[kept] - y[kept])))
    counted = np.searchsorted(np.sort(times), answer.curve.time, side="right") / z.size
    # cells: 1 / 400 of the radius along an edge that isochrones cut across, some 1e-4 of the area
    assert np.max(np.abs(counted - answer.curve.share)) < answer.share_error + 5e-4
    assert answer.arrivals[0].median_time == pytest.approx(np.median(times), rel=1e-3)  # likewise


def test_a_patch_and_its_halves():
    whole = OverPolygon((-9 - 2j, -6 - 2j, -6 + 3j, -9 + 3j))
    halves = OverPolygon((-9 - 2j, -6 - 2j, -6 + 3j)), OverPolygon((-9 - 2j, -6 + 3j, -9 + 3j))
    one, *two = released(ONE_SINK, whole, *halves)
    mean = 0.5 * sum(share_at(answer, "intake") for answer in two)
    errors = one.share_error + 0.5 * sum(answer.share_error for answer in two)
    assert share_at(one, "intake") == pytest.approx(mean, abs=errors)
    curves = [np.interp(one.curve.time, half.curve.time, half.curve.share, left=0.0) for half in two]
    # curves are linear between points a hundredth of their share apart: an eighth of that, by their bend
    assert np.max(np.abs(np.mean(curves, axis=0) - one.curve.share)) < errors + 5e-4


def test_an_outfall_within_the_patch_feeds_it():
    # water let go all round the outfall: what lies in a small disc about it is its own
    layout = Layout(
        depth=1.0,
        ambient=Ambient(0.5 + 0j),
        elements=(Source("outfall", 0j, 2.0), Sink("intake", 12 + 0.4j, 2.0)),
    )
    disc, outfall = released(layout, OverDisc(0j, 0.05), FromOutfall("outfall"))
    # within 0.05 m the outfall's own speed exceeds the current twelve times: shares by area and by flux
    # differ by a part of that in the angle of the divides
    assert share_at(disc, "intake") == pytest.approx(share_at(outfall, "intake"), abs=0.02)
    # 17 s under way, 4 ms within: areas are differences of times, and the answer says what that costs
    assert disc.share_error < 5e-3
    assert (disc.status is ReleaseStatus.NOT_CONVERGED) == (disc.share_error > 1e-3)


@pytest.mark.parametrize(
    ("place", "dry"),
    [
        (
            OverDisc(1j, 2.0),
            4.0 * acos(0.5) - sqrt(3.0),
        ),  # segment beyond half the radius
        (OverPolygon((-3 - 1j, 3 - 1j, 3 + 2j, -3 + 2j)), 6.0),
        (OverDisc(10 + 10j, 5.0), pi * 1.5**2),  # a pier within
    ],
    ids=["disc-over-a-bank", "polygon-over-a-bank", "pier-within"],
)
def test_wet_areas(place, dry):
    layout = Layout(depth=1.0, ambient=Ambient(0.3 + 0j), shore=BANK, structures=(Pier("P", 10 + 10j, 1.5),))
    found = wet_area(compile_layout(layout), place, 1e-4 * place.area)
    assert found.value == pytest.approx(place.area - dry, abs=max(found.error, 1e-9 * place.area))
    assert found.error <= 1e-4 * place.area


def test_parts_that_go_round_a_vortex():
    # a disc about a vortex: what recirculates, counted on cells of equal area by the stream function, largest
    # on the loop through the stagnation point, psi = U y - G/2pi ln r, at y = G / 2 pi U
    circulation, radius = 2.0, 1.2
    layout = Layout(depth=1.0, ambient=Ambient(U + 0j), elements=(Vortex("gyre", 0j, circulation),))
    answer = released(layout, OverDisc(0j, radius))[0]
    y = circulation / (2.0 * pi * U)
    rings, angles = np.meshgrid((np.arange(1000) + 0.5) / 1000, 2 * pi * (np.arange(2000) + 0.5) / 2000)
    z = (radius * np.sqrt(rings) * np.exp(1j * angles)).ravel()

    def psi(at):
        return U * at.imag - circulation / (2.0 * pi) * np.log(np.abs(at))

    # inside the loop psi is above that at the stagnation point, and the loop lies on the near side of it
    round_it = (psi(z) > psi(np.array(1j * y))) & (np.sign(y) * z.imag < abs(y))
    found = {row.outcome: row.share for row in answer.outcomes}
    # cells: 5e-4 of the radius along the loop
    assert found[Outcome.RECIRCULATES] == pytest.approx(round_it.mean(), abs=answer.share_error + 1e-3)
    assert sum(found.values()) == pytest.approx(1.0, abs=1e-12)


# ---- counted parcels on layouts with banks, piers and screens


def random_site(seed):
    rng = np.random.default_rng(seed)
    shore = (BANK, Channel(0j, 1 + 0j, 60.0), OpenWater())[seed % 3]

    def place(row):
        return complex(-40 + 80 * rng.random(), 4 + 10 * (row + 0.7 * rng.random()))

    elements = (
        Sink("a", place(0), 1 + 2 * rng.random()),
        Source("works", place(1), 1 + rng.random()),
        LineSink("screen", 10 + 30j, 14 + 33j, 0.5 + rng.random()),
    )
    piers = (Pier("P", complex(-20 + 40 * rng.random(), 48), 2.0),)
    current = Ambient(complex(0.02 + 0.03 * rng.random(), 0))
    layout = Layout(depth=2.0, ambient=current, shore=shore, elements=elements, structures=piers)
    centre = complex(-50 + 40 * rng.random(), 8 + 25 * rng.random())
    return layout, centre, 6 + 8 * rng.random(), rng


def counted(layout, z):
    """Part of each parcel that each intake takes, by single streamlines, with their times at "a"."""
    model = compile_layout(layout)
    around = survey(model, np.array([point.at for point in search_model(model).points]))
    traces = trace_streamlines(model, z, surroundings=around, rules=TraceRules(tolerance=1e-6))
    taken = {name: np.zeros(z.size) for name in ("a", "screen")}
    for i in range(z.size):
        left = 1.0
        for crossing in traces.crossings[i]:
            taken["screen"][i] += left * (1.0 - crossing.leaving / crossing.arriving)
            left *= crossing.leaving / crossing.arriving
        if traces.stops[i] is Stop.CAPTURED:
            taken[traces.names[i]][i] += left
    return taken, traces.times


def assert_shares_counted(seed, count):
    """Shares and times of a disc and a line agree with a count within the count's own error."""
    layout, centre, radius, rng = random_site(seed)
    line = AlongLine((centre - radius, centre + 1j * radius))
    answers = released(layout, OverDisc(centre, radius), line)
    disc = centre + radius * np.sqrt(rng.random(count)) * np.exp(2j * pi * rng.random(count))
    along = centre - radius + rng.random(count) * radius * (1 + 1j)
    model = compile_layout(layout)
    for answer, z in zip(answers, (disc, along), strict=True):
        taken, times = counted(layout, z[model.wet(z)])
        for name, parts in taken.items():
            error = sqrt(max(parts.var(), 1e-6) / parts.size)
            # four standard errors: one comparison in 16,000 fails by chance
            assert share_at(answer, name) == pytest.approx(parts.mean(), abs=4 * error + answer.share_error)
        whole = taken["a"] == 1.0
        if np.count_nonzero(whole) > 100:
            ranks = np.interp(np.sort(times[whole]), answer.curve.time, answer.curve.by_intake["a"])
            steps = (np.arange(ranks.size) + 0.5) / ranks.size * share_at(answer, "a")
            # Kolmogorov: sup difference exceeds 2.2 / sqrt(n) once in 8,000 times
            assert np.max(np.abs(ranks - steps)) < 2.2 / sqrt(ranks.size) * share_at(answer, "a") + 0.01


@pytest.mark.parametrize("seed", [0, 1, 2])
def test_shares_against_a_count(seed):
    assert_shares_counted(seed, 800)


@pytest.mark.slow
@pytest.mark.parametrize("seed", range(3, 12))
def test_shares_against_a_count_of_twenty_thousand(seed):
    assert_shares_counted(seed, 20000)

"""Widths, dividing streamlines and zones: printed tables, closed forms, and points traced to their fate."""

from functools import lru_cache

import numpy as np
import pytest
import shapely
from numpy.testing import assert_allclose

from forebay.flow.layout import (
    Ambient,
    Basin,
    Channel,
    Corner,
    DeadEnd,
    Element,
    Layout,
    LineSink,
    OpenWater,
    Pier,
    Shore,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.stagnation.search import search_model
from forebay.flow.surroundings import survey
from forebay.flow.traces import TraceRules
from forebay.flow.tracing import trace_streamlines
from forebay.flow.withdrawal.analysis import withdraw
from forebay.flow.withdrawal.result import IntakeWithdrawal, WidthStatus, WithdrawalStatus


def withdrawals(layout: Layout) -> tuple[IntakeWithdrawal, ...]:
    model = compile_layout(layout)
    names = tuple(e.name for e in layout.elements if isinstance(e, Sink | LineSink))
    return withdraw(model, search_model(model), names)


def site(
    *elements: Element, velocity: complex = 0j, shore: Shore | None = None, piers: tuple[Pier, ...] = ()
) -> Layout:
    return Layout(
        depth=1.0, ambient=Ambient(velocity), shore=shore or OpenWater(), elements=elements, structures=piers
    )


# --- widths ---


def test_width_of_a_single_sink():
    """Bear 1979: total width Q/(B U) far upstream."""
    layout = Layout(depth=4.0, ambient=Ambient(0.35 + 0j), elements=(Sink("s", 3 + 2j, 1.8),))
    (answer,) = withdrawals(layout)
    assert_allclose(answer.width_far_upstream, 1.8 / 4.0 / 0.35, rtol=1e-14)  # one division
    assert answer.arriving == pytest.approx(1.8, rel=1e-15)


@pytest.mark.parametrize("count", [2, 3, 4])
def test_width_of_sinks_abreast(count):
    """Javandel and Tsang 1986: n equal sinks across the current take n Q/(B U) in all."""
    sinks = [Sink(f"s{k}", 1j * k, 1.0) for k in range(count)]
    answers = withdrawals(site(*sinks, velocity=0.2))
    assert_allclose(sum(answer.width_far_upstream for answer in answers), count * 5.0, rtol=1e-13)


@pytest.mark.parametrize(("count", "limit"), [(2, 1 / np.pi), (3, 2 ** (1 / 3) / np.pi)])
def test_largest_spacing_that_lets_nothing_pass(count, limit):
    """Kuo table 6.1 (0.32, 0.40), after Javandel and Tsang; exact: 1/pi and 2^(1/3)/pi times Q/(B U)."""
    for factor, expected in ((0.99, "taken"), (1.01, "passed")):
        spacing = factor * limit  # q = 1, U = 1
        sinks = [Sink(f"s{k}", 1j * k * spacing, 1.0) for k in range(count)]
        model = compile_layout(site(*sinks, velocity=1.0))
        nodes = np.array([point.at for point in search_model(model).points])
        # far upstream, where the zones of the sinks meet: those of equal sinks are equally wide
        widths = [answer.width_far_upstream for answer in withdrawals(site(*sinks, velocity=1.0))]
        assert_allclose(sum(widths), count, rtol=1e-13)
        between = np.array([-1e-9 + 1j * (0.5 + k) * spacing for k in range(count - 1)])
        forward = trace_streamlines(
            model,
            _gaps(between, sinks),
            surroundings=survey(model, nodes),
            rules=TraceRules(tolerance=1e-6),
        )
        fate = "passed" if "ambient" in forward.names else "taken"
        assert fate == expected


def _gaps(between, sinks):
    """A fan of points across the first gap between two sinks."""
    return between[0] + 1j * np.linspace(-0.45, 0.45, 181) * abs(sinks[1].at - sinks[0].at)


@pytest.mark.parametrize(("discharge", "edge"), [(1.0, 0.551102), (5.0, None)])
def test_strip_of_a_sink_near_a_bank(discharge, edge):
    """U = 0.5, 1 m off the bank: below q = pi the strip leaves a filament of 0.551102 m at the bank."""
    layout = site(Sink("s", 1j, discharge), velocity=0.5, shore=StraightBank(0j, 1 + 0j))
    (answer,) = withdrawals(layout)
    assert_allclose(answer.width_far_upstream, 2.0 * discharge, rtol=1e-13)
    model = compile_layout(layout)
    ends = [line[0] for line in answer.dividing_streamlines if line[0].real < -1.0]
    from_far = [flux_below(model, end) / 0.5 for end in ends]  # heights far upstream
    if edge is None:
        assert_allclose(from_far, [10.0], rtol=1e-12)
    else:
        assert_allclose(sorted(from_far), [edge, edge + 2.0], atol=5.1e-7)  # printed digits


def flux_below(model, z: complex) -> float:
    """Flux between the bank and a point, which far upstream passes below the height flux / U."""
    foot = np.array([complex(z.real, 0.0)])
    return float(model.chord(foot, np.array([z])).imag[0])


@pytest.mark.parametrize("at", [0j, 30j, 50j])
def test_width_in_a_channel(at):
    """Capture width upstream exactly q / U_up, wherever the intake stands."""
    (answer,) = withdrawals(site(Sink("s", at, 5.0), velocity=0.5, shore=Channel(0j, 1 + 0j, 100.0)))
    assert_allclose(answer.width_far_upstream, 10.0, rtol=1e-13)
    assert [(w.end, w.status) for w in answer.widths] == [
        ("upstream", WidthStatus.OK),
        ("downstream", WidthStatus.OK),
    ]
    assert answer.widths[1].width == 0.0


def test_width_at_both_ends_of_a_still_channel():
    (answer,) = withdrawals(site(Sink("s", 50j, 5.0), shore=Channel(0j, 1 + 0j, 100.0)))
    assert_allclose([w.width for w in answer.widths], 100.0, rtol=1e-13)


def test_a_gradient_has_no_single_width():
    layout = Layout(
        depth=1.0, ambient=Ambient(0.5 + 0j, ((0.0, 0.001), (0.0, 0.0))), elements=(Sink("s", 2j, 1.0),)
    )
    model = compile_layout(layout)
    (answer,) = withdraw(model, search_model(model), ("s",))
    assert [w.status for w in answer.widths] == [WidthStatus.UNEVEN]
    assert np.isnan(answer.width_far_upstream)
    assert sum(share.share for share in answer.shares) == pytest.approx(1.0, abs=1e-15)


# --- dividing streamlines ---


def test_dividing_line_of_a_single_sink():
    """x = -y / tan(2 pi B U y / Q) for a current along -x (Kuo, Practical Design Calculations, eq. 6.3)."""
    (answer,) = withdrawals(site(Sink("s", 0j, 1.0), velocity=-0.5))
    edges = [line for line in answer.dividing_streamlines if abs(line[0]) > 1.0 and line[0].real > 0.0]
    assert len(edges) == 2
    for line in edges:
        y = line.imag[np.abs(line.imag) > 1e-6]
        x = line.real[np.abs(line.imag) > 1e-6]
        # psi is exact at every point, so that x is off by no more than y: rounding over the angle to the line
        assert_allclose(x, -y / np.tan(np.pi * y), rtol=1e-9, atol=1e-10)


@pytest.mark.parametrize(
    ("y", "x"), [(1.0, -13.73), (5.0, -13.14), (10.0, -11.24), (20.0, -2.34), (30.0, 21.01), (40.0, 168.78)]
)
def test_printed_table_of_a_capture_zone(y, x):
    """Kuo p. 226, data of fig. 6.2, in feet; b = Q/(2 pi B U) = 13.751 reproduces the table."""
    b = 13.751
    (answer,) = withdrawals(site(Sink("s", 0j, 2.0 * np.pi * b), velocity=-1.0))
    line = next(part for part in answer.dividing_streamlines if part[0].imag > 1.0)[::-1]
    found = np.interp(y, line.imag, line.real)
    # 0.1 %: the table was computed with an unknown b near 13.751; the polyline sags by as much at most
    assert abs(found - x) < 1e-3 * abs(x) + 0.01 + 0.01 * (y > 15)


def test_dividing_lines_end_at_the_stagnation_point():
    (answer,) = withdrawals(site(Sink("s", 0j, 1.0), velocity=0.5))
    meeting = sorted(
        min(abs(line[0] - 1 / np.pi), abs(line[-1] - 1 / np.pi)) for line in answer.dividing_streamlines
    )
    assert_allclose(meeting, 0.0, atol=1e-12)  # the inclusion radius of the point
    assert len(meeting) == 4


# --- zones ---

ELEMENTS = (
    Sink("s1", 30 + 20j, 2.0),
    Source("o1", 50 + 12j, 1.5),
    Sink("s2", 70 + 33j, 1.0),
    Source("o2", 22 + 41j, 1.5),
    Vortex("v", 60 + 50j, 1.0),
)
PIER = Pier("p1", 40 + 25j, 4.0)
SITES: dict[str, Layout] = {
    "open": site(*ELEMENTS, velocity=0.02 + 0.01j),
    "pier": site(*ELEMENTS, velocity=0.02 + 0.01j, piers=(PIER,)),
    "bank": site(*ELEMENTS, velocity=0.02, shore=StraightBank(0j, 1 + 0j)),
    "flush": site(Sink("s1", 30 + 0j, 2.0), *ELEMENTS[1:], velocity=0.02, shore=StraightBank(0j, 1 + 0j)),
    "channel": site(*ELEMENTS, velocity=-0.02, shore=Channel(0j, 1 + 0j, 60.0)),
    "still-channel": site(*ELEMENTS, shore=Channel(0j, 1 + 0j, 60.0)),
    "corner": site(*ELEMENTS, shore=Corner(0j, 1 + 0j, np.pi / 2)),
    "headland": site(*ELEMENTS, shore=Corner(0j, 1 + 0j, 4.5)),
    "dead-end": site(*ELEMENTS, shore=DeadEnd(0j, 1 + 0j, 60.0)),
    "basin": site(*ELEMENTS, shore=Basin(0j, 1 + 0j, 100.0, 60.0)),
    "still": site(Sink("s1", 1j, 1.0), Source("o1", 3 + 0j, 0.5)),
}


@lru_cache
def answered(name: str) -> tuple[IntakeWithdrawal, ...]:
    return withdrawals(SITES[name])


@pytest.mark.parametrize("name", SITES)
def test_zone_holds_the_water_that_reaches_the_intake(name):
    layout = SITES[name]
    model = compile_layout(layout)
    nodes = np.array([point.at for point in search_model(model).points], dtype=np.complex128)
    rng = np.random.default_rng(5)
    z = rng.uniform(-20, 110, 120) + 1j * rng.uniform(-30, 70, 120)
    z = z[model.wet(z)]
    if layout.structures:
        z = z[np.abs(z - PIER.at) > PIER.radius + 0.1]
    fates = trace_streamlines(
        model, z, surroundings=survey(model, nodes), rules=TraceRules(tolerance=1e-6)
    ).names
    for answer in answered(name):
        zone = shapely.Polygon(np.stack([answer.zone.real, answer.zone.imag], axis=1))
        # drawn chords sag by a ten-thousandth of the layout
        edge = shapely.distance(shapely.points(z.real, z.imag), zone.exterior) < 0.3
        edge |= np.abs(z - answer.centre) > answer.extent
        inside = shapely.contains_xy(zone, z.real, z.imag)
        reach = np.array([fate == answer.name for fate in fates])
        assert np.all((inside == reach)[~edge])
        assert np.any(reach[~edge])


@pytest.mark.parametrize("name", SITES)
def test_zone_is_anticlockwise_and_finite(name):
    for answer in answered(name):
        z = answer.zone
        assert np.all(np.isfinite(z))
        assert 0.5 * np.sum((np.conj(z) * np.roll(z, -1)).imag) > 0.0


def test_zone_area_of_a_strip():
    """Area between the dividing lines from the stagnation point to the extent."""
    (answer,) = withdrawals(site(Sink("s", 0j, 1.0), velocity=1.0))
    z = answer.zone
    area = 0.5 * np.sum((np.conj(z) * np.roll(z, -1)).imag)
    y = np.linspace(0, 0.4999, 200001)[1:]
    x = y / np.tan(2 * np.pi * y)
    left = answer.centre.real - np.sqrt(answer.extent**2 - y**2)
    inside = np.maximum(x - left, 0.0)
    # chords sag by 1e-4 of the layout, here a metre, and the arc at the extent is a polygon
    assert_allclose(area, 2 * np.trapezoid(inside, y), rtol=1e-3)


def test_still_water_alone_is_all_of_the_water():
    (answer,) = withdrawals(site(Sink("s", 3 + 1j, 1.0)))
    assert answer.status is WithdrawalStatus.OK
    assert_allclose(np.abs(answer.zone - (3 + 1j)), answer.extent, rtol=1e-12)
    assert answer.dividing_streamlines == ()


@pytest.mark.parametrize(
    ("shore", "area"),
    [
        (StraightBank(0j, 1 + 0j), 0.5),
        (Corner(0j, 1 + 0j, np.pi / 2), 0.25),
        (Corner(0j, 1 + 0j, 1.5 * np.pi), 0.75),
    ],
)
def test_still_water_alone_beside_walls(shore, area):
    """Nearly the part of the extent's circle that the interior angle leaves."""
    (answer,) = withdrawals(site(Sink("s", 0.02 + 0.01j, 1.0), shore=shore))
    z = answer.zone
    outline = shapely.Polygon(np.stack([z.real, z.imag], axis=1))
    # the circle is centred on what stands in the water, near the vertex
    assert_allclose(outline.area / (np.pi * answer.extent**2), area, atol=0.3)
    assert np.all(compile_layout(site(Sink("s", 0.02 + 0.01j, 1.0), shore=shore)).wet(z))


def test_zone_of_a_basin_with_one_outfall_is_the_basin():
    shore = Basin(0j, 1 + 0j, 100.0, 60.0)
    (answer,) = withdrawals(site(Sink("s", 30 + 20j, 1.0), Source("o", 70 + 30j, 1.0), shore=shore))
    outline = shapely.Polygon(np.stack([answer.zone.real, answer.zone.imag], axis=1))
    # its edge runs a hair off the walls, further where the water is slow: a millionth of the flux
    assert_allclose(outline.area, 6000.0, rtol=1e-3)


def test_zone_far_from_the_origin_of_a_map_grid_is_the_same():
    def area(origin):
        layout = Layout(
            4.0,
            ambient=Ambient(0.35 + 0j),
            shore=StraightBank(origin, 1 + 0j),
            elements=(Sink("intake", origin + 5j, 1.8), Source("outfall", origin + 80, 1.0)),
        )
        zone = withdrawals(layout)[0].zone
        return shapely.Polygon([(z.real - origin.real, z.imag - origin.imag) for z in zone]).area

    # the line is traced 3e-7 of the flux inside its edge there, and drawn to 1e-4 of the layout's size
    assert area(480_000 + 5_540_000j) == pytest.approx(area(0j), rel=1e-4)

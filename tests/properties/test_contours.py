"""Circulation and flux: additive along contours, the same for every contour round the same elements."""

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from forebay.flow.layout import Layout, Sink, Source, Vortex, outflow
from forebay.flow.model import FlowModel, compile_layout
from support.layouts import ALL_KINDS, CELLS, POINT_KINDS
from support.sites import BASINS, SHORES, ComplexArray, place, wall_samples
from support.strategies import layouts, quiet_places

PROFILE = settings(derandomize=True, deadline=None, max_examples=60)

CONVEX = tuple(name for name in SHORES if name != "corner-reflex")
"""Shores where a straight chord between two places in the water stays in the water."""

ROUNDING = 2e-11
"""Fluxes are sums of up to fifty logarithms of order 1 to 30."""

INNER = tuple(kind for kind in ALL_KINDS if not kind.startswith("bank"))


def _closed(model: FlowModel, ring: ComplexArray) -> complex:
    return complex(model.chord(ring, np.roll(ring, -1)).sum())


def _turns(ring: ComplexArray, at: complex) -> int:
    """Winding number by summed angles."""
    steps = np.angle((np.roll(ring, -1) - at) / (ring - at))
    return round(float(steps.sum()) / (2 * np.pi))


def _enclosed(layout: Layout, ring: ComplexArray) -> complex:
    """Circulation + i flux of what the ring winds round."""
    total = 0j
    for element in layout.elements:
        if isinstance(element, Source | Sink):
            total += 1j * outflow(element) / layout.depth * _turns(ring, element.at)
        elif isinstance(element, Vortex):
            total += element.circulation * _turns(ring, element.at)
    for pier in layout.piers:
        total += pier.circulation * _turns(ring, pier.at)
    return total


def _block(shore_name: str, rows: tuple[int, int], columns: tuple[int, int], steps: int = 6) -> ComplexArray:
    """Border of a block of cells, anticlockwise in the frame of the shore, each side in `steps` chords."""
    (low, high), (left, right) = rows, columns
    corners = [(low, left), (low, right), (high, right), (high, left)]
    ring = [
        ((r1 + (r2 - r1) * k / steps) / CELLS, (c1 + (c2 - c1) * k / steps) / CELLS)
        for (r1, c1), (r2, c2) in zip(corners, corners[1:] + corners[:1], strict=True)
        for k in range(steps)
    ]
    return np.array([place(SHORES[shore_name], row, column) for row, column in ring])


@st.composite
def _blocks(draw):
    def span():
        low = draw(st.integers(0, CELLS - 1))
        return low, draw(st.integers(low + 1, CELLS))

    return span(), span()


@PROFILE
@given(layouts(kinds=POINT_KINDS, largest=8), _blocks())
def test_closed_contour_gives_what_it_encloses(named, block):
    shore_name, layout = named
    ring = _block(shore_name, *block)
    model = compile_layout(layout)
    assert abs(_closed(model, ring) - _enclosed(layout, ring)) <= ROUNDING


@PROFILE
@given(layouts(kinds=INNER, largest=6), _blocks())
def test_contour_independent_of_its_shape(named, block):
    # the same cells, their border drawn with bends: lines and cores are whole inside or whole outside
    shore_name, layout = named
    model = compile_layout(layout)
    straight = _block(shore_name, block[0], block[1])
    fine = _block(shore_name, block[0], block[1], steps=24)
    # lamb-oseen vorticity outside its cell is exp(-(2 m / 0.2 m)^2): nothing
    assert abs(_closed(model, straight) - _closed(model, fine)) <= ROUNDING


@PROFILE
@given(layouts(CONVEX, largest=6))
def test_chords_add_up(named):
    # the halves of a chord make the chord, backwards it is the opposite
    shore_name, layout = named
    z = quiet_places(shore_name)
    a, b = z[:-1], z[1:]
    model = compile_layout(layout)
    for part in (0.25, 0.6180339887):
        middle = a + part * (b - a)
        whole = model.chords(a, b)
        assert np.abs(model.chords(a, middle) + model.chords(middle, b) - whole).max() <= ROUNDING
        assert np.abs(model.chords(b, a) + whole).max() <= ROUNDING


@PROFILE
@given(layouts(kinds=INNER, largest=6))
def test_no_flux_through_a_closed_contour_without_elements(named):
    shore_name, layout = named
    model = compile_layout(layout)
    for at in quiet_places(shore_name):
        ring = at + 0.3 * np.exp(2j * np.pi * np.arange(16) / 16)
        if model.wet(ring).all():
            assert abs(_closed(model, ring)) <= ROUNDING


@PROFILE
@given(layouts(largest=8, kinds=ALL_KINDS))
def test_neither_divergence_nor_vorticity_away_from_the_elements(named):
    shore_name, layout = named
    model = compile_layout(layout)
    z = quiet_places(shore_name)
    jet = model.jet(z)
    # dW/dzbar = (divergence - i vorticity) / 2; a core's vorticity has died out at ten radii
    assert np.abs(jet.skew).max() <= 1e-13
    assert np.abs(jet.velocity - model.velocity(z)).max() <= 1e-13 * model.magnitude(z).max()


@PROFILE
@given(layouts(largest=8, kinds=INNER))
def test_no_water_leaves_through_the_walls(named):
    shore_name, layout = named
    model = compile_layout(layout)
    for wall in wall_samples(SHORES[shore_name]):
        fluxes = model.chords(wall.points[:-1], wall.points[1:]).imag
        # element by element; only in a basin what one gives leaves through a wall and comes back for another
        shares = fluxes.sum(axis=1) if shore_name in BASINS else fluxes
        assert np.abs(shares).max() <= ROUNDING

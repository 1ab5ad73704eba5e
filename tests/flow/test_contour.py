"""Contours: residues, winding numbers, every element crossed and passed through, and quadrature beside."""

import numpy as np
import pytest
from numpy.testing import assert_allclose

from forebay.flow.contour import ContourStatus, integrate_contour
from forebay.flow.layout import (
    Ambient,
    Channel,
    Core,
    CoreModel,
    Corner,
    Doublet,
    Layout,
    LineSink,
    LineSource,
    Pier,
    Sink,
    Source,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.paths import Arc, BrokenPathError, Contour, Piece, Straight

ELEMENTS = (
    Sink("sink", 1 + 1j, 2.0),
    Source("source", -1 + 0.5j, 3.0),
    Vortex("vortex", 0.5 - 1j, 4.0),
    Vortex("rankine", -1.5 - 1j, 2.5, Core(CoreModel.RANKINE, 0.6)),
    Vortex("lamb-oseen", 2 - 1.2j, -1.5, Core(CoreModel.LAMB_OSEEN, 0.4)),
    LineSource("line", -0.5 + 2j, 1.5 + 2.6j, 1.2),
    Doublet("doublet", 0j, 1 + 0.5j),
)
DEPTH = 2.0
SHEAR = ((0.05, 0.2), (-0.1, -0.05))
AMBIENT = Ambient(0.3 + 0.1j, SHEAR, 0.3 + 0.2j)
PIER = Pier("pier", 3 + 2j, 0.5, 0.7)
EXACT = 1e-13
"""Rounding of some twenty logarithms with strengths of order 1."""


@pytest.fixture(scope="module")
def everything():
    return compile_layout(Layout(DEPTH, ambient=AMBIENT, elements=ELEMENTS, structures=(PIER,)))


@pytest.fixture(scope="module")
def irrotational():
    elements = tuple(e for e in ELEMENTS if e.name not in {"rankine", "lamb-oseen"})
    return compile_layout(Layout(DEPTH, ambient=Ambient(0.3 + 0.1j), elements=elements, structures=(PIER,)))


def integrated(model, path):
    return integrate_contour(model, path)


def total(integral):
    return complex(integral.circulation, integral.flux)


def difference(integral):
    """Between the exact value and the quadrature."""
    return abs(total(integral) - complex(integral.quadrature.circulation, integral.quadrature.flux))


@pytest.mark.parametrize(
    ("centre", "radius", "flux", "circulation", "enclosed"),
    [
        (1 + 1j, 0.5, -1.0, 0.0, {"sink": 1}),
        (0j, 0.3, 0.0, 0.0, {"doublet": 1}),
        (0.5 - 1j, 0.2, 0.0, 4.0, {"vortex": 1}),
        (0.5 + 2.3j, 1.2, 0.6, 0.0, {"line": 1}),
        (3 + 2j, 0.5, 0.0, 0.7, {"pier": 1}),
        (-3 - 3j, 1.0, 0.0, 0.0, {}),
        (
            0j,
            20.0,
            1.5 - 1.0 + 0.6,
            4.7,
            dict.fromkeys(["sink", "source", "vortex", "line", "doublet", "pier"], 1),
        ),
    ],
)
def test_circle_gives_what_it_encloses(irrotational, centre, radius, flux, circulation, enclosed):
    integral = integrated(irrotational, Contour.circle("c", centre, radius))
    assert integral.status is ContourStatus.OK
    assert_allclose([integral.circulation, integral.flux], [circulation, flux], rtol=0, atol=EXACT)
    assert {item.element: item.turns for item in integral.enclosed} == enclosed
    assert_allclose(integral.discharge, DEPTH * integral.flux)
    assert difference(integral) <= 1e-11  # ten times what the quadrature is asked for


@pytest.mark.parametrize("turns", [1, -1, 3, -2])
def test_windings_count_with_their_direction(irrotational, turns):
    path = Contour("c", (Arc(0.5 + 2.3j, 1.2, 0.4, 0.4 + 2 * np.pi * turns),))
    integral = integrated(irrotational, path)
    assert_allclose([integral.circulation, integral.flux], [0.0, 0.6 * turns], rtol=0, atol=EXACT)
    assert [(item.element, item.turns) for item in integral.enclosed] == [("line", turns)]
    assert_allclose(integral.enclosed_area, turns * np.pi * 1.44)
    assert_allclose(integral.length, abs(turns) * 2 * np.pi * 1.2)


PATHS: dict[str, tuple[Piece, ...]] = {
    "through the centre of lamb-oseen": (Straight(1 - 1.2j, 3 - 1.2j),),
    "through the centre of rankine": (Straight(-2.5 - 1j, -0.3 - 1j),),
    "corner in a core's centre": (Straight(2.5 - 2j, 2 - 1.2j), Straight(2 - 1.2j, 3 - 1j)),
    "arc through a core's centre": (Arc(3 - 1.2j, 1.0, 2.0, 4.0),),
    "arc in a core": (Arc(-1.5 - 1j, 0.3, 0.0, 2.5),),
    "arc along a rankine core's rim": (Arc(-1.5 - 1j, 0.6, 0.0, 2.5),),
    "arc across both": (Arc(0.2 - 3j, 2.4, 2.9, 0.2),),
    "across the line": (Straight(0 + 3j, 0.7 + 1.5j),),
    "arc across the line twice": (Arc(0.5 + 2.3j, 0.4, -1.5, 4.0),),
    "arc that starts on the line": (Arc(0.5 + 1.8j, 0.5, 0.5 * np.pi, 2.0 * np.pi),),
    "arc that ends on the line": (Arc(0.5 + 1.8j, 0.5, -0.5, 0.5 * np.pi),),
    "arc through the line's end": (Arc(-0.5 + 3j, 1.0, 4.0, 6.0),),
    "along the line": (Straight(-0.5 + 2j, 1.5 + 2.6j),),
    "round the pier": (Arc(3 + 2j, 0.5, -2.0, 1.0),),
    "mixed": (Straight(1.7 + 0j, 2.2 + 0j), Arc(0j, 2.2, 0.0, np.pi), Straight(-2.2 + 0j, -1.7 + 0j)),
}


@pytest.mark.parametrize("name", PATHS)
def test_exact_value_meets_the_quadrature(everything, name):
    integral = integrated(everything, Contour("c", PATHS[name]))
    # the quadrature is asked for 1e-12 of the integral of |W|, which is of order 1 to 10
    assert difference(integral) <= 3e-11
    assert difference(integral) <= 10 * integral.quadrature.error_estimate
    assert integral.quadrature.error_estimate <= 1e-8


@pytest.mark.parametrize("name", PATHS)
def test_shares_add_up_and_turn_with_the_direction(everything, name):
    there = integrated(everything, Contour("c", PATHS[name]))
    parts = sum(complex(share.circulation, share.flux) for share in there.by_element)
    assert abs(parts - total(there)) <= EXACT
    assert [share.element for share in there.by_element] == list(everything.owners)
    back = tuple(
        Straight(p.end, p.start) if isinstance(p, Straight) else Arc(p.centre, p.radius, p.to, p.begin)
        for p in reversed(PATHS[name])
    )
    assert abs(total(integrated(everything, Contour("c", back))) + total(there)) <= 10 * EXACT


@pytest.mark.parametrize("name", [name for name, pieces in PATHS.items() if len(pieces) == 1])
def test_pieces_add_up(everything, name):
    (piece,) = PATHS[name]
    parts = [piece.part(0.0, 0.37), piece.part(0.37, 1.0)]
    whole = integrated(everything, Contour("c", (piece,)))
    assert (
        abs(sum(total(integrated(everything, Contour("c", (p,)))) for p in parts) - total(whole))
        <= 10 * EXACT
    )


def test_half_of_a_line_gives_half_of_its_water(irrotational):
    start, end = -0.5 + 2j, 1.5 + 2.6j
    along = (end - start) / abs(end - start)
    corners = 0.5 * (start + end) + along * np.array([0.4j, -1.4 + 0.4j, -1.4 - 0.4j, -0.4j])
    integral = integrated(irrotational, Contour.polyline("c", corners, closed=True))
    assert_allclose([integral.circulation, integral.flux], [0.0, 0.3], rtol=0, atol=EXACT)
    assert integral.enclosed == ()  # a line that is cut is neither in nor out


@pytest.mark.parametrize("turn", [2 * np.pi, -2 * np.pi])
def test_gradient_gives_vorticity_times_area(turn):
    model = compile_layout(Layout(1.0, ambient=AMBIENT))
    integral = integrated(model, Contour("c", (Arc(5 + 1j, 3.0, 1.0, 1.0 + turn),)))
    assert_allclose(integral.circulation, -0.3 * 9 * np.pi * np.sign(turn), rtol=1e-14)
    assert_allclose(integral.flux, 0.0, atol=1e-13)


@pytest.mark.parametrize("radius", [0.1, 0.6, 1.5])
def test_core_gives_its_inner_circulation(radius):
    elements = (
        Vortex("r", 0j, 2.0, Core(CoreModel.RANKINE, 0.6)),
        Vortex("l", 9 + 0j, 3.0, Core(CoreModel.LAMB_OSEEN, 0.6)),
    )
    model = compile_layout(Layout(1.0, elements=elements))
    found = [integrated(model, Contour.circle("c", at, radius)).circulation for at in (0j, 9 + 0j)]
    expected = [2.0 * min(1.0, (radius / 0.6) ** 2), -3.0 * np.expm1(-((radius / 0.6) ** 2))]
    assert_allclose(found, expected, rtol=1e-13)


@pytest.mark.parametrize(("shift", "flux"), [(1e-6, -1.0), (-1e-6, 0.0)])
def test_passing_close_to_a_sink_costs_no_digit(irrotational, shift, flux):
    square = 1 + 1j + np.array([shift + 0.5j, -0.3 + 0.5j, -0.3 - 0.5j, shift - 0.5j])
    integral = integrated(irrotational, Contour.polyline("c", square, closed=True))
    assert_allclose([integral.circulation, integral.flux], [0.0, flux], rtol=0, atol=EXACT)


@pytest.mark.parametrize(
    "path",
    [
        Contour.circle("c", 1 + 2j, 1.0),
        Contour.polyline("c", np.array([0 + 1j, 2 + 1j])),
        Contour.polyline("c", np.array([1 + 1j, 2 + 2j])),
    ],
    ids=["arc", "straight", "vertex"],
)
def test_contour_through_a_point_element_has_no_value(everything, path):
    integral = integrated(everything, path)
    assert integral.status is ContourStatus.THROUGH_SINGULARITY
    assert integral.through == "sink"
    assert integral.flux is integral.circulation is integral.discharge is integral.quadrature is None
    assert integral.by_element == integral.enclosed == ()
    assert integral.length > 0


class TestShores:
    CORNER = compile_layout(
        Layout(
            DEPTH,
            shore=Corner(0j, 1j, 1.5 * np.pi),
            elements=(
                Sink("s", -1 + 1j, 2.0),
                LineSink("west", 0.5j, 1.5j, 0.7),
                LineSource("south", 0.5 + 0j, 1 + 0j, 1.0),
            ),
        )
    )

    def test_round_the_salient_corner(self):
        integral = integrated(self.CORNER, Contour("c", (Arc(0j, 0.3, 0.5 * np.pi, 2 * np.pi),)))
        # from bank to bank nothing but the element's own water passes: between them there is none
        assert abs(integral.flux) <= EXACT
        assert difference(integral) <= 1e-11

    @pytest.mark.parametrize(
        ("arc", "flux"),
        [(Arc(1j, 0.6, 0.5 * np.pi, 1.5 * np.pi), -0.35), (Arc(0.75 + 0j, 0.4, np.pi, 2 * np.pi), 0.5)],
    )
    def test_round_a_line_in_the_bank(self, arc, flux):
        integral = integrated(self.CORNER, Contour("c", (arc,)))
        assert_allclose(integral.flux, flux, rtol=0, atol=EXACT)

    def test_chord_over_land(self):
        integral = integrated(self.CORNER, Contour.polyline("c", np.array([0.8j, 0.8 + 0j])))
        assert integral.status is ContourStatus.CROSSES_LAND

    @pytest.mark.parametrize("centre", [-2.5j, 3.4j, -9j])
    def test_circle_beyond_a_channel(self, centre):
        model = compile_layout(
            Layout(DEPTH, shore=Channel(-3j, 1 + 0j, 7.0), elements=(Sink("s", 1 + 1j, 2.0),))
        )
        assert integrated(model, Contour.circle("c", centre, 1.0)).status is ContourStatus.CROSSES_LAND

    def test_section_of_a_channel(self):
        # checks 1.8: U_up = 0.5 over 100 m, sink 5: 50 comes in, 45 goes on
        model = compile_layout(
            Layout(
                1.0,
                shore=Channel(0j, 1 + 0j, 100.0),
                ambient=Ambient(0.5 + 0j),
                elements=(Sink("s", 30j, 5.0),),
            )
        )
        for x, flux in ((-400.0, 50.0), (-1.0, 50.0), (400.0, 45.0)):
            integral = integrated(model, Contour.polyline("c", np.array([x + 0j, x + 100j])))
            assert_allclose(integral.flux, flux, rtol=1e-14)

    def test_along_the_bank_over_a_screen(self):
        screen = LineSink("screen", 40 + 0j, 52 + 0j, 2.2)
        model = compile_layout(
            Layout(4.0, shore=StraightBank(0j, 1 + 0j), ambient=Ambient(0.35 + 0j), elements=(screen,))
        )
        integral = integrated(model, Contour.polyline("c", np.array([30 + 0j, 46 + 0j, 60 + 0j])))
        assert_allclose(integral.flux, 2.2 / 4.0, rtol=1e-13)  # all of it, to the right: into the bank

    def test_pier_cut_through(self, everything):
        assert integrated(everything, Contour.circle("c", 3 + 2j, 0.4)).status is ContourStatus.CROSSES_LAND
        across = Contour.polyline("c", np.array([2 + 2j, 4 + 2j]))
        assert integrated(everything, across).status is ContourStatus.CROSSES_LAND


def test_polyline_area_and_length():
    square = Contour.polyline("c", np.array([0, 2, 2 + 2j, 2j, 0]), closed=True)
    assert (square.enclosed_area, square.length, len(square.pieces)) == (4.0, 8.0, 4)
    clockwise = Contour.polyline("c", np.array([0, 2j, 2 + 2j, 2]), closed=True)
    assert clockwise.enclosed_area == -4.0
    assert Contour.polyline("c", np.array([0, 1, 1j])).enclosed_area is None


def test_half_disc_area():
    half = Contour("c", (Arc(3 + 1j, 2.0, 0.0, np.pi), Straight(1 + 1j, 5 + 1j)))
    assert half.closed
    assert half.enclosed_area == pytest.approx(2 * np.pi, rel=1e-14)


@pytest.mark.parametrize(
    "pieces",
    [(Straight(0j, 1 + 0j), Straight(2 + 0j, 3 + 0j)), (Straight(1j, 1j),), ()],
    ids=["gap", "point", "none"],
)
def test_broken_paths_are_refused(pieces):
    with pytest.raises(BrokenPathError) as refused:
        Contour("c", pieces)
    assert refused.value.code == "broken-path"


def test_core_whose_centre_lies_on_the_contour_is_neither_in_nor_out(everything):
    integral = integrated(everything, Contour.circle("c", 3 - 1.2j, 1.0))
    assert integral.status is ContourStatus.OK
    assert integral.enclosed == ()
    assert difference(integral) <= 1e-11

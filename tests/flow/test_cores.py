"""Vortex cores: vorticity, circulation, chords and arcs against quadrature, mirrors in walls."""

import numpy as np
import pytest
from numpy.testing import assert_allclose
from scipy.integrate import quad

from forebay.flow.cores import core_term
from forebay.flow.layout import (
    Basin,
    Channel,
    Core,
    CoreModel,
    Corner,
    DeadEnd,
    Layout,
    OpenWater,
    StraightBank,
    Vortex,
)
from forebay.flow.model import compile_layout
from forebay.flow.shores import frame_of

AT, GAMMA, RADIUS = 0.2 + 0.1j, -3.0, 0.7
BOTH = pytest.mark.parametrize("model", list(CoreModel))


def core(model, shore=None, at=AT, radius=RADIUS):
    frame = frame_of(shore or OpenWater(), at, 1.0)
    return core_term(at, GAMMA, Core(model, radius), owner=1, frame=frame)


def whole_velocity(term, z):
    """Point vortex plus difference."""
    return -1j * GAMMA / (2 * np.pi) / (z - AT) + term.jet(z).velocity


def numerical(path, rate, term, breaks=()):
    def along(x, part):
        z = np.array([path(x)])
        return part(whole_velocity(term, z)[0] * rate(x))

    inner = [x for x in breaks if 0.0 < x < 1.0] or None
    parts = [
        quad(along, 0, 1, args=(part,), points=inner, epsabs=1e-13, epsrel=1e-13, limit=200)[0]
        for part in (np.real, np.imag)
    ]
    return complex(*parts)


def circle_meets(a, b):
    """Shares of the chord a -> b at which it meets the core's radius."""
    run, away = b - a, a - AT
    half, square = (away * run.conjugate()).real, abs(run) ** 2
    root = half**2 - square * (abs(away) ** 2 - RADIUS**2)
    return [(-half - root**0.5) / square, (-half + root**0.5) / square] if root > 0 else []


def test_rankine_turns_rigidly_inside_and_freely_outside():
    term = core(CoreModel.RANKINE)
    r = np.array([0.1, 0.5, 0.69, 0.71, 2.0])
    speed = -whole_velocity(term, AT + r).imag
    assert_allclose(speed, GAMMA / (2 * np.pi) * np.where(r < RADIUS, r / RADIUS**2, 1 / r), rtol=1e-14)


def test_lamb_oseen_follows_its_formula():
    # checks 4.4: the largest speed 0.638173 Gamma / (2 pi r0) at 1.120906 r0; six digits
    term = core(CoreModel.LAMB_OSEEN)
    speed = abs(whole_velocity(term, AT + 1.120906 * RADIUS * np.array([1.0, 1j, -1.0])))
    assert_allclose(speed, 0.638173 * abs(GAMMA) / (2 * np.pi * RADIUS), rtol=1e-6)


@BOTH
def test_derivatives_by_differences(model):
    term = core(model)
    z = AT + RADIUS * np.array([0.3 + 0.2j, -0.4j, 0.6 - 0.5j, 1.3 + 0.4j])
    h = 1e-3
    steps, weights = np.array([-2, -1, 1, 2]), np.array([1, -8, 8, -1]) / (12 * h)
    x_change, y_change = (
        (weights[:, None] * term.jet(z + steps[:, None] * d).velocity).sum(axis=0) for d in (h, 1j * h)
    )
    jet = term.jet(z)
    # fourth-order differences: h^4 / 30 times a fifth derivative of order 1e4
    assert_allclose(jet.slope, 0.5 * (x_change - 1j * y_change), atol=1e-8)
    assert_allclose(jet.skew, 0.5 * (x_change + 1j * y_change), atol=1e-8)


@BOTH
def test_skew_integrates_to_the_circulation(model):
    # the vorticity 2i skew over the plane is Gamma: polar midpoint rule
    term = core(model)
    r = (np.arange(4000) + 0.5) * 8.0 * RADIUS / 4000
    vorticity = (2j * term.jet(AT + r + 0j).skew).real
    total = (vorticity * 2 * np.pi * r).sum() * 8.0 * RADIUS / 4000
    assert_allclose(
        total, GAMMA, rtol=1e-3 if model is CoreModel.RANKINE else 1e-6
    )  # rankine jumps in a cell


@BOTH
def test_chords_against_quadrature(model):
    term = core(model)
    pairs = [
        (1 + 1j, -1 - 0.5j),
        (0.3 + 0.2j, 0.1 - 0.2j),
        (-2 + 0.3j, 2 + 0.4j),
        (1 + 1j, 2 - 1j),
        (0.2j, 1 + 0j),
    ]
    for a, b in pairs:
        exact = numerical(
            lambda x, a=a, b=b: a + x * (b - a), lambda _x, a=a, b=b: b - a, term, circle_meets(a, b)
        )
        ends = np.array([a]), np.array([b])
        assert (
            abs(term.whole_chords(*ends)[0] - exact) <= 1e-12
        )  # the quadrature's own tolerance, with margin
        point = -1j * GAMMA / (2 * np.pi) * np.log((b - AT) / (a - AT))
        assert abs(term.chords(*ends)[0] + point - exact) <= 1e-12


@BOTH
def test_chord_through_the_centre_turns_nothing(model):
    term = core(model)
    through = term.whole_chords(np.array([AT - 1, AT]), np.array([AT + 2, AT + 1j]))
    assert_allclose(through.real, 0.0, atol=1e-15)  # the velocity is square to the chord
    backwards = term.whole_chords(np.array([AT + 2, AT + 1j]), np.array([AT - 1, AT]))
    assert_allclose(backwards, -through, atol=1e-15)
    none = term.whole_chords(np.array([AT, 1j]), np.array([AT, 1j]))
    assert_allclose(none, 0.0, atol=1e-15)


@BOTH
@pytest.mark.parametrize(
    ("centre", "radius", "begin", "turn"),
    [
        (1 + 0.5j, 0.9, 2.6, 1.2),
        (0.2 + 0.1j, 0.4, 0.3, 0.7),
        (-0.6 - 0.2j, 1.0, -0.7, 0.75),
        (8j, 2.0, 0.1, -0.7),
    ],
    ids=["across", "concentric", "past-the-centre", "far"],
)
def test_arcs_against_quadrature(model, centre, radius, begin, turn):
    term = core(model)

    def place(x):
        return centre + radius * np.exp(1j * (begin + turn * x))

    samples = np.abs(place(np.linspace(0, 1, 20001)) - AT) - RADIUS
    meets = (np.flatnonzero(np.diff(np.sign(samples))) + 0.5) / 20000
    exact = numerical(place, lambda x: 1j * turn * (place(x) - centre), term, meets)
    found = term.whole_arc(centre, complex(place(0.0)), turn)
    assert abs(found - exact) <= 1e-9  # the kink of a rankine core lies within 5e-5 of the break: its square


@BOTH
def test_stream_function_differs_by_the_flux(model):
    term = core(model)
    a, b = np.array([0.3 + 0.2j, 1 + 1j]), np.array([0.1 - 0.3j, 0.5 + 0j])
    assert_allclose((term.potential(b) - term.potential(a)).imag, term.chords(a, b).imag, atol=1e-14)


@BOTH
@pytest.mark.parametrize(
    "shore",
    [
        StraightBank(0j, 1 + 0j),
        Channel(0j, 1 + 0j, 3.0),
        DeadEnd(0j, 1 + 0j, 3.0),
        Basin(0j, 1 + 0j, 4.0, 3.0),
        Corner(0j, 1 + 0j, np.pi / 2),
        Corner(0j, 1 + 0j, np.pi / 3),
    ],
    ids=lambda shore: type(shore).__name__,
)
def test_walls_stay_impermeable(model, shore):
    # a core of 0.7 m, 0.9 m from a wall: its vorticity reaches the walls
    layout = Layout(1.0, shore=shore, elements=(Vortex("v", 1.5 + 0.9j, GAMMA, Core(model, 0.7)),))
    flow = compile_layout(layout)
    for wall in flow.walls:
        along = np.linspace(-min(wall.before, 6.0), min(wall.after, 6.0), 42)[1:-1]
        places = np.asarray(wall.point + wall.direction * along, dtype=np.complex128)
        normal = (flow.velocity(places) * wall.direction).imag
        assert np.abs(normal).max() <= 1e-14  # every image within exp(-49) is there


def test_odd_corner_mirrors_once_in_each_bank():
    corner = Corner(0j, 1 + 0j, 1.3)
    far_from_vertex = core(CoreModel.LAMB_OSEEN, corner, at=complex(30 * np.exp(0.65j)), radius=5.0)
    assert len(far_from_vertex.centres) == 3
    reflex = core(CoreModel.RANKINE, Corner(0j, 1 + 0j, 1.5 * np.pi), at=5j, radius=1.0)
    assert len(reflex.centres) == 1


@BOTH
def test_magnitude_is_the_size_of_the_difference(model):
    term = core(model)
    z = AT + np.array([0.3, 0.5j, 9.0])
    assert_allclose(term.magnitude(z), np.abs(GAMMA / (2 * np.pi) / (z - AT)) * weight(model, z), atol=1e-15)


def weight(model, z):
    r = np.abs(z - AT)
    return np.where(r <= RADIUS, 1.0, 0.0) if model is CoreModel.RANKINE else np.exp(-((r / RADIUS) ** 2))

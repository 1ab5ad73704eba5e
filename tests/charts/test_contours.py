"""Contour lines: on their level everywhere, complete, and nowhere a line that the flow does not have."""

import numpy as np
import pytest

from forebay.charts.contours import Component, LevelLines, draw_levels
from forebay.charts.lattice import Lattice, lay_lattice
from forebay.charts.window import choose_window
from forebay.flow.layout import Ambient, Channel, Layout, Pier, Sink, Source, StraightBank, Vortex
from forebay.flow.model import FlowModel, compile_layout
from forebay.flow.stagnation.result import Window
from support.layouts import POINT_KINDS, random_layout
from support.sites import SHORES

SQUARE = Window((-40.0, 40.0), (-40.0, 40.0))
COLUMNS = 120


def psi_lines(
    layout: Layout, window: Window, step: float, through: complex | None = None
) -> tuple[FlowModel, Lattice, LevelLines]:
    model = compile_layout(layout)
    lattice = lay_lattice(model, window, COLUMNS)
    return model, lattice, draw_levels(model, lattice, Component.STREAM_FUNCTION, step=step, through=through)


def fitting_step(lattice: Lattice) -> float:
    """A step with lines some four cells apart; no round number, so that no discharge is a multiple of it."""
    return 4.1234 * float(np.median(np.abs(lattice.steps[lattice.usable_edges()])))


def length_within(lines: LevelLines, low: complex, high: complex) -> float:
    """Length of all segments whose middle lies in a rectangle."""
    total = 0.0
    for line in lines.lines:
        middle = (line[1:] + line[:-1]) / 2
        inside = (middle.real > low.real) & (middle.real < high.real)
        inside &= (middle.imag > low.imag) & (middle.imag < high.imag)
        total += float(np.abs(np.diff(line))[inside].sum())
    return total


def turns_round(line: np.ndarray, centre: complex, radius: float) -> int:
    """How often a line crosses a circle."""
    inside = np.abs(line - centre) < radius
    return int(np.count_nonzero(np.diff(inside)))


def largest_drift(model: FlowModel, lines: LevelLines, component: Component) -> tuple[float, float]:
    """Largest change of the field from vertex to vertex, in steps: inside the water, and on to a wall."""
    starts = np.concatenate([line[:-1] for line in lines.lines])
    ends = np.concatenate([line[1:] for line in lines.lines])
    drift = np.abs(component.of(model.chord(starts, ends))) / lines.step
    on_wall = np.minimum(model.distance_to_wall(starts), model.distance_to_wall(ends)) < 1e-6 * model.scale
    return float(drift[~on_wall].max()), float(drift[on_wall].max(initial=0.0))


def loose_ends(model: FlowModel, lattice: Lattice, lines: LevelLines) -> list[complex]:
    """Ends of lines in open water: not at the rim of the grid, not at a wall, not at a singularity."""
    ends = np.array([end for line in lines.lines if line[0] != line[-1] for end in (line[0], line[-1])])
    first, last = lattice.nodes[0, 0], lattice.nodes[-1, -1]
    reach = lattice.spacing
    at_rim = (ends.real < first.real + reach) | (ends.real > last.real - reach)
    at_rim |= (ends.imag < first.imag + reach) | (ends.imag > last.imag - reach)
    at_wall = model.distance_to_wall(ends) < 1e-6 * model.scale
    crowded = np.abs(model.velocity(ends)) * reach > 0.3 * lines.step
    holes = np.array([singularity.at for singularity in model.singularities])
    # a pier that turns and is smaller than a cell leaves the cell of its centre blank
    for pier in model.piers:
        at_wall |= np.abs(ends - pier.at) < pier.radius + 1.5 * reach
    near = (np.abs(ends[:, None] - holes[None, :]) < 3 * reach).any(axis=1)
    return list(ends[~(at_rim | at_wall | crowded | near)])


class TestBasic:
    def test_lone_source_has_rays_at_equal_angles(self):
        # exact: psi = q theta / 2 pi, so 12 tubes are 12 rays 30 degrees apart
        layout = Layout(1.0, elements=(Source("S", 0.3 + 0.2j, 12.0),))
        _, _, lines = psi_lines(layout, SQUARE, 1.0, through=-30 + 0.2j)
        angles = [np.angle(line[line.size // 2] - (0.3 + 0.2j)) for line in lines.lines]
        assert len(lines.lines) == 12
        # vertices lie on their level to 1e-9 of a step of 30 degrees
        np.testing.assert_allclose(np.sin(6 * np.array(angles)), 0.0, atol=1e-7)

    def test_no_line_where_the_principal_branch_has_its_cut(self):
        # rays half way between: none within 2 m of the cut at x < 0.3; principal-branch contours would
        # draw every one of 12 levels along it, 12 x 20 m
        layout = Layout(1.0, elements=(Source("S", 0.3 + 0.2j, 12.0),))
        place = 0.3 + 0.2j + 30 * np.exp(1j * np.deg2rad(165))
        _, _, lines = psi_lines(layout, SQUARE, 1.0, through=complex(place))
        assert length_within(lines, -30 - 1.8j, -10 + 2.2j) == 0.0

    def test_one_true_line_along_the_cut_is_drawn_once(self):
        layout = Layout(1.0, elements=(Source("S", 0.3 + 0.2j, 12.0),))
        _, _, lines = psi_lines(layout, SQUARE, 1.0, through=-30 + 0.2j)
        # segments are counted by their middles: up to one cell of 0.67 m at each end
        assert length_within(lines, -30 - 1.8j, -10 + 2.2j) == pytest.approx(20.0, abs=2 * 80 / COLUMNS)

    def test_uniform_current_between_banks_is_divided_evenly(self):
        layout = Layout(2.0, ambient=Ambient(0.5 + 0j), shore=Channel(-40 - 30j, 1 + 0j, 60.0))
        _, _, lines = psi_lines(layout, SQUARE, 5.0, through=-40 - 30j)
        heights = sorted({round(float(line.imag.mean()), 6) for line in lines.lines})
        # psi = 0.5 y: a line every 10 m, the banks included
        np.testing.assert_allclose(heights, np.arange(-30.0, 31.0, 10.0), atol=1e-6)

    def test_equipotentials_of_a_vortex_are_rays(self):
        layout = Layout(1.0, elements=(Vortex("G", 0.3 + 0.2j, 12.0),))
        model = compile_layout(layout)
        lattice = lay_lattice(model, SQUARE, COLUMNS)
        lines = draw_levels(model, lattice, Component.POTENTIAL, step=1.0, through=-30 + 0.2j)
        angles = np.array([np.angle(line[line.size // 2] - (0.3 + 0.2j)) for line in lines.lines])
        assert angles.size == 12
        np.testing.assert_allclose(np.sin(6 * angles), 0.0, atol=1e-7)


class TestOnLevel:
    @pytest.mark.parametrize("shore", SHORES)
    @pytest.mark.parametrize("component", list(Component), ids=lambda component: component.name.lower())
    def test_field_is_constant_along_every_line(self, shore, component):
        model = compile_layout(random_layout(shore, 5, kinds=POINT_KINDS, count=5))
        lattice = lay_lattice(model, choose_window(model), COLUMNS)
        lines = draw_levels(model, lattice, component, step=fitting_step(lattice))
        assert len(lines.lines) > 3
        inside, on_wall = largest_drift(model, lines, component)
        # crossings are settled to 1e-9 of a step; a chord has two of them, found by bisection next to a pole
        assert inside < 1e-6
        # the last bit to the wall is straight: linear interpolation over one cell, curvature x h^2 / 8
        assert on_wall < 0.05

    def test_levels_are_a_whole_number_of_steps_apart(self):
        layout = Layout(1.0, ambient=Ambient(0.2 + 0j), elements=(Sink("K", 3.3 + 2.2j, 1.5),))
        model, _, lines = psi_lines(layout, SQUARE, 0.5)
        starts = np.array([line[line.size // 2] for line in lines.lines])
        gaps = model.chord(np.full(starts.size - 1, starts[0]), starts[1:]).imag / lines.step
        # 1.5 is three steps, so that all branches agree: settled to 1e-9 of a step
        np.testing.assert_allclose(gaps, np.round(gaps), atol=1e-6)


class TestComplete:
    @pytest.mark.parametrize("discharge", [1.0, 1.37, 0.31, np.pi])
    @pytest.mark.parametrize("kind", [Source, Sink])
    def test_no_line_ends_in_open_water_whatever_the_discharge(self, kind, discharge):
        elements = (kind("A", 3.3 + 2.2j, discharge), Source("B", -11 + 5j, 0.77))
        layout = Layout(1.0, ambient=Ambient(0.05 + 0j), elements=elements)
        model, lattice, lines = psi_lines(layout, SQUARE, 0.2)
        assert lines.breaks == 0
        assert loose_ends(model, lattice, lines) == []

    @pytest.mark.parametrize("shore", SHORES)
    @pytest.mark.parametrize("seed", [1, 2])
    def test_no_line_ends_in_open_water_on_any_shore(self, shore, seed):
        layout = random_layout(shore, seed, kinds=("source", "sink"), count=6, piers=1)
        model = compile_layout(layout)
        lattice = lay_lattice(model, choose_window(model), COLUMNS)
        lines = draw_levels(model, lattice, Component.STREAM_FUNCTION, step=fitting_step(lattice))
        assert lines.breaks == 0
        assert loose_ends(model, lattice, lines) == []

    def test_sink_takes_as_many_lines_as_tubes(self):
        layout = Layout(1.0, ambient=Ambient(0.2 + 0j), elements=(Sink("K", 3.3 + 2.2j, 6.0),))
        _, _, lines = psi_lines(layout, SQUARE, 0.5)
        # the flux through a small circle is 6 = 12 steps, all of it inwards: every line crosses it once
        assert sum(turns_round(line, 3.3 + 2.2j, 3.0) for line in lines.lines) == 12

    def test_lines_that_a_sink_takes_are_missing_downstream(self):
        shore = Channel(-40 - 30.1j, 1 + 0j, 60.0)
        sink = Sink("K", 3.3 + 2.2j, 2.0)
        layout = Layout(1.0, ambient=Ambient(0.2 + 0j), shore=shore, elements=(sink,))
        _, _, lines = psi_lines(layout, SQUARE, 0.5, through=-40 - 29.0j)
        upstream = sum(int(np.count_nonzero(np.diff(line.real > -35))) for line in lines.lines)
        downstream = sum(int(np.count_nonzero(np.diff(line.real > 35))) for line in lines.lines)
        # the sink takes 2.0 of the 12.0 that comes down the channel: four steps of 0.5
        assert upstream - downstream == 4


class TestWalls:
    def test_no_vertex_on_land_or_inside_a_pier(self):
        pier = Pier("P", 5 + 9j, 4.0)
        sink = Sink("K", -12 + 6j, 1.0)
        bank = StraightBank(0j, complex(np.exp(0.3j)))
        layout = Layout(
            2.0, ambient=Ambient(0.1 * np.exp(0.3j)), shore=bank, elements=(sink,), structures=(pier,)
        )
        model, _, lines = psi_lines(layout, SQUARE, 0.1)
        assert model.wet(np.concatenate(lines.lines)).all()

    def test_lines_that_leave_the_water_end_on_the_wall(self):
        layout = Layout(1.0, shore=StraightBank(0j, 1 + 0j), elements=(Source("S", 3.3 + 5.1j, 1.0),))
        model = compile_layout(layout)
        lattice = lay_lattice(model, SQUARE, COLUMNS)
        lines = draw_levels(model, lattice, Component.POTENTIAL, step=0.05)
        ends = np.array([end for line in lines.lines if line[0] != line[-1] for end in (line[0], line[-1])])
        on_bank = ends[ends.imag < 0.5]
        assert on_bank.size > 10
        # bisected 40 times from a cell of 0.7 m, against the wet tolerance of 1e-9 of the scale
        assert np.abs(on_bank.imag).max() < 1e-6


class TestCrowding:
    def test_lines_stop_where_they_would_be_too_near(self):
        layout = Layout(1.0, elements=(Source("S", 0.3 + 0.2j, 12.0),))
        model = compile_layout(layout)
        lattice = lay_lattice(model, SQUARE, COLUMNS)
        lines = draw_levels(model, lattice, Component.STREAM_FUNCTION, step=0.5, apart=2.0)
        nearest = min(float(np.abs(line - (0.3 + 0.2j)).min()) for line in lines.lines)
        # 24 rays are 2 m apart at r = 24 x 2 / 2 pi = 7.64 m
        assert 24 * 2.0 / (2 * np.pi) <= nearest < 24 * 2.0 / (2 * np.pi) + 1.0


class TestCirculation:
    @pytest.mark.parametrize("radius", [0.3, 1.0, 6.0])
    def test_no_equipotential_ends_in_open_water_round_a_turning_pier(self, radius):
        # also where the pier is smaller than a cell of 0.67 m, so that no cell lies within it
        pier = Pier("P", 3.1 + 2.2j, radius, circulation=-0.77)
        vortex = Vortex("G", -14.2 + 9j, 1.31)
        layout = Layout(1.0, ambient=Ambient(0.1 + 0j), elements=(vortex,), structures=(pier,))
        model = compile_layout(layout)
        lattice = lay_lattice(model, SQUARE, COLUMNS)
        lines = draw_levels(model, lattice, Component.POTENTIAL, step=0.2)
        assert lines.breaks == 0
        # a pier of half a cell is passed within the cell: its lines may end there
        ends = [end for end in loose_ends(model, lattice, lines) if abs(end - pier.at) > radius + 1.0]
        assert ends == []

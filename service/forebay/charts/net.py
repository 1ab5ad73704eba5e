"""The net itself: speed, streamlines and equipotentials of a scene, computed before anything is drawn."""

from dataclasses import dataclass

import numpy as np
from scipy import ndimage

from forebay.charts.contours import Component, LevelLines, draw_levels
from forebay.charts.land import visible_part
from forebay.charts.lattice import EIGHT_NEIGHBOURS, Lattice, lay_lattice
from forebay.charts.options import FlowNetOptions, Layer, Scene
from forebay.charts.rings import bank_lines, middle_of, ring_lines
from forebay.charts.steps import Tube, choose_tube, figures, speed_levels
from forebay.charts.units import DisplayUnits
from forebay.flow.arrays import BoolArray, ComplexArray, FloatArray
from forebay.flow.layout import outflow
from forebay.flow.model import FlowModel
from forebay.flow.stagnation.result import WATER

CELL = 4.0
"""Width of a cell of the grid [px at scale 1]."""

GOLDEN = 0.618034
"""Golden section: its multiples are spread evenly between 0 and 1."""

LEAST_SPACING = 2.6
"""Distance below which neighbouring lines are left out [px at scale 1]."""

ROOM = 8.0
"""Distance of streamlines wanted where rings leave little width to them, in brisk water [px at scale 1]."""

MOST_NODES = 150_000
"""Nodes of the grid, above which its cells grow."""


FEWEST_NODES = 12_000
"""Nodes of the grid, below which a line could pass two features of the flow unseen."""

MOST_PAIRS = 20_000_000
"""Nodes times poles, above which the grid is made coarser, down to FEWEST_NODES."""


@dataclass(frozen=True, slots=True)
class FlowNet:
    """What is drawn.

    lattice : the grid;  speeds : shape (ny, nx), in the picture's units, nan away from the water
    levels : limits of the speed bands, same units
    streamlines, equipotentials : None where not asked for or not existing
    tube : discharge of a stream tube in the picture's units, None without streamlines
    """

    lattice: Lattice
    speeds: FloatArray
    levels: FloatArray
    streamlines: LevelLines | None
    equipotentials: LevelLines | None
    tube: Tube | None


def compute_net(scene: Scene, options: FlowNetOptions, pixels: float) -> FlowNet:
    """Speeds and level lines of a scene on a grid of CELL pixels; `pixels`: width of the map at scale 1."""
    model, window = scene.model, scene.window
    aspect = (window.y[1] - window.y[0]) / (window.x[1] - window.x[0])
    nodes = min(MOST_NODES, max(FEWEST_NODES, MOST_PAIRS / max(model.rational.poles.size, 1)))
    columns = int(min(pixels / CELL, np.sqrt(nodes / aspect)))
    lattice = lay_lattice(model, window, columns)
    speeds = speeds_on(model, lattice, options.units)
    room = ROOM * (window.x[1] - window.x[0]) / pixels if ring_lines(model.layout) else 0.0
    tube = tube_of(model, lattice, options.units, brisk(lattice, speeds) * room)
    wanted = options.layers if tube is not None else frozenset()
    streamlines = equipotentials = None
    if tube is not None:
        apart = LEAST_SPACING * (window.x[1] - window.x[0]) / pixels
        step = tube.discharge * options.units.metre**3 / model.layout.depth
        if Layer.STREAMLINES in wanted:
            through = reference(scene)
            streamlines = draw_levels(
                model, lattice, Component.STREAM_FUNCTION, step=step, through=through, apart=apart
            )
        if Layer.EQUIPOTENTIALS in wanted and model.has_potential:
            equipotentials = draw_levels(model, lattice, Component.POTENTIAL, step=step, apart=apart)
    return FlowNet(
        lattice, speeds, speed_levels(in_water(lattice, speeds)), streamlines, equipotentials, tube
    )


def speeds_on(model: FlowModel, lattice: Lattice, units: DisplayUnits) -> FloatArray:
    """Speed at the nodes in the water and next to it, in the picture's units; elsewhere nan."""
    near = ndimage.binary_dilation(lattice.wet, structure=EIGHT_NEIGHBOURS)
    ringed = bool(ring_lines(model.layout))
    known = lattice.wet if ringed else near
    speeds = np.full(lattice.nodes.shape, np.nan)
    speeds[known] = np.abs(model.velocity(lattice.nodes[known])) / units.metre
    return led_ashore(speeds, near & ~known) if ringed else speeds


def led_ashore(speeds: FloatArray, beside: BoolArray) -> FloatArray:
    """Speeds with those of nodes beside the water replaced by the mean of their neighbours in it.

    Behind a ring the flow has no continuation that could be drawn, as it has behind a straight bank.
    """
    known = np.isfinite(speeds)
    around = np.ones((3, 3))
    total = ndimage.convolve(np.where(known, speeds, 0.0), around, mode="constant")
    count = ndimage.convolve(known.astype(np.float64), around, mode="constant")
    return np.where(beside & (count > 0.0), total / np.maximum(count, 1.0), speeds)


def in_water(lattice: Lattice, speeds: FloatArray) -> FloatArray:
    """The finite speeds in the water, flattened."""
    return speeds[lattice.wet & np.isfinite(speeds)]


def brisk(lattice: Lattice, speeds: FloatArray) -> float:
    """Speed that nine tenths of the water do not exceed, in the units of the speeds; 0 without water."""
    known = in_water(lattice, speeds)
    return float(np.percentile(known, 90.0)) if known.size else 0.0


def tube_of(model: FlowModel, lattice: Lattice, units: DisplayUnits, least: float) -> Tube | None:
    """Discharge of a stream tube, from the busiest row or column of the grid; None where nothing flows.

    least : flow per depth below which the lines would stand too close, speed in the picture's units x [m]
    """
    steps = np.where(lattice.usable_edges(), np.abs(lattice.steps.imag), 0.0)
    rows, columns = lattice.shape
    across = steps[: lattice.horizontal_count].reshape(rows, columns - 1).sum(axis=1)
    upward = steps[lattice.horizontal_count :].reshape(rows - 1, columns).sum(axis=0)
    # the median row stands for the map: a row through an intake would count its water twice
    busiest = max(
        float(np.median(across[across > 0])) if (across > 0).any() else 0.0, float(np.median(upward))
    )
    if not busiest > 0.0:
        return None
    discharges = [abs(outflow(element)) for element in model.layout.elements if outflow(element) != 0.0]
    shown = [units.lengthwise(discharge, 3) for discharge in discharges]
    across = units.lengthwise(busiest * model.layout.depth, 3)
    return choose_tube(shown, across, units.lengthwise(least * model.layout.depth, 2))


def reference(scene: Scene) -> complex | None:
    """A place that shall lie on a streamline of the net: a visible bank, else a saddle in the water."""
    for line in bank_lines(scene.model.layout):
        if scene.window.contains(middle_of(line)):
            return middle_of(line)
    for wall in scene.model.walls:
        part = visible_part(wall, scene.window)
        if part is not None:
            return part[0] + 0.01 * (part[1] - part[0])
    return next((point.at for point in scene.stagnation_points if point.on == WATER), None)


def net_notes(net: FlowNet, scene: Scene, options: FlowNetOptions) -> list[str]:
    """What a reader must know about the lines."""
    notes = []
    units, depth = options.units, options.units.lengthwise(scene.model.layout.depth, 1)
    if net.streamlines is not None and net.tube is not None:
        tube = net.tube.discharge
        text = (
            f"Streamlines: {figures(tube)} {units.discharge} flows between neighbours "
            f"({figures(tube / depth)} {units.strength} over {figures(depth)} {units.length} of water)."
        )
        notes.append(
            text
            if net.tube.whole
            else f"{text} Beside an intake or outfall one tube may carry another share."
        )
    if net.equipotentials is not None:
        notes.append("Equipotentials: same interval, so that meshes are square where the net is fine.")
    elif Layer.EQUIPOTENTIALS in options.layers and not scene.model.has_potential:
        notes.append("No equipotentials: the flow has vorticity, so no potential exists.")
    if net.streamlines is not None or net.equipotentials is not None:
        notes.append("Lines are left out where they would crowd, beside point elements.")
    if scene.model.bound is not None:
        notes.append(f"Rings are met within {scene.model.bound.relative:.1g} of the flow through.")
    broken = [lines for lines in (net.streamlines, net.equipotentials) if lines is not None and lines.breaks]
    if broken:
        notes.append("Some lines end inside the water for want of resolution.")
    return notes


def arrowheads(lines: tuple[ComplexArray, ...], spacing: float) -> list[tuple[complex, complex]]:
    """Places on lines with unit directions along them, `spacing` [m] apart, out of step from line to line."""
    found = []
    for number, line in enumerate(lines):
        length = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(line)))])
        start = (0.25 + 0.5 * (number * GOLDEN % 1.0)) * min(spacing, float(length[-1]))
        for wanted in np.arange(start, length[-1] if length[-1] > 0.2 * spacing else 0.0, spacing):
            index = min(int(np.searchsorted(length, wanted, side="right")), line.size - 1)
            chord = line[index] - line[index - 1]
            if chord != 0:
                found.append((complex(line[index]), complex(chord / abs(chord))))
    return found

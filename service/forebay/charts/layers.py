"""The layers of the map that come from the flow and the shore: speed, lines, directions, land."""

from typing import TYPE_CHECKING, Any

import numpy as np

from forebay.charts.contours import LevelLines
from forebay.charts.elements import Drawn
from forebay.charts.land import land_rings, visible_part
from forebay.charts.mapframe import MapFrame
from forebay.charts.net import FlowNet, arrowheads
from forebay.charts.options import Scene
from forebay.charts.palette import FASTER, INK, LAND, LAND_HATCH, WALL, ramp_colours
from forebay.charts.rings import bank_lines
from forebay.charts.symbols import Glyph
from forebay.flow.arrays import ComplexArray

if TYPE_CHECKING:
    from matplotlib.path import Path


def draw_speed(frame: MapFrame, net: FlowNet) -> None:
    """Speed in bands."""
    places = frame.units.place(net.lattice.nodes)
    colours = [*ramp_colours(len(net.levels) - 1), FASTER]
    top = np.nextafter(np.inf, 0.0)
    limits = [*net.levels.tolist(), top]
    speeds = np.ma.masked_invalid(np.clip(net.speeds, net.levels[0], 0.5 * top))
    bands = frame.axes.contourf(places.real, places.imag, speeds, levels=limits, colors=colours, zorder=1.0)
    bands.set_edgecolor("face")
    bands.set_linewidth(0.3)
    bands.set_gid("speed")


def draw_lines(
    frame: MapFrame,
    lines: tuple[ComplexArray, ...],
    *,
    name: str,
    linewidth: float,
    dashes: tuple[float, float] | None = None,
    **style: Any,  # noqa: ANN401
) -> None:
    """Polylines as one group; `linewidth` and `dashes` in pixels at scale 1."""
    from matplotlib.collections import LineCollection

    width = frame.sheet.points(linewidth)
    segments = [frame.points(line) for line in lines]
    collection = LineCollection(segments, linewidths=width, capstyle="butt", joinstyle="round", **style)
    if dashes is not None:
        collection.set_linestyle((0, dashes))
    collection.set_gid(name)
    frame.axes.add_collection(collection, autolim=False)


def draw_arrowheads(frame: MapFrame, scene: Scene, lines: LevelLines) -> None:
    """Small triangles that point with the flow."""
    from matplotlib.collections import PolyCollection

    unit = frame.sheet.scale * frame.pixel
    heads = arrowheads(lines.lines, 280 * unit)
    if not heads:
        return
    places, directions = (np.array(column) for column in zip(*heads, strict=True))
    velocity = np.conj(scene.model.velocity(places))
    roomy = (np.abs(velocity) * 9 * unit <= lines.step) & (scene.model.distance_to_wall(places) >= 5 * unit)
    forwards = (velocity * np.conj(directions)).real >= 0
    places, directions = places[roomy], np.where(forwards, directions, -directions)[roomy, None]
    corners = places[:, None] + directions * unit * np.array([6.5, -3.5 + 3.6j, -3.5 - 3.6j])
    collection = PolyCollection(list(frame.points(corners)), facecolors=INK, edgecolors="none", zorder=5.0)
    collection.set_gid("flow-directions")
    frame.axes.add_collection(collection, autolim=False)


def draw_land(frame: MapFrame, scene: Scene, drawn: Drawn) -> None:
    """Land with hatching, banks as strong lines."""
    from matplotlib.patches import PathPatch

    rings = land_rings(scene.model.layout.shore, scene.window)
    if rings:
        path = ring_path(frame, rings)
        hatching = {
            "facecolor": "none",
            "edgecolor": LAND_HATCH,
            "hatch": "////",
            "linewidth": 0.0,
            "gid": "land",
        }
        frame.axes.add_patch(PathPatch(path, facecolor=LAND, edgecolor="none", zorder=6.0))
        frame.axes.add_patch(PathPatch(path, zorder=6.1, **hatching))
    parts = [part for wall in scene.model.walls if (part := visible_part(wall, scene.window)) is not None]
    lines = [*map(np.array, parts), *bank_lines(scene.model.layout)]
    if lines:
        draw_lines(frame, tuple(lines), name="walls", linewidth=2.6, color=WALL, zorder=7.0)
        drawn.glyphs.add(Glyph.LAND)


def ring_path(frame: MapFrame, rings: list[ComplexArray]) -> "Path":
    """One path of closed rings."""
    from matplotlib.path import Path

    points, codes = [], []
    for ring in rings:
        points.append(frame.points(np.append(ring, ring[0])))
        codes += [Path.MOVETO, *[Path.LINETO] * (ring.size - 1), Path.CLOSEPOLY]
    return Path(np.concatenate(points), codes)

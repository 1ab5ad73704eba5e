"""Symbols of elements, structures and stagnation points; each is drawn the same on the map and in the key."""

from dataclasses import dataclass
from enum import StrEnum
from typing import TYPE_CHECKING, Any

import numpy as np

from forebay.charts.palette import DIVIDING, EQUIPOTENTIAL, INK, LAND, LAND_HATCH, PAPER, WALL
from forebay.charts.sheet import Sheet
from forebay.flow.arrays import FloatArray

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.path import Path

SYMBOL_RADIUS = 7.0
"""Radius of a point element's symbol [px at scale 1]."""

STAGNATION_RADIUS = 5.0
"""Half diagonal of a stagnation point's symbol [px at scale 1]."""


class Glyph(StrEnum):
    """Kinds of symbol, by the words that explain them in the key."""

    STREAMLINE = "streamline"
    EQUIPOTENTIAL = "equipotential"
    DIVIDING = "dividing streamline"
    STAGNATION = "stagnation point"
    INTAKE = "intake (sink)"
    OUTFALL = "outfall (source)"
    LINE_INTAKE = "line intake"
    LINE_OUTFALL = "line outfall"
    VORTEX = "vortex"
    CLOCKWISE_VORTEX = "vortex, clockwise"
    DOUBLET = "doublet, source dark"
    PIER = "pier"
    OUTLINE = "outline"
    OPEN_EDGE = "open edge"
    LAND = "land"


@dataclass(frozen=True, slots=True)
class Stamp:
    """Where symbols go: axes, with the sheet that sizes them."""

    axes: "Axes"
    sheet: Sheet
    zorder: float

    def mark(self, x: float, y: float, *, marker: Any, radius: float, **style: Any) -> None:  # noqa: ANN401
        """One marker of a radius [px at scale 1]."""
        settings: dict[str, Any] = {
            "linestyle": "none",
            "markeredgecolor": INK,
            "markeredgewidth": self.sheet.points(1.5),
            "zorder": self.zorder,
        }
        self.axes.plot(
            [x], [y], marker=marker, markersize=2 * self.sheet.points(radius), **(settings | style)
        )

    def line(self, x: tuple[float, ...], y: tuple[float, ...], *, width: float, **style: Any) -> None:  # noqa: ANN401
        """One line of a width [px at scale 1]."""
        settings: dict[str, Any] = {"color": INK, "solid_capstyle": "butt", "zorder": self.zorder}
        self.axes.plot(x, y, linewidth=self.sheet.points(width), **(settings | style))


def stamp_point(stamp: Stamp, glyph: Glyph, x: float, y: float, *, turned: float = 0.0, name: str) -> None:
    """Draw a point symbol; `turned` is the direction of a doublet's moment [rad]."""
    radius = SYMBOL_RADIUS
    match glyph:
        case Glyph.INTAKE:
            stamp.mark(x, y, marker="o", radius=radius, markerfacecolor=INK, gid=name)
            stamp.mark(x, y, marker="_", radius=0.5 * radius, markeredgecolor=PAPER, gid=f"{name}-sign")
        case Glyph.OUTFALL:
            stamp.mark(x, y, marker="o", radius=radius, markerfacecolor=PAPER, gid=name)
            stamp.mark(x, y, marker="+", radius=0.5 * radius, gid=f"{name}-sign")
        case Glyph.VORTEX | Glyph.CLOCKWISE_VORTEX:
            stamp.mark(
                x, y, marker="o", radius=1.3 * radius, markerfacecolor=PAPER, markeredgecolor="none", gid=name
            )
            arrow = turning_arrow(anticlockwise=glyph is Glyph.VORTEX)
            stamp.mark(x, y, marker=arrow, radius=0.95 * radius, markerfacecolor="none", gid=f"{name}-sign")
        case Glyph.DOUBLET:
            stamp_halves(stamp, x, y, turned=turned, name=name)
        case Glyph.STAGNATION:
            stamp.mark(x, y, marker="D", radius=0.7 * STAGNATION_RADIUS, markerfacecolor=PAPER, gid=name)
        case _:
            raise ValueError(f"{glyph} is no point symbol")


def stamp_halves(stamp: Stamp, x: float, y: float, *, turned: float, name: str) -> None:
    """A disc whose dark half looks along `turned` [rad]."""
    from matplotlib.markers import MarkerStyle
    from matplotlib.transforms import Affine2D

    halves = MarkerStyle("o", fillstyle="right", transform=Affine2D().rotate(turned))
    colours = {"markerfacecolor": INK, "markerfacecoloralt": PAPER}
    stamp.mark(x, y, marker=halves, radius=SYMBOL_RADIUS, gid=name, **colours)


def stamp_line(stamp: Stamp, glyph: Glyph, x: tuple[float, ...], y: tuple[float, ...], *, name: str) -> None:
    """Draw a line symbol: an element's, or a sample for the key."""
    match glyph:
        case Glyph.LINE_INTAKE:
            stamp.line(x, y, width=7, gid=name)
            stamp.line(x, y, width=1.5, color=PAPER, dashes=(2.5, 2.0), gid=f"{name}-sign")
        case Glyph.LINE_OUTFALL:
            stamp.line(x, y, width=7, gid=name)
            stamp.line(x, y, width=4, color=PAPER, gid=f"{name}-sign")
        case Glyph.OPEN_EDGE:
            stamp.line(x, y, width=4.2, color=PAPER, gid=f"{name}-casing")
            stamp.line(x, y, width=2.6, dashes=(1.2, 0.9), gid=name)
        case Glyph.STREAMLINE:
            stamp.line(x, y, width=1.1, gid=name)
        case Glyph.EQUIPOTENTIAL:
            stamp.line(x, y, width=0.9, color=EQUIPOTENTIAL, dashes=(5, 3), gid=name)
        case Glyph.DIVIDING:
            stamp.line(x, y, width=4.6, color=PAPER, gid=f"{name}-casing")
            stamp.line(x, y, width=2.4, color=DIVIDING, gid=name)
        case _:
            raise ValueError(f"{glyph} is no line symbol")


def stamp_disc(stamp: Stamp, place: complex, radius: float, *, name: str) -> None:
    """A pier at its true size in the units of the axes."""
    from matplotlib.patches import Circle

    for style in solid_styles(stamp, name):
        stamp.axes.add_patch(Circle((place.real, place.imag), radius, zorder=stamp.zorder, **style))


def stamp_solid(stamp: Stamp, corners: FloatArray, *, name: str) -> None:
    """An outline in the units of the axes; corners : shape (n, 2)."""
    from matplotlib.patches import Polygon

    for style in solid_styles(stamp, name):
        stamp.axes.add_patch(Polygon(corners, closed=True, zorder=stamp.zorder, **style))


def solid_styles(stamp: Stamp, name: str) -> tuple[dict[str, Any], ...]:
    """Ground, hatching and wall of a structure, one over the other."""
    return (
        {"facecolor": LAND, "edgecolor": "none"},
        {"facecolor": "none", "edgecolor": LAND_HATCH, "hatch": "/////", "linewidth": 0.0},
        {"facecolor": "none", "edgecolor": WALL, "linewidth": stamp.sheet.points(1.8), "gid": name},
    )


def turning_arrow(*, anticlockwise: bool) -> "Path":
    """Three quarters of a circle of radius 1 with an arrowhead at its end."""
    from matplotlib.path import Path

    angle = np.deg2rad(np.linspace(60.0, 330.0, 28))
    arc = np.exp(1j * angle)
    head = arc[-1] + 0.75 * np.exp(1j * (angle[-1] + np.deg2rad([-120.0, 155.0])))
    points = np.concatenate([arc, [head[0], arc[-1], head[1]]])
    if not anticlockwise:
        points = -points.conj()
    codes = [Path.MOVETO, *[Path.LINETO] * (arc.size - 1), Path.MOVETO, Path.LINETO, Path.LINETO]
    return Path(np.stack([points.real, points.imag], axis=1), codes)

"""The map's frame: axes in the picture's units, and the way from the plan to pixels."""

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from forebay.charts.palette import FAINT_INK, INK
from forebay.charts.sheet import Box, Sheet
from forebay.charts.units import DisplayUnits
from forebay.flow.arrays import ComplexArray, FloatArray
from forebay.flow.stagnation.result import Window

if TYPE_CHECKING:
    from matplotlib.axes import Axes

TICK_SPACE = 95.0
"""Least distance between ticks [px at scale 1]."""


@dataclass(frozen=True, slots=True)
class MapFrame:
    """Axes that show `window` [m] in `box` [px], one scale both ways.

    pixel : length of a pixel in the plan [m]
    """

    sheet: Sheet
    axes: "Axes"
    box: Box
    window: Window
    units: DisplayUnits

    @property
    def pixel(self) -> float:
        """Length of a pixel in the plan [m]."""
        return (self.window.x[1] - self.window.x[0]) / (self.box.right - self.box.left)

    def points(self, z: ComplexArray) -> FloatArray:
        """Coordinates on the axes of places [m], shape (n, 2)."""
        shown = self.units.place(z)
        return np.stack([shown.real, shown.imag], axis=-1)

    def on_sheet(self, z: complex) -> tuple[float, float]:
        """Place on the sheet [px] of a place in the plan [m]."""
        return (
            self.box.left + (z.real - self.window.x[0]) / self.pixel,
            self.box.bottom - (z.imag - self.window.y[0]) / self.pixel,
        )


def fit_box(space: Box, window: Window) -> Box:
    """Largest box of the window's shape in a space, at its top, centred."""
    aspect = (window.y[1] - window.y[0]) / (window.x[1] - window.x[0])
    width = min(space.right - space.left, (space.bottom - space.top) / aspect)
    left = (space.left + space.right - width) / 2
    return Box(left, space.top, left + width, space.top + width * aspect)


def quiet_axes(sheet: Sheet, box: Box, tick_space: float = TICK_SPACE) -> "Axes":
    """Axes in a box [px] in faint ink, with round ticks at least `tick_space` apart [px at scale 1]."""
    from matplotlib.ticker import MaxNLocator

    width, height = box.right - box.left, box.bottom - box.top
    place = (
        box.left / sheet.width,
        1 - box.bottom / sheet.height,
        width / sheet.width,
        height / sheet.height,
    )
    axes = sheet.figure.add_axes(place)
    axes.ticklabel_format(useOffset=False, style="plain")
    for axis, length in ((axes.xaxis, width), (axes.yaxis, height)):
        most = max(2, int(length / (tick_space * sheet.scale)))
        axis.set_major_locator(MaxNLocator(nbins=most, steps=[1, 2, 5, 10]))
    axes.tick_params(
        labelsize=sheet.points(11),
        colors=FAINT_INK,
        length=sheet.points(5),
        width=sheet.points(1),
        pad=sheet.points(4),
    )
    for spine in axes.spines.values():
        spine.set_color(FAINT_INK)
        spine.set_linewidth(sheet.points(1.2))
        spine.set_zorder(15)
    return axes


def open_map(sheet: Sheet, box: Box, window: Window, units: DisplayUnits) -> MapFrame:
    """Axes with ticks and the directions of x and y."""
    axes = quiet_axes(sheet, box)
    axes.set_gid("map")
    axes.set_xlim(*(value / units.metre for value in window.x))
    axes.set_ylim(*(value / units.metre for value in window.y))
    size = sheet.points(11.5)
    axes.set_xlabel(f"x [{units.length}]", fontsize=size, color=INK, labelpad=sheet.points(3))
    axes.set_ylabel(f"y [{units.length}]", fontsize=size, color=INK, labelpad=sheet.points(3))
    return MapFrame(sheet, axes, box, window, units)

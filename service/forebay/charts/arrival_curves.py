"""Arrival curves: how much of each release has reached an intake, against time."""

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from forebay.charts.mapframe import quiet_axes
from forebay.charts.margins import FOOT, LONGEST_TITLE, NOTES, SIDE, TICKS, draw_foot
from forebay.charts.options import FlowNetOptions, Picture
from forebay.charts.palette import FAINT_INK, INK
from forebay.charts.sheet import Box, Sheet, Style, blank_sheet, shortened
from forebay.flow.arrays import FloatArray

if TYPE_CHECKING:
    from matplotlib.axes import Axes

DEFAULT_SIZE: Final = (640, 520)
"""Width and height of a picture [px] when none is asked for."""

SCALE: Final = 0.75
"""Size of text and symbols relative to a map of 1200 px, as on maps of the default size."""

DASHES: Final = ((), (6.0, 3.0), (1.5, 2.0), (9.0, 2.5, 1.5, 2.5))
"""Dashes and gaps of one curve after the other [line widths]; all are of the same ink."""

WIDTHS: Final = (1.4, 2.6)
"""Line widths, the second for those that come after all dashes are used up [px at scale 1]."""

MOST_CURVES: Final = len(DASHES) * len(WIDTHS)
"""Curves that are told apart; more are counted."""

ROWS: Final = 4
"""Lines of a column of the key."""

PITCH, SAMPLE, TICK_SPACE = 22.0, 46.0, 60.0
"""Distance of the key's lines, length of a sample, least distance between ticks [px at scale 1]."""

TOP: Final = 46.0
"""Where the plot begins, below the title [px at scale 1]."""

LONGEST_NAMES: Final = (100, 42)
"""Characters of a curve's name that are shown in a key of one column, and of two."""

CLOCKS: Final = (
    (240.0, 1.0, "s"),
    (14_400.0, 60.0, "min"),
    (345_600.0, 3600.0, "h"),
    (np.inf, 86_400.0, "d"),
)
"""Largest time shown [s] in each unit, the unit's size [s] and name."""

MARGIN: Final = 1.08
"""Room beyond the last time and above the largest share, as a factor [-]."""

EXPLANATION: Final = (
    "Share of a whole release that has reached an intake, by the mean flow alone: turbulence brings some of "
    "it earlier and some later, and no dilution is claimed."
)

CUT: Final = "The picture ends when 95 % of what each intake takes has arrived; more comes later."


@dataclass(frozen=True, slots=True)
class Course:
    """Arrivals of one release at one intake, shape (k,) each.

    time : ascending [s];  share : of the release, arrived up to each time [-]
    last_time : when nearly all of it has arrived, at which a picture may end [s]
    """

    name: str
    time: FloatArray
    share: FloatArray
    last_time: float


@dataclass(frozen=True, slots=True)
class Plot:
    """Axes of time, in a unit of `clock` seconds, up to `end` [s], and of share in per cent."""

    sheet: Sheet
    axes: "Axes"
    clock: float
    end: float


def draw_arrivals(courses: tuple[Course, ...], options: FlowNetOptions) -> Picture:
    """Draw share against time.

    Parameters
    ----------
    courses : at least one; only the first `MOST_CURVES` are drawn, and the picture says how many are not
    options : format, size and title

    Returns
    -------
    Picture, the same bytes for the same input on one machine. Groups of the SVG carry the ids `curve-<n>,
    key-curve-<n>, title, caution`.
    """
    shown, (width, height) = courses[:MOST_CURVES], options.size or DEFAULT_SIZE
    with blank_sheet(width, height, SCALE) as sheet:
        title = shortened(options.title, LONGEST_TITLE)
        sheet.write(title, (SIDE[0] * SCALE, 14 * SCALE), size=19, name="title", weight="bold")
        plot = open_plot(sheet, shown)
        for index, course in enumerate(shown):
            time, share = drawn_line(course, plot.end)
            plot.axes.plot(time / plot.clock, 100.0 * share, gid=f"curve-{index + 1}", **look(sheet, index))
        name_courses(sheet, shown)
        draw_foot(sheet, plot_notes(courses, plot.end))
        return Picture(options.media_type, sheet.encode(options.media_type, options.title))


def open_plot(sheet: Sheet, courses: tuple[Course, ...]) -> Plot:
    """Axes for some curves, with a faint line at every mark of the share."""
    end = last_shown(courses)
    clock, unit = clock_for(end)
    largest = max(float(course.share[-1]) for course in courses)
    axes = quiet_axes(
        sheet,
        Box(SIDE[0] * SCALE, TOP * SCALE, sheet.width - SIDE[1] * SCALE, plot_bottom(sheet)),
        TICK_SPACE,
    )
    axes.set_xlim(0.0, end / clock)
    axes.set_ylim(0.0, 100.0 * MARGIN * largest)
    style: Style = {"fontsize": sheet.points(11.5), "color": INK, "labelpad": sheet.points(3)}
    axes.set_xlabel(f"Time from the start of the release [{unit}]", **style)
    axes.set_ylabel("Arrived, of the whole release [%]", **style)
    axes.grid(axis="y", color=FAINT_INK, alpha=0.3, linewidth=sheet.points(0.8))
    return Plot(sheet, axes, clock, end)


def plot_bottom(sheet: Sheet) -> float:
    """Where the plot ends, below which are its ticks, the key, notes and the caution [px]."""
    return sheet.height - SCALE * (TICKS + (ROWS + 0.5) * PITCH + NOTES + FOOT)


def last_shown(courses: tuple[Course, ...]) -> float:
    """Time at which the picture ends [s]: a little after nearly all of every curve."""
    return MARGIN * max(course.last_time for course in courses)


def clock_for(end: float) -> tuple[float, str]:
    """Unit of a time axis that ends at a time [s]: its size [s] and name."""
    return next((size, name) for largest, size, name in CLOCKS if end <= largest)


def drawn_line(course: Course, end: float) -> tuple[FloatArray, FloatArray]:
    """Times [s] and shares [-] of a curve from the start to at least the end of the picture."""
    time = np.concatenate([[0.0, course.time[0]], course.time, [max(end, float(course.time[-1]))]])
    share = np.concatenate([[0.0, 0.0], course.share, course.share[-1:]])
    return time, share


def look(sheet: Sheet, index: int) -> Style:
    """How a curve is drawn."""
    dashes, width = DASHES[index % len(DASHES)], WIDTHS[index // len(DASHES)]
    linestyle = (0.0, dashes) if dashes else "solid"
    return {"color": INK, "linewidth": sheet.points(width), "linestyle": linestyle, "zorder": 3.0}


def name_courses(sheet: Sheet, courses: tuple[Course, ...]) -> None:
    """The key: a sample of each curve with its name."""
    columns = -(-len(courses) // ROWS)
    column = (sheet.width - sum(SIDE) * SCALE) / columns
    for index, course in enumerate(courses):
        x = SIDE[0] * SCALE + column * (index // ROWS)
        y = plot_bottom(sheet) + SCALE * (TICKS + 10.0 + PITCH * (index % ROWS))
        sheet.paper.plot((x, x + SAMPLE * SCALE), (y, y), **look(sheet, index))
        name = shortened(course.name, LONGEST_NAMES[columns - 1])
        place = (x + (SAMPLE + 10.0) * SCALE, y)
        sheet.write(name, place, size=11.5, name=f"key-curve-{index + 1}", va="center")


def plot_notes(courses: tuple[Course, ...], end: float) -> list[str]:
    """What the picture shows, and what it does not."""
    notes = [EXPLANATION]
    if any(course.time[-1] > end for course in courses):
        notes.append(CUT)
    if len(courses) > MOST_CURVES:
        notes.append(f"Curves left out: {len(courses) - MOST_CURVES}.")
    return notes

"""The sheet of paper: a figure in pixels, text that knows its size, and its bytes.

The drawing library keeps process-wide parameters, so one lock is held while a picture is drawn. Nothing
here touches its global "current figure".
"""

from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from io import BytesIO
from threading import Lock
from typing import TYPE_CHECKING, Any, Final, NamedTuple

from forebay.charts.options import MediaType
from forebay.charts.palette import INK, PAPER

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.backends.backend_agg import RendererAgg
    from matplotlib.figure import Figure
    from matplotlib.font_manager import FontProperties
    from matplotlib.text import Text

Style = dict[str, Any]
"""Settings of the drawing library."""

DRAWING = Lock()

DPI: Final = 96
"""Pixels per inch: a CSS pixel, so that SVG and PNG have the same size on a page."""

FONT: Final = "DejaVu Sans"
"""Comes with the drawing library, so that pictures are the same on every machine."""

REPLACEMENT: Final = "\N{REPLACEMENT CHARACTER}"
"""Drawn for a character that the font lacks."""

PARAMETERS: Final[Style] = {
    "svg.hashsalt": "forebay",
    "svg.fonttype": "path",
    "font.family": [FONT],
    "text.usetex": False,
    "hatch.linewidth": 0.7,
}


class Box(NamedTuple):
    """Rectangle on the sheet [px], y downwards."""

    left: float
    top: float
    right: float
    bottom: float

    def overlaps(self, other: "Box") -> bool:
        """Whether two rectangles share more than an edge."""
        return (
            self.left < other.right
            and other.left < self.right
            and self.top < other.bottom
            and other.top < self.bottom
        )

    def within(self, other: "Box") -> bool:
        """Whether this rectangle lies inside another."""
        return (
            self.left >= other.left
            and self.right <= other.right
            and self.top >= other.top
            and self.bottom <= other.bottom
        )

    def grown(self, by: float) -> "Box":
        """The rectangle with a border of `by` pixels."""
        return Box(self.left - by, self.top - by, self.right + by, self.bottom + by)


@dataclass(frozen=True, slots=True)
class Sheet:
    """A figure of `width` by `height` pixels whose axes `paper` count pixels, y downwards.

    scale : size of text and symbols, 1 on a sheet of 1200 px [-]
    """

    figure: "Figure"
    paper: "Axes"
    width: int
    height: int
    scale: float
    renderer: "RendererAgg"

    def points(self, pixels: float) -> float:
        """Length in points of a length in pixels of a sheet at scale 1."""
        return pixels * self.scale * 72 / DPI

    def write(
        self,
        text: str,
        at: tuple[float, float],
        *,
        size: float = 12.0,
        name: str,
        **style: Any,  # noqa: ANN401
    ) -> "Text":
        """Text with its anchor at a place on the sheet [px]; `size` in pixels at scale 1."""
        settings: Style = {"color": INK, "ha": "left", "va": "top", "zorder": 20.0} | style
        written = self.paper.text(
            *at, printable(text), fontsize=self.points(size), parse_math=False, **settings
        )
        written.set_gid(name)
        return written

    def measure(self, text: str, size: float, *, bold: bool = False) -> tuple[float, float]:
        """Width and height [px] of text, line breaks included; `size` in pixels at scale 1."""
        from matplotlib.font_manager import FontProperties

        font = FontProperties(family=[FONT], weight="bold" if bold else "normal", size=self.points(size))
        return measure_lines(self.renderer, printable(text).split("\n"), font)

    def wrap(self, text: str, size: float, width: float) -> list[str]:
        """Lines of text no wider than `width` [px], broken at spaces."""
        lines: list[str] = []
        current = ""
        for word in text.split():
            longer = f"{current} {word}".strip()
            if current and self.measure(longer, size)[0] > width:
                lines.append(current)
                current = word
            else:
                current = longer
        return [*lines, current] if current else lines

    def encode(self, media_type: MediaType, title: str) -> bytes:
        """The picture's bytes: no date, no random names."""
        stream = BytesIO()
        title = printable(title)
        match media_type:
            case MediaType.SVG:
                self.figure.savefig(
                    stream, format="svg", metadata={"Date": None, "Creator": "Forebay", "Title": title}
                )
            case MediaType.PNG:
                self.figure.savefig(
                    stream, format="png", metadata={"Software": "Forebay", "Title": latin(title)}
                )
        return stream.getvalue()


def measure_lines(renderer: "RendererAgg", lines: list[str], font: "FontProperties") -> tuple[float, float]:
    """Width and height [px] of lines of text with the drawing library's line spacing of 1.2."""
    measure: Any = renderer.get_text_width_height_descent
    widths = [float(measure(line or " ", font, ismath=False)[0]) for line in lines]
    return max(widths), 1.2 * float(measure("lp", font, ismath=False)[1]) * len(lines)


@contextmanager
def blank_sheet(width: int, height: int, scale: float) -> Iterator[Sheet]:
    """An empty sheet; nobody else draws until it is given back."""
    import matplotlib as mpl
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    with DRAWING, mpl.rc_context(PARAMETERS):  # type: ignore[arg-type]
        figure = Figure(figsize=(width / DPI, height / DPI), dpi=DPI, facecolor=PAPER)
        canvas = FigureCanvasAgg(figure)
        paper = figure.add_axes((0.0, 0.0, 1.0, 1.0), xlim=(0, width), ylim=(height, 0), frameon=False)
        paper.set_axis_off()
        paper.set_zorder(10)
        yield Sheet(figure, paper, width, height, scale, canvas.get_renderer())  # type: ignore[no-untyped-call]


def printable(text: str) -> str:
    """Text with control characters dropped and characters that the font lacks replaced; line breaks stay."""
    from matplotlib.font_manager import FontProperties, findfont, get_font

    face = get_font(findfont(FontProperties(family=[FONT])))
    kept = [character for character in text if character == "\n" or character.isprintable()]
    return "".join(
        character if character == "\n" or face.get_char_index(ord(character)) else REPLACEMENT
        for character in kept
    )


def latin(text: str) -> str:
    """Text that a PNG comment can hold (ISO 8859-1)."""
    return text.encode("latin-1", errors="replace").decode("latin-1")


def shortened(text: str, longest: int) -> str:
    """Text on one line of at most `longest` characters."""
    line = " ".join(text.split())
    return line if len(line) <= longest else line[: longest - 1].rstrip() + "…"

"""Tables of a sheet: a caption, columns with units, rows; heads are repeated on every page."""

from collections.abc import Sequence
from dataclasses import dataclass

from forebay.api.calculation_sheet.markup import Html, element
from forebay.api.calculation_sheet.widths import column_widths, plain

Row = Sequence[str]

TOGETHER_ROWS, TOGETHER_CHARACTERS = 12, 900
"""Size up to which a table stays on one page."""


@dataclass(frozen=True, slots=True)
class Column:
    """Heading of a column with the printed form of its unit; numbers stand to the right."""

    title: str
    unit: str = ""
    is_number: bool = False

    @property
    def style(self) -> str:
        """Class of the column's cells."""
        return "number" if self.is_number else ""


def word(title: str) -> Column:
    """Column of words."""
    return Column(title)


def number(title: str, unit: str = "") -> Column:
    """Column of numbers."""
    return Column(title, unit, is_number=True)


def table(caption: str, columns: Sequence[Column], rows: Sequence[Row], note: str = "") -> Html:
    """A table with a caption above and a note below; nothing without rows."""
    if not rows:
        return Html()
    head = element("tr", *(heading(column) for column in columns))
    body = [
        element(
            "tr",
            *(element("td", cell, class_=column.style) for cell, column in zip(row, columns, strict=True)),
        )
        for row in rows
    ]
    titled = element("h3", caption) if caption else Html()
    made = element("table", column_group(columns, rows), element("thead", head), element("tbody", *body))
    noted = element("p", note, class_="note") if note else Html()
    return element("div", titled, made, noted, class_="together" if is_small(rows) else "")


def is_small(rows: Sequence[Row]) -> bool:
    """Whether a table is so small that it stays on one page."""
    characters = sum(len(plain(cell)) for row in rows for cell in row)
    return len(rows) <= TOGETHER_ROWS and characters <= TOGETHER_CHARACTERS


def column_group(columns: Sequence[Column], rows: Sequence[Row]) -> Html:
    """Widths of the columns."""
    headings = [f"{column.title} {column.unit}" for column in columns]
    widths = column_widths(headings, rows, [column.is_number for column in columns])
    return element("colgroup", *(element("col", style=f"width:{width:g}%") for width in widths))


def heading(column: Column) -> Html:
    """Heading of a column, its unit in a line of its own."""
    unit = element("span", column.unit, class_="unit") if column.unit else Html()
    return element("th", column.title, unit, class_=column.style)

"""Widths of a table's columns, from what stands in them: numbers stay whole, words share the rest."""

import re
from collections.abc import Sequence

ROOM = 108.0
"""Characters that fit side by side on a page of the narrower paper."""

PADDING = 2.5
"""Space between columns, in characters."""

ONE_LINE = 30
"""Characters of a text that count in full; those beyond count a third, since it is broken into lines."""

WIDEST = 48.0
"""Characters of a column beyond which it gets no wider."""

WIDEST_NUMBER = 24
"""Characters of a number that is kept whole; a longer one is a list, which may be broken."""

SPARE = 1.15
"""Room for a number over its characters, for faces wider than the sheet's own."""

LONGEST_WHOLE = 15.0
"""Characters up to which a word stays whole at the cost of other columns."""

HEADING = 0.95
"""Width of a character in a heading, over that of one in a cell."""

BREAKS = re.compile(r"[ \n\t]+")
"""Where a text may be broken; not at a no-break space."""

TAGS = re.compile(r"<[^>]*>|&(\w+|#\w+);")


def column_widths(
    headings: Sequence[str], rows: Sequence[Sequence[str]], whole: Sequence[bool]
) -> list[float]:
    """Share of the table's width [%] for each column; they add to 100.

    headings : text of the heads, broken only at spaces;  whole : columns that must not be broken, of numbers

    Columns of numbers are as wide as their longest one. Columns of words share what is left as their longest
    texts do, but none is narrower than its longest word where there is room for that.
    """
    texts = [[plain(row[index]) for row in rows] for index in range(len(headings))]
    least = [
        PADDING + max(HEADING * longest_word(heading), *(longest_word(text) for text in column), 1.0)
        for heading, column in zip(headings, texts, strict=True)
    ]
    wanted = [PADDING + max(room_for(text) for text in column) for column in texts]
    narrow = [min(width, LONGEST_WHOLE) for width in least]
    fixed = [
        max(PADDING + SPARE * min(full - PADDING, WIDEST_NUMBER), low) if is_whole else low
        for full, low, is_whole in zip(wanted, narrow, whole, strict=True)
    ]
    spare = max(ROOM - sum(fixed), 0.0)
    more = [max(full - width, 0.0) for full, width in zip(wanted, fixed, strict=True)]
    share = min(spare / sum(more), 1.0) if sum(more) else 0.0
    widths = [width + share * extra for width, extra in zip(fixed, more, strict=True)]
    return [round(100.0 * width / sum(widths), 2) for width in widths]


def room_for(text: str) -> float:
    """Characters that a text would like to have side by side."""
    return min(min(len(text), ONE_LINE) + max(len(text) - ONE_LINE, 0) / 3, WIDEST)


def plain(cell: str) -> str:
    """Text of a cell without its markup."""
    return TAGS.sub(lambda tag: "x" if tag.group(1) else "", cell)


def longest_word(text: str) -> int:
    """Characters of the longest part of a text that must not be broken."""
    return max((len(word) for word in BREAKS.split(text)), default=0)

"""Widths of columns: numbers stay whole, words share the rest, everything adds up."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forebay.api.calculation_sheet.widths import ROOM, column_widths, longest_word, plain

TEXTS = st.text(alphabet="ab c", min_size=0, max_size=200)


@given(st.data(), st.integers(1, 9), st.integers(1, 4))
def test_widths_add_to_the_whole(data, columns, rows):
    headings = data.draw(st.lists(TEXTS, min_size=columns, max_size=columns))
    table = data.draw(
        st.lists(st.lists(TEXTS, min_size=columns, max_size=columns), min_size=rows, max_size=rows)
    )
    whole = data.draw(st.lists(st.booleans(), min_size=columns, max_size=columns))
    widths = column_widths(headings, table, whole)
    assert sum(widths) == pytest.approx(100.0, abs=0.005 * columns)  # each is rounded to 0.01
    assert min(widths) > 0.0


def test_a_number_keeps_its_characters_beside_long_words():
    numbers, words = ["1.472·10⁻⁵", "3"], ["word " * 60, "x"]
    widths = column_widths(["n", "w"], list(zip(numbers, words, strict=True)), [True, False])
    assert widths[0] / 100 * ROOM >= len(numbers[0])


def test_the_longer_text_gets_the_wider_column():
    widths = column_widths(["a", "b"], [("x" * 3 + " y" * 50, "x y")], [False, False])
    assert widths[0] > widths[1]


def test_markup_takes_no_room():
    assert plain('<span class="caution">CAUTION</span> &lt;') == "CAUTION x"
    assert longest_word("one three two") == 5
    assert longest_word("") == 0
    assert longest_word("NOT\N{NO-BREAK SPACE}MET at all") == 7

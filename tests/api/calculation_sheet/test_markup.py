"""Markup: text never becomes HTML or style by itself."""

from html.parser import HTMLParser

import pytest
from hypothesis import given
from hypothesis import strategies as st
from typing_extensions import override

from forebay.api.calculation_sheet.markup import Html, element, items, joined, section, style_string


class Reader(HTMLParser):
    """What a reader of HTML sees: the names of elements, and the text."""

    def __init__(self, document):
        super().__init__(convert_charrefs=True)
        self.names, self.text = [], ""
        self.feed(document)
        self.close()

    @override
    def handle_starttag(self, tag, attrs):
        self.names.append(tag)

    @override
    def handle_data(self, data):
        self.text += data


@given(st.text(alphabet=st.characters(exclude_categories=("Cc", "Cs"), exclude_characters="⁰¹²³⁴⁵⁶⁷⁸⁹⁻")))
def test_text_stays_text(text):
    reader = Reader(element("p", text))
    assert (reader.names, reader.text) == (["p"], text)


@given(st.text(alphabet=st.characters(exclude_categories=("Cc", "Cs"))))
def test_attributes_stay_attributes(text):
    assert Reader(element("p", "x", title=text)).names == ["p"]


def test_html_is_kept():
    assert element("p", element("b", "1 < 2")) == "<p><b>1 &lt; 2</b></p>"
    assert joined(["a", Html("<br>")], between=" ") == "a <br>"


def test_raised_digits_are_set_as_raised_digits():
    assert element("td", "3·10⁻¹² m³/s") == "<td>3·10<sup>−12</sup> m<sup>3</sup>/s</td>"


def test_an_element_without_content_has_no_end():
    assert element("meta", charset="utf-8") == '<meta charset="utf-8">'


def test_a_section_without_content_is_nothing():
    assert section("Title", Html()) == ""
    assert items(["a & b"]) == "<ul><li>a &amp; b</li></ul>"


@pytest.mark.parametrize("text", ['a"b', "a\\b", "a}b</style>", "läufe · 1", "", "a 1"])
def test_a_string_of_a_style_sheet_says_its_text(text):
    written = style_string(text)
    assert not set(written[1:-1]) & set('"<>{}()@;')
    assert unescaped(written) == text


def unescaped(string):
    """Text of a string of a style sheet (CSS Syntax Level 3, 4.3.7: an escape takes the space after it)."""
    text, rest = "", string[1:-1]
    while rest:
        if rest[0] == "\\":
            digits, rest = rest[1:].split(" ", 1)
            text += chr(int(digits, 16))
        else:
            text, rest = text + rest[0], rest[1:]
    return text

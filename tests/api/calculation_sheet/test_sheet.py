"""The calculation sheet over HTTP: complete, safe, the same twice, on the paper asked for."""

import io
import json
import re
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest
from pypdf import PdfReader
from typing_extensions import override

from forebay.api.figures import figure
from forebay.api.limits import Limits
from forebay.api.operation import perform
from forebay.api.outcome import Reply
from forebay.api.routers import assessment
from forebay.settings import Settings
from support.http import a_layout, assert_problem, example

ROUTE = "/v1/assessment"
HTML, PDF = "text/html", "application/pdf"
TITLE = {
    "project": "River <b>one</b>",
    "site": 'Reach "A" & B',
    "author": "A. Engineer",
    "date": "2026-12-01",
}
SIZES = {"a4": (595.3, 841.9), "letter": (612.0, 792.0)}
"""Paper [pt]: 210 by 297 mm (ISO 216), 8.5 by 11 in (ANSI Y14.1), at 72 points to the inch."""


def small(**changes):
    sheet = TITLE | changes.pop("sheet", {})
    return {"layout": a_layout(), "sheet": sheet} | changes


def post(client, body, accept):
    return client.post(ROUTE, json=body, headers={"Accept": accept})


def made(body, media_type):
    """Sheet of a request, made here: setting pages takes seconds, longer than a busy service may wait."""
    reply = perform(assessment.ASSESS, json.dumps(body).encode(), media_type, limits=Limits.of(Settings()))
    assert isinstance(reply, Reply), reply
    assert isinstance(reply.body, bytes)
    return reply.body


class Page(HTMLParser):
    """Text of a page, and every address in it."""

    def __init__(self, document):
        super().__init__()
        self.words, self.names, self.addresses, self.ids = [], [], [], []
        self.feed(document)

    @override
    def handle_starttag(self, tag, attrs):
        self.names.append(tag)
        for name, value in attrs:
            if name in {"src", "href", "xlink:href", "action", "data"}:
                self.addresses.append(value)
            if name == "id":
                self.ids.append(value)

    @override
    def handle_data(self, data):
        self.words.append(data)

    @property
    def text(self):
        return " ".join("".join(self.words).split())


@pytest.fixture(scope="module")
def page(ready_client):
    response = post(ready_client, example("assessLayout"), HTML)
    assert response.status_code == 200, response.text[:2000]
    assert response.headers["content-type"] == "text/html; charset=utf-8"
    return Page(response.text)


@pytest.fixture(scope="module")
def answer(ready_client):
    return ready_client.post(ROUTE, json=example("assessLayout")).json()


def test_the_page_loads_and_runs_nothing(page):
    assert not {"script", "link", "iframe", "img", "object", "a"} & set(page.names)
    assert page.addresses  # the drawing refers to its own parts
    assert all(address.startswith("#") for address in page.addresses)
    assert "svg" in page.names


def test_parts_of_drawings_have_names_of_their_own(page):
    assert len(set(page.ids)) == len(page.ids)
    assert {address[1:] for address in page.addresses} <= set(page.ids)


def test_the_page_says_what_the_answer_says(page, answer):
    result = answer["result"]
    told = [*result["summary"], *result["cautions"]]
    told += [warning["source"] for warning in answer["warnings"]]
    told += [warning["code"] for warning in answer["warnings"]]
    told += [verdict["source"] for verdict in result["verdicts"]]
    told += [figure(transect["discharge"], 6) for transect in result["transects"]]
    told += [answer["provenance"]["layout_digest"], answer["provenance"]["version"]]
    plain = page.text.translate(str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789−"))
    for text in told:
        assert " ".join(text.split()).translate(str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789−")) in plain


@pytest.mark.parametrize(
    "title", ["Summary", "Verdicts", "Pictures", "Results", "Warnings", "Cautions", "Inputs", "Method"]
)
def test_the_page_has_every_section(page, title):
    assert title in page.text


@pytest.mark.parametrize(
    ("at", "words"),
    [
        ({"points": [[0.5, 1.25], [20, 5]]}, "at points (0.5, 1.25); (20, 5) m given"),
        ({"x": [0.5, 20], "y": [1.25, 5]}, "at x (0.5, 20) m given"),
        ({"line": {"from": [0.5, 1.25], "to": [20, 5], "count": 3}}, "at line from (0.5, 1.25) m given"),
    ],
    ids=["points", "columns", "line"],
)
def test_points_asked_for_are_those_on_the_page(at, words):
    page = made(small(at=at), HTML).decode().replace("</td>", " </td>")
    assert words in Page(page).text


RIVER = Path(__file__).parents[3] / "openapi" / "examples" / "layout-river-bend.json"


def test_solved_walls_are_told(ready_client):
    body = {"layout": json.loads(RIVER.read_text(encoding="utf-8"))}
    found = ready_client.post(ROUTE, json=body).json()
    text = Page(made(body, HTML).decode()).text
    assert "Outlines and surveyed shores" in text
    assert "A conformal map" not in text
    solved, survey = found["boundary"]["solved"], found["boundary"]["survey"]
    assert f"Unknowns: {solved['unknowns']}" in text
    assert f"{survey['vertices']} vertices of the {survey['vertices_given']} given" in text
    assert "merged with land" in text
    assert "between banks and eyot" in text
    for edge in survey["open_edges"]:
        assert edge["name"] in text
    speeds = [end["end_speed"] for end in found["result"]["ends"]]
    assert f"current through open ends up to {figure(max(speeds))} m/s" in text


def test_straight_walls_are_not_solved(page):
    assert "Outlines and surveyed shores" not in page.text
    assert "Solved walls" not in page.text


def test_arrivals_are_drawn_where_anything_arrives(page, ready_client):
    assert "share against time" in page.text
    assert "p3-curve-1" in page.ids
    assert "share against time" not in Page(post(ready_client, small(), HTML).text).text


def test_free_text_is_text(ready_client):
    document = post(ready_client, small(), HTML).text
    assert "<b>one</b>" not in document
    assert 'Reach "A" & B' in Page(document).text


def test_the_same_request_gives_the_same_page(ready_client):
    first, second = (post(ready_client, small(), HTML).text for _ in range(2))
    assert first == second


def test_two_dates_differ_in_nothing_else(ready_client):
    early, late = (
        post(ready_client, small(sheet={"date": day}), HTML).text for day in ("2026-12-01", "2027-01-31")
    )
    assert early != late
    assert early.replace("2026-12-01", "2027-01-31") == late


def test_without_a_date_the_day_stands_on_it(ready_client):
    body = small()
    del body["sheet"]["date"]
    assert re.search(r"\b20\d\d-\d\d-\d\d\b", Page(post(ready_client, body, HTML).text).text)


def test_warnings_travel_in_the_header_too(ready_client):
    assert "near-field" in post(ready_client, small(), HTML).headers["forebay-warnings"]


@pytest.fixture(scope="module")
def paper():
    return made(example("assessLayout"), PDF)


def test_the_route_offers_html_and_pdf(ready_client):
    problem = assert_problem(post(ready_client, small(), "text/troff"), 406, "not-acceptable")
    assert {HTML, PDF} <= set(problem["offered"])


def test_the_paper_has_heads_and_page_numbers(paper):
    reader = PdfReader(io.BytesIO(paper))
    count = len(reader.pages)
    assert count > 3
    for index, sheet in enumerate(reader.pages):
        text = " ".join(sheet.extract_text().split())
        assert f"page {index + 1} of {count}" in text
        assert "Lower river abstractions" in text
        assert "layout sha256:" in text


def test_the_paper_says_what_it_is(paper):
    facts = PdfReader(io.BytesIO(paper)).metadata
    assert facts is not None
    assert facts.author == "A. Engineer"
    assert str(facts.title).startswith("Calculation sheet")
    assert str(facts.creation_date_raw).startswith("D:20261201")


def test_the_paper_brings_its_own_faces(paper):
    text = b" ".join(page_fonts(paper))
    assert b"Forebay-Text" in text
    assert b"Forebay-Label" in text


def page_fonts(paper):
    """Names of the faces of the first page, and whether each is in the file."""
    resources: Any = PdfReader(io.BytesIO(paper)).pages[0]["/Resources"]
    for font in resources["/Font"].values():
        (descendant,) = font.get_object()["/DescendantFonts"]
        descriptor = descendant.get_object()["/FontDescriptor"].get_object()
        assert {"/FontFile2", "/FontFile3"} & set(descriptor)
        yield str(font.get_object()["/BaseFont"]).encode()


@pytest.mark.parametrize(
    ("units", "wish", "size"),
    [("si", None, "a4"), ("us", None, "letter"), ("si", "letter", "letter"), ("us", "a4", "a4")],
)
def test_the_paper_has_the_size_asked_for(units, wish, size):
    layout = a_layout(
        water={"temperature": 50}
    )  # degrees of either system that water can have: 50 F, not 50 C
    layout = layout if units == "us" else a_layout()
    sheet = {} if wish is None else {"paper": wish}
    paper = made(small(layout=layout, unit_system=units, sheet=sheet), PDF)
    box = PdfReader(io.BytesIO(paper)).pages[0].mediabox
    assert (float(box.width), float(box.height)) == pytest.approx(SIZES[size], abs=0.5)  # half a point


def test_the_same_request_gives_the_same_paper():
    first, second = (made(small(), PDF) for _ in range(2))
    assert first == second


def test_a_part_that_failed_is_on_the_sheet(ready_client):
    spill = {"releases": [{"name": "none", "outfall": "no such outfall"}]}
    text = Page(post(ready_client, small(spill=spill), HTML).text).text
    assert "NOT COMPUTED: spill" in text
    assert "(unknown-name)" in text


def test_a_picture_that_failed_says_so(monkeypatch):
    def fail(*_):
        raise ZeroDivisionError

    monkeypatch.setattr(assessment, "draw_assessment", fail)
    assert "could not be drawn" in Page(made(small(), HTML).decode()).text


@pytest.mark.parametrize(
    ("sheet", "pointer"),
    [
        ({"project": "two\nlines"}, "#/sheet/project"),
        ({"date": "yesterday"}, "#/sheet/date"),
        ({"paper": "a0"}, "#/sheet/paper"),
        ({"colour": "red"}, "#/sheet/colour"),
    ],
    ids=["lines", "date", "paper", "unknown"],
)
def test_a_wrong_title_block_is_refused(ready_client, sheet, pointer):
    problem = assert_problem(post(ready_client, small(sheet=sheet), HTML), 422, "invalid-request")
    assert [error["pointer"] for error in problem["errors"]] == [pointer]


def test_nothing_but_faces_is_ever_read():
    from forebay.api.calculation_sheet.paper import face_address, fetcher, setter

    faces = fetcher(setter())
    assert faces.fetch(face_address("STIXGeneral.ttf")).read(4)
    for address in ("file:///etc/hostname", "http://127.0.0.1/"):
        with pytest.raises(ValueError, match="nothing but its faces"):
            faces.fetch(address)


def test_without_pango_the_paper_is_not_acceptable(monkeypatch):
    import builtins

    from forebay.api.calculation_sheet.paper import setter
    from forebay.api.problems import Problem

    known = builtins.__import__

    def without(name, *rest):
        if name == "weasyprint":
            raise OSError("no library")
        return known(name, *rest)

    monkeypatch.setattr(builtins, "__import__", without)
    with pytest.raises(Problem, match="Pango"):
        setter()

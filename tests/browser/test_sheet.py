"""The calculation sheet in a browser: nothing is loaded, clipped or too wide, on screen and on paper."""

import json
import shutil

import pytest

from forebay.api.limits import Limits
from forebay.api.media import HTML
from forebay.api.operation import perform
from forebay.api.outcome import Reply
from forebay.api.routers.assessment import ASSESS
from forebay.settings import Settings

pytestmark = pytest.mark.browser

ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking"]

MILLIMETRE = 96 / 25.4
"""Pixels of a style sheet in a millimetre (CSS Values and Units 3: 96 to the inch)."""

WIDTHS = {"a4": round(182 * MILLIMETRE), "letter": round(188 * MILLIMETRE)}
"""Paper less the margins of 14 mm on either side [px]."""

UNBROKEN = "intake-of-a-very-long-unbroken-name-that-somebody-has-pasted-in-here-whatever-it-is"[:80]

REQUEST = {
    "layout": {
        "depth": 4.0,
        "ambient": {"velocity": [0.1, 0]},
        "shore": {"kind": "straight-bank", "point": [0, 0], "along": [1, 0]},
        "elements": [
            {"kind": "sink", "name": UNBROKEN, "at": [0, 12], "discharge": {"value": 40, "unit": "ML/d"}},
            {"kind": "source", "name": "outfall", "at": [60, 5], "discharge": 0.4},
        ],
    },
    "transects": [{"name": "section", "polyline": [[-40, 0], [-40, 30]]}],
    "at": {"line": {"from": [-50, 20], "to": [50, 20], "count": 25}},
    "quantities": [
        "stream_function",
        "head_change",
        "streamline_curvature",
        "strain_rate_xx",
        "acceleration_x",
    ],
    "sheet": {"project": UNBROKEN * 2, "site": "Long meadow", "reference": UNBROKEN, "date": "2026-12-01"},
}

CLIPPED = """() => [...document.querySelectorAll("td, th, p, li, h1, h2, h3, .field span, .person, main")]
  .filter((element) => element.scrollWidth > element.clientWidth + 1 && element.clientWidth > 0)
  .map((element) => element.textContent.slice(0, 60))"""

TOO_WIDE = """() => {
  const page = document.querySelector("main").getBoundingClientRect();
  return [...document.querySelectorAll("main *")].filter((element) => !element.closest("svg"))
    .filter((element) => {
      const box = element.getBoundingClientRect();
      return box.right > page.right + 1 || box.left < page.left - 1;
    }).map((element) => element.textContent.slice(0, 60));
}"""

OVERLAPPING = """() => [...document.querySelectorAll("tr")].flatMap((row) => {
  const boxes = [...row.children].map((cell) => {
    const range = document.createRange();
    range.selectNodeContents(cell);
    return range.getBoundingClientRect();
  }).filter((box) => box.width > 0);
  return boxes.slice(1).filter((box, index) => box.left < boxes[index].right - 1).map(() => row.textContent);
})"""
"""Rows in which the text of one cell runs into that of the next."""


@pytest.fixture(scope="module")
def document():
    reply = perform(ASSESS, json.dumps(REQUEST).encode(), HTML, limits=Limits.of(Settings()))
    assert isinstance(reply, Reply)
    assert isinstance(reply.body, bytes)
    return reply.body.decode()


@pytest.fixture(scope="module")
def browser():
    from playwright.sync_api import sync_playwright

    chromium = shutil.which("chromium")
    if chromium is None:
        pytest.skip("no Chromium on this machine")
    with sync_playwright() as driver:
        running = driver.chromium.launch(executable_path=chromium, args=ARGUMENTS)
        yield running
        running.close()


@pytest.fixture
def page(browser, document):
    opened = browser.new_page()
    loads = []
    opened.on("request", lambda request: loads.append(request.url))
    opened.set_content(document)
    yield opened, loads
    opened.close()


def test_nothing_is_loaded(page):
    _, loads = page
    assert loads == []


@pytest.mark.parametrize(
    "script", [CLIPPED, TOO_WIDE, OVERLAPPING], ids=["clipped", "too-wide", "overlapping"]
)
@pytest.mark.parametrize("paper", WIDTHS)
def test_everything_fits_the_paper(page, paper, script):
    opened, _ = page
    opened.emulate_media(media="print")
    opened.set_viewport_size({"width": WIDTHS[paper], "height": 1000})
    assert opened.evaluate(script) == []


def test_the_drawing_is_shown(page):
    opened, _ = page
    boxes = opened.evaluate(
        "() => [...document.querySelectorAll('svg')].map((svg) => svg.getBoundingClientRect().width)"
    )
    assert boxes
    assert min(boxes) > 300  # px: nothing is drawn in a corner

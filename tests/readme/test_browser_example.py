"""The browser example of the README works in a page of another origin."""

import shutil

import pytest

from support.readme import ADDRESS, blocks

pytestmark = pytest.mark.browser

ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking"]


@pytest.fixture
def page():
    from playwright.sync_api import sync_playwright

    chromium = shutil.which("chromium")
    if chromium is None:
        pytest.skip("no Chromium on this machine")
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=chromium, args=ARGUMENTS)
        yield browser.new_page()
        browser.close()


def test_javascript_example_works(page, service):
    said = []
    page.on("console", lambda message: said.append(message.text))
    (code,) = blocks("javascript")
    page.set_content("<!doctype html><title>another origin</title><body></body>")
    page.evaluate(f"async () => {{ {code.replace(ADDRESS, service.address)} }}")
    assert page.locator("svg").count() == 1
    (line,) = said
    share = float(line.split()[0])
    assert 0.0 < share < 1.0

"""The documentation page in a browser without internet: operations rendered, nothing from elsewhere."""

import shutil
import threading
import time
from contextlib import suppress
from urllib.error import HTTPError
from urllib.request import urlopen

import pytest
import uvicorn

from forebay.api.routers.registry import OPERATIONS
from forebay.app import create_app
from forebay.settings import Settings

pytestmark = pytest.mark.browser

ARGUMENTS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]


def serve(app):
    """A server in a thread, and the port it listens on."""
    server = uvicorn.Server(uvicorn.Config(app, host="127.0.0.1", port=0, log_level="error"))
    thread = threading.Thread(target=server.run)
    thread.start()
    while not server.started:
        time.sleep(0.01)
    return server, thread, server.servers[0].sockets[0].getsockname()[1]


def await_readiness(address):
    """Wait for the kernels: where nothing is cached they compile first, and the page would wait for them."""
    deadline = time.monotonic() + 300.0
    while time.monotonic() < deadline:
        with suppress(HTTPError), urlopen(f"{address}/readyz", timeout=60.0) as answer:
            if answer.status == 200:
                return
        time.sleep(0.2)
    pytest.fail("the service did not become ready in five minutes")


class Prefixed:
    """A proxy that publishes the application under /tools/forebay and strips the prefix."""

    def __init__(self, app):
        self.app = app

    async def __call__(self, scope, receive, send):
        if scope["type"] == "http":
            if not scope["path"].startswith("/tools/forebay/"):
                await send({"type": "http.response.start", "status": 404, "headers": []})
                await send({"type": "http.response.body", "body": b""})
                return
            scope = {**scope, "path": scope["path"].removeprefix("/tools/forebay")}
        await self.app(scope, receive, send)


@pytest.fixture(params=["", "/tools/forebay"], ids=["root", "prefix"])
def address(request):
    app = create_app(Settings(workers=1))
    server, thread, port = serve(Prefixed(app) if request.param else app)
    address = f"http://127.0.0.1:{port}{request.param}"
    await_readiness(address)
    yield address
    server.should_exit = True
    thread.join()


@pytest.fixture
def page():
    from playwright.sync_api import sync_playwright

    chromium = shutil.which("chromium")
    if chromium is None:
        pytest.skip("no Chromium on this machine")
    with sync_playwright() as driver:
        browser = driver.chromium.launch(executable_path=chromium, args=ARGUMENTS)
        yield browser.new_page(viewport={"width": 1280, "height": 1600})
        browser.close()


class Witness:
    """What a page asks for, what of it fails, and what the browser complains of."""

    def __init__(self, page):
        self.asked: list[str] = []
        self.failed: list[str] = []
        self.complaints: list[str] = []
        page.on("request", lambda request: self.asked.append(request.url))
        page.on("requestfailed", lambda request: self.failed.append(request.url))
        page.on("response", lambda answer: self.failed.append(answer.url) if answer.status >= 400 else None)
        page.on(
            "console",
            lambda message: self.complaints.append(message.text) if message.type == "error" else None,
        )

    def assert_content_with(self, address):
        """Check that all went well and that nothing came from elsewhere."""
        assert self.failed == []
        assert self.complaints == []
        assert [url for url in self.asked if not url.startswith((address, "data:", "blob:"))] == []


def test_page_renders_every_operation_from_this_server_alone(page, address):
    witness = Witness(page)
    page.goto(f"{address}/docs")
    page.wait_for_selector(".opblock")
    paths = {
        element.inner_text().replace("\u200b", "")
        for element in page.query_selector_all(".opblock-summary-path")
    }
    assert {operation.path for operation in OPERATIONS.values()} <= paths
    witness.assert_content_with(address)


def test_try_it_out_reaches_the_service(page, address):
    page.goto(f"{address}/docs")
    page.wait_for_selector(".opblock")
    block = page.locator("[id*=sampleField]")
    block.locator(".opblock-summary-control").click()
    block.get_by_role("button", name="Try it out").click()
    with page.expect_response("**/v1/field/sample") as answer:
        block.get_by_role("button", name="Execute").click()
    assert answer.value.url == f"{address}/v1/field/sample"
    assert answer.value.status == 200


def test_how_to_call_it_names_this_address(page, address):
    witness = Witness(page)
    page.goto(f"{address}/docs")
    page.get_by_role("link", name="How to call it").click()
    page.wait_for_selector("#spreadsheet")
    assert page.url == f"{address}/docs/how-to-call"
    blocks = page.locator("pre code").all_inner_texts()
    assert len(blocks) == 5
    assert all(f"{address}/v1/field/sample" in block for block in blocks)
    assert "divers" in page.inner_text(".caution")
    witness.assert_content_with(address)


def test_example_of_the_page_runs_in_it(page, address):
    page.goto(f"{address}/docs/how-to-call")
    said = []
    page.on("console", lambda message: said.append(message.text))
    code = page.inner_text("code.javascript")
    page.evaluate(f"async () => {{ {code} }}")
    assert [text.endswith("m/s") for text in said] == [True]


def test_links_of_the_page_lead_somewhere(page, address):
    page.goto(f"{address}/docs/how-to-call")
    links = page.eval_on_selector_all("main a", "links => links.map(link => link.href)")
    for link in {link.split("#")[0] for link in links}:
        assert link.startswith(address)
        assert page.request.get(link).status == 200


def test_reader_on_a_narrow_screen_scrolls_code_only(page, address):
    page.set_viewport_size({"width": 390, "height": 800})
    page.goto(f"{address}/docs/how-to-call")
    assert page.evaluate("document.documentElement.scrollWidth") <= 390

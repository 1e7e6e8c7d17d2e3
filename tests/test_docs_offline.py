"""The page at /docs in a real browser, on a machine without any network but loopback.

Run it so: unshare -n sh -c 'ip link set lo up; python -m pytest -m browser'
"""

import re
import socket
from collections.abc import Iterator

import pytest
from playwright.sync_api import Page, expect, sync_playwright

from tests.conftest import RunningServer

pytestmark = pytest.mark.browser
CHROMIUM = "/usr/bin/chromium"
FLAGS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]


class Visit:
    """A page with everything it asked for and complained about."""

    def __init__(self, page: Page, address: str) -> None:
        self.page = page
        self.address = address
        self.complaints: list[str] = []
        self.outside: list[str] = []
        page.on(
            "console", lambda m: self.complaints.append(m.text) if m.type in ("error", "warning") else None
        )
        page.on("pageerror", lambda error: self.complaints.append(str(error)))
        page.on("request", self._note)

    def _note(self, request) -> None:
        if not request.url.startswith((self.address + "/", "data:", "blob:" + self.address)):
            self.outside.append(request.url)


@pytest.fixture(scope="module", params=["", "/melt"], ids=["at the root", "under a prefix"])
def visit(request) -> Iterator[Visit]:
    """Open /docs of a running server; with a prefix, as a proxy that keeps it would."""
    arguments = ["--root-path", request.param] if request.param else []
    with RunningServer(*arguments) as address, sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=CHROMIUM, args=FLAGS)
        made = Visit(browser.new_page(viewport={"width": 1280, "height": 1000}), address)
        made.page.goto(f"{address}{request.param}/docs")
        yield made
        browser.close()


def test_there_is_no_network_here_but_loopback():
    assert [name for _, name in socket.if_nameindex()] == ["lo"]
    with pytest.raises(OSError, match="unreachable"), socket.create_connection(("192.0.2.1", 80), timeout=2):
        pass


def test_operations_and_cautions_are_shown(visit):
    expect(visit.page.locator(".opblock").first).to_be_visible()
    for path in ("/v1/safety", "/livez", "/version"):
        expect(visit.page.locator(f'.opblock [data-path="{path}"]')).to_be_visible()
    cautions = visit.page.locator("#safety")
    expect(cautions).to_be_visible()
    expect(cautions).to_contain_text("Local rules and licensed practice decide")
    expect(cautions).to_contain_text("Extract fume at the joint")
    expect(visit.page.locator(".errors-wrapper")).to_have_count(0)


def run_operation(page: Page, operation_id: str, values: dict[str, str]):
    """Open an operation, fill in its parameters, execute it, and return its block."""
    block = page.locator(f'.opblock[id$="-{operation_id}"]')
    block.locator(".opblock-summary").click()
    block.get_by_role("button", name="Try it out").click()
    for name, value in values.items():
        block.locator(f'tr[data-param-name="{name}"] input').fill(value)
    block.get_by_role("button", name="Execute").click()
    answered = block.locator(".live-responses-table .response-col_status").last
    expect(answered).to_contain_text("200", timeout=60_000)
    return block


def test_an_operation_can_be_tried(visit):
    block = run_operation(visit.page, "safety", {"alloy": "Sn63Pb37"})
    expect(block.locator(".live-responses-table")).to_contain_text("Lead harms nerves")


def test_the_picture_of_a_run_shows_in_the_page(visit):
    block = run_operation(visit.page, "draw_profile", {})
    image = block.locator(".live-responses-table img")
    expect(image).to_be_visible()
    assert image.evaluate("picture => picture.naturalWidth") > 800


def test_a_shortlist_can_be_tried(visit):
    block = run_operation(visit.page, "make_shortlist", {})
    expect(block.locator(".live-responses-table")).to_contain_text("ranked_count")


def test_nothing_was_asked_of_anybody_else_and_nothing_went_wrong(visit):
    visit.page.wait_for_load_state("networkidle")
    assert visit.outside == []
    assert visit.complaints == []


def test_start_and_problem_pages_hang_together(visit):
    page = visit.page
    base = re.sub(r"/docs.*$", "/", page.url)
    page.goto(base)
    page.get_by_role("link", name="What the error codes mean").click()
    expect(page.locator("dt")).not_to_have_count(0)
    page.goto(base + "problems/outside-data")
    expect(page.locator("main h1")).to_have_text("Outside the data")
    expect(page.locator("#safety")).to_be_visible()
    assert page.locator("#safety").evaluate("e => getComputedStyle(e).borderLeftStyle") == "solid"
    page.get_by_role("link", name="All problems").click()
    expect(page).to_have_url(base + "problems")
    page.get_by_role("link", name="Meltband").click()
    page.get_by_role("link", name="All operations").click()
    expect(page.locator(".opblock").first).to_be_visible()
    assert visit.outside == []
    assert visit.complaints == []

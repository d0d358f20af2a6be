"""The pages as a browser shows them: nothing from elsewhere, no error, nothing cut off, the caution there."""

import os
import shutil
from collections.abc import Iterator
from threading import Thread
from urllib.parse import urlsplit

import pytest
from playwright.sync_api import Browser, Page, sync_playwright
from werkzeug.serving import make_server

from service import create_app

PAGES = ["/", "/reference", "/problems", "/problems/invalid-question"]
_SANDBOX_OFF_FOR_ROOT = ["--no-sandbox"] if os.geteuid() == 0 else []


@pytest.fixture(scope="module")
def address() -> Iterator[str]:
    server = make_server("127.0.0.1", 0, create_app(), threaded=True)
    thread = Thread(target=server.serve_forever)
    thread.start()
    yield f"http://127.0.0.1:{server.port}"
    server.shutdown()
    thread.join()
    server.server_close()


@pytest.fixture(scope="module")
def browser() -> Iterator[Browser]:
    program = shutil.which("chromium")
    if program is None:
        if os.environ.get("CI") == "true":
            pytest.fail("CI must have a browser: chromium is not installed.")
        pytest.skip("No browser here: chromium is not installed.")
    quiet = ["--disable-background-networking", "--disable-component-update", "--disable-sync"]
    with sync_playwright() as playwright:
        started = playwright.chromium.launch(executable_path=program, args=[*_SANDBOX_OFF_FOR_ROOT, *quiet])
        yield started
        started.close()


def opened(browser: Browser, url: str, width: int, scheme: str) -> tuple[Page, list[str], list[str]]:
    """Open a page; give it with what its console complained of and the hosts it asked."""
    complaints: list[str] = []
    hosts: list[str] = []
    page = browser.new_page(viewport={"width": width, "height": 900}, color_scheme=scheme)
    page.on("console", lambda m: complaints.append(m.text) if m.type in {"error", "warning"} else None)
    page.on("pageerror", lambda error: complaints.append(str(error)))
    page.on("request", lambda request: hosts.append(urlsplit(request.url).netloc))
    page.goto(url, wait_until="networkidle")
    return page, complaints, hosts


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("width", [390, 1280, 2560])
@pytest.mark.parametrize("path", PAGES)
def test_a_page_is_whole_at_any_width(
    browser: Browser, address: str, path: str, width: int, scheme: str
) -> None:
    page, complaints, hosts = opened(browser, address + path, width, scheme)
    assert complaints == []
    assert set(hosts) == {urlsplit(address).netloc}
    assert page.evaluate("document.documentElement.scrollWidth") <= width
    assert page.get_by_text("It is not a safety function").first.is_visible()
    assert page.locator("h1").count() == 1
    page.close()


def test_dark_and_light_have_grounds_of_their_own(browser: Browser, address: str) -> None:
    grounds = set()
    for scheme in ("light", "dark"):
        page, _, _ = opened(browser, address + "/", 1280, scheme)
        grounds.add(page.evaluate("getComputedStyle(document.documentElement).backgroundColor"))
        page.close()
    assert len(grounds) == 2


def test_the_example_on_the_start_page_leads_to_an_answer(browser: Browser, address: str) -> None:
    page, _, _ = opened(browser, address + "/", 1280, "light")
    page.locator("a[href^='/v1/stability']").click()
    assert "Stable for 0 < K < 8/55" in page.locator("body").inner_text()
    page.close()


def test_the_keyboard_reaches_every_link_of_the_start_page(browser: Browser, address: str) -> None:
    page, _, _ = opened(browser, address + "/", 1280, "light")
    links = page.locator("a").count()
    reached = set()
    for _ in range(2 * links):
        page.keyboard.press("Tab")
        reached.add(page.evaluate("[...document.querySelectorAll('a')].indexOf(document.activeElement)"))
    assert reached >= set(range(links))
    page.close()

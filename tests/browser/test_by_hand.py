"""The network goes: the crew goes on by hand from the plan in the page, and is brought back to what the table says."""

from __future__ import annotations

import re
from contextlib import ExitStack

import httpx2
import pytest
from playwright.sync_api import Page, expect

from tests.browser.conftest import CREW
from tests.serving import Served, served
from tests.web.crew_screen import read_screen
from tests.web.pages import read
from tests.web.ready import Meet

pytestmark = pytest.mark.browser

PATIENCE_MS = 15_000  # the page calls itself unconnected after five seconds


def go_offline(page: Page, running: Served) -> None:
    page.goto(running.url + CREW)
    page.locator("[data-age]", has_text="connected, ").wait_for()
    page.wait_for_function(
        "() => performance.getEntriesByType('resource').some((one) => one.name.endsWith('/ahead') && one.responseEnd)"
    )
    running.kill()
    expect(page.locator("#by-hand")).to_be_visible(timeout=PATIENCE_MS)


def weight(page: Page) -> str:
    return page.locator("#crew .weight .heard").inner_text()


def test_crew_steps_through_the_plan_by_hand_and_back(page: Page, running: Served) -> None:
    """What the pages would have shown is asked of the server while it is still there."""
    ahead = [
        read_screen(one) for one in read(httpx2.get(f"{running.url}{CREW}/ahead").text).all("section", "now")
    ]
    go_offline(page, running)
    assert re.match(r"Not connected since \d\d:\d\d:\d\d\.", page.locator("#stale").inner_text())
    first = weight(page)
    for step in ahead[:3]:
        page.get_by_role("button", name="Next change").click()
        assert weight(page) == f"{float(step.weight or 0):g}"
    expect(page.locator("#by-hand")).to_contain_text(f"change 3 of {len(ahead)} ahead")
    for _ in range(3):
        page.get_by_role("button", name="Back").click()
    assert weight(page) == first


def test_nothing_is_sent_while_there_is_no_network(page: Page, running: Served) -> None:
    go_offline(page, running)
    sent: list[str] = []
    page.on("request", lambda request: sent.append(request.method) if request.method == "POST" else None)
    page.get_by_role("button", name="Bar is loaded").click()
    expect(page.locator("#again")).to_contain_text("nothing was sent")
    assert sent == []


def test_screens_ahead_have_nothing_to_confirm(page: Page, running: Served) -> None:
    go_offline(page, running)
    page.get_by_role("button", name="Next change").click()
    expect(page.locator("#crew form")).to_have_count(0)


def test_when_the_network_is_back_the_tables_word_wins_and_the_page_says_so(
    page: Page, running: Served, meet: Meet
) -> None:
    go_offline(page, running)
    page.get_by_role("button", name="Next change").click()
    page.get_by_role("button", name="Next change").click()
    with ExitStack() as stack:
        again = stack.enter_context(
            served("serve", meet.file.parent, port=int(running.url.rsplit(":", 1)[1]))
        )
        expect(page.locator("#by-hand")).to_be_hidden(timeout=PATIENCE_MS)
        expect(page.locator("#again")).to_contain_text("Connected again")
        live = read_screen(read(httpx2.get(again.url + CREW).text).one("section", "now"))
        expect(page.locator("#crew .now")).to_have_attribute("data-state", live.state)
        assert weight(page) == f"{float(live.weight or 0):g}"

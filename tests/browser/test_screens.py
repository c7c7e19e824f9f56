"""What is seen: the crew never has to scroll, a card is one page, every page can be used by everybody."""

from __future__ import annotations

import io
from collections.abc import Callable

import httpx2
import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Page
from pypdf import PdfReader

from tests.browser.conftest import CREW, TABLE
from tests.serving import Served
from tests.web.pages import form, read
from tests.web.ready import Meet

pytestmark = pytest.mark.browser

SIZES = ((1280, 800), (1024, 768), (1920, 1080), (390, 844))
OVERFLOW = """() => {
  const root = document.documentElement;
  const seen = [...document.querySelectorAll('section.now *')].filter((one) => {
    const box = one.getBoundingClientRect();
    const hidden = box.width <= 1 || box.height <= 1 || getComputedStyle(one).visibility === 'hidden';
    // The box of a text in a drawing is its typeface's, taller than its ink; the drawing itself is looked at.
    if (hidden || one.ownerSVGElement) return false;
    return box.right > innerWidth + 1 || box.bottom > innerHeight + 1 || box.left < -1 || box.top < -1;
  });
  return {
    down: root.scrollHeight - innerHeight,
    across: root.scrollWidth - innerWidth,
    outside: seen.map((one) => one.tagName + '.' + (one.className.baseVal ?? one.className)),
  };
}"""


def enter(running: Served, page: str, action: str, **fields: str) -> None:
    """Send a form of a page; a redirect means that it was taken."""
    chosen = form(read(httpx2.get(running.url + page).text), action)
    assert httpx2.post(running.url + chosen.action, data=chosen.filled() | fields).status_code == 303


def word(running: Served, tell: str) -> None:
    """Say something about the bar."""
    assert httpx2.post(f"{running.url}/platforms/1/table-bar", data={"tell": tell}).status_code == 303


def declare(running: Served, meet: Meet, lot: int, weight: str) -> None:
    """Hand a weight in for the second squat."""
    attempt = meet.attempt(lot, "Squat", 2)
    fields = {"attempt": attempt["id"], "version": attempt["version"], "weight": weight}
    assert httpx2.post(f"{running.url}/platforms/1/weight", data=fields).status_code == 303


def judge(running: Served, meet: Meet, lot: int, result: str = "good") -> None:
    """Enter a result of the second squat."""
    attempt = meet.attempt(lot, "Squat", 2)
    fields = {"attempt": attempt["id"], "version": attempt["version"], "result": result}
    assert httpx2.post(f"{running.url}/platforms/1/result", data=fields).status_code == 303


def no_change(running: Served, meet: Meet) -> None:
    declare(running, meet, 7, "117.5")
    declare(running, meet, 2, "117.5")
    word(running, "before")
    judge(running, meet, 2)


def asked(running: Served, meet: Meet) -> None:
    declare(running, meet, 2, "115")


def unknown(running: Served, meet: Meet) -> None:
    declare(running, meet, 16, "245")
    asked(running, meet)
    word(running, "unknown")


def whole_flight(running: Served, meet: Meet) -> None:
    for lot in (2, 7, 5, 14, 1, 12, 16):
        judge(running, meet, lot, "missed")


def next_flight(running: Served, meet: Meet) -> None:
    """The most plates that the demo's roster puts on at once."""
    httpx2.post(f"{running.url}/platforms/1/flight", data={"flight": 2, "lift": 3})
    word(running, "before")
    for lot in (3, 8, 15, 6, 13, 10, 17):
        attempt = meet.attempt(lot, "Deadlift", 1)
        fields = {"attempt": attempt["id"], "version": attempt["version"], "result": "passed"}
        httpx2.post(f"{running.url}/platforms/1/result", data=fields)
    word(running, "unknown")


STATES: dict[str, tuple[str, Callable[[Served, Meet], None]]] = {
    "changing": ("changing", lambda running, meet: None),
    "no change": ("changing", no_change),
    "loaded": ("lifting", lambda running, meet: word(running, "loaded")),
    "changed": ("changed", asked),
    "unknown": ("unknown", unknown),
    "hold": ("hold", lambda running, meet: word(running, "hold")),
    "waiting": ("waiting", whole_flight),
    "heavy": ("unknown", next_flight),
}


@pytest.mark.parametrize("state", STATES)
def test_crew_reads_everything_without_scrolling(page: Page, running: Served, meet: Meet, state: str) -> None:
    """On a tablet both ways, on a TV and on a phone: nothing lies outside the screen, nothing is cut off."""
    wanted, reach = STATES[state]
    reach(running, meet)
    page.goto(running.url + CREW)
    assert page.locator("section.now").get_attribute("data-state") == wanted
    for width, height in SIZES:
        page.set_viewport_size({"width": width, "height": height})
        page.evaluate("document.fonts.ready")
        found = page.evaluate(OVERFLOW)
        assert (found["down"] <= 0, found["across"] <= 0, found["outside"]) == (True, True, []), (
            width,
            height,
            found,
        )


@pytest.mark.parametrize("path", ["/platforms/1/crew", "/platforms/2/crew"])
def test_crews_screen_of_bar_and_belt_fits(page: Page, base_url: str, path: str) -> None:
    page.goto(path)
    for width, height in SIZES:
        page.set_viewport_size({"width": width, "height": height})
        found = page.evaluate(OVERFLOW)
        assert (found["down"] <= 0, found["across"] <= 0, found["outside"]) == (True, True, []), (
            width,
            height,
            found,
        )


CARDS = [f"/platforms/{p}/cards/{f}/{x}/{n}" for p, f, x, n in ((1, 1, 1, 2), (1, 2, 3, 1), (2, 3, 5, 3))]


@pytest.mark.parametrize("paper", ["A4", "Letter"])
@pytest.mark.parametrize("path", CARDS)
def test_card_is_one_page_of_paper(page: Page, base_url: str, path: str, paper: str) -> None:
    """Printed as the browser prints it: the meet's revision at the foot is on the page, and there is no second."""
    page.goto(path)
    printed = PdfReader(io.BytesIO(page.pdf(format=paper)))
    assert len(printed.pages) == 1
    assert "Revision" in printed.pages[0].extract_text()


def test_printed_card_has_no_menu_and_no_buttons(page: Page, base_url: str) -> None:
    page.goto(CARDS[0])
    assert page.get_by_role("navigation", name="Pages").is_visible()
    page.emulate_media(media="print")
    assert page.get_by_role("navigation", name="Pages").is_hidden()
    assert page.get_by_role("button", name="Print").is_hidden()
    assert page.locator("article.sheet").is_visible()


PAGES = ("/", "/meets/1", "/meets/1/roster", TABLE, f"{TABLE}?flight=2&lift=1", CREW, "/platforms/2/crew")
PAGES += ("/platforms/1/cards", CARDS[0], "/platforms/1/equipment", "/platforms/2/equipment", "/nowhere")


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("path", PAGES)
def test_page_has_no_accessibility_violation_and_a_clean_console(
    page: Page, base_url: str, complaints: list[str], path: str, scheme: str
) -> None:
    page.emulate_media(color_scheme=scheme)
    page.goto(path)
    page.evaluate("document.fonts.ready")
    results = Axe().run(page)
    assert results.violations_count == 0, results.generate_report()
    assert complaints == []


@pytest.mark.parametrize("path", [path for path in PAGES if "crew" not in path])
def test_page_does_not_scroll_sideways_on_a_phone(page: Page, base_url: str, path: str) -> None:
    page.set_viewport_size({"width": 390, "height": 844})
    page.goto(path)
    assert page.evaluate("document.documentElement.scrollWidth - innerWidth") <= 0


def test_light_or_dark_is_chosen_and_remembered(page: Page, base_url: str) -> None:
    page.emulate_media(color_scheme="light")
    page.goto("/meets/1")
    page.get_by_role("button", name="Light or dark").click()
    assert page.evaluate("document.documentElement.dataset.theme") == "dark"
    page.goto(TABLE)
    assert page.evaluate("document.documentElement.dataset.theme") == "dark"

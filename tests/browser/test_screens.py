"""What is seen: the crew never has to scroll, a card is one page, every page can be used by everybody."""

from __future__ import annotations

import io
from collections.abc import Callable

import pytest
from axe_playwright_python.sync_playwright import Axe
from playwright.sync_api import Page
from pypdf import PdfReader

from tests.browser.conftest import CREW, TABLE
from tests.browser.hall import Hall

pytestmark = pytest.mark.browser

SIZES = ((1280, 800), (1024, 768), (1920, 1080), (390, 844))
OVERFLOW = """() => {
  const root = document.documentElement;
  const shortened = (one) => getComputedStyle(one).textOverflow === 'ellipsis';
  const seen = [...document.querySelectorAll('section.now *')].filter((one) => {
    const box = one.getBoundingClientRect();
    const hidden = box.width <= 1 || box.height <= 1 || getComputedStyle(one).visibility === 'hidden';
    // The box of a text in a drawing is its typeface's, taller than its ink; the drawing itself is looked at. And
    // a long name that ends in an ellipsis says itself that it goes on. Of what follows, the last may be cut.
    if (hidden || one.ownerSVGElement || shortened(one.parentElement) || one.closest('.then li')) return false;
    return box.right > innerWidth + 1 || box.bottom > innerHeight + 1 || box.left < -1 || box.top < -1;
  });
  return {
    down: root.scrollHeight - innerHeight,
    across: root.scrollWidth - innerWidth,
    outside: seen.map((one) => one.tagName + ' ' + one.textContent.trim().slice(0, 40)),
  };
}"""


def changing(_hall: Hall) -> None:
    """As the demo stands."""


def no_change(hall: Hall) -> None:
    hall.declare(2, 2, "125")
    hall.post("table-bar", tell="before")
    hall.judge(2, 2, "good")


def loaded(hall: Hall) -> None:
    hall.post("table-bar", tell="loaded")


def asked(hall: Hall) -> None:
    hall.declare(2, 2, "115")


def unknown(hall: Hall) -> None:
    asked(hall)
    hall.post("table-bar", tell="unknown")


def held(hall: Hall) -> None:
    hall.post("table-bar", tell="hold")


def waiting(hall: Hall) -> None:
    """The next in round 3 has not handed in a weight."""
    for lot in (2, 7, 5, 14, 1, 12, 16):
        hall.judge(lot, 2, "missed")
    for lot in (4, 11, 9):
        hall.judge(lot, 3, "good")


def heavy(hall: Hall) -> None:
    """The most plates that the demo's roster puts on at once: the last deadlift, from a bar nobody knows."""
    last = hall.attempt(18, 1, "Deadlift")
    hall.post("flight", flight=last["flight_id"], lift=last["lift_id"])
    for lot in (3, 8, 15, 6, 13, 10, 17):
        hall.judge(lot, 1, "passed", "Deadlift")
    hall.post("table-bar", tell="unknown")


STATES: dict[str, tuple[str, Callable[[Hall], None]]] = {
    "changing": ("changing", changing),
    "no change": ("changing", no_change),
    "loaded": ("lifting", loaded),
    "changed": ("changed", asked),
    "unknown": ("unknown", unknown),
    "hold": ("hold", held),
    "waiting": ("waiting", waiting),
    "heavy": ("unknown", heavy),
}


def assert_fits(page: Page) -> None:
    """Nothing outside of the screen, nothing to scroll to, in any of the sizes."""
    for width, height in SIZES:
        page.set_viewport_size({"width": width, "height": height})
        page.evaluate("document.fonts.ready")
        found = page.evaluate(OVERFLOW)
        assert (found["down"] <= 0, found["across"] <= 0, found["outside"]) == (True, True, []), (
            width,
            height,
            found,
        )


@pytest.mark.parametrize("state", STATES)
def test_crew_reads_everything_without_scrolling(page: Page, hall: Hall, state: str) -> None:
    """On a tablet both ways, on a TV and on a phone: nothing lies outside the screen, nothing is cut off."""
    wanted, reach = STATES[state]
    reach(hall)
    page.goto(hall.crew)
    assert page.locator("section.now").get_attribute("data-state") == wanted
    assert_fits(page)


def test_crews_screen_of_a_belt_fits(page: Page, base_url: str) -> None:
    page.goto("/platforms/2/crew")
    assert_fits(page)


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
PAGES += tuple(
    f"/platforms/1/{name}" for name in ("check", "announcer", "screen", "join", "chart/1", "checklist")
)
PAGES += tuple(f"/platforms/1/{name}" for name in ("plates-check", "flights", "lifts/1", "rules"))
WALLS = tuple(f"/platforms/{name}" for name in ("1/crew", "2/crew", "1/check", "1/announcer"))


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


@pytest.mark.parametrize("path", [path for path in PAGES if path not in WALLS])
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

"""An entry in one page changes another page by itself, and two people at one attempt lose nothing."""

from __future__ import annotations

import statistics

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser.conftest import CREW, TABLE, wait_connected
from tests.browser.hall import Hall
from tests.serving import Served, served
from tests.web.ready import Meet

pytestmark = pytest.mark.browser

# Both pages live on one machine and one clock: from the key going down to the changed screen being painted.
NOTE_KEY = """() => addEventListener('keydown', (event) => {
  if (event.key === 'g') window.pressed = performance.timeOrigin + performance.now();
}, true)"""
NOTE_PAINT = """() => {
  const shown = () => document.querySelector('[data-revision]').dataset.revision;
  const before = shown();
  window.painted = new Promise((done) => new MutationObserver((_, watcher) => {
    if (shown() === before) return;
    watcher.disconnect();
    requestAnimationFrame(() => setTimeout(() => done(performance.timeOrigin + performance.now())));
  }).observe(document.getElementById('crew'), {subtree: true, childList: true, attributes: true}));
}"""


def open_crew(context: BrowserContext, hall: Hall) -> Page:
    """The crew's page, on a screen of its own."""
    crew = context.new_page()
    crew.goto(hall.crew)
    wait_connected(crew)
    return crew


def test_entry_at_the_table_changes_the_crews_screen(
    table: Page, context: BrowserContext, hall: Hall, capsys: pytest.CaptureFixture[str]
) -> None:
    crew = open_crew(context, hall)
    expect(crew.locator("section.now")).to_contain_text("Tamsin Okoro")
    table.evaluate(NOTE_KEY)
    times = []
    for name in ("Ines Quarto", "Rosa Tenney", "Hilde Brandvold"):
        crew.evaluate(NOTE_PAINT)
        table.bring_to_front()
        table.keyboard.press("g")
        times.append(crew.evaluate("window.painted") - table.evaluate("window.pressed"))
        expect(crew.locator("section.now")).to_contain_text(name)
    with capsys.disabled():
        print(f"\n  entry to crew's screen: {', '.join(f'{one:.0f}' for one in times)} ms", end=" ")
        print(f"(median {statistics.median(times):.0f} ms)", end=" ")


def test_crews_word_changes_the_table(table: Page, context: BrowserContext, hall: Hall) -> None:
    crew = open_crew(context, hall)
    crew.get_by_role("button", name="Bar is loaded").click()
    expect(crew.locator("section.now")).to_have_attribute("data-state", "lifting")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: bar is loaded.")


def test_weight_changed_under_the_hands_asks_the_crew_on_its_own_screen(
    table: Page, context: BrowserContext, hall: Hall
) -> None:
    crew = open_crew(context, hall)
    hall.declare(2, 2, "115")
    expect(crew.get_by_role("heading", level=1)).to_have_text("Changed")
    entries = hall.entries()
    nothing_moved = crew.get_by_role("button", name="Nothing moved yet")
    nothing_moved.click()  # too soon: this tap was meant for what stood here before
    crew.evaluate(
        "new Promise((done) => setTimeout(done, 1500))"
    )  # the page's own clock, past the deaf moment
    assert hall.entries() == entries
    nothing_moved.click()
    expect(crew.locator("section.now")).to_have_attribute("data-state", "changing")
    expect(crew.locator(".weight")).to_contain_text("115")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: loading.")


def test_half_typed_weight_survives_a_colleagues_entry_and_is_then_told(
    table: Page, context: BrowserContext, hall: Hall
) -> None:
    """The colleague enters for the very same attempt: what is typed stays, Enter is refused and says why."""
    attempt = hall.attempt(2, 3)
    box = table.locator(f"#weight-{attempt['id']}")
    box.click()
    table.keyboard.type("12")

    other = context.new_page()
    other.goto(hall.table)
    wait_connected(other)
    other.locator(f"#weight-{attempt['id']}").fill("117.5")
    other.locator(f"#weight-{attempt['id']}").press("Enter")
    expect(other.locator("#said")).to_contain_text("declared at 117.5")

    revision = other.locator("[data-revision]").get_attribute("data-revision")
    expect(table.locator("[data-revision]")).to_have_attribute("data-revision", revision or "")
    expect(box).to_have_value("12")
    expect(box).to_be_focused()
    table.keyboard.type("0")
    table.keyboard.press("Enter")
    line = table.locator(f"#row-{attempt['id']}")
    expect(line.get_by_role("alert")).to_contain_text("was changed by table while you were typing")
    expect(box).to_have_value("120")
    assert hall.meet.attempt_by_id(attempt["id"])["weight"] == "117.5"

    box.press("Enter")  # now it has been seen; that it is a change needs a reason
    expect(table.get_by_label("Reason to enter it all the same")).to_be_focused()
    table.keyboard.type("the coach was misheard")
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 120 (was 117.5)")
    assert hall.meet.attempt_by_id(attempt["id"])["weight"] == "120"


def test_refused_weight_stays_typed_when_the_page_is_refreshed_by_others(
    table: Page, context: BrowserContext, hall: Hall
) -> None:
    attempt = hall.attempt(2, 3)
    box = table.locator(f"#weight-{attempt['id']}")
    box.fill("118")
    box.press("Enter")
    said = table.locator(f"#ahead-{attempt['id']}")
    expect(said).to_contain_text("Nearest: 117.5 or 120.")
    crew = open_crew(context, hall)
    crew.get_by_role("button", name="Bar is loaded").click()
    expect(table.get_by_label("Up now")).to_contain_text("Crew: bar is loaded.")
    expect(box).to_have_value("118")
    expect(said).to_contain_text("Nearest: 117.5 or 120.")


def test_entry_while_the_server_is_away_is_told_and_stays_typed(
    page: Page, running: Served, meet: Meet
) -> None:
    """What was typed was once thrown away as soon as the connection came back, though nobody had taken it."""
    page.goto(running.url + TABLE)
    wait_connected(page)
    box = page.locator(f"#weight-{meet.attempt(2, 'Squat', 3)['id']}")
    running.kill()
    box.fill("117.5")
    box.press("Enter")
    expect(page.locator("#refused")).to_contain_text("Not entered: the server does not answer.")
    with served("serve", meet.file.parent, port=int(running.url.rpartition(":")[2])):
        expect(page.locator("#stale")).to_be_hidden(timeout=60_000)
        wait_connected(page)
        expect(box).to_have_value("117.5")
        box.press("Enter")
        expect(page.locator("#said")).to_contain_text("declared at 117.5")


@pytest.mark.parametrize("path", [TABLE, CREW])
def test_page_says_that_it_may_be_old_when_the_server_is_gone(page: Page, running: Served, path: str) -> None:
    page.goto(running.url + path)
    wait_connected(page)
    band = page.locator("#stale")
    expect(band).to_be_hidden()
    running.kill()
    expect(band).to_be_visible(timeout=30_000)
    expect(band).to_contain_text("What you see may be old.")
    expect(page.locator("[data-age]")).to_have_text("not up to date", timeout=30_000)

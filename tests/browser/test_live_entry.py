"""An entry in one page changes another page by itself, and two people at one attempt lose nothing."""

from __future__ import annotations

import statistics

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser.conftest import CREW, TABLE, wait_connected
from tests.serving import Served
from tests.web.ready import Meet

pytestmark = pytest.mark.browser

# Both pages live on one machine and one clock: from the key going down to the changed screen being painted.
NOTE_KEY = "addEventListener('keydown', (e) => { if (e.key === 'g') window.pressed = performance.timeOrigin + performance.now(); }, true)"
NOTE_PAINT = """() => {
  const shown = () => document.querySelector('[data-revision]').dataset.revision;
  const before = shown();
  window.painted = new Promise((done) => new MutationObserver((_, watcher) => {
    if (shown() === before) return;
    watcher.disconnect();
    requestAnimationFrame(() => setTimeout(() => done(performance.timeOrigin + performance.now())));
  }).observe(document.getElementById('crew'), {subtree: true, childList: true, attributes: true}));
}"""


def open_crew(context: BrowserContext, running: Served) -> Page:
    """The crew's page, on a screen of its own."""
    crew = context.new_page()
    crew.goto(running.url + CREW)
    wait_connected(crew)
    return crew


def test_entry_at_the_table_changes_the_crews_screen(
    table: Page, context: BrowserContext, running: Served, capsys: pytest.CaptureFixture[str]
) -> None:
    crew = open_crew(context, running)
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
        print(f"\n  entry to crew's screen: {', '.join(f'{one:.0f}' for one in times)} ms", end=" ")  # noqa: T201
        print(f"(median {statistics.median(times):.0f} ms)", end=" ")  # noqa: T201


def test_crews_word_changes_the_table(table: Page, context: BrowserContext, running: Served) -> None:
    crew = open_crew(context, running)
    crew.get_by_role("button", name="Bar is loaded").click()
    expect(crew.locator("section.now")).to_have_attribute("data-state", "lifting")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: bar is loaded.")


def test_weight_changed_under_the_hands_asks_the_crew_on_its_own_screen(
    table: Page, context: BrowserContext, running: Served, meet: Meet
) -> None:
    crew = open_crew(context, running)
    box = table.locator(f"#weight-{meet.attempt(2, 'Squat', 2)['id']}")
    box.fill("115")
    box.press("Enter")
    expect(crew.get_by_role("heading", level=1)).to_have_text("Changed")
    crew.get_by_role("button", name="Nothing moved yet").click()
    expect(crew.locator("section.now")).to_have_attribute("data-state", "changing")
    expect(crew.locator(".weight")).to_contain_text("115")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: loading.")


def test_half_typed_weight_survives_a_colleagues_entry_and_is_then_told(
    table: Page, context: BrowserContext, running: Served, meet: Meet
) -> None:
    """The colleague enters for the very same attempt: what is typed stays, Enter is refused and says why."""
    attempt = meet.attempt(2, "Squat", 3)
    box = table.locator(f"#weight-{attempt['id']}")
    box.click()
    table.keyboard.type("12")

    other = context.new_page()
    other.goto(running.url + TABLE)
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
    assert meet.attempt_by_id(attempt["id"])["weight"] == "117.5"

    box.press("Enter")  # now it has been seen
    expect(table.locator("#said")).to_contain_text("declared at 120 (was 117.5)")
    assert meet.attempt_by_id(attempt["id"])["weight"] == "120"


def test_refused_weight_stays_typed_when_the_page_is_refreshed_by_others(
    table: Page, context: BrowserContext, running: Served, meet: Meet
) -> None:
    attempt = meet.attempt(2, "Squat", 3)
    box = table.locator(f"#weight-{attempt['id']}")
    box.fill("118")
    box.press("Enter")
    expect(table.locator(f"#row-{attempt['id']}").get_by_role("alert")).to_contain_text(
        "Nearest: 117.5 or 120."
    )
    crew = open_crew(context, running)
    crew.get_by_role("button", name="Bar is loaded").click()
    expect(table.get_by_label("Up now")).to_contain_text("Crew: bar is loaded.")
    expect(box).to_have_value("118")


def test_entry_while_the_server_is_away_is_told_and_stays_typed(
    table: Page, running: Served, meet: Meet
) -> None:
    """What was typed was once thrown away as soon as the connection came back, though nobody had taken it."""
    attempt = meet.attempt(2, "Squat", 3)
    running.kill()
    box = table.locator(f"#weight-{attempt['id']}")
    box.fill("117.5")
    box.press("Enter")
    expect(table.locator("#refused")).to_contain_text("Not entered: the server does not answer.")
    expect(box).to_have_value("117.5")


@pytest.mark.parametrize("path", [TABLE, CREW])
def test_page_says_that_it_may_be_old_when_the_server_is_gone_and_recovers(
    page: Page, running: Served, meet: Meet, path: str
) -> None:
    from tests.serving import served

    page.goto(running.url + path)
    wait_connected(page)
    band = page.locator("#stale")
    expect(band).to_be_hidden()
    running.kill()
    expect(band).to_be_visible(timeout=20_000)
    expect(band).to_contain_text("What you see may be old.")
    expect(page.locator("[data-age]")).to_have_text("not up to date")
    with served("serve", meet.file.parent, port=int(running.url.rpartition(":")[2])):
        expect(band).to_be_hidden(timeout=40_000)
        wait_connected(page)

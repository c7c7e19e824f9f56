"""A day at the Table by keyboard: a full round with its keys counted, reasons, redo, the freeze, and the countdown."""

from __future__ import annotations

import re
import statistics

import pytest
from playwright.sync_api import BrowserContext, Page, expect

from tests.browser.conftest import wait_connected
from tests.browser.hall import Hall
from tests.browser.test_keyboard import focused
from tests.browser.test_live_entry import open_crew

pytestmark = pytest.mark.browser

MOST_KEYS = 6  # for an attempt whose next weight has at most four characters
COUNT_KEYS = "window.keys = 0; addEventListener('keydown', () => { window.keys += 1; }, true);"

# Flight B squats its first round: lot, result, the weight handed in next ("" takes the grey one).
ROUND = (
    (3, "g", "170"), (8, "g", "180"), (15, "n", ""), (6, "g", "195"),
    (13, "g", "192.5"), (10, "g", "210"), (17, "n", "210"), (18, "g", "235"),
)  # fmt: skip


def test_a_full_round_is_entered_by_keyboard_alone_in_six_keys_an_attempt(
    page: Page, hall: Hall, complaints: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    first = hall.attempt(ROUND[0][0], 1)
    page.goto(f"{hall.table}?flight={first['flight_id']}&lift={first['lift_id']}")
    wait_connected(page)
    page.get_by_role("button", name="Bring Flight B").click()
    expect(page.get_by_label("Up now")).to_contain_text("What is on the bar?")
    page.keyboard.press("b")  # the crew was at Flight A's change: nothing has been moved yet
    expect(page.get_by_label("Up now")).to_contain_text("Crew: loading.")
    page.evaluate(COUNT_KEYS)
    spent: list[tuple[str, int]] = []
    for lot, key, typed in ROUND:
        before = page.evaluate("window.keys")
        page.keyboard.press(key)
        wanted = hall.box(lot, 2)
        expect(page.locator(f"#{wanted}")).to_be_focused()
        page.keyboard.type(typed)
        page.keyboard.press("Enter")
        expect(page.locator("#said")).to_contain_text("declared at")
        spent.append((typed, page.evaluate("window.keys") - before))
        assert hall.attempt(lot, 2)["weight"] == (typed or hall.attempt(lot, 1)["weight"])
    assert all(keys <= MOST_KEYS for typed, keys in spent if len(typed) <= 4)
    assert sorted(hall.attempt(lot, 1)["result"] for lot, _, _ in ROUND) == ["good"] * 6 + ["missed"] * 2
    assert complaints == []
    keys = [one for _, one in spent]
    with capsys.disabled():
        print(f"\n  keys an attempt: {keys}, mean {statistics.mean(keys):.1f}, most {max(keys)}", end=" ")


def test_a_rule_is_overridden_without_leaving_the_keyboard(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    wanted = hall.box(2, 3)
    expect(table.locator(f"#{wanted}")).to_be_focused()
    table.keyboard.type("116")
    table.keyboard.press("Enter")
    reason = table.get_by_label("Reason to enter it all the same")
    expect(reason).to_be_focused()
    table.keyboard.type("jury says so")
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("because: jury says so")
    assert hall.attempt(2, 3)["weight"] == "116"


def test_the_rule_speaks_on_the_line_before_enter(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    wanted = hall.box(2, 3)
    expect(table.locator(f"#{wanted}")).to_be_focused()
    table.keyboard.type("116")
    line = table.locator(f"#row-{hall.attempt(2, 3)['id']}")
    expect(line).to_contain_text("116 kg is not a multiple of 2.5. Nearest: 115 or 117.5.")
    table.keyboard.press("ArrowUp")
    expect(line).to_contain_text("lifts ")
    expect(line).not_to_contain_text("is not a multiple")
    assert hall.attempt(2, 3)["weight"] is None


def test_a_record_attempt_is_typed_with_an_r_behind_it(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    expect(table.locator(f"#{hall.box(2, 3)}")).to_be_focused()
    table.keyboard.type("115.5r")
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 115.5, record attempt")
    expect(table.locator(f"#row-{hall.attempt(2, 3)['id']}")).to_contain_text("record")


def test_undo_and_redo_go_back_and_forth_by_key(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    expect(table.locator("#said")).to_contain_text("good lift")
    table.keyboard.press("u")
    expect(table.locator("#said")).to_contain_text("Undone: Tamsin Okoro: Squat, 2nd: good lift at 112.5.")
    table.keyboard.press("r")
    expect(table.locator("#said")).to_contain_text(
        "Entered again: Tamsin Okoro: Squat, 2nd: good lift at 112.5."
    )
    assert hall.attempt(2, 2)["result"] == "good"
    expect(table.locator(f"#{hall.box(2, 3)}")).to_be_focused()


def read_by_the_crew(crew: Page) -> str:
    """Everything the crew reads about the change in its hands."""
    return str(
        crew.locator("section.now").evaluate(
            "(now) => { const copy = now.cloneNode(true);"
            " copy.querySelectorAll('.status, .ahead, .next').forEach((one) => one.remove());"
            " return copy.dataset.shown + ' ' + copy.textContent.replace(/\\s+/g, ' '); }"
        )
    )


def test_an_entry_for_another_lifter_changes_nothing_that_the_crew_reads(
    table: Page, context: BrowserContext, hall: Hall
) -> None:
    crew = open_crew(context, hall)
    before = read_by_the_crew(crew)
    revision = crew.locator("[data-revision]").first.get_attribute("data-revision")
    one = table.locator(f"#{hall.box(16, 3)}")
    one.fill("175")
    one.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 175")
    expect(crew.locator("[data-revision]").first).not_to_have_attribute("data-revision", revision or "")
    assert read_by_the_crew(crew) == before


def test_a_change_of_the_weight_being_loaded_asks_and_then_gives_the_difference(
    table: Page, context: BrowserContext, hall: Hall
) -> None:
    """The old weight struck through, nothing altered until the crew has said what is on the bar."""
    crew = open_crew(context, hall)
    hand = hall.platform()["hand"]
    one = table.locator(f"#{hall.box(2, 2)}")
    one.fill("120")
    one.press("Enter")
    expect(table.get_by_label("Reason to enter it all the same")).to_be_focused()
    table.keyboard.type("coach")
    table.keyboard.press("Enter")
    expect(crew.get_by_role("heading", level=1)).to_have_text(re.compile("changed", re.IGNORECASE))
    expect(crew.locator(".swap s")).to_contain_text("112.5")
    assert hall.platform()["hand"] == hand  # the old instruction is still the one that is out
    done = crew.get_by_role("button", name="All moved")
    # A tap just after the screen changed is not taken: it was meant for what stood there before.
    crew.wait_for_function("(shown) => Date.now() - shown > 1500", arg=crew.evaluate("Date.now()"))
    done.click()
    expect(crew.locator("section.now")).to_have_attribute("data-state", re.compile("changing|unknown"))
    assert hall.platform()["hand"]["before"] == hand["stack"]
    expect(crew.locator(".weight")).to_contain_text(hall.platform()["hand"]["weight"])


def test_who_has_not_handed_in_is_counted_down(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    waiting = table.get_by_label("Not handed in")
    place = waiting.locator("li", has_text="Tamsin Okoro").locator("[data-until]")
    expect(place).to_have_text(re.compile(r"^(60|5\d) s left$"))
    first = place.inner_text()
    expect(place).not_to_have_text(first)
    assert int(place.inner_text().split()[0]) < int(first.split()[0])
    table.keyboard.press("Enter")
    expect(waiting.locator("li", has_text="Tamsin Okoro")).to_have_count(0)
    assert focused(table) != ""

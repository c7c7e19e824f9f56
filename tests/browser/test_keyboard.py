"""The Table by keyboard alone: a whole lifter's change in a few keys, with the cursor where the next key belongs."""

from __future__ import annotations

import pytest
from playwright.sync_api import Page, expect

from tests.browser.hall import Hall

pytestmark = pytest.mark.browser


def focused(page: Page) -> str:
    """The id of what has the cursor."""
    return str(page.evaluate("document.activeElement.id"))


def test_several_attempts_are_entered_with_six_keys_each(table: Page, hall: Hall) -> None:
    """Result, the digits of the next weight, Enter; then the next lifter. No mouse, no Tab."""
    for key, lot, typed, result in (
        ("g", 2, "117.5", "good"),
        ("g", 7, "130", "good"),
        ("n", 5, "140", "missed"),
        ("g", 14, "145", "good"),
    ):
        table.keyboard.press(key)
        wanted = hall.box(lot, 3)
        expect(table.locator(f"#{wanted}")).to_be_focused()
        assert len(key + typed) <= 6
        table.keyboard.type(typed)
        table.keyboard.press("Enter")
        expect(table.locator("#said")).to_contain_text(f"declared at {typed}")
        assert hall.attempt(lot, 2)["result"] == result
        assert hall.attempt(lot, 3)["weight"] == typed


def test_enter_in_the_empty_box_takes_the_grey_weight(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    expect(table.locator(f"#{hall.box(2, 3)}")).to_be_focused()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 115")


def test_second_enter_hands_nothing_in_for_anybody(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    expect(table.locator(f"#{hall.box(2, 3)}")).to_be_focused()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 115")
    journal = hall.entries()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("stays at 115")
    assert hall.entries() == journal


def test_arrow_keys_move_the_weight_by_one_step(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    one = table.locator(f"#{hall.box(2, 3)}")
    expect(one).to_be_focused()
    for key, value in (("ArrowUp", "117.5"), ("ArrowUp", "120"), ("ArrowDown", "117.5")):
        table.keyboard.press(key)
        expect(one).to_have_value(value)
    one.fill("118")
    table.keyboard.press("ArrowDown")
    expect(one).to_have_value("117.5")
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 117.5")


def test_escape_forgets_what_was_typed(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    one = table.locator(f"#{hall.box(2, 3)}")
    expect(one).to_be_focused()
    table.keyboard.type("999")
    table.keyboard.press("Escape")
    expect(one).to_have_value("")


def test_refusal_keeps_what_was_typed_and_asks_for_a_reason_or_another_weight(
    table: Page, hall: Hall
) -> None:
    """All of it stays while the page refreshes itself; Enter in the box tries again."""
    table.keyboard.press("g")
    one = table.locator(f"#{hall.box(2, 3)}")
    expect(one).to_be_focused()
    table.keyboard.type("118")
    table.keyboard.press("Enter")
    said = table.locator(f"#{hall.box(2, 3).replace('weight', 'ahead')}")
    expect(said).to_contain_text("Nearest: 117.5 or 120.")
    expect(one).to_have_attribute("aria-invalid", "true")
    hall.declare(16, 3, "172.5")
    expect(table.locator(f"#{hall.box(16, 3)}")).to_have_value("172.5")
    expect(one).to_have_value("118")
    expect(one).to_have_attribute("aria-invalid", "true")
    expect(said).to_contain_text("Nearest: 117.5 or 120.")
    one.fill("120")
    one.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 120")


def test_lot_number_finds_a_lifter(table: Page, hall: Hall) -> None:
    table.keyboard.press("f")
    assert focused(table) == "find-lot"
    table.keyboard.type("16")
    table.keyboard.press("Enter")
    assert focused(table) == hall.box(16, 3)  # the first of that lifter's boxes that is still empty


def test_undo_and_hold_have_their_keys(table: Page, hall: Hall) -> None:
    table.keyboard.press("g")
    expect(table.locator("#said")).to_contain_text("good lift")
    table.keyboard.press("u")
    expect(table.locator("#said")).to_contain_text("Undone: Tamsin Okoro: Squat, 2nd: good lift at 112.5.")
    assert hall.attempt(2, 2)["result"] == "open"
    table.keyboard.press("h")
    expect(table.get_by_role("button", name="End the hold")).to_be_visible()
    assert hall.platform()["condition"] == "hold"


def test_weight_against_the_rules_is_entered_with_a_reason_and_the_bar_is_asked(
    table: Page, hall: Hall
) -> None:
    """The cursor goes to the reason by itself; what is on the bar is answered by one key."""
    one = table.locator(f"#{hall.box(2, 2)}")
    one.fill("115")
    one.press("Enter")
    expect(table.get_by_label("Reason to enter it all the same")).to_be_focused()
    table.keyboard.type("jury: clerk's mistake")
    table.keyboard.press("Enter")
    expect(table.get_by_label("Up now")).to_contain_text("What is on the bar?")
    table.keyboard.press("b")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: loading.")
    assert hall.platform()["hand"]["weight"] == "115"


def test_colleagues_entry_does_not_move_the_cursor(table: Page, hall: Hall) -> None:
    one = table.locator(f"#{hall.box(16, 3)}")
    one.focus()
    other = table.context.new_page()
    other.goto(table.url)
    other.keyboard.press("g")
    expect(other.locator("#said")).to_contain_text("good lift")
    revision = other.locator("[data-revision]").get_attribute("data-revision")
    expect(table.locator("[data-revision]")).to_have_attribute("data-revision", revision or "")
    expect(one).to_be_focused()

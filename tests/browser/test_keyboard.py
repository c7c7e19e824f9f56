"""The Table by keyboard alone: a whole lifter's change in a few keys, with the cursor where the next key belongs."""

from __future__ import annotations

import pytest
from playwright.sync_api import Page, expect

from tests.web.ready import Meet

pytestmark = pytest.mark.browser


def focused(page: Page) -> str:
    """The id of what has the cursor."""
    return str(page.evaluate("document.activeElement.id"))


def box(meet: Meet, lot: int, number: int) -> str:
    """The id of a weight box."""
    return f"weight-{meet.attempt(lot, 'Squat', number)['id']}"


def test_several_attempts_are_entered_with_six_keys_each(table: Page, meet: Meet) -> None:
    """Result, the digits of the next weight, Enter; then the next lifter. No mouse, no Tab."""
    for key, lot, typed, result in (
        ("g", 2, "117.5", "good"),
        ("g", 7, "130", "good"),
        ("n", 5, "140", "missed"),
        ("g", 14, "145", "good"),
    ):
        table.keyboard.press(key)
        wanted = box(meet, lot, 3)
        expect(table.locator(f"#{wanted}")).to_be_focused()
        assert len(key + typed) <= 6
        table.keyboard.type(typed)
        table.keyboard.press("Enter")
        expect(table.locator("#said")).to_contain_text(f"declared at {typed}")
        assert meet.attempt(lot, "Squat", 2)["result"] == result
        assert meet.attempt(lot, "Squat", 3)["weight"] == typed


def test_enter_in_the_empty_box_takes_the_grey_weight(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    expect(table.locator(f"#{box(meet, 2, 3)}")).to_be_focused()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 115")


def test_second_enter_hands_nothing_in_for_anybody(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    expect(table.locator(f"#{box(meet, 2, 3)}")).to_be_focused()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 115")
    journal = meet.journal()
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("stays at 115")
    assert meet.journal() == journal


def test_arrow_keys_move_the_weight_by_one_step(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    one = table.locator(f"#{box(meet, 2, 3)}")
    expect(one).to_be_focused()
    for key, value in (("ArrowUp", "117.5"), ("ArrowUp", "120"), ("ArrowDown", "117.5")):
        table.keyboard.press(key)
        expect(one).to_have_value(value)
    one.fill("118")
    table.keyboard.press("ArrowDown")
    expect(one).to_have_value("117.5")
    table.keyboard.press("Enter")
    expect(table.locator("#said")).to_contain_text("declared at 117.5")


def test_escape_forgets_what_was_typed(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    one = table.locator(f"#{box(meet, 2, 3)}")
    expect(one).to_be_focused()
    table.keyboard.type("999")
    table.keyboard.press("Escape")
    expect(one).to_have_value("")


def test_refusal_keeps_the_cursor_in_the_box_with_what_was_typed(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    one = table.locator(f"#{box(meet, 2, 3)}")
    expect(one).to_be_focused()
    table.keyboard.type("118")
    table.keyboard.press("Enter")
    expect(table.get_by_role("alert").filter(has_text="Nearest: 117.5 or 120.")).to_be_visible()
    expect(one).to_be_focused()
    expect(one).to_have_value("118")


def test_lot_number_finds_a_lifter(table: Page, meet: Meet) -> None:
    table.keyboard.press("f")
    assert focused(table) == "find-lot"
    table.keyboard.type("16")
    table.keyboard.press("Enter")
    assert focused(table) == box(meet, 16, 3)  # the first of that lifter's boxes that is still empty


def test_undo_and_hold_have_their_keys(table: Page, meet: Meet) -> None:
    table.keyboard.press("g")
    expect(table.locator("#said")).to_contain_text("good lift")
    table.keyboard.press("u")
    expect(table.locator("#said")).to_contain_text("Undone: Tamsin Okoro: Squat, 2nd: good lift at 112.5.")
    assert meet.attempt(2, "Squat", 2)["result"] == "open"
    table.keyboard.press("h")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: on hold.")
    assert meet.platform()["condition"] == "hold"


def test_bar_question_is_answered_by_a_key(table: Page, meet: Meet) -> None:
    one = table.locator(f"#{box(meet, 2, 2)}")
    one.fill("115")
    one.press("Enter")
    expect(table.get_by_label("Up now")).to_contain_text("What is on the bar?")
    table.keyboard.press("b")
    expect(table.get_by_label("Up now")).to_contain_text("Crew: loading.")
    assert meet.platform()["hand"]["weight"] == "115"


def test_colleagues_entry_does_not_move_the_cursor(table: Page, meet: Meet) -> None:
    one = table.locator(f"#{box(meet, 16, 3)}")
    one.focus()
    other = table.context.new_page()
    other.goto(table.url)
    other.keyboard.press("g")
    expect(other.locator("#said")).to_contain_text("good lift")
    revision = other.locator("[data-revision]").get_attribute("data-revision")
    expect(table.locator("[data-revision]")).to_have_attribute("data-revision", revision or "")
    expect(one).to_be_focused()

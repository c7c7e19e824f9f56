"""The cards: every round of every flight and lift, each line added up again, what is lifted, what is still blank."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

import pytest
from starlette.testclient import TestClient

from tests.web.asking import get
from tests.web.hands import can_be_done, stands_well, wish
from tests.web.pages import Element, form
from tests.web.ready import Meet
from tests.web.test_table_page import judge

FLIGHTS = {1: (1, 2), 2: (3,)}
LIFTS = {1: (1, 2, 3), 2: (4, 5, 6)}
EMPTY = {1: Fraction(25), 2: Fraction(0)}
ENDS = {1: 2, 2: 1}
CARDS = [
    (platform, flight, lift, number)
    for platform in (1, 2)
    for flight in FLIGHTS[platform]
    for lift in LIFTS[platform]
    for number in (1, 2, 3)
]


def card(client: TestClient, platform: int, flight: int, lift: int, number: int) -> Element:
    """The sheet."""
    return get(client, f"/platforms/{platform}/cards/{flight}/{lift}/{number}").one("article", "sheet")


def cell(row: Element, klass: str) -> str:
    """What stands in a column, without the small print."""
    found = row.all("td", klass)
    if not found:
        return ""
    strong = found[0].texts("strong")
    return strong[0] if strong else found[0].text


def faces(text: str) -> tuple[Fraction, ...]:
    """``25 10 2.5`` as plates; a dash or ``empty`` as none."""
    return tuple(Fraction(word) for word in text.split() if word[0].isdigit())


def called(row: Element) -> Fraction:
    """The weight of a line, without the star of one that nobody handed in."""
    return Fraction(cell(row, "c-weight").split()[0])


def lines(sheet: Element) -> list[Element]:
    """The lines with a weight."""
    return [row for row in sheet.one("tbody").all("tr") if cell(row, "c-weight")]


def to_load(sheet: Element) -> list[Element]:
    """The lines that are still to be loaded."""
    return [row for row in lines(sheet) if row.all("td", "c-stack") and cell(row, "c-stack")]


def test_list_offers_every_round_and_marks_the_lift_that_is_on(visitor: TestClient) -> None:
    page = get(visitor, "/platforms/1/cards")
    rows = page.one("table", "list").one("tbody").all("tr")
    links = [a.attrs["href"] for row in rows for a in row.all("a")]
    assert sorted(links) == sorted(f"/platforms/1/cards/{f}/{x}/{n}" for p, f, x, n in CARDS if p == 1)
    assert [row.all("td")[0].text for row in rows if "aria-current" in row.attrs] == [
        "Flight A, Squat lifting now"
    ]
    for href in links:
        assert visitor.get(href).status_code == 200


@pytest.mark.parametrize(("platform", "flight", "lift", "number"), CARDS, ids=str)
def test_every_line_of_every_card_adds_up(
    still_visitor: TestClient, still_meet: Meet, platform: int, flight: int, lift: int, number: int
) -> None:
    """The stack of each line makes its weight from the plates there are, and follows from the line before."""
    sheet = card(still_visitor, platform, flight, lift, number)
    stock, bar = still_meet.stock(platform), None
    widths, (order, access) = still_meet.diameters(platform), wish(still_meet.loading(lift))
    open_ones = still_meet.rows(
        "SELECT attempt.id FROM attempt JOIN lifter ON lifter.id = lifter_id"
        " WHERE flight_id = ? AND lift_id = ? AND number = ? AND result = 'open'",
        flight,
        lift,
        number,
    )
    declared = still_meet.rows(
        "SELECT attempt.id FROM attempt JOIN lifter ON lifter.id = lifter_id"
        " WHERE flight_id = ? AND lift_id = ? AND number = ? AND weight IS NOT NULL",
        flight,
        lift,
        number,
    )
    # A round that nobody has declared is a blank card: see tests/web/test_paper.py.
    assert len(to_load(sheet)) == (len(open_ones) if declared else 0)
    members = still_meet.rows("SELECT name FROM lifter WHERE flight_id = ?", flight)
    for row in to_load(sheet):
        stack = faces(cell(row, "c-stack"))
        assert EMPTY[platform] + ENDS[platform] * sum(stack) == called(row)
        assert all(ENDS[platform] * n <= stock.get(face, 0) for face, n in Counter(stack).items())
        assert stands_well(stack, order, widths)
        off, on = faces(cell(row, "c-off")), faces(cell(row, "c-on"))
        assert bar is None or can_be_done(bar, stack, off, on, access)
        bar = stack
    assert [called(row) for row in to_load(sheet)] == sorted(called(row) for row in to_load(sheet))
    named = [cell(row, "c-who") for row in sheet.one("tbody").all("tr")]
    assert all(named.count(lifter["name"]) == 1 for lifter in members)


def test_first_line_starts_from_what_the_card_says_is_on(visitor: TestClient, meet: Meet) -> None:
    sheet = card(visitor, 1, 1, 1, 2)
    assert " + ".join(meet.platform()["hand"]["before"]) in sheet.one("p", "implement").text
    assert "empty" in card(visitor, 1, 2, 1, 1).one("p", "implement").text


def test_attempts_lifted_already_stand_first_with_what_became_of_them(
    visitor: TestClient, meet: Meet
) -> None:
    sheet = card(visitor, 1, 1, 1, 2)
    done = [row for row in lines(sheet) if row not in to_load(sheet)]
    assert [(cell(row, "c-who"), cell(row, "c-weight")) for row in done] == [
        ("Mara Lindvik", "92.5"),
        ("Odile Farrant", "102.5"),
        ("Petra Havlin", "105"),
    ]
    assert lines(sheet)[:3] == done
    assert ["good lift" in done[0].text, "no lift" in done[1].text, "good lift" in done[2].text] == [True] * 3


def test_result_moves_a_line_from_the_work_to_the_done(visitor: TestClient) -> None:
    before = card(visitor, 1, 1, 1, 2)
    judge(visitor, "good")
    after = card(visitor, 1, 1, 1, 2)
    assert len(to_load(after)) == len(to_load(before)) - 1
    assert [cell(row, "c-who") for row in lines(after)] == [cell(row, "c-who") for row in lines(before)]


def test_weight_nobody_handed_in_is_marked_on_the_paper(visitor: TestClient, meet: Meet) -> None:
    """Round 3 of the lifters who have not lifted their second is by the rule only."""
    sheet = card(visitor, 1, 1, 1, 3)
    given = {
        row["name"]
        for row in meet.rows(
            "SELECT lifter.name FROM attempt JOIN lifter ON lifter.id = lifter_id"
            " WHERE lift_id = 1 AND number = 3 AND weight IS NOT NULL"
        )
    }
    by_rule = {cell(row, "c-who") for row in to_load(sheet)} - given
    assert given
    assert by_rule
    starred = {cell(row, "c-who") for row in to_load(sheet) if cell(row, "c-weight").endswith("*")}
    assert starred == by_rule
    assert "by the rule" in sheet.text


def test_lifter_without_a_weight_has_a_blank_line(visitor: TestClient, meet: Meet) -> None:
    visitor.post("/meets/1/roster", data={"text": "name,lot,flight\nWilma Orr,31,Flight A\n"})
    for number in (1, 2, 3):
        (row,) = [row for row in card(visitor, 1, 1, 1, number).all("tr", "open") if "Wilma Orr" in row.text]
        assert cell(row, "c-weight") == cell(row, "c-off") == cell(row, "c-on") == ""
        assert "no weight yet" in row.text


def test_card_leaves_blank_lines_for_changes_by_hand(visitor: TestClient) -> None:
    blank = [
        row for row in card(visitor, 1, 1, 1, 2).all("tr", "open") if row.one("td", "c-who").text == "change"
    ]
    assert len(blank) >= 2


def test_total_is_what_the_lines_handle_and_names_the_chart_beside_it(visitor: TestClient) -> None:
    sheet = card(visitor, 1, 2, 1, 1)
    moved = [
        face for row in to_load(sheet) for klass in ("c-off", "c-on") for face in faces(cell(row, klass))
    ]
    mass = f"{float(sum(moved)):g}"
    foot = sheet.one("footer").text
    assert f"{len(moved)} plates, {mass} kg handled a side; by the chart " in foot


def test_foot_names_the_revision_so_that_an_old_card_is_known(visitor: TestClient, meet: Meet) -> None:
    assert f"Revision {meet.platform()['revision']} " in card(visitor, 1, 1, 1, 2).one("footer").text


def test_foot_defers_to_the_rules_and_to_trained_people(visitor: TestClient) -> None:
    assert "trained crew decide" in card(visitor, 1, 1, 1, 2).one("footer").text


def test_weight_that_cannot_be_made_is_a_note_and_never_a_stack(visitor: TestClient, meet: Meet) -> None:
    plates = form(get(visitor, "/platforms/1/equipment"), "/plates")
    kept = [
        "0" if face == "1.25" else count
        for face, count in zip(plates.fields["face"], plates.fields["count"], strict=True)
    ]
    visitor.post(plates.action, data=plates.filled(count=kept))
    rows = [row for row in lines(card(visitor, 1, 2, 1, 1)) if "cannot be made" in row.text]
    assert [cell(row, "c-weight") for row in rows] == ["172.5", "187.5", "187.5", "202.5", "227.5"]
    assert all(not row.all("td", "c-stack") or not faces(cell(row, "c-stack")) for row in rows)

"""The Table: every entry has exactly its effect, or is refused in a sentence and loses nothing."""

from __future__ import annotations

from fractions import Fraction

import pytest
from starlette.testclient import TestClient

from tests.web.asking import app_over, get, landed, refusal, send, swaps
from tests.web.pages import Element, form, read
from tests.web.ready import Meet, Row, changed

TABLE = "/platforms/1/table"


def up(meet: Meet) -> Row:
    """The attempt that is up on the bar's platform: its row, with the lifter's name and lot."""
    hand = meet.platform()["hand"]
    return meet.row(
        "SELECT attempt.*, lifter.name, lifter.lot FROM attempt JOIN lifter ON lifter.id = lifter_id"
        " WHERE attempt.id = ?",
        hand["attempt"],
    )


def next_of(meet: Meet, attempt: Row) -> Row:
    """The same lifter's next attempt of the lift."""
    return meet.row(
        "SELECT * FROM attempt WHERE lifter_id = ? AND lift_id = ? AND number = ?",
        attempt["lifter_id"],
        attempt["lift_id"],
        attempt["number"] + 1,
    )


def line(page: Element, attempt: Row) -> Element:
    """The attempt's line in the lifting order."""
    return page.one("tr", id=f"row-{attempt['id']}")


def declare(client: TestClient, attempt: Row, weight: str) -> Element:
    """Hand a weight in on a page opened now; where a rule stands against it, a reason is given, and it is taken."""
    number = str(attempt["id"])
    answer = send(client, get(client, TABLE), "/weight", attempt=number, weight=weight)
    if answer.status_code == 422:
        reason = "the coach has thought again"
        answer = send(client, read(answer.text), "/weight", attempt=number, weight=weight, reason=reason)
    return landed(client, answer)


def up_now(page: Element) -> Element:
    """The panel of who is up, with the buttons that end the attempt."""
    return page.one("section", aria_label="Up now")


def judge(client: TestClient, result: str) -> Element:
    """Press the button of a result; it must be taken."""
    return landed(client, send(client, up_now(get(client, TABLE)), "/result", f"result={result}"))


def tell(client: TestClient, what: str) -> Element:
    """Say something about the bar; it must be taken."""
    return landed(client, send(client, get(client, TABLE), "/table-bar", f"tell={what}"))


# What is shown


def test_the_order_is_by_round_then_weight_then_lot(visitor: TestClient) -> None:
    body = get(visitor, TABLE).one("table", "order").one("tbody")
    order, round_number = [], 0
    for row in body.all("tr"):
        if "round" in row.classes:
            round_number = int(row.text.removeprefix("Round "))
            continue
        box = row.one("input", "weight-box").attrs
        order.append((round_number, Fraction(box["value"] or box["placeholder"]), int(row.all("td")[1].text)))
    assert len(order) == 17  # ten lifters: seven of round 2 and all of round 3
    assert order == sorted(order)


def test_a_weight_nobody_handed_in_stands_grey_and_never_in_the_box(visitor: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    assert attempt["weight"] is None
    box = line(get(visitor, TABLE), attempt).one("input", "weight-box").attrs
    assert box["value"] == ""
    assert box["placeholder"] == "115"  # one step over 112.5


def test_who_is_up_is_told_with_the_two_after(visitor: TestClient) -> None:
    panel = up_now(get(visitor, TABLE))
    assert panel.one("p", "up-line").text == "112.5 Tamsin Okoro Squat, 2nd · lot 2"
    assert "Crew: loading . On deck: Ines Quarto, 125. In the hole: Rosa Tenney, 137.5." in panel.text


def test_looking_at_another_flight_shows_it_and_lifts_nothing(visitor: TestClient, meet: Meet) -> None:
    before = meet.platform()
    page = get(visitor, TABLE + "?flight=2&lift=1")
    assert page.one("h1").text == "Flight B · Squat"
    assert "The platform is lifting Flight A, Squat ." in page.one("section", "elsewhere").text
    assert meet.platform() == before


def test_two_looks_at_the_same_revision_are_the_same_page(visitor: TestClient) -> None:
    assert visitor.get(TABLE).text == visitor.get(TABLE).text


# A weight


def test_weight_is_handed_in(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    before, journal = meet.state(), meet.journal()
    page = declare(client, attempt, "117,5")
    row = changed(before, meet.state()).pop(f"attempt {attempt['id']}")
    assert row.pop("entered_at")
    assert row == {"weight": "117.5", "version": attempt["version"] + 1, "entered_by": "table"}
    assert list(changed(before, meet.state())) == [f"attempt {attempt['id']}"]
    said = "Tamsin Okoro: Squat, 3rd declared at 117.5"
    assert [entry["what"] for entry in meet.journal()[len(journal) :]] == [said]
    assert line(page, attempt).one("input", "weight-box").attrs["value"] == "117.5"
    if swaps(client):
        assert page.one("p", id="said").text == f"{said}."


def test_empty_weight_takes_the_grey_one(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    declare(client, attempt, "  ")
    assert meet.attempt_by_id(attempt["id"])["weight"] == "115"


def test_same_weight_again_is_no_second_entry(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    declare(client, attempt, "117.5")
    before, journal = meet.state(), meet.journal()
    declare(client, attempt, "117.5")
    assert (meet.state(), meet.journal()) == (before, journal)


@pytest.mark.parametrize(
    ("typed", "because"),
    [
        ("118", "118 kg is not a multiple of 2.5. Nearest: 117.5 or 120."),
        ("20", "20 kg is lighter than the bare bar or belt, 25 kg."),
        ("much", "“much” is not a weight. Type a number such as 142.5."),
        ("1e3", "“1e3” is not a weight. Type a number such as 142.5."),
        ("-120", "A weight cannot be less than 0."),
        ("5000", "5000 is more than any bar carries. Check the number."),
        ("999.99999999999999999", "“999.99999999999999999” is not a weight."),
        ("<b>", "“<b>” is not a weight. Type a number such as 142.5."),
    ],
)
def test_weight_that_cannot_stand_is_refused_on_its_line_and_stays_typed(
    client: TestClient, meet: Meet, typed: str, because: str
) -> None:
    attempt = next_of(meet, up(meet))
    before, journal = meet.state(), meet.journal()
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight=typed)
    assert answer.status_code == 422
    row = line(read(answer.text), attempt)
    box = row.one("input", "weight-box").attrs
    assert (box["value"], box["aria-invalid"]) == (typed, "true")
    wrong = row.one("span", "wrong")
    assert wrong.text.startswith(because)
    assert box["aria-describedby"] == wrong.attrs["id"]
    assert (meet.state(), meet.journal()) == (before, journal)


def test_weight_under_the_last_lift_is_refused(client: TestClient, meet: Meet) -> None:
    attempt = meet.attempt(7, "Squat", 2)
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="115")
    assert refusal(answer, 422) == (
        "115 kg is below 117.5 kg, which this lifter has lifted. Next possible: 120. "
        "Only the third attempt of the last lift may be changed. 125 kg stands."
    )
    assert meet.attempt_by_id(attempt["id"]) == attempt


def test_weight_that_the_plates_cannot_make_offers_the_nearest(client: TestClient, meet: Meet) -> None:
    """The belt steps by 1.25; with its 0.25 and 0.5 gone, 2.5 is still made and 0.75 never was."""
    page = get(client, "/platforms/2/equipment")
    plates = form(page, "/plates")
    row = plates.fields["face"].index("1.25")
    counts = [*plates.fields["count"][:row], "0", *plates.fields["count"][row + 1 :]]
    assert client.post(plates.action, data=plates.filled(count=counts)).status_code == 200
    attempt = meet.attempt(24, "Pull-up", 3)
    answer = send(
        client, get(client, "/platforms/2/table"), "/weight", attempt=str(attempt["id"]), weight="63.75"
    )
    assert refusal(answer, 422) == (
        "63.75 kg cannot be made with the plates at this platform. Nearest: 62.5 or 65."
    )


def test_opener_has_no_default(client: TestClient, meet: Meet) -> None:
    client.post("/meets/1/roster", data={"text": "name,lot,flight\nWilma Orr,31,Flight A\n"})
    attempt = meet.attempt(31, "Squat", 1)
    page = get(client, TABLE)
    assert line(page, attempt).one("td", "quiet").text == "no opener yet"
    answer = send(client, page, "/weight", attempt=str(attempt["id"]), weight="")
    assert refusal(answer, 422) == "Wilma Orr: Squat, 1st: type a weight. An opener has no default."
    declare(client, attempt, "100")
    assert meet.attempt_by_id(attempt["id"])["weight"] == "100"


def test_second_of_two_who_declare_is_told_what_the_first_wrote(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    late = get(client, TABLE)
    client.post("/official", data={"name": "Otto"})
    declare(client, attempt, "117.5")
    before, journal = meet.state(), meet.journal()
    answer = send(client, late, "/weight", attempt=str(attempt["id"]), weight="120")
    assert refusal(answer, 409) == (
        "Tamsin Okoro: Squat, 3rd was changed by Otto while you were typing: it is now not lifted at 117.5. "
        "Nothing of yours was entered. Look, and enter again."
    )
    page = read(answer.text)
    assert line(page, attempt).one("input", "weight-box").attrs["value"] == "120"
    assert (meet.state(), meet.journal()) == (before, journal)
    declare(client, attempt, "120")
    assert meet.attempt_by_id(attempt["id"])["weight"] == "120"


def test_weight_for_an_attempt_that_has_left_the_order_is_told_at_the_top(
    client: TestClient, meet: Meet
) -> None:
    """Its line is gone, and the refusal once went with it: the second of two saw nothing at all."""
    attempt = up(meet)
    late = get(client, TABLE)
    judge(client, "passed")
    answer = send(client, late, "/weight", attempt=str(attempt["id"]), weight="115")
    assert refusal(answer, 409) == (
        "Tamsin Okoro: Squat, 2nd was changed by table while you were typing: it is now passed at 112.5. "
        "Nothing of yours was entered. Look, and enter again. You had typed “115”."
    )
    assert read(answer.text).one("div", id="refused").text


def test_weight_for_the_loaded_bar_is_refused(client: TestClient, meet: Meet) -> None:
    attempt = up(meet)
    tell(client, "loaded")
    before = meet.state()
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="115")
    assert refusal(answer, 422) == (
        "The bar is loaded for Tamsin Okoro at 112.5. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    assert meet.state() == before


def test_attempt_of_the_other_platform_cannot_be_entered_here(client: TestClient, meet: Meet) -> None:
    other = meet.attempt(24, "Pull-up", 3)
    before = meet.state()
    fields = {"attempt": other["id"], "version": other["version"]}
    answer = client.post("/platforms/1/weight", data=fields | {"weight": "65"})
    assert "This attempt belongs to another platform." in refusal(answer, 422)
    answer = client.post("/platforms/1/result", data=fields | {"result": "good"})
    assert refusal(answer, 422) == "This attempt belongs to another platform."
    assert meet.state() == before


# A result


@pytest.mark.parametrize(
    ("result", "words"), [("good", "good lift"), ("missed", "no lift"), ("passed", "passed")]
)
def test_result_is_entered_and_the_next_is_up(
    client: TestClient, meet: Meet, result: str, words: str
) -> None:
    attempt, hand = up(meet), meet.platform()["hand"]
    before, journal = meet.state(), meet.journal()
    page = judge(client, result)
    after = changed(before, meet.state())
    assert set(after) - {"platform 1"} == {f"attempt {attempt['id']}"}
    assert after[f"attempt {attempt['id']}"]["result"] == result
    assert [entry["what"] for entry in meet.journal()[len(journal) :]] == [
        f"Tamsin Okoro: Squat, 2nd: {words} at 112.5"
    ]
    assert page.one("p", "up-line").text.startswith("125 Ines Quarto Squat, 2nd")
    if result == "passed":
        # Nobody lifted: whether the crew had begun is asked, and the instruction stays until they answer.
        assert meet.platform()["hand"] == hand
    else:
        assert meet.platform()["bar"] == hand["stack"]
        assert meet.platform()["hand"]["attempt"] == meet.attempt(7, "Squat", 2)["id"]


def test_result_moves_the_cursor_to_that_lifters_next_weight(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    page = judge(client, "good")
    (box,) = [one for one in page.all("input") if "data-focus" in one.attrs]
    assert box.attrs["id"] == f"weight-{attempt['id']}"
    assert box.attrs["placeholder"] == "115"


def test_cursor_never_goes_to_a_lifter_who_owes_no_weight(client: TestClient, meet: Meet) -> None:
    """A second Enter in an empty box would hand in, for somebody still to lift, a weight that nobody asked for."""
    attempt = next_of(meet, up(meet))
    judge(client, "good")
    page = declare(client, attempt, "117.5")
    assert [one for one in page.all("input") if "data-focus" in one.attrs] == []
    assert meet.attempt(7, "Squat", 3)["weight"] is None


def test_missed_lift_leaves_the_same_weight_as_default(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    page = judge(client, "missed")
    assert line(page, attempt).one("input", "weight-box").attrs["placeholder"] == "112.5"


def test_result_of_somebody_who_is_not_up_is_refused(client: TestClient, meet: Meet) -> None:
    other = meet.attempt(16, "Squat", 2)
    before, journal = meet.state(), meet.journal()
    answer = client.post(
        "/platforms/1/result", data={"attempt": other["id"], "version": other["version"], "result": "good"}
    )
    assert refusal(answer, 422).startswith(
        "Lars Pettifer is not up, so there is no lift to judge. Tamsin Okoro is up."
    )
    assert (meet.state(), meet.journal()) == (before, journal)


def test_second_of_two_who_judge_is_told_what_the_first_wrote(client: TestClient, meet: Meet) -> None:
    late = get(client, TABLE)
    judge(client, "good")
    before, journal = meet.state(), meet.journal()
    answer = send(client, up_now(late), "/result", "result=missed")
    assert refusal(answer, 409).startswith(
        "Tamsin Okoro: Squat, 2nd was changed by table while you were typing"
    )
    assert (meet.state(), meet.journal()) == (before, journal)


def test_anyone_may_pass_before_their_turn(client: TestClient, meet: Meet) -> None:
    other = meet.attempt(16, "Squat", 2)
    hand = meet.platform()["hand"]
    answer = client.post(
        "/platforms/1/result", data={"attempt": other["id"], "version": other["version"], "result": "passed"}
    )
    assert answer.status_code in (200, 303)
    assert meet.attempt_by_id(other["id"])["result"] == "passed"
    assert meet.platform()["hand"] == hand


def test_result_that_was_wrong_is_corrected_on_the_score_sheet(client: TestClient, meet: Meet) -> None:
    done = meet.attempt(4, "Squat", 2)
    assert done["result"] == "good"
    page = get(client, TABLE)
    wrong = [
        one
        for one in page.all("form")
        if [x for x in one.all("input", name="attempt") if x.attrs["value"] == str(done["id"])]
        and one.all("button", value="missed")
    ]
    fields = {x.attrs["name"]: x.attrs["value"] for x in wrong[0].all("input")}
    landed(client, client.post("/platforms/1/result", data=fields | {"result": "missed"}))
    assert meet.attempt_by_id(done["id"])["result"] == "missed"
    assert meet.journal()[-1]["what"] == "Mara Lindvik: Squat, 2nd corrected to no lift (was good lift)"


# The bar


def test_table_says_for_the_crew_that_the_bar_is_loaded_and_takes_it_back(
    client: TestClient, meet: Meet
) -> None:
    before = meet.platform()
    tell(client, "loaded")
    assert meet.platform()["condition"] == "lifting"
    assert meet.platform()["bar"] == before["hand"]["stack"]
    tell(client, "not-loaded")
    after = meet.platform()
    assert (after["condition"], after["bar"], after["hand"]) == ("changing", before["bar"], before["hand"])


def test_hold_stops_results_until_it_is_ended(client: TestClient, meet: Meet) -> None:
    hand = meet.platform()["hand"]
    tell(client, "hold")
    answer = send(client, up_now(get(client, TABLE)), "/result", "result=good")
    assert refusal(answer, 422) == "The platform is on hold. End the hold first."
    assert meet.platform()["hand"] == hand
    tell(client, "go")
    judge(client, "good")
    assert meet.platform()["bar"] == hand["stack"]


@pytest.mark.parametrize(
    ("answer", "bar"), [("before", ["25", "15"]), ("shown", None), ("unknown", None)], ids=str
)
def test_weight_changed_under_the_hands_is_asked_and_the_answer_is_the_new_start(
    client: TestClient, meet: Meet, answer: str, bar: list[str] | None
) -> None:
    before = meet.platform()
    page = declare(client, up(meet), "115")
    assert meet.platform()["hand"] == before["hand"]
    asked = page.one("div", "notice")
    assert "The crew was loading 112.5. Now up: Tamsin Okoro, 115. What is on the bar?" in asked.text
    refused = send(client, up_now(page), "/result", "result=good")
    assert (
        refusal(refused, 422)
        == "The crew has not said what is on the bar. Answer that first, then enter the result."
    )
    tell(client, answer)
    found = {"before": before["bar"], "shown": before["hand"]["stack"], "unknown": None}[answer]
    hand = meet.platform()["hand"]
    assert (hand["weight"], hand["before"]) == ("115", found)


@pytest.mark.parametrize(
    ("what", "because"),
    [
        ("not-loaded", "The bar is not confirmed as loaded."),
        ("nonsense", "There is no change out to compare the bar with."),
    ],
)
def test_word_about_the_bar_that_makes_no_sense_now_is_refused(
    client: TestClient, meet: Meet, what: str, because: str
) -> None:
    before, journal = meet.state(), meet.journal()
    answer = client.post("/platforms/1/table-bar", data={"tell": what})
    assert refusal(answer, 422) == because
    assert (meet.state(), meet.journal()) == (before, journal)


def test_late_word_about_the_bar_is_refused(client: TestClient, meet: Meet) -> None:
    late = get(client, TABLE)
    judge(client, "good")
    before = meet.state()
    answer = send(client, late, "/table-bar", "tell=loaded")
    assert (
        refusal(answer, 409) == "This screen was showing an earlier change. Look at the new one, then answer."
    )
    assert meet.state() == before


# Undo, and the next flight


def test_undo_takes_the_last_entry_back_in_words(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    before = meet.state()
    page = declare(client, attempt, "117.5")
    assert "Undo U Tamsin Okoro: Squat, 3rd declared at 117.5" in page.text
    page = landed(client, send(client, page, "/undo"))
    row = changed(before, meet.state())[f"attempt {attempt['id']}"]
    assert "weight" not in row
    assert row["version"] == attempt["version"] + 2
    assert meet.journal()[-1]["what"] == "undone: Tamsin Okoro: Squat, 3rd declared at 117.5"
    if swaps(client):
        assert page.one("p", id="said").text == "Undone: Tamsin Okoro: Squat, 3rd declared at 117.5."


def test_undo_of_a_result_puts_the_lifter_up_again_and_moves_no_plate(client: TestClient, meet: Meet) -> None:
    attempt, stack = up(meet), meet.platform()["hand"]["stack"]
    judge(client, "good")
    hand = meet.platform()["hand"]
    page = landed(client, send(client, get(client, TABLE), "/undo"))
    assert meet.attempt_by_id(attempt["id"])["result"] == "open"
    assert page.one("p", "up-line").text.startswith("112.5 Tamsin Okoro")
    assert (meet.platform()["bar"], meet.platform()["hand"]) == (stack, hand)
    assert "What is on the bar?" in page.text


def test_undo_of_what_somebody_else_entered_since_is_refused(client: TestClient, meet: Meet) -> None:
    late = get(client, TABLE)
    declare(client, next_of(meet, up(meet)), "117.5")
    before, journal = meet.state(), meet.journal()
    answer = send(client, late, "/undo")
    assert refusal(answer, 409).startswith(
        "Somebody made another entry since: “Tamsin Okoro: Squat, 3rd declared at 117.5”."
    )
    assert (meet.state(), meet.journal()) == (before, journal)


def test_undo_with_nothing_entered_says_so(fresh: Meet) -> None:
    with app_over(fresh) as client:
        client.post("/meets", data={"name": "Hill Open"})
        client.post("/meets/1/platforms", data={"name": "Left", "preset": "bar-kg"})
        answer = client.post("/platforms/1/undo")
        assert refusal(answer, 422) == "There is nothing to undo."


def test_next_flight_is_brought_and_the_bar_stays_what_it_is(client: TestClient, meet: Meet) -> None:
    before = meet.platform()
    page = get(client, TABLE + "?flight=2&lift=1")
    page = landed(client, send(client, page, "/flight"))
    after = meet.platform()
    assert (after["flight_id"], after["lift_id"]) == (2, 1)
    assert (after["bar"], after["hand"]) == (before["bar"], before["hand"])
    assert "The crew was loading 112.5. Now up: Bram Ostler, 165. What is on the bar?" in page.text


@pytest.mark.parametrize(("flight", "lift"), [("3", "1"), ("1", "5"), ("99", "1"), ("1", "99")])
def test_flight_that_is_not_of_this_platform_cannot_be_brought(
    client: TestClient, meet: Meet, flight: str, lift: str
) -> None:
    before = meet.state()
    answer = client.post("/platforms/1/flight", data={"flight": flight, "lift": lift})
    assert refusal(answer, 422) == "This flight does not lift that lift on this platform."
    assert meet.state() == before


def test_flight_with_no_openers_is_told_and_nothing_is_loaded(client: TestClient, meet: Meet) -> None:
    roster = "name,lot,flight,Squat opener\nWilma Orr,31,Flight N,100\nYann Kube,32,Flight N,100\n"
    assert client.post("/meets/1/roster", data={"text": roster}).status_code == 200
    flight = meet.row("SELECT id FROM flight WHERE name = 'Flight N'")["id"]
    meet_lift = meet.row("SELECT id FROM lift WHERE name = 'Deadlift'")["id"]
    page = landed(client, send(client, get(client, f"{TABLE}?flight={flight}&lift={meet_lift}"), "/flight"))
    tell(client, "before")
    page = get(client, TABLE)
    assert page.one("p", "up-line").text == "Nobody left to lift"
    assert "Some lifters have no weight yet: they stand at the end of the order." in page.text
    assert [
        row.all("td")[2].text for row in page.one("table", "order").one("tbody").all("tr") if row.all("td")
    ] == [
        "Wilma Orr",
        "Yann Kube",
    ]
    assert meet.platform()["hand"] is None
    crew = get(client, "/platforms/1/crew").one("section", "now")
    assert crew.attrs["data-state"] == "finished"
    assert "2 lifters of this flight have no opener. The table is asked for them." in crew.text


def test_plain_form_comes_back_to_the_flight_it_was_sent_from(visitor: TestClient, meet: Meet) -> None:
    page = get(visitor, TABLE + "?flight=2&lift=1")
    attempt = meet.attempt(3, "Squat", 1)
    answer = send(visitor, page, "/weight", attempt=str(attempt["id"]), weight="167.5")
    assert (answer.status_code, answer.headers["location"]) == (303, "/platforms/1/table?flight=2&lift=1")

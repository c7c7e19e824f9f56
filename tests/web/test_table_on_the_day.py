"""The other entries of the day at the Table, and the pages behind it: reasons, redo, people, misloads, rules, files."""

from __future__ import annotations

import csv
import io
import json
import sqlite3
from contextlib import closing

import pytest
from starlette.testclient import TestClient

from tests.web.asking import app_over, get, landed, refusal, send, swaps
from tests.web.pages import Element, form, read
from tests.web.ready import Meet, changed
from tests.web.test_table_page import TABLE, declare, judge, line, next_of, tell, up, up_now

RULES, LIFT = "/platforms/1/rules", "/platforms/1/lifts/1"
BELT_LIFT = "/platforms/2/lifts/5"
MISLOAD = "/platforms/1/misload"


# A reason


def test_a_broken_rule_asks_for_a_reason_on_its_line_and_keeps_what_was_typed(
    client: TestClient, meet: Meet
) -> None:
    attempt = next_of(meet, up(meet))
    before = meet.state()
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="116")
    assert "116 kg is not a multiple of 2.5. Nearest: 115 or 117.5." in refusal(answer, 422)
    asked = line(read(answer.text), attempt)
    assert asked.one("input", name="weight").attrs["value"] == "116"
    reason = asked.one("input", name="reason")
    assert "data-focus" in reason.attrs
    assert meet.state() == before
    answer = send(
        client, read(answer.text), "/weight", attempt=str(attempt["id"]), weight="116", reason="jury"
    )
    landed(client, answer)
    assert meet.attempt_by_id(attempt["id"])["weight"] == "116"
    assert meet.journal()[-1]["what"].endswith("(116 kg is not a multiple of 2.5.), because: jury")


def test_what_cannot_be_overridden_asks_for_no_reason(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="116.1")
    assert "cannot be made" in refusal(answer, 422)
    assert line(read(answer.text), attempt).all("input", name="reason") == []


def test_a_late_weight_offers_the_usual_reason(client: TestClient, meet: Meet) -> None:
    """A minute to hand in (IPL Rulebook 2019, 6.1.1): the demo's lift was long ago in its own time."""
    attempt = meet.row("SELECT * FROM attempt WHERE id = ?", next_of(meet, up(meet))["id"])
    judge(client, "good")
    with_time = "UPDATE attempt SET lifted_at = '2026-03-07 09:00:00.000000' WHERE lifted_at IS NOT NULL"
    with closing(sqlite3.connect(meet.file)) as database:
        database.execute(with_time)
        database.commit()
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="120")
    assert "had run out" in refusal(answer, 422)
    asked = line(read(answer.text), attempt).one("input", name="reason")
    assert asked.attrs["value"] == "handed in in time, entered late"
    landed(client, send(client, read(answer.text), "/weight", attempt=str(attempt["id"]), weight="120"))
    assert meet.attempt_by_id(attempt["id"])["weight"] == "120"


# Before Enter


def ahead(client: TestClient, attempt: dict[str, object], weight: str) -> Element:
    query = {"attempt": attempt["id"], "version": attempt["version"], "weight": weight}
    answer = client.get("/platforms/1/ahead", params=query)  # type: ignore[arg-type]
    assert answer.status_code == 200
    return read(answer.text)


def test_before_enter_the_line_says_where_it_lifts_and_what_it_needs(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    told = ahead(client, next_of(meet, up(meet)), "120")
    assert told.text.startswith("lifts ")
    assert ", after " in told.text
    assert meet.state() == before


def test_before_enter_the_line_says_what_a_rule_has_against_it(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    assert "116 kg is not a multiple of 2.5" in ahead(client, attempt, "116").one("span", "wrong").text
    assert "is not a weight" in ahead(client, attempt, "1x").one("span", "wrong").text
    assert "lifts" not in ahead(client, attempt, "999").text
    assert ahead(client, attempt, " ").text == ""


# Redo


def test_redo_enters_again_in_words_what_undo_took_back(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    declare(client, attempt, "120")
    after = meet.attempt_by_id(attempt["id"])
    landed(client, send(client, get(client, TABLE), "/undo"))
    page = get(client, TABLE)
    assert "declared at 120" in page.one("form", action="/platforms/1/redo").text
    answer = landed(client, send(client, page, "/redo"))
    if swaps(client):
        assert "Entered again: " in answer.text
    again = meet.attempt_by_id(attempt["id"])
    assert (again["weight"], again["changes"]) == (after["weight"], after["changes"])


def test_a_redo_that_somebodys_entry_has_overtaken_is_refused(client: TestClient, meet: Meet) -> None:
    declare(client, next_of(meet, up(meet)), "120")
    landed(client, send(client, get(client, TABLE), "/undo"))
    page = get(client, TABLE)
    judge(client, "good")
    assert "There is nothing to redo." in refusal(send(client, page, "/redo"), 422)


# People


def test_a_lifter_withdraws_and_is_back(client: TestClient, meet: Meet) -> None:
    someone = meet.row("SELECT * FROM lifter WHERE lot = 16")
    page = get(client, TABLE)
    chosen = next(
        one for one in page.all("form", action="/platforms/1/lifter") if _lifter(one) == str(someone["id"])
    )
    data = {one.attrs["name"]: one.attrs["value"] for one in chosen.all("input")}
    landed(client, client.post("/platforms/1/lifter", data=data | {"do": "withdraw"}))
    assert meet.row("SELECT withdrawn FROM lifter WHERE lot = 16")["withdrawn"] == 1
    page = get(client, TABLE)
    assert someone["name"] not in page.one("table", "order").text
    assert "withdrawn" in page.one("tr", "gone").text
    landed(client, client.post("/platforms/1/lifter", data=data | {"do": "back"}))
    assert someone["name"] in get(client, TABLE).one("table", "order").text


def _lifter(element: Element) -> str:
    return element.one("input", name="lifter").attrs["value"]


def test_a_fourth_attempt_that_was_granted_has_a_line_to_type_its_weight_on(
    client: TestClient, meet: Meet
) -> None:
    """It was said to hand in its weight, and nothing on the page took one."""
    save(client, fourth_for_record="yes")
    lifter = meet.row("SELECT * FROM lifter WHERE lot = 4")
    while meet.attempt(4, "Squat", 3)["result"] == "open":
        one = up(meet)
        if one["number"] < 3 and next_of(meet, one)["weight"] is None:
            declare(client, next_of(meet, one), str(float(one["weight"]) + 2.5))
        judge(client, "good")
    place = {"flight": "1", "lift": "1", "lifter": str(lifter["id"])}
    landed(client, client.post("/platforms/1/lifter", data=place | {"do": "fourth"}))
    fourth = meet.attempt(4, "Squat", 4)
    page = get(client, TABLE)
    assert "fourth attempt, no weight yet" in line(page, fourth).text
    answer = send(client, page, "/weight", attempt=str(fourth["id"]), weight="110r")
    landed(client, answer)
    assert meet.attempt(4, "Squat", 4)["weight"] == "110"


def test_a_fourth_where_there_is_none_is_refused(client: TestClient) -> None:
    answer = client.post(
        "/platforms/1/lifter", data={"flight": "1", "lift": "1", "lifter": "1", "do": "fourth"}
    )
    assert "no fourth attempt" in refusal(answer, 422)


def test_a_flight_is_taken_over_and_the_other_official_is_told(client: TestClient, meet: Meet) -> None:
    client.cookies.set("official", "Wanda")
    landed(client, send(client, get(client, TABLE), "/owner", "take=yes"))
    assert "You (Wanda) enter for this flight." in get(client, TABLE).text
    client.cookies.set("official", "Otto")
    page = get(client, TABLE)
    assert "Wanda enters for this flight. You can look; your entries would be refused." in page.text
    told = refusal(send(client, up_now(page), "/result", "result=good"), 422)
    assert told.startswith("Wanda enters for this flight.")
    landed(client, send(client, page, "/owner", "take=yes"))
    judge(client, "good")
    landed(client, send(client, get(client, TABLE), "/owner", "take=no"))
    assert "Anybody at the table may enter." in get(client, TABLE).text


# After an error in loading


def misload(client: TestClient, attempt: dict[str, object], ends: list[str], kind: str = "bar") -> Element:
    query = [("attempt", str(attempt["id"])), ("version", str(attempt["version"])), ("kind", kind)]
    answer = client.get(MISLOAD, params=[*query, *(("end", end) for end in ends)])
    assert answer.status_code == 200, answer.text[-300:]
    return read(answer.text)


def test_the_page_asks_for_each_end_and_is_filled_with_what_was_shown(
    visitor: TestClient, meet: Meet
) -> None:
    one = up(meet)
    link = next(a for a in get(visitor, TABLE).all("a") if "misload" in a.attrs.get("href", ""))
    page = get(visitor, link.attrs["href"])
    stack = " ".join(meet.platform()["hand"]["stack"])
    assert [box.attrs["value"] for box in page.all("input", name="end")] == [stack, stack]
    assert f"called {one['weight']} kg" in page.text


def test_a_misload_gives_its_remedies_and_the_one_taken_is_entered(client: TestClient, meet: Meet) -> None:
    """Unequal ends, good lift: kept at the next lower multiple of 2.5 kg, or repeated (S26, second-hand)."""
    one = up(meet)
    judge(client, "good")
    after = meet.attempt_by_id(one["id"])
    page = misload(client, after, ["25 15 2.5", "25 15 1.25"])
    assert "The two ends were not the same (108.75 kg)" in page.text
    words = [button.text for button in page.all("button", name="choice")]
    assert words[0] == "The lifter keeps the good lift, recorded as 107.5 kg."
    landed(client, send(client, page, "/misload", "choice=0"))
    assert meet.attempt_by_id(one["id"])["weight"] == "107.5"


def test_a_retake_stands_in_the_order_with_its_mark(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    judge(client, "missed")
    page = misload(client, meet.attempt_by_id(one["id"]), ["", ""], "spoiled")
    landed(client, send(client, page, "/misload", "choice=0"))
    assert "retake" in line(get(client, TABLE), one).text


def test_nothing_wrong_needs_no_remedy(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    stack = " ".join(meet.platform()["hand"]["stack"])
    assert "Nothing has to be done." in misload(client, one, [stack, stack]).text


def test_what_is_no_plate_is_refused_and_stays_typed(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    query = [("attempt", one["id"]), ("version", one["version"]), ("end", "25 ten"), ("end", "25")]
    answer = client.get(MISLOAD, params=query)
    assert "“ten” is not a plate." in refusal(answer, 422)
    assert [box.attrs["value"] for box in read(answer.text).all("input", name="end")] == ["25 ten", "25"]


def test_a_remedy_of_a_page_that_is_old_is_refused(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    judge(client, "good")
    page = misload(client, meet.attempt_by_id(one["id"]), ["25", "25"])
    with app_over(meet) as other:
        corrected = form(get(other, TABLE), "/result", attempt=str(one["id"]), result="missed")
        other.post(corrected.action, data=corrected.fields | {"result": "missed"})
    before = meet.state()
    assert "was changed by" in refusal(send(client, page, "/misload", "choice=0"), 409)
    assert meet.state() == before


@pytest.mark.parametrize("attempt", ["0", "999999", str(10**30)])
def test_an_error_in_loading_of_no_attempt_is_told(client: TestClient, attempt: str) -> None:
    refusal(client.get(MISLOAD, params={"attempt": attempt, "version": "0"}), 404)


def test_the_plates_found_on_the_bar_change_the_next_instruction(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    judge(client, "good")
    page = misload(client, meet.attempt_by_id(one["id"]), ["25 15", "25 15"])
    landed(client, send(client, page, "/misload", "choice=0"))
    assert meet.platform()["hand"]["before"] == ["25", "15"]


# Rules


def save(client: TestClient, **typed: str) -> None:
    page = get(client, RULES)
    answer = send(client, page, "/rules", **typed)
    assert answer.status_code == 200, refusal(answer, answer.status_code)


def test_rules_are_shown_with_their_sources_and_what_differs_is_marked(client: TestClient) -> None:
    save(client, below_missed="yes")
    page = get(client, RULES)
    row = next(one for one in page.all("tr") if one.all("select", name="below_missed"))
    assert "IPL Rulebook 2019, 6.1.1" in row.text
    assert "changed" in row.text
    assert sum("changed" in one.texts("span", "tag") for one in page.all("tr")) == 1


def test_rules_are_kept_and_hold_at_the_table(client: TestClient, meet: Meet) -> None:
    attempt = next_of(meet, up(meet))
    save(client, record_step="2.5")
    answer = send(client, get(client, TABLE), "/weight", attempt=str(attempt["id"]), weight="115.5r")
    assert "115.5 kg is not a multiple of 2.5." in refusal(answer, 422)


def test_wrong_rules_are_refused_whole_and_stay_typed(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    answer = send(
        client, get(client, RULES), "/rules", step="zero", seconds_to_hand_in="soon", opener_changes="7"
    )
    told = refusal(answer, 422)
    assert "Step: “zero” is not a weight." in told
    assert "Time to hand in the next weight: “soon”" in told
    page = read(answer.text)
    assert page.one("input", name="step").attrs["value"] == "zero"
    assert page.one("input", name="opener_changes").attrs["value"] == "7"
    assert meet.state() == before


def test_another_set_of_rules_fills_the_form_and_is_kept_only_when_told(
    client: TestClient, meet: Meet
) -> None:
    before = meet.state()
    page = get(client, f"{RULES}?preset=rising-bar")
    chosen = form(page, "/rules")
    assert chosen.fields["order_system"] == ["rising"]
    assert meet.state() == before
    assert client.post(chosen.action, data=chosen.fields).status_code == 200
    assert json.loads(meet.row("SELECT rules FROM session WHERE id = 1")["rules"])["order_system"] == "rising"


@pytest.mark.parametrize("query", ["?preset=nonsense", "?session=99", "?session=99&preset=rising-bar"])
def test_a_set_or_session_of_nothing_is_told_or_left_out(client: TestClient, query: str) -> None:
    answer = client.get(RULES + query)
    assert answer.status_code in (200, 404)
    assert read(answer.text).all("h1") or swaps(client)


@pytest.mark.parametrize("session", ["", "99", "2", "x", "9" * 40])
def test_rules_of_another_session_are_not_saved_here(client: TestClient, meet: Meet, session: str) -> None:
    chosen = form(get(client, RULES), "/rules")
    before = meet.state()
    answer = client.post(chosen.action, data=chosen.fields | {"session": session})
    assert answer.status_code in (404, 422)
    assert meet.state() == before


def test_a_field_that_is_no_rule_is_named(client: TestClient) -> None:
    chosen = form(get(client, RULES), "/rules")
    answer = client.post(chosen.action, data=chosen.fields | {"colour": "red"})
    assert "“colour” is not a setting of the rules." in refusal(answer, 422)


# How a lift is loaded


def test_how_a_lift_is_loaded_is_kept(client: TestClient, meet: Meet) -> None:
    answer = send(client, get(client, LIFT), LIFT, measure="mass", extra_plates="2")
    assert answer.status_code in (200, 204, 303)
    stored = json.loads(meet.row("SELECT loading FROM lift WHERE id = 1")["loading"])
    assert (stored["measure"], stored["extra_plates"]) == ("mass", 2)


def test_wrong_settings_of_a_lift_are_refused_and_stay_typed(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    answer = send(client, get(client, LIFT), LIFT, plate_s="quick", measure="beauty")
    told = refusal(answer, 422)
    assert "“quick”" in told
    assert read(answer.text).one("input", name="plate_s").attrs["value"] == "quick"
    assert meet.state() == before


def test_the_figures_of_a_lift_say_what_each_choice_costs(visitor: TestClient) -> None:
    page = read(visitor.get(f"{LIFT}/figures", params={"flight": "1"}).text)
    assert len(page.all("form")) >= 2


def test_the_figures_of_a_flight_that_does_not_lift_it_are_not_there(client: TestClient) -> None:
    assert client.get(f"{LIFT}/figures", params={"flight": "99"}).status_code == 404


def test_a_choice_that_is_no_row_of_the_figures_is_refused(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    typed = {"extra_plates": "9", "aim": "total", "measure": "plates"}
    assert "Pick a row" in refusal(client.post(f"{LIFT}/choice", data=typed), 422)
    assert meet.state() == before


def test_a_choice_from_the_figures_is_kept(client: TestClient, meet: Meet) -> None:
    landed(
        client, client.post(f"{LIFT}/choice", data={"extra_plates": "2", "aim": "worst", "measure": "mass"})
    )
    stored = json.loads(meet.row("SELECT loading FROM lift WHERE id = 1")["loading"])
    assert (stored["extra_plates"], stored["aim"], stored["measure"]) == (2, "worst", "mass")


def test_ready_made_settings_of_a_belt_are_taken_and_others_refused(client: TestClient, meet: Meet) -> None:
    page = get(client, BELT_LIFT)
    ready = page.all("button", name="ready")[0].attrs["value"]
    landed(client, client.post(f"{BELT_LIFT}/ready", data={"ready": ready}))
    assert json.loads(meet.row("SELECT loading FROM lift WHERE id = 5")["loading"])["comfort"]
    assert "Choose one of" in refusal(client.post(f"{BELT_LIFT}/ready", data={"ready": "soft"}), 422)


# Files


def test_a_whole_meet_goes_out_and_in_as_a_file(client: TestClient, meet: Meet) -> None:
    text = client.get("/meets/1/meet.json").text
    answer = client.post("/meets/file", files={"file": ("meet.json", text.encode(), "application/json")})
    landed(client, answer)
    assert client.get("/meets/2/meet.json").text == text


@pytest.mark.parametrize(
    ("data", "told"),
    [
        (b"", "This is not a meet file: it is not JSON."),
        (b"\xff\xfe\x00", "The file is not text, so it is no meet file."),
        (b'{"platewright meet": 1, "tables": {}}', "The meet file is not complete."),
    ],
    ids=["empty", "not text", "no tables"],
)
def test_a_file_that_is_no_meet_is_refused_and_leaves_nothing(
    client: TestClient, meet: Meet, data: bytes, told: str
) -> None:
    before = meet.state()
    answer = client.post("/meets/file", files={"file": ("meet.json", data, "application/json")})
    assert told in refusal(answer, 422)
    assert meet.state() == before


def test_a_file_is_asked_for_when_none_is_sent(client: TestClient) -> None:
    assert "file" in refusal(client.post("/meets/file"), 422)


def test_results_and_journal_go_out_as_tables(client: TestClient, meet: Meet) -> None:
    results = list(csv.DictReader(io.StringIO(client.get("/meets/1/results.csv").text)))
    assert len(results) == meet.row("SELECT count(*) AS n FROM attempt WHERE weight IS NOT NULL")["n"]
    assert client.get("/meets/1/results.json").json()[0]["lifter"] == results[0]["lifter"]
    journal = list(csv.DictReader(io.StringIO(client.get("/meets/1/journal.csv").text)))
    assert [one["what"] for one in journal] == [one["what"] for one in meet.journal()]
    assert len(client.get("/meets/1/journal.json").json()) == len(journal)
    assert "attachment" in client.get("/meets/1/results.csv").headers["content-disposition"]


def test_the_default_of_the_score_sheet_is_the_rules_own(client: TestClient, meet: Meet) -> None:
    """The score sheet went on showing a default where the rules forfeit the attempt."""
    one = up(meet)
    judge(client, "good")
    assert score(client, one["lot"])[6] == "(115)"
    save(client, default="forfeited")
    assert score(client, one["lot"])[6] == ""


def score(client: TestClient, lot: int) -> list[str]:
    """The cells of a lifter's line on the score sheet."""
    lines = [row.texts("td") for row in get(client, TABLE).one("table", "score").all("tr")]
    return next(cells for cells in lines if cells and cells[0] == str(lot))


def test_who_has_not_handed_in_is_listed_with_the_end_of_their_time(client: TestClient, meet: Meet) -> None:
    one = up(meet)
    judge(client, "good")
    waiting = get(client, TABLE).one("section", aria_label="Not handed in")
    assert f"{one['name']} lot {one['lot']}, Squat, 3rd, else 115" in waiting.text
    assert waiting.one("span", "tag").attrs["data-until"]
    save(client, seconds_to_hand_in="0")
    assert get(client, TABLE).one("section", aria_label="Not handed in").all("span", "tag") == []


def test_a_hold_and_a_change_leave_only_what_they_say_changed(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    tell(client, "hold")
    assert changed(before, meet.state()) == {"platform 1": {"condition": "hold"}}

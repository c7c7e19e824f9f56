"""The Crew page: each of its states, reached through real entries, and its answers, timely or late."""

from __future__ import annotations

from fractions import Fraction

from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send, swaps
from tests.web.crew_screen import look
from tests.web.pages import form, read
from tests.web.ready import Meet
from tests.web.test_table_page import declare, judge, next_of, tell, up

CREW = "/platforms/1/crew"


def kg(*faces: str) -> tuple[Fraction, ...]:
    """Plates by their faces."""
    return tuple(map(Fraction, faces))


def test_changing_shows_weight_off_on_and_the_finished_end(client: TestClient, meet: Meet) -> None:
    hand = meet.platform()["hand"]
    screen = look(client)
    assert (screen.state, screen.weight) == ("changing", Fraction("112.5"))
    assert screen.drawn == kg(*hand["stack"])
    kept = len(hand["stack"]) - len(screen.on or ())
    assert screen.on == kg(*hand["stack"][kept:]) or screen.on is None
    assert (screen.off or ()) == tuple(reversed(kg(*hand["before"][kept:])))
    assert "Tamsin Okoro Squat, 2nd" in screen.text
    assert screen.count == len(hand["stack"])


def test_same_weight_for_the_next_lifter_fills_the_screen_with_no_change(
    client: TestClient, meet: Meet
) -> None:
    declare(client, up(meet), "125")
    tell(client, "before")
    judge(client, "good")
    screen = look(client)
    assert (screen.state, screen.no_change, screen.weight) == ("changing", True, Fraction(125))
    assert (screen.off, screen.on, screen.drawn) == (None, None, None)
    assert screen.added_up == kg(*meet.platform()["bar"])


def test_loaded_says_hands_off_and_what_follows(client: TestClient, meet: Meet) -> None:
    hand = meet.platform()["hand"]
    page = landed(client, send(client, get(client, CREW), "/loaded"))
    assert meet.platform()["condition"] == "lifting"
    assert meet.platform()["bar"] == hand["stack"]
    assert page.one(klass="loaded-word").text == "Loaded"
    screen = look(client)
    assert (screen.state, screen.off, screen.on) == ("lifting", None, None)
    assert screen.drawn == kg(*hand["stack"])
    assert "After this lift 125" in screen.text
    assert not page.all("form")  # nothing to press while somebody lifts
    assert meet.journal()[-1]["who"] == "crew"


def test_after_the_result_the_next_change_is_there_by_itself(client: TestClient, meet: Meet) -> None:
    judge(client, "good")
    screen = look(client)
    assert (screen.state, screen.weight) == ("changing", Fraction(125))
    assert "Ines Quarto" in screen.text


def test_weight_changed_under_the_hands_is_asked_with_both_weights(client: TestClient, meet: Meet) -> None:
    hand = meet.platform()["hand"]
    declare(client, up(meet), "115")
    screen = look(client)
    assert screen.state == "changed"
    assert (screen.drawn, screen.off, screen.on) == (None, None, None)
    assert "112.5 115 kg" in screen.text
    answers = {
        form.one("button").attrs["value"]: form.text
        for form in get(client, CREW).one("section", "now").all("form")
    }
    assert answers == {
        "before": f"Nothing moved yet {' + '.join(hand['before'])}",
        "shown": f"All moved {' + '.join(hand['stack'])}",
        "unknown": "Something else strip it and build from empty",
    }


def test_crews_answer_is_where_the_next_change_starts(client: TestClient, meet: Meet) -> None:
    stack = meet.platform()["hand"]["stack"]
    declare(client, up(meet), "115")
    landed(client, send(client, get(client, CREW), "/bar", "bar=shown"))
    assert meet.platform()["hand"]["before"] == stack
    assert (look(client).state, look(client).weight) == ("changing", Fraction(115))


def test_unknown_bar_is_stripped_and_built_from_empty(client: TestClient, meet: Meet) -> None:
    declare(client, up(meet), "115")
    landed(client, send(client, get(client, CREW), "/bar", "bar=unknown"))
    screen = look(client)
    assert (screen.state, screen.everything_off) == ("unknown", True)
    assert screen.on == screen.drawn == kg(*meet.platform()["hand"]["stack"])
    assert "Nobody knows what is on the bar. Strip it, then build this from empty." in screen.text
    landed(client, send(client, get(client, CREW), "/loaded"))
    assert look(client).state == "lifting"


def test_hold_fills_the_screen_and_takes_no_loaded(client: TestClient, meet: Meet) -> None:
    shown = get(client, CREW)
    tell(client, "hold")
    screen = look(client)
    assert screen.state == "hold"
    assert "Nothing moves until the table says so." in screen.text
    assert " + ".join(meet.platform()["bar"]) in screen.text
    answer = send(client, shown, "/loaded")
    assert refusal(answer, 422) == "There is no change to confirm."
    assert meet.platform()["condition"] == "hold"


def test_weight_not_handed_in_lets_the_crew_wait(visitor: TestClient, meet: Meet) -> None:
    for _ in range(20):
        screen = look(visitor)
        if screen.state == "waiting":
            break
        judge(visitor, "good")
    assert screen.state == "waiting"
    assert "has not handed in a weight. By the rule it will be" in screen.text
    assert meet.platform()["hand"] is None


def test_weight_that_cannot_be_made_any_more_is_never_shown_as_a_load(client: TestClient, meet: Meet) -> None:
    """Plates leave the platform after the weight was declared."""
    plates = form(get(client, "/platforms/1/equipment"), "/plates")
    faces = plates.fields["face"]
    small = plates.filled(count=["2" if face in ("25", "1.25") else "0" if face else "" for face in faces])
    assert client.post(plates.action, data=small).status_code == 200
    tell(client, "unknown")
    screen = look(client)
    assert screen.state == "waiting"
    assert "112.5 cannot be made with the plates here. The table has been told." in screen.text
    assert (screen.drawn, screen.on) == (None, None)


def test_finished_flight_says_so(visitor: TestClient, meet: Meet) -> None:
    for _ in range(60):
        if look(visitor).state == "finished":
            break
        if look(visitor).state == "waiting":
            row = up_by_page(visitor, meet)
            declare(visitor, row, "")
        else:
            judge(visitor, "missed")
    screen = look(visitor)
    assert screen.state == "finished"
    assert "Flight A has finished this lift. The table brings the next flight." in screen.text
    assert (
        meet.rows(
            "SELECT attempt.id FROM attempt JOIN lifter ON lifter.id = lifter_id"
            " WHERE flight_id = 1 AND lift_id = 1 AND result = 'open'"
        )
        == []
    )


def up_by_page(client: TestClient, meet: Meet) -> dict[str, object]:
    """The attempt that is up, from the Table's first line."""
    body = get(client, "/platforms/1/table").one("table", "order").one("tbody")
    first = next(row for row in body.all("tr") if "id" in row.attrs)
    return meet.attempt_by_id(int(first.attrs["id"].removeprefix("row-")))


def test_late_loaded_for_an_earlier_change_is_refused(client: TestClient, meet: Meet) -> None:
    """A tablet that slept must not confirm a bar that it never showed."""
    late = get(client, CREW)
    judge(client, "good")
    before, journal = meet.state(), meet.journal()
    answer = send(client, late, "/loaded")
    assert (
        refusal(answer, 409) == "This screen was showing an earlier change. Look at the new one, then answer."
    )
    assert len(read(answer.text).all("html")) == (0 if swaps(client) else 1)
    assert (meet.state(), meet.journal()) == (before, journal)


def test_late_answer_about_the_bar_is_refused(client: TestClient, meet: Meet) -> None:
    declare(client, up(meet), "115")
    late = get(client, CREW)
    landed(client, send(client, get(client, CREW), "/bar", "bar=before"))
    before = meet.state()
    answer = send(client, late, "/bar", "bar=shown")
    assert refusal(answer, 409).startswith("This screen was showing an earlier change.")
    assert meet.state() == before


def test_second_loaded_of_two_tablets_is_refused_and_changes_nothing(client: TestClient, meet: Meet) -> None:
    late = get(client, CREW)
    landed(client, send(client, late, "/loaded"))
    before = meet.state()
    assert refusal(send(client, late, "/loaded"), 422) == "There is no change to confirm."
    assert meet.state() == before


def test_entry_for_somebody_later_leaves_the_instruction_as_it_was_shown(
    client: TestClient, meet: Meet
) -> None:
    shown, hand = look(client), meet.platform()["hand"]
    declare(client, next_of(meet, up(meet)), "120")
    declare(client, meet.attempt(16, "Squat", 2), "170")
    after = look(client)
    assert meet.platform()["hand"] == hand
    assert (after.weight, after.off, after.on, after.drawn) == (
        shown.weight,
        shown.off,
        shown.on,
        shown.drawn,
    )


def test_belt_has_one_stack_and_speaks_of_no_sides(client: TestClient, meet: Meet) -> None:
    screen = look(client, 2)
    assert screen.state == "changing"
    assert "a side" not in screen.text
    assert screen.drawn == kg(*meet.platform(2)["hand"]["stack"])
    assert sum(screen.drawn) == Fraction(meet.platform(2)["hand"]["weight"])
    assert "Belt is loaded" in screen.text


def test_platform_that_no_flight_was_brought_to_is_idle(client: TestClient, meet: Meet) -> None:
    client.post("/meets/1/platforms", data={"name": "Third", "preset": "bar-kg"})
    roster = "name,lot,flight,Squat opener\nWilma Orr,31,Flight N,100\n"
    client.post("/meets/1/roster", data={"text": roster})
    screen = look(client, 3)
    assert screen.state == "idle"
    assert "The table has not brought a flight to this platform yet." in screen.text

"""Plates on the move, from the pages: what the meet owns, lending, and one broken piece."""

from __future__ import annotations

import json

from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send
from tests.web.pages import form, read
from tests.web.ready import Meet, changed

PAGE = "/platforms/1/equipment"


def count(client: TestClient) -> None:
    """The meet counts what stands at its platforms, as the form offers it."""
    assert send(client, get(client, "/meets/1"), "/owned").status_code in (204, 303)


def test_counting_begins_with_what_stands_at_the_platforms(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    page = landed(client, send(client, get(client, "/meets/1"), "/owned"))
    owned = json.loads(changed(before, meet.state())["meet 1"]["owned"])
    both = {face: n + meet.stock(2).get(face, 0) for face, n in meet.stock(1).items()}
    assert {float(face): n for face, n in owned.items()} == {float(face): n for face, n in both.items()}
    assert "Main hall 12, Quay stage" in page.one("section", id_="owned").text


def test_counting_ends_with_its_own_button(client: TestClient, meet: Meet) -> None:
    count(client)
    send(client, get(client, "/meets/1"), "/owned", "uncounted=yes")
    assert meet.row("SELECT owned FROM meet")["owned"] is None


def test_wrong_counts_are_refused_and_stay_in_the_form(client: TestClient, meet: Meet) -> None:
    chosen = form(get(client, "/meets/1"), "/owned")
    counts = ["1", *chosen.fields["count"][1:]]
    answer = client.post(chosen.action, data=chosen.fields | {"count": counts})
    assert "the meet owns 1." in refusal(answer, 422)
    assert form(read(answer.text), "/owned").fields["count"][0] == "1"
    assert meet.row("SELECT owned FROM meet")["owned"] is None


def test_a_plate_given_to_a_second_platform_is_refused_with_the_form_as_typed(client: TestClient) -> None:
    count(client)
    chosen = form(get(client, PAGE), "/plates")
    answer = client.post(chosen.action, data=chosen.fields | {"count": ["14", *chosen.fields["count"][1:]]})
    assert (
        "25: 18 would stand at the platforms (Main hall 14, Quay stage 4), and the meet owns 16."
        in refusal(answer, 422)
    )
    assert form(read(answer.text), "/plates").fields["count"][0] == "14"


def test_plates_are_lent_to_the_other_platform(client: TestClient, meet: Meet) -> None:
    here, there = meet.stock(1), meet.stock(2)
    answer = send(client, get(client, PAGE), "/lend", face="25", pieces="4")
    assert (
        landed(client, answer).one("div", "notice").text == "4 of the 25s lent from Main hall to Quay stage."
    )
    assert meet.stock(1) == here | {25: here[25] - 4}  # type: ignore[dict-item]
    assert meet.stock(2) == there | {25: there[25] + 4}  # type: ignore[dict-item]


def test_a_refused_loan_stays_in_the_form(client: TestClient) -> None:
    answer = send(client, get(client, PAGE), "/lend", face="15", pieces="9")
    assert "Main hall has only 2 of the 15s." in refusal(answer, 422)
    kept = form(read(answer.text), "/lend").fields
    assert (kept["face"], kept["pieces"]) == (["15"], ["9"])


def test_with_one_platform_there_is_nobody_to_lend_to(new_client: TestClient) -> None:
    new_client.post("/meets", data={"name": "Quiet Cup", "unit": "kg"})
    new_client.post("/meets/1/platforms", data={"name": "Hall", "preset": "bar-kg"})
    assert not get(new_client, PAGE).all("section", id_="lend")


def test_one_press_takes_a_broken_piece_out_and_keeps_what_was_typed(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    page = get(client, PAGE)
    (button,) = page.all("button", aria_label="Take one 20 out")
    chosen = form(page, "/plates")
    thickness = ["27.3", *chosen.fields["thickness"][1:]]
    answer = client.post(
        button.attrs["formaction"],
        data=chosen.fields | {"thickness": thickness, "out": button.attrs["value"]},
    )
    after = read(answer.text)
    assert after.one("div", "notice").text == "One 20 is taken out: 1 is left, one of them without a partner."
    assert changed(before, meet.state()) == {"plate 2": {"count": 1}}
    kept = form(after, "/plates").fields
    assert (kept["thickness"][0], kept["count"][1]) == ("27.3", "1")
    assert client.post(chosen.action, data=kept).status_code == 200  # and can be saved from there


def test_enter_in_a_field_of_the_plates_saves_and_takes_nothing_out(visitor: TestClient) -> None:
    """A browser presses the form's first button on Enter."""
    (plates,) = get(visitor, PAGE).all("form", action=f"{PAGE}/plates")
    assert "formaction" not in plates.all("button")[0].attrs

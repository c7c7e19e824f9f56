"""The Equipment page: what is saved, what is refused with everything still as typed, and a form that came late."""

from __future__ import annotations

import json

import pytest
from starlette.testclient import TestClient

from tests.web.asking import get, refusal, send
from tests.web.pages import Form, form, read
from tests.web.ready import Meet, changed

PAGE = "/platforms/1/equipment"


def plates(client: TestClient) -> Form:
    """The form of the plates as it stands."""
    return form(get(client, PAGE), "/plates")


def with_row(chosen: Form, row: int, **typed: str) -> dict[str, list[str]]:
    """The form with one row typed over."""
    return chosen.fields | {
        name: [*chosen.fields[name][:row], value, *chosen.fields[name][row + 1 :]]
        for name, value in typed.items()
    }


def test_count_of_one_plate_is_saved_and_nothing_else_changes(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    chosen = plates(client)
    answer = client.post(chosen.action, data=with_row(chosen, 0, count="14"))
    page = read(answer.text)
    assert page.one("div", "notice").text == "The plates are saved."
    assert changed(before, meet.state()) == {"plate 1": {"count": 14}}
    assert form(page, "/plates").fields["count"][0] == "14"
    assert meet.journal()[-1]["what"] == "Main hall: plates changed"


def test_new_plate_is_typed_into_a_spare_row_with_a_decimal_comma(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    chosen = plates(client)
    row = chosen.fields["face"].index("")
    typed = with_row(chosen, row, face="0,125", count="2", thickness="4,5", diameter="100", colour="#ABCDEF")
    assert client.post(chosen.action, data=typed).status_code == 200
    (new,) = changed(before, meet.state()).values()
    assert {k: new[k] for k in ("face", "count", "thickness_mm", "diameter_mm", "colour")} == {
        "face": "0.125",
        "count": 2,
        "thickness_mm": "4.5",
        "diameter_mm": "100",
        "colour": "#abcdef",
    }


def test_row_with_its_face_value_cleared_is_taken_out(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    chosen = plates(client)
    row = chosen.fields["face"].index("0.25")
    assert client.post(chosen.action, data=with_row(chosen, row, face="")).status_code == 200
    assert list(changed(before, meet.state()).values()) == [None]


def test_saving_what_is_there_is_no_entry(client: TestClient, meet: Meet) -> None:
    before, journal = meet.state(), meet.journal()
    page = get(client, PAGE)
    for action in ("/plates", "/tools"):
        assert send(client, page, action).status_code == 200
    assert (meet.state(), meet.journal()) == (before, journal)


@pytest.mark.parametrize(
    ("typed", "because"),
    [
        ({"count": "eleven"}, "Row 1: count “eleven” is not a whole number from 0 to 200."),
        ({"count": "-2"}, "Row 1: count “-2” is not a whole number from 0 to 200."),
        ({"count": "201"}, "Row 1: count “201” is not a whole number from 0 to 200."),
        ({"count": "²"}, "Row 1: count “²” is not a whole number from 0 to 200."),
        ({"face": "heavy"}, "Row 1: face value “heavy” is not a number."),
        ({"face": "0"}, "Row 1: face value 0 is not possible."),
        ({"face": "20"}, "Row 2: 20 stands twice. Add the counts together."),
        ({"thickness": "1e3"}, "Row 1: thickness “1e3” is not a number."),
        ({"diameter": "-450"}, "Row 1: diameter -450 is not possible."),
        ({"colour": "red;}"}, "Row 1: colour “red;}” is not of the form #c62828."),
    ],
)
def test_wrong_plate_is_named_by_its_row_and_everything_stays_as_typed(
    client: TestClient, meet: Meet, typed: dict[str, str], because: str
) -> None:
    before, journal = meet.state(), meet.journal()
    chosen = plates(client)
    sent = with_row(chosen, 1, count="7") | {}
    sent = with_row(Form(chosen.action, sent), 0, **typed)
    answer = client.post(chosen.action, data=sent)
    assert refusal(answer, 422) == f"{because} Nothing was saved. What you typed is still in the form."
    kept = form(read(answer.text), "/plates").fields
    assert {name: kept[name] for name in sent} == sent
    assert (meet.state(), meet.journal()) == (before, journal)


def test_all_wrong_rows_are_told_at_once(client: TestClient) -> None:
    chosen = plates(client)
    sent = with_row(Form(chosen.action, with_row(chosen, 0, count="x")), 2, face="y")
    said = refusal(client.post(chosen.action, data=sent), 422)
    assert "Row 1: count “x”" in said
    assert "Row 3: face value “y”" in said


@pytest.mark.parametrize("action", ["/plates", "/tools"])
def test_form_made_before_a_colleague_saved_is_refused_and_keeps_what_was_typed(
    client: TestClient, meet: Meet, action: str
) -> None:
    late = form(get(client, PAGE), action)
    chosen = plates(client)
    client.post(chosen.action, data=with_row(chosen, 0, count="14"))
    before = meet.state()
    column = {"/plates": "count", "/tools": "mass"}[action]
    answer = client.post(late.action, data=with_row(late, 0, **{column: "8"}))
    assert refusal(answer, 409).startswith(
        "Somebody changed the equipment since this page was made. Look, and save again."
    )
    assert form(read(answer.text), action).fields[column][0] == "8"
    assert meet.state() == before


def test_bar_and_collars_are_saved(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    chosen = form(get(client, PAGE), "/tools")
    answer = client.post(
        chosen.action, data=with_row(chosen, 0, mass="15", collar_mass="", name="Junior bar")
    )
    assert read(answer.text).one("div", "notice").text == "The bars and belts are saved."
    after = changed(before, meet.state())
    assert after["implement 1"] == {"name": "Junior bar", "mass": "15", "collar_mass": None}


def test_second_bar_is_added_and_a_lift_is_given_to_it(client: TestClient, meet: Meet) -> None:
    chosen = form(get(client, PAGE), "/tools")
    client.post(chosen.action, data=with_row(chosen, 1, name="Bench bar", mass="20", usable="420"))
    bar = meet.row("SELECT id FROM implement WHERE name = 'Bench bar'")["id"]
    lifts = form(get(client, PAGE), "/lifts")
    before = meet.state()
    row = lifts.fields["lift_id"].index(str(meet.row("SELECT id FROM lift WHERE name = 'Bench press'")["id"]))
    answer = client.post(
        lifts.action, data=with_row(lifts, row, implement_id=str(bar), step="1,25", measure="mass")
    )
    assert read(answer.text).one("div", "notice").text == "The settings of the lifts are saved."
    (name,) = (
        one for one in changed(before, meet.state()) if "implement_id" in changed(before, meet.state())[one]
    )
    saved = meet.row("SELECT * FROM lift WHERE name = 'Bench press'")
    assert name == f"lift {saved['id']}"
    assert (saved["implement_id"], saved["step"]) == (bar, "1.25")
    assert json.loads(saved["loading"])["measure"] == "mass"


def test_bar_that_a_lift_uses_cannot_be_taken_out(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    chosen = form(get(client, PAGE), "/tools")
    answer = client.post(chosen.action, data=with_row(chosen, 0, name=""))
    assert refusal(answer, 422).startswith(
        "Row 1: Power bar is used by a lift. Give that lift another one first."
    )
    assert meet.state() == before


@pytest.mark.parametrize(
    ("typed", "because"),
    [
        ({"mass": ""}, "Row 1: mass is empty."),
        ({"mass": "0"}, "Row 1: mass 0 is not possible."),
        ({"kind": "rope"}, "Row 1: it is a bar or a belt."),
        ({"usable": "long"}, "Row 1: room for plates “long” is not a number."),
    ],
)
def test_wrong_bar_is_named_by_its_row(
    client: TestClient, meet: Meet, typed: dict[str, str], because: str
) -> None:
    before = meet.state()
    chosen = form(get(client, PAGE), "/tools")
    sent = with_row(chosen, 0, **typed)
    answer = client.post(chosen.action, data=sent)
    assert refusal(answer, 422).startswith(because)
    kept = form(read(answer.text), "/tools").fields
    # A choice that is not offered cannot stand in the form.
    assert {k: v for k, v in kept.items() if k not in ("seen", "kind")} == {
        k: v for k, v in sent.items() if k not in ("seen", "kind")
    }
    assert meet.state() == before


def test_wrong_step_of_a_lift_keeps_every_setting_as_typed(client: TestClient, meet: Meet) -> None:
    """What was typed for the lifts was once thrown away while the page said that it was kept."""
    before, journal = meet.state(), meet.journal()
    chosen = form(get(client, PAGE), "/lifts")
    sent = with_row(Form(chosen.action, with_row(chosen, 0, step="often")), 1, step="5", aim="worst")
    answer = client.post(chosen.action, data=sent)
    assert refusal(answer, 422).startswith("Squat: step “often” is not a number. Nothing was saved.")
    assert form(read(answer.text), "/lifts").fields == sent
    assert (meet.state(), meet.journal()) == (before, journal)


@pytest.mark.parametrize(
    ("typed", "because"),
    [
        ({"implement_id": "2"}, "Squat: choose a bar or belt of this platform."),
        ({"measure": "noise"}, "Squat: choose one of fewest plates, least kilograms, least time."),
        ({"lift_id": "4"}, "One of these lifts is not on this platform any more. Load the page again."),
        ({"lift_id": "none"}, "One of these lifts is not on this platform any more. Load the page again."),
    ],
)
def test_setting_that_is_not_offered_is_refused(
    client: TestClient, meet: Meet, typed: dict[str, str], because: str
) -> None:
    before = meet.state()
    chosen = form(get(client, PAGE), "/lifts")
    answer = client.post(chosen.action, data=with_row(chosen, 0, **typed))
    assert refusal(answer, 422).startswith(because)
    assert meet.state() == before


def test_equipment_of_one_platform_leaves_the_other_alone(client: TestClient, meet: Meet) -> None:
    revision = meet.platform(2)["revision"]
    chosen = plates(client)
    client.post(chosen.action, data=with_row(chosen, 0, count="14"))
    assert meet.platform(2)["revision"] == revision


def test_plate_of_the_change_that_is_out_is_taken_away_and_the_crew_is_asked(
    visitor: TestClient, meet: Meet
) -> None:
    """The instruction stays as it was shown; whether it can still be done, only the people at the bar can say."""
    hand = meet.platform()["hand"]
    chosen = plates(visitor)
    row = chosen.fields["face"].index(hand["stack"][0])
    visitor.post(chosen.action, data=with_row(chosen, row, count="0"))
    assert meet.platform()["hand"] == hand
    crew = get(visitor, "/platforms/1/crew").one("section", "now")
    assert crew.attrs["data-state"] == "changed"
    assert "A plate of this change is no longer at the platform." in crew.text

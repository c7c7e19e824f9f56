"""The front door: a meet and a platform are made, and a screen remembers who sits at it."""

from __future__ import annotations

import pytest
from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send
from tests.web.ready import Meet, changed


def test_an_empty_folder_says_what_to_do_first(new_client: TestClient) -> None:
    page = get(new_client, "/")
    assert page.one("div", "empty").text.startswith("No meet yet Give it a name and a unit")


def test_from_nothing_to_a_platform_that_waits_for_its_roster(new_client: TestClient, fresh: Meet) -> None:
    meet_page = landed(
        new_client, send(new_client, get(new_client, "/"), "/meets", name=" Hill  Open ", unit="lb")
    )
    assert meet_page.one("h1").text == "Hill Open"
    assert meet_page.one("div", "empty").text.startswith("No platform yet")
    assert fresh.row("SELECT name, unit FROM meet") == {"name": "Hill Open", "unit": "lb"}

    meet_page = landed(new_client, send(new_client, meet_page, "/platforms", name="Left"))
    assert "No lifters yet" in meet_page.text
    assert fresh.row("SELECT name, condition, bar FROM platform") == {
        "name": "Left",
        "condition": "idle",
        "bar": "[]",
    }
    assert fresh.journal()[-1]["what"] == "platform Left set up: Bar lifts, lb iron plates"


EMPTY_PLATFORM = {
    "/platforms/1/table": ("div", "empty", "No flight on this platform yet"),
    "/platforms/1/cards": ("div", "empty", "No flights yet"),
    "/platforms/1/crew": ("section", "now", "NO FLIGHT"),
    "/meets/1/roster": ("div", "empty", "Nobody on the roster yet"),
}


@pytest.mark.parametrize("path", EMPTY_PLATFORM)
def test_platform_without_a_roster_says_what_is_missing(new_client: TestClient, path: str) -> None:
    new_client.post("/meets", data={"name": "Hill Open"})
    new_client.post("/meets/1/platforms", data={"name": "Left", "preset": "bar-kg"})
    tag, klass, words = EMPTY_PLATFORM[path]
    assert words in get(new_client, path).one(tag, klass).text


def test_roster_without_a_platform_sends_to_the_meet(new_client: TestClient) -> None:
    new_client.post("/meets", data={"name": "Hill Open"})
    empty = get(new_client, "/meets/1/roster").one("div", "empty")
    assert empty.text.startswith("No platform yet")
    assert empty.one("a").attrs["href"] == "/meets/1"


@pytest.mark.parametrize(
    ("name", "unit", "because"),
    [
        ("   ", "kg", "Give the meet a name."),
        ("x" * 81, "kg", "The name of the meet is longer than 80 letters."),
        ("Hill Open", "stone", "The unit is kg or lb."),
    ],
)
def test_meet_that_cannot_be_made_is_refused_with_what_was_typed(
    new_client: TestClient, fresh: Meet, name: str, unit: str, because: str
) -> None:
    answer = send(new_client, get(new_client, "/"), "/meets", name=name, unit=unit)
    assert refusal(answer, 422) == because
    assert f'name="name" value="{name}"' in answer.text
    assert fresh.rows("SELECT * FROM meet") == []


@pytest.mark.parametrize(
    ("name", "preset", "because"),
    [
        ("", "bar-kg", "Give the platform a name."),
        ("MAIN HALL", "bar-kg", "There is already a platform called “MAIN HALL”. Choose another name."),
        ("Third", "bar-lb", "This meet is in kg; “Bar lifts, lb iron plates” is in lb. Choose a set in kg."),
        ("Third", "none", "Choose one of: Bar lifts, kg steel plates, "),
    ],
)
def test_platform_that_cannot_be_made_is_refused_with_what_was_typed(
    client: TestClient, meet: Meet, name: str, preset: str, because: str
) -> None:
    before, journal = meet.state(), meet.journal()
    answer = send(client, get(client, "/meets/1"), "/platforms", name=name, preset=preset)
    assert refusal(answer, 422).startswith(because)
    assert f'name="name" value="{name}"' in answer.text
    assert (meet.state(), meet.journal()) == (before, journal)


def test_second_platform_leaves_the_first_as_it_was(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    landed(client, send(client, get(client, "/meets/1"), "/platforms", name="Third", preset="belt-kg"))
    touched = {name.split()[0] for name, after in changed(before, meet.state()).items() if after}
    assert touched == {"platform", "implement", "plate", "session", "lift"}
    assert changed({"platform": before["platform"]}, {"platform": meet.state()["platform"]}).keys() == {
        "platform 3"
    }


def test_name_at_this_screen_is_kept_and_stands_beside_what_is_entered(
    client: TestClient, meet: Meet
) -> None:
    page = landed(client, send(client, get(client, "/meets/1"), "/official", name=" Zoë  Ångström "))
    assert page.one("input", id="official").attrs["value"] == "Zoë Ångström"
    client.post("/platforms/1/table-bar", data={"tell": "hold"})
    assert meet.journal()[-1]["who"] == "Zoë Ångström"


@pytest.mark.parametrize(
    "back", ["https://elsewhere.example/", "//elsewhere.example", "/\\elsewhere.example", ""]
)
def test_the_name_form_leads_nowhere_but_to_our_own_pages(visitor: TestClient, back: str) -> None:
    assert visitor.post("/official", data={"name": "Zoë", "back": back}).headers["location"] == "/"


@pytest.mark.parametrize("name", ["x" * 5000, "\u202eback", "a\nb", "\x00", "%ff%fe"])
def test_odd_name_at_this_screen_breaks_no_page(client: TestClient, name: str) -> None:
    client.post("/official", data={"name": name, "back": "/"})
    assert get(client, "/meets/1").one("h1").text == "Harbour Hall Open"

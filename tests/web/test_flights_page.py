"""The Flights page: proposals with their cost, one press to take one, and one lifter or flight changed."""

from __future__ import annotations

import pytest
from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send
from tests.web.pages import Element, form, read
from tests.web.ready import Meet, changed

PAGE = "/platforms/1/flights"
ROSTER = "name,lot,flight,body weight,Squat opener\nAda Brook,1,Flight A,57,100\nBo Carver,2,Flight A,93,60\n"


def proposals(client: TestClient, page: Element) -> Element:
    """What the page fetches when it is there."""
    return get(client, page.one("div", hx_trigger="load").attrs["hx-get"])


@pytest.fixture
def eve(new_client: TestClient) -> TestClient:
    """A meet the day before, two lifters in one flight."""
    new_client.post("/meets", data={"name": "Quiet Cup", "unit": "kg"})
    new_client.post("/meets/1/platforms", data={"name": "Hall", "preset": "bar-kg"})
    new_client.post("/meets/1/roster", data={"text": ROSTER})
    return new_client


def test_every_page_of_the_platform_leads_to_the_flights(visitor: TestClient) -> None:
    assert PAGE in {one.attrs["href"] for one in get(visitor, "/platforms/1/table").all("a")}


def test_proposals_stand_beside_the_flights_as_they_are_with_what_each_costs(client: TestClient) -> None:
    page = get(client, f"{PAGE}?limits=59,+66,+74,+83")
    said = proposals(client, page)
    assert said.texts("h3") == ["As they stand", "By opener", "By body-weight class"]
    assert len(said.all("span", "weight-figure")) == 6
    assert not said.all("form")  # somebody has lifted
    assert "its flights stay" in page.text


def test_a_proposal_is_taken_with_one_press(eve: TestClient) -> None:
    page = get(eve, f"{PAGE}?limits=59")
    answer = send(eve, proposals(eve, page), "/flights/take", "way=class")
    made = landed(eve, answer)
    assert made.one("div", "notice").text == "The flights of Bar lifts are made: Flight A 2."
    assert form(made, "/save").fields["name"] == ["Flight A"]


def test_wrong_class_limits_are_said_where_the_proposals_would_stand(client: TestClient) -> None:
    page = get(client, f"{PAGE}?limits=74,66")
    assert "Class limits rise" in proposals(client, page).one("div", "error").text


def test_a_lifter_is_moved_and_only_that_changes(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    lifter = meet.row("SELECT * FROM lifter WHERE lot = 3")
    page = get(client, PAGE)
    chosen = form(page, "/move", lifter=str(lifter["id"]))
    answer = client.post(chosen.action, data=chosen.fields)
    to = int(chosen.fields["to"][0])
    assert changed(before, meet.state()) == {f"lifter {lifter['id']}": {"flight_id": to}}
    assert "moved from Flight B to Flight A." in read(answer.text).one("div", "notice").text


def test_a_move_that_came_late_is_refused_and_told(client: TestClient, meet: Meet) -> None:
    lifter = meet.row("SELECT * FROM lifter WHERE lot = 3")
    chosen = form(get(client, PAGE), "/move", lifter=str(lifter["id"]))
    client.post(chosen.action, data=chosen.fields)
    before = meet.state()
    sentence = refusal(client.post(chosen.action, data=chosen.fields), 409)
    assert "has been moved to Flight A meanwhile" in sentence
    assert meet.state() == before


def test_a_flight_is_renamed_and_given_a_time_as_the_hall_reads_it(client: TestClient, meet: Meet) -> None:
    flight = meet.row("SELECT * FROM flight WHERE name = 'Flight A'")["id"]
    answer = send(
        client, get(client, PAGE), "/flights/save", f"flight={flight}", name="Morning", starts="9:05"
    )
    saved = form(landed(client, answer), "/save", flight=str(flight))
    assert (saved.fields["name"], saved.fields["starts"]) == (["Morning"], ["09:05"])


def test_a_flight_with_too_many_lifters_is_warned_about(client: TestClient) -> None:
    rules = form(get(client, "/platforms/1/rules"), "/rules")
    assert client.post(rules.action, data=rules.filled(most_in_flight="9")).status_code == 200
    (warning,) = get(client, PAGE).all("div", "error")
    assert "More lifters than the 9 that the rules of this session allow" in warning.text


def test_without_lifters_the_page_sends_to_the_roster(new_client: TestClient) -> None:
    new_client.post("/meets", data={"name": "Quiet Cup", "unit": "kg"})
    new_client.post("/meets/1/platforms", data={"name": "Hall", "preset": "bar-kg"})
    assert "No lifters yet" in get(new_client, PAGE).text


def test_a_session_that_is_not_there_is_not_found(client: TestClient) -> None:
    assert client.get(f"{PAGE}?session=99").status_code == 404
    assert client.get(f"{PAGE}/proposals?session=99").status_code == 404

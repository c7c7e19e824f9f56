"""The page that asks whether the plates will do."""

from __future__ import annotations

from starlette.testclient import TestClient

from tests.web.asking import get
from tests.web.pages import form
from tests.web.ready import Meet

PAGE = "/platforms/1/plates-check"


def test_equipment_leads_to_the_check(visitor: TestClient) -> None:
    links = {one.attrs["href"] for one in get(visitor, "/platforms/1/equipment").all("a")}
    assert PAGE in links


def test_every_lift_is_answered_with_yes_when_all_can_be_made(client: TestClient) -> None:
    page = get(client, PAGE)
    assert [one.text for one in page.all("span", "tag")] == ["yes"] * 3
    assert "Every weight from 85 to 260 kg can be made." in page.text


def test_a_short_plate_is_said_with_where_it_stands(client: TestClient, meet: Meet) -> None:
    chosen = form(get(client, "/platforms/1/equipment"), "/plates")
    place = chosen.fields["face"].index("1.25")
    counts = [*chosen.fields["count"]]
    counts[place] = "0"
    assert client.post(chosen.action, data=chosen.fields | {"count": counts}).status_code == 200
    page = get(client, PAGE)
    assert page.texts("span", "tag") == ["no"] * 3
    assert "Short by 1 pair of 1.25s" in page.text
    assert (
        f"Quay stage has {meet.stock(2)[next(f for f in meet.stock(2) if f * 4 == 5)]} of the 1.25s."
        in page.text
    )


def test_what_to_borrow_is_fetched_when_the_page_is_there(client: TestClient) -> None:
    page = get(client, PAGE)
    places = [one.attrs["hx-get"] for one in page.all("div", hx_trigger="load")]
    assert len(places) == 3
    assert "Trying one more pair" in page.text
    said = [get(client, place).text for place in places]
    assert all(one.startswith("Borrow 1 pair of ") for one in said)


def test_a_belt_borrows_single_pieces_or_says_that_none_helps(client: TestClient) -> None:
    page = get(client, "/platforms/2/plates-check")
    for place in page.all("div", hx_trigger="load"):
        said = get(client, place.attrs["hx-get"]).text
        assert said.startswith(("Borrow 1 of the ", "No single borrowed plate"))


def test_without_a_roster_the_page_sends_to_it(new_client: TestClient) -> None:
    new_client.post("/meets", data={"name": "Quiet Cup", "unit": "kg"})
    new_client.post("/meets/1/platforms", data={"name": "Hall", "preset": "bar-kg"})
    page = get(new_client, PAGE)
    assert page.text.count("No opener yet") == 3
    assert "/meets/1/roster" in {one.attrs["href"] for one in page.all("a")}


def test_a_platform_or_lift_that_is_not_there_is_not_found(client: TestClient) -> None:
    assert client.get("/platforms/99/plates-check").status_code == 404
    assert client.get(f"{PAGE}/999/borrow").status_code == 404


def test_lending_is_offered_where_the_plates_stand(client: TestClient) -> None:
    out = {"out": "1.25"}
    for _ in range(4):
        chosen = form(get(client, "/platforms/1/equipment"), "/plates")
        assert client.post("/platforms/1/equipment/out", data=chosen.fields | out).status_code == 200
    links = {one.attrs["href"] for one in get(client, PAGE).all("a") if one.text == "Lend from there"}
    assert links == {"/platforms/2/equipment#lend"}
    assert form(get(client, "/platforms/2/equipment"), "/lend").fields["to"] == ["1"]

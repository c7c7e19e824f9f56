"""A copy of an earlier meet from the first page, and every set that a platform can start from."""

from __future__ import annotations

from starlette.testclient import TestClient

from tests.web.asking import get, landed, refusal, send
from tests.web.pages import form, read
from tests.web.ready import Meet, changed


def test_a_meet_is_copied_with_one_name_and_one_press(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    page = landed(client, send(client, get(client, "/"), "/meets/copy", name="Harbour Hall Open 2"))
    assert page.one("h1").text == "Harbour Hall Open 2"
    assert page.texts("h2")[:2] == ["Main hall", "Quay stage"]
    new = changed(before, meet.state())
    assert {name.split()[0] for name in new} == {"meet", "platform", "implement", "plate", "session", "lift"}
    assert meet.stock(3) == meet.stock(1)


def test_a_copy_without_a_name_is_refused_and_the_choice_stays(client: TestClient) -> None:
    answer = send(client, get(client, "/"), "/meets/copy", name=" ")
    assert refusal(answer, 422) == "Give the new meet a name."
    assert form(read(answer.text), "/meets/copy").fields["meet"] == ["1"]


def test_in_an_empty_folder_there_is_nothing_to_copy(new_client: TestClient) -> None:
    assert "A copy of an earlier meet" not in get(new_client, "/").text


def test_every_kg_set_can_be_started_from(client: TestClient) -> None:
    page = get(client, "/meets/1")
    sets = [one.attrs["value"] for one in page.one("select", id_="preset").all("option")]
    assert sets == ["bar-kg", "belt-kg", "rising-men", "rising-women"]
    for place, chosen in enumerate(sets):
        made = landed(client, send(client, page, "/platforms", name=f"Extra {place}", preset=chosen))
        assert f"Extra {place}" in made.texts("h2")

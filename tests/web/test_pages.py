"""Every page answers, says what it is, and turns away what it cannot serve in a plain sentence."""

from __future__ import annotations

import sqlite3
from contextlib import closing

import pytest
from fastapi.routing import APIRoute
from starlette.testclient import TestClient

from app.web.main import SECURITY_HEADERS, create_app
from tests.web.asking import HTMX, app_over, get, send, swaps
from tests.web.pages import read
from tests.web.ready import Meet

PAGES = {
    "/": "Meets",
    "/meets/1": "Meet",
    "/meets/1/roster": "Roster",
    "/platforms/1/table": "Table, Flight A · Squat",
    "/platforms/1/crew": "Crew, Main hall",
    "/platforms/1/check": "Check, Main hall",
    "/platforms/1/announcer": "Announcer, Main hall",
    "/platforms/1/screen": "This screen, Main hall",
    "/platforms/1/cards": "Cards, Main hall",
    "/platforms/1/cards/1/1/2": "Card, Flight A · Squat · round 2",
    "/platforms/1/join": "Join, Main hall",
    "/platforms/1/missing": "Don't have a plate?",
    "/platforms/1/chart/1": "Loading chart, Squat",
    "/platforms/1/checklist": "Set-up, Main hall",
    "/platforms/1/equipment": "Equipment, Main hall",
    "/platforms/1/from-paper": "Back from paper, Flight A · Squat · round 2",
    "/platforms/1/rules": "Rules, Saturday, bar lifts",
    "/platforms/1/flights": "Flights, Saturday, bar lifts",
    "/platforms/1/lifts/1": "Squat, Main hall",
    "/platforms/1/plates-check": "Will the plates do? Main hall",
}
# Pages that stand under another one in the navigation.
UNDER = {
    "/platforms/1/from-paper": "/platforms/1/cards",
    "/platforms/1/lifts/1": "/platforms/1/equipment",
    "/platforms/1/plates-check": "/platforms/1/equipment",
}
# Walls without navigation, and pages that are reached from others.
WALLS = tuple(
    f"/platforms/1/{name}"
    for name in ("crew", "check", "announcer", "screen", "chart/1", "checklist", "missing")
)
FILES = {
    "/meets/1/roster.csv",
    "/meets/1/results.csv",
    "/meets/1/results.json",
    "/meets/1/journal.csv",
    "/meets/1/journal.json",
    "/meets/1/meet.json",
    "/platforms/1/plates-check/1/borrow",
    "/platforms/1/cards/1/1/2/pdf",
    "/platforms/1/chart/1/pdf",
    "/platforms/1/checklist/pdf",
    "/platforms/1/crew/ahead",
}
STREAMS = {"/platforms/1/events"}
# Answers to a question that the page asks, and a picture by name.
ASKED = {
    "/platforms/1/ahead": "?attempt=1&version=0&weight=100",
    "/platforms/1/misload": "?attempt=1&version=0",
    "/platforms/1/flights/proposals": "?session=1",
    "/platforms/1/lifts/1/figures": "?flight=1",
    "/platforms/1/join/{page}": "",
}
POSTS = (
    "/meets",
    "/meets/copy",
    "/meets/file",
    "/meets/1/owned",
    "/meets/1/platforms",
    "/official",
    "/meets/1/roster",
    "/platforms/1/equipment/plates",
    "/platforms/1/equipment/tools",
    "/platforms/1/equipment/lifts",
    "/platforms/1/equipment/lend",
    "/platforms/1/equipment/out",
    "/platforms/1/flights/move",
    "/platforms/1/flights/remove",
    "/platforms/1/flights/save",
    "/platforms/1/flights/take",
    "/platforms/1/lifts/1",
    "/platforms/1/lifts/1/choice",
    "/platforms/1/lifts/1/ready",
    "/platforms/1/rules",
    "/platforms/1/misload",
    "/platforms/1/from-paper",
    "/platforms/1/lifter",
    "/platforms/1/owner",
    "/platforms/1/redo",
    "/platforms/1/weight",
    "/platforms/1/result",
    "/platforms/1/undo",
    "/platforms/1/flight",
    "/platforms/1/table-bar",
    "/platforms/1/loaded",
    "/platforms/1/screen",
    "/platforms/1/missing",
    "/platforms/1/bar",
    "/api/plan",
)
MEET_FILES = ("/meets/copy", "/meets/file")  # their address looks like that of a meet
NO_PAGE = "There is no such page here."


def _routes(method: str) -> set[str]:
    app = create_app("sqlite://")
    pending, found = list(app.routes), set()
    while pending:
        route = pending.pop()
        if isinstance(route, APIRoute):
            found |= {route.path} if method in route.methods else set()
        else:
            pending += list(getattr(getattr(route, "original_router", route), "routes", None) or [])
    return found


def _pattern(path: str) -> str:
    """``/platforms/1/cards/1/1/2`` without its numbers, as a shape that a route's path can be compared to."""
    parts = ["{}" if part.isdigit() or part.startswith("{") else part for part in path.split("/")]
    return "/".join(parts)


def test_these_tests_know_every_address_of_the_app() -> None:
    """A new page or action fails here until it stands in the lists above, and so gets the whole ladder."""
    assert {_pattern(path) for path in (*PAGES, *FILES, *STREAMS, *ASKED)} == {
        _pattern(p) for p in _routes("GET")
    }
    assert {_pattern(path) for path in POSTS} == {_pattern(path) for path in _routes("POST")}


@pytest.mark.parametrize(("path", "title"), PAGES.items())
def test_page_has_its_title_one_heading_and_the_content_in_main(
    visitor: TestClient, path: str, title: str
) -> None:
    page = get(visitor, path)
    assert page.one("title").text.startswith(f"{title} ·")
    assert page.one("html").attrs["lang"] == "en"
    assert len(page.all("h1")) <= 1
    assert page.one("main").text


@pytest.mark.parametrize("path", PAGES)
def test_page_marks_itself_in_the_navigation(visitor: TestClient, path: str) -> None:
    page = get(visitor, path)
    here = [
        a.attrs["href"]
        for nav in page.all("nav", aria_label="Pages")
        for a in nav.all("a", aria_current="page")
    ]
    wanted = (
        []
        if path == "/" or path in WALLS
        else [UNDER.get(path, path.partition("/cards/")[0] + "/cards" * ("/cards/" in path))]
    )
    assert here == wanted


@pytest.mark.parametrize("path", [path for path in PAGES if "/cards/" not in path])
def test_page_answers_htmx_with_its_content_alone(meet: Meet, path: str) -> None:
    with app_over(meet, HTMX) as client:
        page = get(client, path)
    assert not page.all("html")
    assert not page.all("script")
    assert page.text


@pytest.mark.parametrize("path", [*PAGES, *FILES, "/static/platewright.css", "/nowhere"])
def test_every_answer_carries_the_security_headers(client: TestClient, path: str) -> None:
    headers = client.get(path).headers
    assert {name: headers.get(name) for name in SECURITY_HEADERS} == SECURITY_HEADERS


def test_the_content_policy_allows_nothing_from_elsewhere_and_nothing_inline() -> None:
    policy = SECURITY_HEADERS["Content-Security-Policy"]
    assert "default-src 'self'" in policy
    assert "unsafe" not in policy
    assert "http" not in policy


@pytest.mark.parametrize("path", PAGES)
def test_page_cannot_be_posted_to_unless_it_takes_a_form(client: TestClient, meet: Meet, path: str) -> None:
    if path in POSTS:
        return
    before = meet.state()
    answer = client.post(path)
    assert answer.status_code == 405
    assert read(answer.text).texts("strong") == ["This address takes another kind of request."]
    assert meet.state() == before


@pytest.mark.parametrize(
    "path", [path for path in POSTS if path not in (*PAGES, *ASKED, *MEET_FILES, "/api/plan")]
)
def test_action_cannot_be_got(client: TestClient, meet: Meet, path: str) -> None:
    """A link, or a browser that guesses what to load ahead, must not enter anything."""
    before = meet.state()
    answer = client.get(path)
    assert answer.status_code == 405
    assert read(answer.text).texts("strong") == ["This address takes another kind of request."]
    assert meet.state() == before


@pytest.mark.parametrize("number", ["99", "0"])
@pytest.mark.parametrize(
    "path",
    [path for path in (*PAGES, *FILES, *STREAMS) if path != "/"]
    + [path + query for path, query in ASKED.items() if query],
)
def test_number_of_nothing_is_told_in_a_sentence(client: TestClient, path: str, number: str) -> None:
    room = path.split("/")[1]
    answer = client.get(path.replace(f"/{room}/1", f"/{room}/{number}", 1))
    assert answer.status_code == 404
    said = " ".join(read(answer.text).texts("strong"))
    what = "meet" if room == "meets" else "platform"
    assert said == f"There is no such {what} here. It may have been taken away; go back and choose again."


@pytest.mark.parametrize(
    "path",
    [
        "/nowhere",
        "/platforms/one/table",
        "/meets/one",
        "/platforms/1/cards/a/b/c",
        "/platforms/99999999999999999999/table",
        "/meets/99999999999999999999/roster",
        "/platforms/1/table?flight=first",
    ],
)
def test_address_of_nothing_is_told_in_a_sentence(client: TestClient, path: str) -> None:
    answer = client.get(path)
    assert answer.status_code == 404
    assert " ".join(read(answer.text).texts("strong")) == NO_PAGE


@pytest.mark.parametrize("path", ["99/1/1", "1/99/1", "1/4/1", "3/1/1", "1/1/0", "1/1/4", "1/1/99"])
def test_card_that_is_not_of_this_platform_is_not_another_card(client: TestClient, path: str) -> None:
    """A card of a wrong address once showed the flight that was lifting, under the wrong name."""
    answer = client.get(f"/platforms/1/cards/{path}")
    assert answer.status_code == 404
    assert read(answer.text).texts("strong") == [
        "There is no such card here. It may have been taken away; go back and choose again."
    ]


def test_refusal_is_a_page_for_a_person_and_a_fragment_for_htmx(client: TestClient) -> None:
    page = read(client.get("/meets/99").text)
    assert len(page.all("html")) == (0 if swaps(client) else 1)
    assert page.one("div", "error").attrs["role"] == "alert"


@pytest.mark.parametrize("path", [path for path in POSTS if path not in ("/official", "/meets")])
@pytest.mark.parametrize(
    "headers",
    [
        {"Sec-Fetch-Site": "cross-site"},
        {"Origin": "http://elsewhere.example"},
        {"Origin": "http://testserver:81"},
        {"Origin": "null"},
    ],
    ids=["says so", "other host", "other port", "hidden"],
)
def test_post_from_another_sites_page_is_refused(
    visitor: TestClient, meet: Meet, path: str, headers: dict[str, str]
) -> None:
    """Over plain http on a hall's network a browser sends Origin, but no Sec-Fetch-Site."""
    before, journal = meet.state(), meet.journal()
    answer = visitor.post(path, headers=headers, data={"tell": "hold"})
    assert answer.status_code == 403
    assert "Posted from another site's page: refused." in answer.text.replace("&#39;", "'")
    assert {name: answer.headers.get(name) for name in SECURITY_HEADERS} == SECURITY_HEADERS
    assert (meet.state(), meet.journal()) == (before, journal)


def test_post_from_our_own_page_is_taken(visitor: TestClient, meet: Meet) -> None:
    own = {"Origin": "http://testserver", "Sec-Fetch-Site": "same-origin"}
    answer = visitor.post("/platforms/1/table-bar", headers=own, data={"tell": "hold"})
    assert answer.status_code == 303
    assert meet.platform()["condition"] == "hold"


@pytest.mark.parametrize(
    ("path", "data", "missing"),
    [
        ("/platforms/1/weight", {}, "attempt, version"),
        ("/platforms/1/weight", {"attempt": "x", "version": "0"}, "attempt"),
        ("/platforms/1/result", {"attempt": "1", "version": "0"}, "result"),
        ("/platforms/1/result", {"attempt": "1", "version": "0", "result": "splendid"}, "result"),
        ("/platforms/1/undo", {"entry": "last"}, "entry"),
        ("/platforms/1/flight", {"flight": "1"}, "lift"),
        ("/platforms/1/table-bar", {}, "tell"),
        ("/platforms/1/loaded", {}, "shown"),
        ("/platforms/1/bar", {"bar": "before"}, "shown"),
    ],
)
def test_form_with_a_field_missing_names_the_field_and_enters_nothing(
    client: TestClient, meet: Meet, path: str, data: dict[str, str], missing: str
) -> None:
    before, journal = meet.state(), meet.journal()
    answer = client.post(path, data=data)
    assert answer.status_code == 422
    page = read(answer.text)
    assert page.texts("strong") == [f"The form was not complete: {missing}."]
    assert "Load the page again and enter it once more." in page.text
    assert (meet.state(), meet.journal()) == (before, journal)


@pytest.mark.parametrize(
    "path", [path for path in POSTS if path not in ("/official", "/meets", "/api/plan", *MEET_FILES)]
)
def test_action_on_what_is_not_there_is_told_in_a_sentence(client: TestClient, meet: Meet, path: str) -> None:
    before = meet.state()
    data = {"attempt": "1", "version": "0", "weight": "100", "result": "good", "flight": "1", "lift": "1"}
    data |= {"tell": "hold", "shown": "none", "bar": "empty", "name": "Third", "preset": "bar-kg"}
    data |= {
        "kind": "bar",
        "end": "25",
        "choice": "0",
        "do": "withdraw",
        "lifter": "1",
        "take": "yes",
        "ready": "dip",
    }
    data |= {
        "extra_plates": "1",
        "aim": "total",
        "measure": "mass",
        "session": "1",
        "by": "opener",
        "starts": "",
    }
    data |= {"number": "1", "way": "opener", "seen": "x", "to": "1"}
    answer = client.post(path.replace("/1", "/99", 1), data=data)
    assert answer.status_code == 404
    assert " ".join(read(answer.text).texts("strong")).startswith("There is no such ")
    assert meet.state() == before


def test_attempt_of_nothing_is_told_in_a_sentence(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    for attempt in ("9999", "99999999999999999999"):
        answer = client.post(
            "/platforms/1/result", data={"attempt": attempt, "version": "0", "result": "good"}
        )
        assert answer.status_code == 404
        assert read(answer.text).one("div", "error").text.startswith("There is no such ")
    assert meet.state() == before


def test_fault_inside_is_told_in_a_sentence_with_the_headers_and_nothing_of_the_fault(meet: Meet) -> None:
    """A table is taken away under the running program: a real fault, not a pretended one."""
    with app_over(meet, faults=True) as client:
        client.get("/")
        with closing(sqlite3.connect(meet.file)) as connection:
            connection.execute("ALTER TABLE platform RENAME TO elsewhere")
        for path, shape in (("/meets/1", "html"), ("/platforms/1/crew", "html")):
            answer = client.get(path)
            assert answer.status_code == 500
            assert read(answer.text).one("div", "error").text == (
                "Something went wrong inside Platewright; nothing was entered. Go back and try once more."
            )
            assert "Traceback" not in answer.text
            assert len(read(answer.text).all(shape)) == 1
            assert {name: answer.headers.get(name) for name in SECURITY_HEADERS} == SECURITY_HEADERS


HOSTILE = '<script>alert("x")</script>&<b>'


@pytest.fixture
def hostile(fresh: Meet) -> Meet:
    """A meet in which everything that can be named is named with HTML."""
    with app_over(fresh) as client:
        client.post("/meets", data={"name": HOSTILE, "unit": "kg"})
        client.post("/meets/1/platforms", data={"name": HOSTILE, "preset": "bar-kg"})
        roster = f"name;lot;flight;Squat opener;Squat rack\n{HOSTILE};1;{HOSTILE};100;{HOSTILE}\nB;2;{HOSTILE};120;\n"
        roster = roster.replace('"', "'")
        assert client.post("/meets/1/roster", data={"text": roster}).status_code == 200
        client.post("/official", data={"name": HOSTILE, "back": "/"})
        send(client, get(client, "/platforms/1/equipment"), "/tools", name=[HOSTILE, ""])
        send(client, get(client, "/platforms/1/table"), "/flight")
    return fresh


def test_names_are_shown_as_text_and_never_become_html(hostile: Meet) -> None:
    with app_over(hostile) as client:
        client.post("/official", data={"name": HOSTILE, "back": "/"})
        for path in (*PAGES, "/platforms/1/cards/1/1/1"):
            text = client.get(path).text
            assert "alert(" in text, path
            assert "<script>alert" not in text, path
            assert "&<b>" not in text, path
            assert not [one for one in read(text).all("script") if "src" not in one.attrs], path

"""The roster over HTTP: all of it or nothing, every wrong line by its number, and out again as it came in."""

from __future__ import annotations

import csv
import io

import pytest
from starlette.testclient import TestClient

from tests.web.asking import get, refusal, send
from tests.web.pages import Element, read
from tests.web.ready import Meet, changed

HEAD = "name,lot,flight,body weight,Squat opener,Squat rack\n"
NEW = HEAD + "Wilma Orr,31,Flight B,70.5,102.5,11 in\nYann Kube,32,Flight Z,,,\n"


def paste(client: TestClient, text: str) -> Element:
    """The page after a roster that is taken."""
    answer = send(client, get(client, "/meets/1/roster"), "/roster", text=text)
    assert answer.status_code == 200, refusal(answer, answer.status_code)
    return read(answer.text)


def test_pasted_lifters_are_taken_in_and_nobody_else_is_touched(client: TestClient, meet: Meet) -> None:
    before = meet.state()
    page = paste(client, NEW.replace("Flight Z,,", "Flight B,,"))
    assert page.one("div", "notice").text == "2 lifters added, 0 updated."
    after = meet.state()
    assert {name.split()[0] for name in changed(before, after)} == {"lifter", "attempt", "rack"}
    assert all(before[table][key] == after[table][key] for table in before for key in before[table])
    assert meet.row("SELECT name, body_weight FROM lifter WHERE lot = 31") == {
        "name": "Wilma Orr",
        "body_weight": "70.5",
    }
    assert meet.attempt(31, "Squat", 1)["weight"] == "102.5"
    assert meet.journal()[-1]["what"] == "roster: 2 lifters added, 0 updated"


def test_uploaded_file_is_taken_in_like_a_pasted_one(client: TestClient, meet: Meet) -> None:
    answer = client.post(
        "/meets/1/roster", files={"file": ("r.csv", (HEAD + "Wilma Orr,31,Flight B,70.5,102.5,").encode())}
    )
    assert read(answer.text).one("div", "notice").text == "1 lifters added, 0 updated."
    assert meet.attempt(31, "Squat", 1)["weight"] == "102.5"


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
def test_file_is_read_in_whatever_way_a_spreadsheet_wrote_it(
    visitor: TestClient, meet: Meet, encoding: str
) -> None:
    text = "name;lot;flight;Squat opener\r\nZoë Müller;31;Flight B;102,5\r\n"
    answer = visitor.post("/meets/1/roster", files={"file": ("r.csv", text.encode(encoding))})
    assert answer.status_code == 200
    assert meet.row("SELECT name FROM lifter WHERE lot = 31") == {"name": "Zoë Müller"}
    assert meet.attempt(31, "Squat", 1)["weight"] == "102.5"


def test_roster_that_went_out_comes_in_again_without_changing_anything(
    client: TestClient, meet: Meet
) -> None:
    file = client.get("/meets/1/roster.csv")
    assert file.headers["content-type"] == "text/csv; charset=utf-8"
    assert file.headers["content-disposition"] == 'attachment; filename="roster.csv"'
    before = meet.state()
    answer = client.post("/meets/1/roster", files={"file": ("roster.csv", file.content)})
    assert answer.status_code == 200
    assert read(answer.text).one("div", "notice").text == "0 lifters added, 26 updated."
    assert meet.state() == before
    assert client.get("/meets/1/roster.csv").content == file.content


def test_roster_goes_from_one_meet_to_another_whole(client: TestClient, meet: Meet) -> None:
    file = client.get("/meets/1/roster.csv").text
    client.post("/meets", data={"name": "Next year", "unit": "kg"})
    client.post("/meets/2/platforms", data={"name": "Main hall", "preset": "bar-kg"})
    client.post("/meets/2/platforms", data={"name": "Quay stage", "preset": "belt-kg"})
    answer = client.post("/meets/2/roster", data={"text": file})
    assert read(answer.text).one("div", "notice").text == "26 lifters added, 0 updated."
    assert client.get("/meets/2/roster.csv").text == file
    assert len(meet.rows("SELECT * FROM lifter WHERE meet_id = 1")) == 26


def test_page_shows_what_the_file_holds(visitor: TestClient) -> None:
    rows = list(csv.DictReader(io.StringIO(visitor.get("/meets/1/roster.csv").text)))
    table = get(visitor, "/meets/1/roster").one("table", "list")
    shown = [[cell.text for cell in row.all("td")] for row in table.one("tbody").all("tr")]
    assert len(shown) == len(rows) == 26
    columns = ["flight", "lot", "name", *list(rows[0])[4:]]  # the platform is only in the file
    assert shown == [[row[name] for name in columns] for row in rows]


def test_every_wrong_line_is_named_and_nothing_is_half_taken(client: TestClient, meet: Meet) -> None:
    before, journal = meet.state(), meet.journal()
    text = (
        HEAD + "Wilma Orr,31,Flight B,70.5,102.5,\n\nYann Kube,x,Flight B,,,\n,33,Flight B,,101,\n"
        "Mara Lindvik,11,Flight A,,,\nNew Name,31,Flight B,heavy,10,\n"
    )
    answer = send(client, get(client, "/meets/1/roster"), "/roster", text=text)
    assert refusal(answer, 422) == "Nothing was imported: 3 lines are wrong. Correct and send again."
    page = read(answer.text)
    table = page.one("table", aria_label="Wrong lines")
    assert [[cell.text for cell in row.all("td")] for row in table.one("tbody").all("tr")] == [
        ["4", "lot “x” is not a whole number from 1 to 99999."],
        ["5", "name is empty."],
        ["5", "Squat opener: 101 kg is not a multiple of 2.5. Nearest: 100 or 102.5."],
        ["7", "body weight: “heavy” is not a weight. Type a number such as 142.5."],
        ["7", "Squat opener: 10 kg is lighter than the bar with its collars, 25 kg. Next possible: 25."],
    ]
    assert page.one("textarea").text == " ".join(text.split())
    assert (meet.state(), meet.journal()) == (before, journal)


@pytest.mark.parametrize(
    ("text", "line", "because"),
    [
        ("", "1", "The roster is empty. The first line names the columns."),
        (HEAD, "2", "There is no lifter below the column names."),
        ("name,flight\nWilma,Flight A\n", "1", "column “lot” is missing."),
        (
            HEAD + "Mara Lindqvist,4,Flight A,,,\n",
            "2",
            "lot 4 is already Mara Lindvik. Take a free lot number",
        ),
        (HEAD + "Mara Lindvik,4,Flight A,,90,\n", "2", "Squat opener: Mara Lindvik has lifted already"),
        ("name,lot,flight\nYann Kube,32,Flight Z\n", "2", "it is not clear where flight “Flight Z” lifts"),
    ],
)
def test_roster_that_cannot_be_taken_says_why(
    client: TestClient, meet: Meet, text: str, line: str, because: str
) -> None:
    before = meet.state()
    answer = send(client, get(client, "/meets/1/roster"), "/roster", text=text)
    assert answer.status_code == 422
    wrong = read(answer.text).one("table", aria_label="Wrong lines")
    cells = [cell.text for cell in wrong.one("tbody").one("tr").all("td")]
    assert cells[0] == line
    assert cells[1].startswith(because)
    assert meet.state() == before


def test_wrong_file_stands_in_the_box_to_be_corrected(visitor: TestClient) -> None:
    text = HEAD + "Wilma Orr,31,Flight B,,101,\n"
    answer = visitor.post("/meets/1/roster", files={"file": ("r.csv", text.encode())})
    assert answer.status_code == 422
    assert read(answer.text).one("textarea").text == " ".join(text.split())


def test_file_of_exactly_1_mb_is_read_and_one_byte_more_is_refused(client: TestClient, meet: Meet) -> None:
    text = HEAD + "Wilma Orr,31,Flight B,70.5,102.5,"
    data = text.encode() + b"\n" * (1_000_000 - len(text))
    assert client.post("/meets/1/roster", files={"file": ("r.csv", data)}).status_code == 200
    before = meet.state()
    answer = client.post("/meets/1/roster", files={"file": ("r.csv", data + b"\n")})
    assert (
        refusal(answer, 422)
        == "The file is larger than 1 MB. A roster is a small text file; is this the right one?"
    )
    assert meet.state() == before


@pytest.mark.parametrize(
    "data",
    [
        b"\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR\x81",
        b"PK\x03\x04\x14\x00\x06\x00\x08\x00\x00\x00!\x00",
        b"name,lot\x00,flight\n",
        b"\xff\xfe\x00",
    ],
    ids=["picture", "workbook", "zeros", "half a character"],
)
def test_file_that_is_no_text_is_refused(client: TestClient, meet: Meet, data: bytes) -> None:
    before = meet.state()
    answer = client.post("/meets/1/roster", files={"file": ("r.xlsx", data)}, data={"text": "kept as typed"})
    assert refusal(answer, 422) == "The file is not text. Save it as CSV (UTF-8) and choose it again."
    assert read(answer.text).one("textarea").text == "kept as typed"
    assert meet.state() == before


def test_no_file_chosen_and_something_pasted_takes_what_was_pasted(visitor: TestClient, meet: Meet) -> None:
    """A browser sends an empty file when none was chosen."""
    answer = visitor.post(
        "/meets/1/roster", files={"file": ("", b"")}, data={"text": NEW.replace("Flight Z", "Flight B")}
    )
    assert read(answer.text).one("div", "notice").text == "2 lifters added, 0 updated."


def test_new_roster_reaches_every_platforms_page(visitor: TestClient, meet: Meet) -> None:
    revisions = [meet.platform(number)["revision"] for number in (1, 2)]
    paste(visitor, HEAD + "Wilma Orr,31,Flight A,,102.5,\n")
    assert [meet.platform(number)["revision"] for number in (1, 2)] == [one + 1 for one in revisions]
    assert "Wilma Orr" in get(visitor, "/platforms/1/table").text

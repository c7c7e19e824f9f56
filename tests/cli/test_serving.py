"""``platewright demo`` and ``platewright serve`` as a person starts them, and as a power cut ends them."""

from __future__ import annotations

import re
import socket
import sqlite3
from contextlib import closing
from pathlib import Path

import httpx2
import pytest

from tests.serving import free_port, platewright, platewright_here, served
from tests.web.pages import form, read
from tests.web.ready import Meet

ADDRESS = re.compile(r"^ *(\w+) +(http://127\.0\.0\.1:\d+/\S*)$", re.MULTILINE)


def addresses(said: str) -> list[tuple[str, str]]:
    """The pages that a start names, with their addresses."""
    return [(name, url) for name, url in ADDRESS.findall(said)]


def test_demo_names_the_address_of_every_page_and_each_answers(tmp_path: Path) -> None:
    with served("demo", tmp_path / "demo") as running:
        named = addresses(running.said)
        assert {"Start", "Roster", "Table", "Crew", "Cards", "Equipment"} <= {name for name, _ in named}
        assert len([name for name, _ in named if name == "Table"]) == 2
        for name, url in named:
            answer = httpx2.get(url)
            assert answer.status_code == 200, (name, url)
            assert read(answer.text).one("title").text
        assert f"Platewright keeps its meet in {tmp_path / 'demo'}" in running.said
        assert "Harbour Hall Open" in httpx2.get(named[0][1]).text


def test_serve_starts_with_an_empty_folder_and_makes_it(tmp_path: Path) -> None:
    folder = tmp_path / "new" / "meet data"
    with served("serve", folder) as running:
        assert [name for name, _ in addresses(running.said)] == ["Start"]
        assert "No meet yet" in httpx2.get(running.url).text
    assert (folder / "meet.db").is_file()


def test_second_start_keeps_the_meet(ready: Meet) -> None:
    before, journal = ready.state(), ready.journal()
    with served("demo", ready.file.parent) as running:
        assert "Tamsin Okoro" in httpx2.get(f"{running.url}/platforms/1/crew").text
    assert (ready.state(), ready.journal()) == (before, journal)


def test_entry_that_was_acknowledged_survives_kill_9(ready: Meet) -> None:
    """The answer arrives, the process is gone at once, and the next start shows the entry; twice."""
    for weight in ("115", "117.5"):
        with served("serve", ready.file.parent) as running:
            page = read(httpx2.get(f"{running.url}/platforms/1/table").text)
            attempt = ready.attempt(2, "Squat", 3)
            chosen = form(page, "/weight", attempt=str(attempt["id"]))
            answer = httpx2.post(
                running.url + chosen.action,
                data=chosen.fields | {"weight": [weight], "reason": ["typed wrong"]},
            )
            running.kill()
        assert answer.status_code == 303
        assert ready.attempt(2, "Squat", 3)["weight"] == weight
    assert ready.journal()[-1]["what"].startswith("Tamsin Okoro: Squat, 3rd declared at 117.5 (was 115)")
    with closing(sqlite3.connect(ready.file)) as connection:
        assert connection.execute("PRAGMA integrity_check").fetchall() == [("ok",)]
    with served("serve", ready.file.parent) as running:
        page = read(httpx2.get(f"{running.url}/platforms/1/table").text)
    assert page.one("input", id=f"weight-{attempt['id']}").attrs["value"] == "117.5"


def test_stream_tells_an_entry_and_does_not_keep_a_stopped_server_alive(ready: Meet) -> None:
    with (
        served("serve", ready.file.parent) as running,
        httpx2.stream("GET", f"{running.url}/platforms/1/events", timeout=30) as stream,
    ):
        assert stream.headers["content-type"].startswith("text/event-stream")
        lines = (line for line in stream.iter_lines() if line.startswith(("event: revision", "data: ")))
        assert next(lines) == "event: revision"
        revision = int(next(lines).removeprefix("data: "))
        httpx2.post(f"{running.url}/platforms/1/table-bar", data={"tell": "hold"})
        assert any(line == f"data: {revision + 1}" for line in lines)
        running.process.terminate()
        running.process.wait(30)
        assert "Traceback" not in running.said


def test_port_that_is_taken_is_a_sentence_and_status_2(tmp_path: Path) -> None:
    with socket.socket() as taken:
        taken.bind(("127.0.0.1", 0))
        taken.listen()
        port = taken.getsockname()[1]
        done = platewright("serve", "--port", str(port), "--data", str(tmp_path / "data"))
    assert (done.status, done.out) == (2, "")
    assert done.err == (
        f"Port {port} is taken: another program, perhaps another Platewright, listens there. "
        f"Stop it, or choose another port: --port {port + 1}.\n"
    )
    assert not (tmp_path / "data").exists()


@pytest.mark.parametrize("port", ["0", "65536", "-1"])
def test_port_that_is_none_is_a_sentence_and_status_2(tmp_path: Path, port: str) -> None:
    done = platewright_here("serve", "--port", port, "--data", str(tmp_path / "data"))
    assert (done.status, done.out) == (2, "")
    assert done.err == f"{port} is not a port. Choose one from 1024 to 65535 with --port.\n"


def test_host_that_is_not_this_machine_is_a_sentence_and_status_2(tmp_path: Path) -> None:
    port = free_port()
    done = platewright_here(
        "serve", "--host", "192.0.2.1", "--port", str(port), "--data", str(tmp_path / "data")
    )
    assert (done.status, done.out) == (2, "")
    assert done.err.startswith(f"Cannot listen on 192.0.2.1, port {port}: ")


@pytest.mark.parametrize("trouble", ["a file", "under a file", "no database", "a folder as database"])
def test_folder_that_cannot_be_used_is_a_sentence_and_status_2(tmp_path: Path, trouble: str) -> None:
    folder = tmp_path / "data"
    if trouble in ("a file", "under a file"):
        folder.write_text("not a folder")
        folder = folder / "deeper" if trouble == "under a file" else folder
    elif trouble == "no database":
        folder.mkdir()
        (folder / "meet.db").write_bytes(b"this is no database at all" * 100)
    else:
        (folder / "meet.db").mkdir(parents=True)
    done = platewright_here("serve", "--port", str(free_port()), "--data", str(folder))
    assert (done.status, done.out) == (2, "")
    assert done.err.startswith(f"The data folder {folder} cannot be used: ")
    assert done.err.rstrip().endswith("Choose another with --data FOLDER.")
    assert "Traceback" not in done.err
    assert len(done.err.splitlines()) == 1


def test_meet_of_a_newer_version_is_not_touched(tmp_path: Path) -> None:
    """Its tables are of a revision that this version does not know."""
    folder = tmp_path / "data"
    folder.mkdir()
    with closing(sqlite3.connect(folder / "meet.db")) as connection:
        connection.execute("CREATE TABLE alembic_version (version_num VARCHAR(32) NOT NULL)")
        connection.execute("INSERT INTO alembic_version VALUES ('fedcba987654')")
        connection.commit()
        before = list(connection.iterdump())
        done = platewright_here("serve", "--port", str(free_port()), "--data", str(folder))
        assert done.status == 2
        assert done.err.startswith(
            f"The data folder {folder} cannot be used: its meet was made by another version of Platewright."
        )
        assert list(connection.iterdump()) == before

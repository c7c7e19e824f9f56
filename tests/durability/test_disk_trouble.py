"""A disk that is full, read-only or damaged, a clock that is wrong: said plainly, and nothing kept is lost."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest
from sqlalchemy import Engine, event
from starlette.testclient import TestClient

from app.desk.check_data import check_file
from app.desk.errors import NotKept
from app.desk.undo import undo
from app.store.backup import make_copy
from app.web.main import create_app
from tests.cast import BO, WANDA, Clock, Hall, open_desk
from tests.desk.checks import rows
from tests.durability.disks import disk, fill, make_read_only
from tests.durability.entering import enter
from tests.serving import free_port, platewright_here
from tests.web.asking import HTMX
from tests.web.pages import form, read

AT = datetime(2026, 3, 7, 9, 42, tzinfo=UTC)
FULL = (
    "Not entered: the disk on which the meet is kept is full. What was entered before is safe. "
    "Make room on it (empty the wastebasket, move films and pictures away), then enter it again."
)
READ_ONLY = (
    "Not entered: the disk on which the meet is kept cannot be written to. What was entered before is safe. "
    "Make it writable again, or restore the newest copy on another disk, then enter it again."
)


@contextmanager
def every_connection(engine: Engine, pragma: str) -> Iterator[None]:
    """Each connection of the engine is opened with this setting, for as long as the block lasts."""

    def set_pragma(dbapi, _record) -> None:
        dbapi.execute(f"PRAGMA {pragma}")

    event.listen(engine, "connect", set_pragma)
    engine.dispose()
    yield
    event.remove(engine, "connect", set_pragma)
    engine.dispose()


def full(engine: Engine) -> str:
    """The setting by which a database may not grow any more: SQLite says then what it says of a full disk.

    https://www.sqlite.org/pragma.html#pragma_max_page_count
    """
    with engine.connect() as connection:
        pages = connection.exec_driver_sql("PRAGMA page_count").scalar_one()
    return f"max_page_count={pages}"


def enter_until_refused(hall: Hall) -> tuple[int, str]:
    """Entries in turn until one is refused: how many were acknowledged, and the refusal."""
    for step in range(1000):
        try:
            enter(hall, str(115 + 2.5 * (step % 20)))
        except NotKept as refused:
            return step, str(refused)
    raise AssertionError("the disk never was full")


def test_a_full_disk_refuses_the_entry_whole_and_takes_it_when_there_is_room_again(hall: Hall) -> None:
    before = len(hall.journal())
    with every_connection(hall.desk.engine, full(hall.desk.engine)):
        acknowledged, sentence = enter_until_refused(hall)
        assert sentence == FULL
        assert len(hall.journal()) == before + acknowledged
        kept = rows(hall.desk.engine)
        with pytest.raises(NotKept):
            enter(hall, "200")
        assert rows(hall.desk.engine) == kept
    enter(hall, "200")
    assert len(hall.journal()) == before + acknowledged + 1
    assert check_file(Path(hall.desk.engine.url.database or "")).wrong == []


def test_a_real_disk_that_runs_full_loses_nothing_that_was_acknowledged(
    ready_file: Path, tmp_path: Path
) -> None:
    with disk(tmp_path / "disk") as place:
        hall = Hall(open_desk(Path(shutil.copy(ready_file, place / "meet.db"))))
        enter(hall, "112.5")
        before = len(hall.journal())
        films = fill(place, leave=60_000)
        acknowledged, sentence = enter_until_refused(hall)
        assert sentence == FULL
        assert len(hall.journal()) == before + acknowledged
        hall.desk.engine.dispose()  # the server is stopped and started again, the disk still full
        again = Hall(open_desk(place / "meet.db"))
        assert len(again.journal()) == before + acknowledged
        assert check_file(place / "meet.db").wrong == []
        films.unlink()
        enter(again, "200")
        assert len(again.journal()) == before + acknowledged + 1
        again.desk.engine.dispose()


def test_a_disk_that_has_become_read_only_refuses_the_entry_and_still_shows_the_meet(hall: Hall) -> None:
    """SQLite's ``query_only`` answers a write just as a file that cannot be written to does."""
    kept = rows(hall.desk.engine)
    with every_connection(hall.desk.engine, "query_only=ON"):
        with pytest.raises(NotKept) as refused:
            enter(hall, "120")
        assert str(refused.value) == READ_ONLY
        assert rows(hall.desk.engine) == kept
        assert hall.board().up is not None
    enter(hall, "120")


@pytest.mark.parametrize("headers", [{}, HTMX], ids=["plain", "htmx"])
@pytest.mark.parametrize(("trouble", "sentence"), [("full", FULL), ("query_only=ON", READ_ONLY)])
def test_the_table_answers_503_with_the_sentence_and_keeps_what_was_typed(
    ready_file: Path, tmp_path: Path, headers: dict[str, str], trouble: str, sentence: str
) -> None:
    file = Path(shutil.copy(ready_file, tmp_path / "meet.db"))
    number = str(attempt_of_bo(file))
    with TestClient(
        create_app(f"sqlite:///{file}"),
        headers=headers,
        follow_redirects=False,
        raise_server_exceptions=False,
    ) as client:
        engine = client.app.state.desk.engine  # type: ignore[attr-defined]
        with every_connection(engine, full(engine) if trouble == "full" else trouble):
            for step in range(200):
                typed = f"{115 + 2.5 * step:g}"
                page = read(client.get("/platforms/1/table").text)
                chosen = form(page, "/weight", attempt=number)
                answer = client.post(
                    chosen.action, data=chosen.fields | {"weight": [typed], "reason": ["to and fro"]}
                )
                if answer.status_code not in (200, 303):
                    break
        assert answer.status_code == 503
        shown = read(answer.text)
        assert sentence in shown.text
        assert shown.one("input", id=f"weight-{number}").attrs["value"] == typed
        again = client.post(chosen.action, data=chosen.fields | {"weight": [typed], "reason": ["to and fro"]})
        assert again.status_code in (200, 303)
        page = read(client.get("/platforms/1/table").text)
        assert page.one("input", id=f"weight-{number}").attrs["value"] == typed


def attempt_of_bo(file: Path) -> int:
    hall = Hall(open_desk(file))
    number = hall.attempt(BO, 2).id
    hall.desk.engine.dispose()
    return number


def test_a_page_over_a_file_that_can_no_longer_be_read_answers_503_and_says_what_to_do(
    ready_file: Path, tmp_path: Path
) -> None:
    file = Path(shutil.copy(ready_file, tmp_path / "meet.db"))
    with TestClient(create_app(f"sqlite:///{file}"), raise_server_exceptions=False) as client:
        garble(file)
        client.app.state.desk.engine.dispose()  # type: ignore[attr-defined]
        answer = client.get("/platforms/1/table")
    assert answer.status_code == 503
    assert (
        "The meet cannot be read: the file or its disk is damaged. Nothing was entered."
        in read(answer.text).text
    )
    assert "Traceback" not in answer.text


def garble(file: Path) -> None:
    """All pages but the first become nonsense, as from a dying disk."""
    data = file.read_bytes()
    file.write_bytes(data[:4096] + bytes((7 * place) % 251 for place in range(len(data) - 4096)))


def serve(folder: Path) -> str:
    """Start a server on a folder that cannot be served; what it says."""
    done = platewright_here("serve", "--port", str(free_port()), "--data", str(folder))
    assert (done.status, done.out) == (2, "")
    assert len(done.err.splitlines()) == 1
    return done.err


@pytest.mark.parametrize("how", ["pages", "beginning", "cut off", "emptied"])
def test_a_damaged_meet_is_not_served_is_left_as_it_is_and_the_copy_to_restore_is_named(
    ready_file: Path, tmp_path: Path, how: str
) -> None:
    file = Path(shutil.copy(ready_file, tmp_path / "meet.db"))
    stick = tmp_path / "backups"
    stick.mkdir()
    desk = open_desk(file)
    copy = make_copy(desk.engine, stick, AT, keep=9)
    desk.engine.dispose()
    assert copy is not None
    data = file.read_bytes()
    if how == "pages":
        garble(file)
    else:
        file.write_bytes(
            {"beginning": b"\0" * 4096 + data[4096:], "cut off": data[:50_000], "emptied": b""}[how]
        )
    damaged = file.read_bytes()
    said = serve(tmp_path)
    assert said.startswith(f"The data folder {tmp_path} cannot be used: meet.db is damaged (")
    assert f"“platewright restore COPY --data FOLDER”: the newest copy is {copy.file}." in said
    assert file.read_bytes() == damaged
    assert platewright_here("restore", str(copy.file), "--data", str(tmp_path)).status == 0
    (aside,) = tmp_path.glob("meet-set-aside-*.db")
    assert aside.read_bytes() == damaged
    assert platewright_here("check", "--data", str(tmp_path)).status == 0


def test_a_read_only_folder_is_said_at_start(ready_file: Path, tmp_path: Path) -> None:
    with disk(tmp_path / "disk") as place:
        shutil.copy(ready_file, place / "meet.db")
        make_read_only(place)
        assert serve(place) == (
            f"The data folder {place} cannot be used: it cannot be written to. Choose another with --data FOLDER.\n"
        )
        # Looking is allowed.
        assert platewright_here("check", "--data", str(place)).status == 0


def test_a_full_disk_is_said_at_start(tmp_path: Path) -> None:
    with disk(tmp_path / "disk") as place:
        (place / "data").mkdir()
        fill(place)
        assert serve(place / "data") == (
            f"The data folder {place / 'data'} cannot be used: it is full. Choose another with --data FOLDER.\n"
        )


def test_when_the_clock_jumps_back_a_day_the_entries_stay_in_their_order(hall: Hall) -> None:
    """The order is the journal's number; the time stands beside it as the clock said it."""
    clock = hall.desk.clock
    assert isinstance(clock, Clock)
    enter(hall, "120")
    clock.now -= timedelta(days=1)
    enter(hall, "122.5")
    hall.declare(BO, 2, "125", reason="to and fro")
    *_, first, second, third = hall.journal()
    assert [one.what.split(" (")[0].split("; ")[0] for one in (first, second, third)] == [
        f"Bo Carver: Squat, 2nd declared at {weight}" for weight in ("120", "122.5", "125")
    ]
    assert second.at < first.at
    assert first.revision is not None
    assert [second.revision, third.revision] == [first.revision + 1, first.revision + 2]
    undo(hall.desk, 1, None, who=WANDA)
    assert hall.attempt(BO, 2).weight == 122.5
    assert check_file(Path(hall.desk.engine.url.database or "")).wrong == []

"""The keeper of copies: after each round and every few minutes, and never in the meet's way."""

from __future__ import annotations

import logging
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path

import pytest
from starlette.testclient import TestClient

from app.desk.keeper import AGAIN_S, CopyPlan, Keeper
from app.meet.model import Result
from app.store.backup import copies
from app.web.main import create_app
from tests.cast import ADA, BO, CLEO, Hall, open_desk
from tests.durability.disks import disk, fill, make_read_only
from tests.durability.entering import enter
from tests.web.pages import read

MINUTES = 3.0


@dataclass
class Watched:
    """A keeper whose looks and whose time are the test's own."""

    hall: Hall
    folder: Path
    seconds: float = 0
    keeper: Keeper = field(init=False)

    def __post_init__(self) -> None:
        plan = CopyPlan(self.folder, keep=48, minutes=MINUTES)
        self.keeper = Keeper(self.hall.desk.engine, plan, self.hall.desk.clock, lambda: self.seconds)

    def after(self, seconds: float) -> int:
        """Time passes and the keeper looks; how many copies there are then."""
        self.seconds += seconds
        self.keeper.look()
        return len(copies(self.folder)) if self.folder.is_dir() else 0


@pytest.fixture
def watched(hall: Hall, tmp_path: Path) -> Watched:
    """The ready meet, its copies going to a stick."""
    (tmp_path / "stick").mkdir()
    return Watched(hall, tmp_path / "stick")


def test_copies_are_made_at_start_and_then_every_few_minutes_while_something_changes(
    watched: Watched,
) -> None:
    assert watched.after(0) == 1
    assert watched.after(1000) == 1  # nothing was entered
    enter(watched.hall, "120")
    assert watched.after(2) == 2  # it had been long
    enter(watched.hall, "122.5")
    assert watched.after(MINUTES * 60 - 1) == 2
    assert watched.after(1) == 3
    assert watched.keeper.standing.last == copies(watched.folder)[-1]
    assert watched.keeper.standing.kept == 3


def test_the_end_of_a_round_and_another_flight_are_copied_at_once(watched: Watched) -> None:
    hall = watched.hall
    watched.after(0)
    hall.lift(ADA, 1, following="105")
    hall.lift(BO, 1, following="115")
    assert watched.after(1) == 1
    hall.lift(CLEO, 1, Result.MISSED, following="110")
    assert watched.after(1) == 2
    assert copies(watched.folder)[-1].entry == hall.journal()[-1].id
    hall.bring("Flight B", "Squat")
    assert watched.after(1) == 3


def test_a_rising_bar_has_no_rounds_so_only_the_minutes_count(watched: Watched) -> None:
    hall = watched.hall
    hall.rules("rising-bar")
    hall.bring("Flight B", "Squat")
    hall.bring("Flight A", "Squat")
    watched.after(0)
    hall.lift(ADA, 1, following="105")
    assert watched.after(1) == 1
    assert watched.after(MINUTES * 60) == 2


def test_a_stick_that_is_pulled_out_is_said_once_never_stops_the_meet_and_is_taken_up_again(
    watched: Watched, caplog: pytest.LogCaptureFixture, monkeypatch: pytest.MonkeyPatch
) -> None:
    # The import linter, run in this process by the house's tests, silences every logger that is there.
    monkeypatch.setattr(logging.getLogger("platewright.copies"), "disabled", False)
    watched.after(0)
    away = watched.folder.rename(watched.folder.with_name("pocket"))
    with caplog.at_level(logging.INFO, "platewright.copies"):
        for weight in ("120", "122.5", "125"):
            enter(watched.hall, weight)
            watched.after(MINUTES * 60)
            assert watched.keeper.standing.trouble == "is gone"
        assert not watched.folder.exists()  # nothing was made in its place, on another disk
        away.rename(watched.folder)
        assert watched.after(AGAIN_S - 1) == 1
        assert watched.after(1) == 2
    assert watched.keeper.standing.trouble == ""
    assert [record.getMessage() for record in caplog.records] == [
        f"No copy could be made: {watched.folder} is gone. The meet goes on; it is tried again every 30 s.",
        f"Copies are made again in {watched.folder}.",
    ]


def test_a_full_stick_is_said_keeps_the_copies_it_has_and_is_tried_again(hall: Hall, tmp_path: Path) -> None:
    with disk(tmp_path / "stick") as stick:
        watched = Watched(hall, stick)
        assert watched.after(0) == 1
        films = fill(stick, leave=100_000)
        enter(hall, "120")
        assert watched.after(MINUTES * 60) == 1
        assert watched.keeper.standing.trouble == "is full"
        assert sorted(file.suffix for file in stick.iterdir()) == [
            "",
            ".db",
        ]  # no half of a copy stays behind
        films.unlink()
        assert watched.after(AGAIN_S) == 2
        assert watched.keeper.standing.trouble == ""


def test_a_read_only_stick_is_said(hall: Hall, tmp_path: Path) -> None:
    with disk(tmp_path / "stick") as stick:
        watched = Watched(hall, stick)
        make_read_only(stick)
        watched.after(0)
        assert watched.keeper.standing.trouble == "cannot be written to"


@contextmanager
def pages(ready_file: Path, folder: Path, stick: Path) -> Iterator[TestClient]:
    """The app over a copy of the ready meet, with copies going to a stick."""
    file = folder / "meet.db"
    file.write_bytes(ready_file.read_bytes())
    with TestClient(create_app(f"sqlite:///{file}", copy_plan=CopyPlan(stick, keep=5))) as client:
        yield client


def told(client: TestClient) -> str:
    return read(client.get("/meets/1").text).one("main").text


def test_the_meet_page_says_when_the_last_copy_was_made_or_why_there_is_none(
    ready_file: Path, tmp_path: Path
) -> None:
    stick = tmp_path / "stick"
    with pages(ready_file, tmp_path, stick) as client:
        keeper = client.app.state.keeper  # type: ignore[attr-defined]
        keeper.look(last=True)
        assert f"No copy yet: the folder {stick} is gone." in told(client)
        stick.mkdir()
        keeper.look(last=True)
        (copy,) = copies(stick)
        at = f"{copy.at.astimezone():%H:%M}"
        assert f"Last copy {at}, 1 kept in {stick}." in told(client)
        stick.rename(tmp_path / "pocket")
        assert client.post("/platforms/1/table-bar", data={"tell": "hold"}).status_code == 200
        keeper.look(last=True)
        assert f"No copy since {at}: the folder {stick} is gone." in told(client)
        assert "The meet goes on" in told(client)


def test_a_server_that_is_stopped_copies_what_was_entered_last(ready_file: Path, tmp_path: Path) -> None:
    stick = tmp_path / "stick"
    stick.mkdir()
    with pages(ready_file, tmp_path, stick) as client:
        client.post("/platforms/1/table-bar", data={"tell": "hold"})
    desk = open_desk(tmp_path / "meet.db")
    assert copies(stick)[-1].entry == Hall(desk).journal()[-1].id
    desk.engine.dispose()


def test_without_a_place_for_copies_the_meet_page_says_nothing_of_them(
    ready_file: Path, tmp_path: Path
) -> None:
    file = tmp_path / "meet.db"
    file.write_bytes(ready_file.read_bytes())
    with TestClient(create_app(f"sqlite:///{file}")) as client:
        assert "copy" not in told(client).lower().replace("copy of an earlier", "")

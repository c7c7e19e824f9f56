"""Copies: each one is whole and a moment of the meet; the oldest go, and nobody else's; a restore begins with them."""

from __future__ import annotations

import threading
from datetime import UTC, datetime, timedelta
from pathlib import Path

import pytest

from app.desk.check_data import check_file
from app.desk.entry import Desk
from app.store.backup import copies, make_copy
from tests.cast import Hall, open_desk, ready_meet
from tests.desk.checks import rows
from tests.durability.entering import enter

AT = datetime(2026, 3, 7, 9, 42, 0, tzinfo=UTC)


@pytest.fixture
def stick(tmp_path: Path) -> Path:
    """A folder for copies."""
    folder = tmp_path / "stick"
    folder.mkdir()
    return folder


def test_a_copy_holds_the_whole_meet_in_one_file_and_its_name_says_when_and_up_to_which_entry(
    hall: Hall, stick: Path
) -> None:
    enter(hall, "120")
    made = make_copy(hall.desk.engine, stick, AT, keep=3)
    newest = hall.journal()[-1].id
    assert made is not None
    assert [file.name.partition("-")[2].partition("-")[2] for file in stick.iterdir()] == [
        f"00001-2026-03-07T094200Z-entry-{newest}.db"
    ]
    assert (made.number, made.entry, made.at) == (1, newest, AT)
    assert (
        made.file.read_bytes()[18:20] == b"\x01\x01"
    )  # no write-ahead log: a single file, sqlite.org/fileformat2
    copy = open_desk(made.file)
    assert rows(copy.engine) == rows(hall.desk.engine)
    copy.engine.dispose()


def test_while_the_table_enters_every_copy_is_one_moment_of_the_meet(hall: Hall, stick: Path) -> None:
    over = threading.Event()

    def go_on() -> None:
        for step in range(30):
            enter(hall, str(112.5 + 2.5 * (step % 20)))
        over.set()

    writer = threading.Thread(target=go_on)
    writer.start()
    made = []
    while not over.is_set() or not made:
        copy = make_copy(hall.desk.engine, stick, AT, keep=1000)
        assert copy is not None
        made.append(copy)
    writer.join()
    for copy in made[:: max(1, len(made) // 10)]:
        report = check_file(copy.file)
        assert (report.wrong, report.newest) == ([], copy.entry)
    assert [one.entry for one in made] == sorted(one.entry for one in made)


def test_only_so_many_are_kept_and_the_oldest_go_first_whatever_the_clock_says(
    hall: Hall, stick: Path
) -> None:
    for step, hours in enumerate((0, 1, -24, -23), start=1):  # on the third day the clock was put back
        enter(hall, str(115 + 2.5 * step))
        make_copy(hall.desk.engine, stick, AT + timedelta(hours=hours), keep=2)
    left = copies(stick)
    assert [(one.number, one.at) for one in left] == [
        (3, AT - timedelta(hours=24)),
        (4, AT - timedelta(hours=23)),
    ]
    assert left[-1].entry == hall.journal()[-1].id


def test_two_meets_share_a_stick_and_nothing_else_on_it_is_touched(
    hall: Hall, demo_file: Path, stick: Path, tmp_path: Path
) -> None:
    photo = stick / "podium.jpg"
    photo.write_bytes(b"not ours")
    other = tmp_path / "other.db"
    other.write_bytes(demo_file.read_bytes())
    desk = open_desk(other)
    for _ in range(3):
        make_copy(hall.desk.engine, stick, AT, keep=1)
        make_copy(desk.engine, stick, AT, keep=2)
    desk.engine.dispose()
    marks = [one.file.name.split("-")[1] for one in copies(stick)]
    assert sorted(map(marks.count, set(marks))) == [1, 2]
    assert photo.read_bytes() == b"not ours"


def test_after_a_restore_to_an_earlier_entry_the_new_copies_are_still_the_newest(
    hall: Hall, stick: Path, ready_file: Path
) -> None:
    enter(hall, "117.5")
    enter(hall, "120")
    make_copy(hall.desk.engine, stick, AT, keep=2)
    earlier = open_desk(ready_file)  # the same meet, two entries ago
    back = make_copy(earlier.engine, stick, AT, keep=1)
    earlier.engine.dispose()
    assert copies(stick) == [back]
    assert back is not None
    assert (back.number, back.entry) == (2, hall.journal()[-1].id - 2)


def test_a_copy_that_was_broken_off_has_no_copys_name_and_is_cleared_away_by_the_next(
    hall: Hall, stick: Path
) -> None:
    first = make_copy(hall.desk.engine, stick, AT, keep=9)
    assert first is not None
    part = stick / f"meet-{first.file.name.split('-')[1]}.part"
    part.write_bytes(first.file.read_bytes()[:5000])
    assert copies(stick) == [first]
    make_copy(hall.desk.engine, stick, AT, keep=9)
    assert not part.exists()
    assert len(copies(stick)) == 2


def test_a_folder_in_which_no_meet_has_begun_makes_no_copy(desk: Desk, stick: Path) -> None:
    assert make_copy(desk.engine, stick, AT, keep=9) is None
    assert list(stick.iterdir()) == []
    ready_meet(desk)
    assert make_copy(desk.engine, stick, AT, keep=9) is not None

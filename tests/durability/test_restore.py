"""``platewright restore``: only into a folder that nobody uses, only a sound copy, and what was there is kept."""

from __future__ import annotations

import shutil
import sqlite3
import subprocess
import sys
from contextlib import closing
from datetime import UTC, datetime
from pathlib import Path

import pytest

from app.loading.mass import show_mass
from app.store.backup import Copy, make_copy
from app.store.lock import InUse, folder_lock
from tests.cast import BO, Hall, open_desk
from tests.desk.checks import Rows, rows
from tests.durability.entering import enter
from tests.serving import Done, free_port, platewright_here

AT = datetime(2026, 3, 7, 9, 42, tzinfo=UTC)


@pytest.fixture
def folder(ready_file: Path, tmp_path: Path) -> Path:
    """A data folder with the ready meet."""
    made = tmp_path / "data"
    made.mkdir()
    shutil.copy(ready_file, made / "meet.db")
    return made


@pytest.fixture
def copy(folder: Path) -> Copy:
    """Bo wants 120, a copy is made, and then Bo wants 122.5 and 125."""
    hall = Hall(open_desk(folder / "meet.db"))
    enter(hall, "120")
    (folder / "backups").mkdir()
    made = make_copy(hall.desk.engine, folder / "backups", AT, keep=9)
    enter(hall, "122.5")
    enter(hall, "125")
    hall.desk.engine.dispose()
    assert made is not None
    return made


def wanted(file: Path) -> str:
    hall = Hall(open_desk(file))
    weight = hall.attempt(BO, 2).weight
    hall.desk.engine.dispose()
    return "" if weight is None else show_mass(weight)


def state(file: Path) -> Rows:
    desk = open_desk(file)
    found = rows(desk.engine)
    desk.engine.dispose()
    return found


def restore(copy: Path, folder: Path) -> Done:
    return platewright_here("restore", str(copy), "--data", str(folder))


def aside(folder: Path) -> list[Path]:
    return sorted(folder.glob("meet-set-aside-*.db"))


def test_the_copy_is_the_meet_again_and_the_later_file_is_kept_and_told(folder: Path, copy: Copy) -> None:
    later, copied = state(folder / "meet.db"), copy.file.read_bytes()
    done = restore(copy.file, folder)
    assert (done.status, done.err) == (0, "")
    assert wanted(folder / "meet.db") == "120"
    (kept,) = aside(folder)
    assert state(kept) == later
    assert copy.file.read_bytes() == copied
    said = done.out.splitlines()
    assert said[0] == f"Checked {copy.file.name}: it holds everything up to entry {copy.entry}."
    assert said[-2:] == [
        f"The file that was there is kept as {kept.name}. It has 2 later entries that the copy has not.",
        f"The meet in {folder} is now what the copy holds. Start the server again.",
    ]
    assert platewright_here("check", "--data", str(folder)).status == 0


def test_what_was_set_aside_can_be_restored_as_well(folder: Path, copy: Copy) -> None:
    restore(copy.file, folder)
    (kept,) = aside(folder)
    assert restore(kept, folder).status == 0
    assert wanted(folder / "meet.db") == "125"
    assert len(aside(folder)) == 2  # within one second, too: nothing is written over


def test_into_an_empty_folder_on_another_machine(copy: Copy, tmp_path: Path) -> None:
    done = restore(copy.file, tmp_path / "new laptop")
    assert done.status == 0
    assert "There was no meet in the folder before." in done.out
    assert wanted(tmp_path / "new laptop" / "meet.db") == "120"


def test_entries_that_a_killed_server_left_in_the_log_are_kept_with_the_file(
    folder: Path, copy: Copy, tmp_path: Path
) -> None:
    hall = Hall(open_desk(folder / "meet.db"))
    enter(hall, "127.5")
    killed = tmp_path / "killed"
    shutil.copytree(folder, killed)  # the log is still beside the file, as after kill -9
    hall.desk.engine.dispose()
    (killed / "meet.db-shm").unlink()
    assert (killed / "meet.db-wal").stat().st_size > 0
    done = restore(copy.file, killed)
    assert "It has 3 later entries" in done.out
    assert wanted(killed / "meet.db") == "120"
    assert wanted(*aside(killed)) == "127.5"


def garbled(file: Path, start: int) -> None:
    data = bytearray(file.read_bytes())
    data[start : start + 6000] = bytes(range(256)) * 23 + bytes(112)
    file.write_bytes(data)


@pytest.mark.parametrize("start", [0, 40_000], ids=["its beginning", "its middle"])
def test_a_damaged_copy_is_refused_and_nothing_was_touched(folder: Path, copy: Copy, start: int) -> None:
    garbled(copy.file, start)
    before = (folder / "meet.db").read_bytes()
    done = restore(copy.file, folder)
    assert (done.status, done.out) == (2, "")
    assert done.err.startswith(f"The copy {copy.file} is damaged, and was not taken: ")
    assert (folder / "meet.db").read_bytes() == before
    assert aside(folder) == []
    assert list(folder.glob("restore*")) == []


def test_a_copy_whose_journal_does_not_lead_to_it_is_refused(folder: Path, copy: Copy) -> None:
    with closing(sqlite3.connect(copy.file)) as connection:
        connection.execute("UPDATE attempt SET weight = '200' WHERE weight = '120'")
        connection.commit()
    done = restore(copy.file, folder)
    assert done.status == 2
    assert done.err.startswith("The copy is not sound, and was not taken.\nattempt ")
    assert wanted(folder / "meet.db") == "125"


def test_what_is_no_copy_is_refused_in_a_sentence(folder: Path, copy: Copy, tmp_path: Path) -> None:
    other = tmp_path / "other.db"
    with closing(sqlite3.connect(other)) as connection:
        connection.execute("CREATE TABLE shopping (what TEXT)")
    newest = f"{folder / 'backups'} is a folder. Name one copy in it. The newest one is {copy.file.name}."
    for wrong, sentence in (
        (tmp_path / "none.db", f"There is no file {tmp_path / 'none.db'}."),
        (folder / "backups", newest),
        (other, f"{other} is no copy of a Platewright meet."),
    ):
        done = restore(wrong, folder)
        assert (done.status, done.err) == (2, f"{sentence}\n")
    assert wanted(folder / "meet.db") == "125"


def test_a_copy_of_a_newer_version_is_refused(folder: Path, copy: Copy) -> None:
    with closing(sqlite3.connect(copy.file)) as connection:
        connection.execute("UPDATE alembic_version SET version_num = 'fedcba987654'")
        connection.commit()
    done = restore(copy.file, folder)
    assert (done.status, done.err) == (
        2,
        f"{copy.file} was made by another version of Platewright, and was not taken.\n",
    )


def test_neither_a_restore_nor_a_second_server_enters_a_folder_that_a_server_uses(
    folder: Path, copy: Copy
) -> None:
    before = (folder / "meet.db").read_bytes()
    with folder_lock(folder):
        refused = [
            restore(copy.file, folder),
            platewright_here("serve", "--port", str(free_port()), "--data", str(folder)),
        ]
    for done in refused:
        assert (done.status, done.out) == (2, "")
        assert done.err == (
            f"The data folder {folder} is in use by another Platewright. Stop that one first, with Ctrl+C "
            "where it was started; or choose another folder with --data FOLDER.\n"
        )
    assert (folder / "meet.db").read_bytes() == before
    assert restore(copy.file, folder).status == 0


def test_a_lock_dies_with_its_process(tmp_path: Path) -> None:
    """Killed as a power cut does it; the lock's file stays behind and is no obstacle."""
    holder = (
        "import sys, time, pathlib; from app.store.lock import folder_lock\n"
        "with folder_lock(pathlib.Path(sys.argv[1])):\n    print('held', flush=True); time.sleep(60)\n"
    )
    with subprocess.Popen([sys.executable, "-c", holder, str(tmp_path)], stdout=subprocess.PIPE) as process:
        assert process.stdout is not None
        assert process.stdout.readline() == b"held\n"
        with pytest.raises(InUse), folder_lock(tmp_path):
            pass
        process.kill()
        process.wait()
    with folder_lock(tmp_path):
        pass

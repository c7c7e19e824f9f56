"""A torn write: whatever becomes of the end of the write-ahead log, what was whole before it is the meet."""

from __future__ import annotations

import random
import shutil
from pathlib import Path

import pytest

from app.desk.check_data import check_file
from tests.cast import Hall, open_desk
from tests.durability.entering import enter

ENTRIES = 8


@pytest.fixture(scope="module")
def cut_short(ready_file: Path, tmp_path_factory: pytest.TempPathFactory) -> tuple[Path, list[int], int]:
    """A folder as the loss of power leaves it, how long the log was after each entry, and the entries before them."""
    folder = tmp_path_factory.mktemp("cut")
    file = Path(shutil.copy(ready_file, folder / "meet.db"))
    hall = Hall(open_desk(file))
    before = hall.journal()[-1].id or 0
    log, lengths = folder / "meet.db-wal", []
    for step in range(ENTRIES):
        enter(hall, str(115 + 2.5 * step))
        lengths.append(log.stat().st_size)
    kept = tmp_path_factory.mktemp("kept")
    shutil.copy(file, kept)
    shutil.copy(log, kept)
    hall.desk.engine.dispose()
    assert lengths == sorted(set(lengths))  # each entry was added to the log; nothing was moved out of it yet
    return kept, lengths, before


def after(kept: Path, folder: Path, log: bytes) -> int:
    """Start again with this log; the newest entry then, when the meet is in order."""
    shutil.copy(kept / "meet.db", folder)
    (folder / "meet.db-wal").write_bytes(log)
    (folder / "meet.db-shm").unlink(missing_ok=True)
    desk = open_desk(folder / "meet.db")
    newest = Hall(desk).journal()[-1].id
    desk.engine.dispose()
    report = check_file(folder / "meet.db")
    assert (report.wrong, report.newest) == ([], newest)
    return report.newest


def whole(lengths: list[int], place: int) -> int:
    """How many entries lie wholly before a place in the log."""
    return sum(length <= place for length in lengths)


def test_a_log_that_was_cut_off_anywhere_gives_every_entry_that_was_whole_by_then(
    cut_short, tmp_path
) -> None:
    kept, lengths, before = cut_short
    log = (kept / "meet.db-wal").read_bytes()
    chance = random.Random(1)
    edges = [edge for length in lengths for edge in (length - 1, length)]
    for place in [0, 31, 32, *edges, *(chance.randrange(len(log)) for _ in range(8))]:
        assert after(kept, tmp_path, log[:place]) == before + whole(lengths, place), place


def test_a_log_in_which_a_byte_was_garbled_gives_every_entry_before_it(cut_short, tmp_path) -> None:
    """SQLite's log carries a running checksum: from the first wrong byte on nothing of it counts."""
    kept, lengths, before = cut_short
    log = (kept / "meet.db-wal").read_bytes()
    chance = random.Random(2)
    start = lengths[0]
    for place in (chance.randrange(start, len(log)) for _ in range(12)):
        torn = bytearray(log)
        torn[place] ^= 1 << chance.randrange(8)
        newest = after(kept, tmp_path, bytes(torn))
        assert newest >= before + whole(lengths, place), place
        assert newest < before + ENTRIES


def test_a_last_block_of_zeros_or_of_another_files_content_takes_only_the_last_entry(
    cut_short, tmp_path
) -> None:
    kept, lengths, before = cut_short
    log = (kept / "meet.db-wal").read_bytes()
    last = lengths[-1] - lengths[-2]
    for rubbish in (bytes(last), bytes(range(256)) * (last // 256 + 1)):
        torn = log[: lengths[-2]] + rubbish[:last]
        assert after(kept, tmp_path, torn) == before + ENTRIES - 1

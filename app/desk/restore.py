"""``platewright restore``: a copy becomes the meet again, and the file that was there is kept."""

from __future__ import annotations

import os
import shutil
import sqlite3
from collections.abc import Sequence
from contextlib import closing, suppress
from datetime import datetime
from pathlib import Path

from alembic.util.exc import CommandError

from app.desk.check_data import Report, check_file
from app.desk.data_folder import MEET
from app.store.backup import copies, flush_folder, newest_entry, put_in_place
from app.store.migrate import upgrade
from app.store.sound import damage, open_read_only

LOGS = ("", "-wal", "-shm")  # a database and what may lie beside it


class CannotRestore(Exception):
    """The copy was not put in place, and nothing was changed; the message is one or more plain sentences."""


def restore(copy: Path, folder: Path, now: datetime) -> list[str]:
    """Put a copy in place of the folder's meet; what was done, in sentences. The folder must be locked.

    The copy itself is only read. It is brought into the folder under another name, up to this version's tables,
    checked there as ``platewright check`` does, and only then takes the meet's place.
    Raises :class:`CannotRestore` and ``OSError``.
    """
    part, meet = folder / "restore.part", folder / MEET
    try:
        _bring(copy, part)
        report = check_file(part)
        if report.wrong:
            raise CannotRestore(_sentences("The copy is not sound, and was not taken.", report.wrong))
        said = [f"Checked {copy.name}: it holds everything up to entry {report.newest}.", *report.good]
        said += _set_aside(meet, report, now)
        for suffix in LOGS[1:]:
            meet.with_name(MEET + suffix).unlink(missing_ok=True)
        put_in_place(part, meet)
    finally:
        for suffix in (*LOGS, "-journal"):
            part.with_name(part.name + suffix).unlink(missing_ok=True)
    return [*said, f"The meet in {folder} is now what the copy holds. Start the server again."]


def _bring(copy: Path, part: Path) -> None:
    """The copy as ``part``, one file in the tables of this version."""
    if copy.is_dir():
        there = copies(copy)
        newest = f" The newest one is {there[-1].file.name}." if there else ""
        raise CannotRestore(f"{copy} is a folder. Name one copy in it.{newest}")
    if not copy.exists():
        raise CannotRestore(f"There is no file {copy}.")
    broken = damage(copy)
    if broken is not None:
        raise CannotRestore(
            f"The copy {copy} is damaged, and was not taken: {broken}. Try the one before it."
        )
    part.unlink(missing_ok=True)
    with closing(open_read_only(copy)) as source, closing(sqlite3.connect(part)) as target:
        tables = {row[0] for row in source.execute("SELECT name FROM sqlite_master WHERE type = 'table'")}
        if not {"alembic_version", "journal", "meet"} <= tables:
            raise CannotRestore(f"{copy} is no copy of a Platewright meet.")
        source.backup(target)
    try:
        upgrade(f"sqlite:///{part}")
    except CommandError as error:
        raise CannotRestore(
            f"{copy} was made by another version of Platewright, and was not taken."
        ) from error
    with closing(sqlite3.connect(part)) as target:
        target.execute("PRAGMA journal_mode=DELETE")


def _set_aside(meet: Path, taken: Report, now: datetime) -> list[str]:
    """Keep the file that is there, with what lies beside it, under a dated name."""
    if not meet.exists():
        return ["There was no meet in the folder before."]
    entry = None
    if damage(meet) is None:  # a damaged file is kept just as it is, for whoever may get something out of it
        with suppress(sqlite3.Error), closing(sqlite3.connect(meet)) as old:
            old.execute("PRAGMA wal_checkpoint(TRUNCATE)")  # so that it is one file
            entry = newest_entry(old)
    aside = _free(meet.with_name(f"{meet.stem}-set-aside-{now:%Y-%m-%dT%H%M%SZ}.db"))
    for suffix in LOGS:
        beside = meet.with_name(MEET + suffix)
        if beside.exists():
            with beside.open("rb") as source, aside.with_name(aside.name + suffix).open("xb") as target:
                shutil.copyfileobj(source, target)
                target.flush()
                os.fsync(target.fileno())
    flush_folder(meet.parent)
    if entry is None:
        return [f"The file that was there cannot be read; it is kept as {aside.name}."]
    later = entry - taken.newest
    lost = (
        f" It has {later} later {'entries' if later != 1 else 'entry'} that the copy has not."
        if later > 0
        else ""
    )
    return [f"The file that was there is kept as {aside.name}.{lost}"]


def _free(file: Path) -> Path:
    """The name itself, or with a number behind it: nothing that was set aside before is written over."""
    tried, number = file, 2
    while tried.exists():
        tried, number = file.with_stem(f"{file.stem}-{number}"), number + 1
    return tried


def _sentences(first: str, others: Sequence[str]) -> str:
    return "\n".join([first, *others])

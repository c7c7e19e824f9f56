"""Copies of the meet in a second folder, by SQLite's own backup call, while the meet goes on.

A copy is made under another name, checked, and only then given its own: whatever has a copy's name is whole.
Which copy is newest is a running number's business, not the clock's, and not the journal's (which a restore
turns back).
"""

from __future__ import annotations

import errno
import hashlib
import os
import re
import sqlite3
from contextlib import closing
from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from sqlalchemy import Engine

from app.store.sound import integrity

NAME = re.compile(r"meet-([0-9a-f]{6})-(\d{5,})-(\d{4}-\d\d-\d\dT\d{6}Z)-entry-(\d+)\.db")
TIME = "%Y-%m-%dT%H%M%SZ"


@dataclass(frozen=True, slots=True, order=True)
class Copy:
    """A copy by what its name says: the running number, the newest journal entry in it, when it was made (UTC)."""

    number: int
    entry: int
    at: datetime
    file: Path


class BadCopy(Exception):
    """A copy that did not come out as it should; it was not kept."""


def copies(folder: Path, mark: str | None = None) -> list[Copy]:
    """The copies in a folder, oldest first; with a ``mark`` only those of that meet. Raises ``OSError``."""
    found = []
    for file in folder.iterdir():
        parts = NAME.fullmatch(file.name)
        if parts and (mark is None or parts[1] == mark):
            at = datetime.strptime(parts[3], TIME).replace(tzinfo=UTC)
            found.append(Copy(int(parts[2]), int(parts[4]), at, file))
    return sorted(found)


def mark_of(connection: sqlite3.Connection) -> str | None:
    """Six digits that stay the same for as long as the journal has its first line; None while it has none.

    So that two meets can share a stick, and neither tidies the other's copies away.
    """
    first = connection.execute("SELECT at, who, what FROM journal ORDER BY id LIMIT 1").fetchone()
    return None if first is None else hashlib.sha256(repr(first).encode()).hexdigest()[:6]


def newest_entry(connection: sqlite3.Connection) -> int:
    """The number of the journal's newest entry; 0 while there is none."""
    return int(connection.execute("SELECT coalesce(max(id), 0) FROM journal").fetchone()[0])


def make_copy(engine: Engine, folder: Path, at: datetime, keep: int) -> Copy | None:
    """One more copy, after which the oldest beyond ``keep`` go; None while there is nothing to copy.

    Raises ``OSError``, ``sqlite3.Error`` or :class:`BadCopy`; then no copy has come or gone.
    """
    pooled = engine.raw_connection()
    try:
        source = pooled.driver_connection
        if not isinstance(source, sqlite3.Connection):
            raise TypeError("Copies are made of SQLite files only.")
        mark = mark_of(source)
        if mark is None:
            return None
        number = max((one.number for one in copies(folder, mark)), default=0) + 1
        part = folder / f"meet-{mark}.part"
        try:
            part.unlink(missing_ok=True)
            with part.open("xb"):  # the plain reason, where a file cannot be made
                pass
            entry = _fill(source, part)
            name = f"meet-{mark}-{number:05d}-{at.astimezone(UTC):{TIME}}-entry-{entry}.db"
            put_in_place(part, folder / name)
        except BaseException:
            _forget(part)
            raise
    finally:
        pooled.close()
    made = copies(folder, mark)
    for old in made[:-keep]:
        old.file.unlink(missing_ok=True)
    return made[-1]


def _fill(source: sqlite3.Connection, part: Path) -> int:
    """The whole database into ``part``, as one file without a log beside it, and checked; its newest entry."""
    with closing(sqlite3.connect(part)) as target:
        # Nobody reads it under this name, so it needs no journal of its own and one flush at the end.
        target.execute("PRAGMA journal_mode=OFF")
        target.execute("PRAGMA synchronous=OFF")
        source.backup(target)
    with closing(sqlite3.connect(part)) as target:
        target.execute("PRAGMA journal_mode=DELETE")
        target.execute("PRAGMA synchronous=OFF")
        found = integrity(target)
        if found:
            raise BadCopy(f"the copy came out damaged ({found[0]})")
        return newest_entry(target)


def _forget(part: Path) -> None:
    for suffix in ("", "-journal"):
        try:
            part.with_name(part.name + suffix).unlink(missing_ok=True)
        except OSError:  # the disk that just failed; the next copy begins by removing it
            return


def put_in_place(part: Path, file: Path) -> None:
    """Flush a finished file to the disk and give it its name, which whoever has the old one keeps."""
    with part.open("rb+") as whole:
        os.fsync(whole.fileno())
    part.replace(file)
    flush_folder(file.parent)


def flush_folder(folder: Path) -> None:
    """A new name is on the disk only when its folder is; where a system cannot do that, it does so by itself."""
    if os.name != "posix":
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    except OSError as error:
        if error.errno != errno.EINVAL:  # some sticks' file systems know no such thing
            raise
    finally:
        os.close(handle)

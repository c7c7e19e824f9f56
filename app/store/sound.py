"""Whether a database file is whole: opened so that nothing can be written, SQLite's own check, every reference."""

from __future__ import annotations

import sqlite3
from collections.abc import Iterator
from contextlib import closing, contextmanager
from pathlib import Path
from typing import Any

from sqlalchemy import Connection, NullPool, create_engine, event
from sqlmodel import Session

from app.store.meet_file import ALL, references

FEW = 5  # findings that are told one by one


def open_read_only(file: Path) -> sqlite3.Connection:
    """A connection that cannot write, also while a server works with the file. Raises ``sqlite3.Error``."""
    place = file.resolve().as_uri()
    connection = sqlite3.connect(f"{place}?mode=ro", uri=True, check_same_thread=False, isolation_level=None)
    try:
        connection.execute("SELECT count(*) FROM sqlite_master").fetchone()
    except sqlite3.OperationalError:
        connection.close()
        log = file.with_name(f"{file.name}-wal")
        if log.exists() and log.stat().st_size:
            raise
        # On a read-only disk SQLite cannot make the small file by which programs share a database: nobody else
        # can write there either, and nothing is waiting in the log.
        connection = sqlite3.connect(
            f"{place}?immutable=1", uri=True, check_same_thread=False, isolation_level=None
        )
    except BaseException:
        connection.close()
        raise
    return connection


@contextmanager
def reading_file(file: Path) -> Iterator[Session]:
    """One consistent look at a database file, through the tables of this version; nothing is written."""
    engine = create_engine("sqlite://", creator=lambda: open_read_only(file), poolclass=NullPool)

    @event.listens_for(engine, "begin")
    def _on_begin(connection: Connection) -> None:
        connection.exec_driver_sql("BEGIN")

    with Session(engine) as session:
        yield session


def damage(file: Path) -> str | None:
    """What SQLite finds wrong with a file, in a few words; None when it is whole. Raises ``OSError``."""
    with file.open("rb"):  # the plain reason, where it cannot even be read
        pass
    try:
        with closing(open_read_only(file)) as connection:
            found = integrity(connection)
    except sqlite3.DatabaseError as error:
        return str(error)
    return " ".join(found[0].split()) if found else None


def integrity(connection: sqlite3.Connection) -> list[str]:
    """SQLite's own findings: pages, indexes, and what the columns may hold. Empty when the file is sound."""
    rows = connection.execute(f"PRAGMA integrity_check({FEW})").fetchall()
    return [] if rows == [("ok",)] else [str(row[0]) for row in rows]


def dangling(connection: sqlite3.Connection) -> list[str]:
    """References that lead nowhere: the declared ones, and those that no foreign key declares."""
    found = [
        f"{table} {row} speaks of a {other} that is not there."
        for table, row, other, _ in connection.execute("PRAGMA foreign_key_check")
    ]
    for name in ALL:
        declared = {row[3] for row in connection.execute(f"PRAGMA foreign_key_list({name})")}
        for column, other in references(name).items():
            if column not in declared:
                found += [
                    f"{name} {row} speaks of {other} {key}, which is not there."
                    for row, key in _nowhere(connection, name, column, other)
                ]
    return found


def _nowhere(connection: sqlite3.Connection, name: str, column: str, other: str) -> list[Any]:
    # All four are names of our own tables and columns.
    query = f"SELECT id, {column} FROM {name} WHERE {column} IS NOT NULL AND {column} NOT IN (SELECT id FROM {other})"  # noqa: S608
    return connection.execute(query).fetchall()

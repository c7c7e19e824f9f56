"""The database engine: SQLite as a small durable server, one writer at a time.

An acknowledged entry survives kill -9 and loss of power: write-ahead log with ``synchronous=FULL``.
"""

from __future__ import annotations

import threading
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any

from sqlalchemy import Connection, Engine, create_engine, event
from sqlalchemy.exc import DBAPIError
from sqlmodel import Session

from app.store.trouble import trouble_of

PRAGMAS = ("journal_mode=WAL", "synchronous=FULL", "busy_timeout=5000", "foreign_keys=ON")

# SQLite before 3.51.3 can, very rarely, damage a file when two connections checkpoint at the same instant;
# all our writers pass through this one lock, so two never do.
_write_lock = threading.Lock()


class CannotWrite(Exception):
    """The disk did not take a transaction: nothing of it was kept. ``trouble``: why, as the end of a sentence."""

    def __init__(self, trouble: str) -> None:
        super().__init__(f"The disk {trouble}.")
        self.trouble = trouble


def make_engine(url: str) -> Engine:
    """An engine whose transactions begin as we say: BEGIN IMMEDIATE for writers, BEGIN for readers."""
    engine = create_engine(url)
    if engine.dialect.name != "sqlite":
        return engine

    @event.listens_for(engine, "connect")
    def _on_connect(dbapi: Any, _record: object) -> None:
        dbapi.isolation_level = None  # we send BEGIN ourselves, below
        for pragma in PRAGMAS:
            dbapi.execute(f"PRAGMA {pragma}")

    @event.listens_for(engine, "begin")
    def _on_begin(connection: Connection) -> None:
        # A transaction that reads and then writes would fail at once if anyone wrote in between.
        writes = connection.get_execution_options().get("writes", False)
        connection.exec_driver_sql("BEGIN IMMEDIATE" if writes else "BEGIN")

    return engine


@contextmanager
def writing(engine: Engine) -> Iterator[Session]:
    """One write transaction; commits at the end, rolls back on an exception.

    Raises :class:`CannotWrite` where the disk is full, read-only or does not answer.
    """
    try:
        with _write_lock, Session(engine.execution_options(writes=True)) as session, session.begin():
            yield session
    except DBAPIError as error:
        trouble = trouble_of(error)
        if trouble is None:
            raise
        raise CannotWrite(trouble) from error


@contextmanager
def reading(engine: Engine) -> Iterator[Session]:
    """One consistent look at the database; nothing is written."""
    with Session(engine) as session:
        yield session

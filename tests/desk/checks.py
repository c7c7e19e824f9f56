"""Checkers that trust nobody: what is shown is summed anew, and what was journalled is played again from nothing."""

from __future__ import annotations

import json
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from datetime import UTC, datetime
from itertools import pairwise
from typing import Any

import pytest
from sqlalchemy import Engine, text

from app.desk.board import Board
from app.desk.errors import DeskError
from app.desk.planned import wish_of
from app.loading.stack import check_stack
from app.store.engine import reading
from app.store.tables import JournalRow
from tests.cast import Hall

# Counted up or derived at every entry, so no part of what a journal must be able to tell.
DERIVED = {"platform": {"revision", "changed_at", "plan"}}
NO_STATE = ("journal", "alembic_version", "sqlite_sequence")

Rows = dict[tuple[str, int], dict[str, Any]]


def rows(engine: Engine) -> Rows:
    """Every row of the meet as the database file has it, without what is derived; values as JSON would hold them."""
    found: Rows = {}
    with reading(engine) as session:
        database = session.connection()
        names = database.execute(text("SELECT name FROM sqlite_master WHERE type = 'table'")).scalars().all()
        for table in sorted(set(names) - set(NO_STATE)):
            columns = database.execute(text(f"PRAGMA table_info({table})")).mappings()
            kinds = {column["name"]: column["type"] for column in columns}
            for row in database.execute(text(f"SELECT * FROM {table}")).mappings():
                found[(table, row["id"])] = {
                    name: _plain(row[name], kind)
                    for name, kind in kinds.items()
                    if name not in DERIVED.get(table, set())
                }
    return found


def _plain(value: Any, kind: str) -> Any:
    if value is None:
        return None
    if kind == "JSON":
        return json.loads(value)
    if kind == "DATETIME":
        return datetime.fromisoformat(value).replace(tzinfo=UTC).isoformat()
    return value


def differing(before: Rows, after: Rows) -> dict[tuple[str, int], set[str]]:
    """Which columns of which rows differ; a row that came or went differs in its id."""
    found = {}
    for place in before.keys() | after.keys():
        old, new = before.get(place), after.get(place)
        if old is None or new is None:
            found[place] = {"id"}
        elif old != new:
            found[place] = {column for column in old if old[column] != new[column]}
    return found


def replayed(entries: Sequence[JournalRow]) -> Rows:
    """The rows that come of doing every journalled edit in turn, beginning with nothing at all.

    Each edit's *before* must be what the row is at that moment: the journal has no gaps.
    """
    return replay_on({}, entries)


def replay_on(made: Rows, entries: Sequence[JournalRow]) -> Rows:
    """The same from rows that earlier entries have made already; they are changed in place."""
    for entry in entries:
        for edit in entry.edits:
            place = (edit["table"], edit["id"])
            now = made.get(place)
            if edit["before"] is None:
                assert now is None, (entry.what, edit)
                made[place] = dict(edit["after"])
                continue
            assert now is not None, (entry.what, edit)
            assert {key: now[key] for key in edit["before"]} == edit["before"], entry.what
            if edit["after"] is None:
                del made[place]
            else:
                now |= edit["after"]
    return made


def check_board(one: Board) -> None:
    """Sums every step of a board afresh, and sees that each begins where the one before it ended."""
    rule = wish_of(one.now, one.lift.id).order
    for step in one.steps:
        if step.stack is not None:
            check_stack(one.equipment, step.stack, step.turn.weight, rule)
    shown = [step for step in one.steps if step.stack is not None]
    for before, after in pairwise(shown):
        assert after.before == before.stack
    assert [step.turn for step in one.steps] == sorted(
        (step.turn for step in one.steps), key=lambda turn: (one.up != turn, one.order.index(turn))
    )


@contextmanager
def refused(hall: Hall, error: type[DeskError], sentence: str) -> Iterator[None]:
    """The entry in this block is refused with just this sentence, and nothing at all was touched."""
    before, entries, revision = rows(hall.desk.engine), len(hall.journal()), hall.picture().revision
    with pytest.raises(error) as told:
        yield
    assert str(told.value) == sentence
    assert rows(hall.desk.engine) == before
    assert (len(hall.journal()), hall.picture().revision) == (entries, revision)


@contextmanager
def changes(hall: Hall, expected: dict[tuple[str, int], set[str]]) -> Iterator[None]:
    """The entry in this block changes exactly these columns of these rows, in one journal entry."""
    before, entries, revision = rows(hall.desk.engine), len(hall.journal()), hall.picture().revision
    yield
    assert differing(before, rows(hall.desk.engine)) == expected
    one = 1 if expected else 0
    assert (len(hall.journal()), hall.picture().revision) == (entries + one, revision + one)

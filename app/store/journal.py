"""The journal: every change of a meet as one row, with each touched row before and after.

Nobody has to remember to write it: what a transaction changed is read off the session itself, so an entry
and its journal line cannot disagree. Undo puts the *before* of each row back, if the row still is as the
entry left it.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import datetime
from fractions import Fraction
from typing import Any, cast

from sqlalchemy import Table, event, inspect
from sqlalchemy.orm import UOWTransaction
from sqlmodel import Session, col, select
from sqlmodel.sql.sqltypes import UTCDateTime

from app.loading.mass import parse_mass, show_mass
from app.store.tables import TABLES, Exact, JournalRow, Row

# Derived, or counted up whatever happens: no part of the meet's state.
NOT_KEPT = {"platform": {"revision", "changed_at", "plan"}}
# The iron itself. An undo changes what was entered; it cannot move plates.
IRON = {"platform": {"condition", "bar", "hand", "spare", "ahead", "implement_id", "loaded_at"}}

Edit = dict[str, Any]
"""``{"table", "id", "before": {column: value} | None, "after": {column: value} | None}``"""


@dataclass(frozen=True, slots=True)
class CannotUndo(Exception):
    """An entry that cannot be taken back as things stand, with the reason."""

    because: str

    def __str__(self) -> str:
        return self.because


class Recorder:
    """Collects the edits of one session while it lasts."""

    def __init__(self, session: Session) -> None:
        self._session = session
        self._edits: dict[tuple[str, int], Edit] = {}
        event.listen(session, "before_flush", self._before)
        event.listen(session, "after_flush", self._after)

    def edits(self) -> list[Edit]:
        """What was changed so far, one edit a row, rows that ended as they began left out."""
        self._session.flush()
        return [edit for edit in self._edits.values() if edit["before"] != edit["after"]]

    def _before(self, session: Session, _context: UOWTransaction, _instances: object) -> None:
        for row in session.dirty:
            if isinstance(row, Row) and table_name(row) in TABLES:
                before, after = changed_columns(row)
                self._note(row, before, after)
        for row in session.deleted:
            if isinstance(row, Row) and table_name(row) in TABLES:
                self._note(row, snapshot(row), None)

    def _after(self, session: Session, _context: UOWTransaction) -> None:
        for row in session.new:
            if isinstance(row, Row) and table_name(row) in TABLES:
                self._note(row, None, snapshot(row))

    def _note(self, row: Row, before: Edit | None, after: Edit | None) -> None:
        key = (table_name(row), cast("int", row.id))
        earlier = self._edits.get(key)
        if earlier is None:
            self._edits[key] = {"table": key[0], "id": key[1], "before": before, "after": after}
            return
        # Several flushes in one transaction are one edit: the first before, the last after.
        if earlier["before"] is not None and before is not None:
            earlier["before"] = {**before, **earlier["before"]}
        earlier["after"] = None if after is None else {**(earlier["after"] or {}), **after}


def table_name(row: Row) -> str:
    """The name of the row's table."""
    return str(type(row).__tablename__)


def changed_columns(row: Row) -> tuple[Edit, Edit]:
    """The columns that this transaction set to something else: their values before, and after."""
    before: Edit = {}
    after: Edit = {}
    kept = NOT_KEPT.get(table_name(row), set())
    for attribute in inspect(row).attrs:
        history = attribute.history
        if attribute.key in kept or not history.has_changes() or not history.deleted:
            continue
        before[attribute.key] = plain(history.deleted[0])
        after[attribute.key] = plain(attribute.value)
    return before, after


def snapshot(row: Row) -> Edit:
    """Every kept column of a row."""
    kept = NOT_KEPT.get(table_name(row), set())
    return {key: plain(getattr(row, key)) for key in type(row).model_fields if key not in kept}


def plain(value: object) -> Any:
    """A column's value as JSON can hold it."""
    if isinstance(value, Fraction):
        return show_mass(value)
    if isinstance(value, datetime):
        return value.isoformat()
    return value


def unplain(table: str, column: str, value: Any) -> Any:
    """The value as the column holds it; undoes :func:`plain`."""
    kind = cast("Table", TABLES[table].__table__).c[column].type  # type: ignore[attr-defined]  # SQLModel adds it
    if value is None:
        return None
    if isinstance(kind, Exact):
        return parse_mass(value)
    if isinstance(kind, UTCDateTime):
        return datetime.fromisoformat(value)
    return value


def put_back(session: Session, edits: Iterable[Edit], words: str) -> None:
    """Give each row its *before* again; refused whole when one of them has been changed since."""
    for edit in reversed(list(edits)):
        table = edit["table"]
        iron = IRON.get(table, set())
        row = session.get(TABLES[table], edit["id"])
        before, after = edit["before"], edit["after"]
        if after is None:
            session.add(TABLES[table](**{key: unplain(table, key, value) for key, value in before.items()}))
        elif row is None or not _still(row, after, iron):
            raise CannotUndo(f"“{words}” cannot be undone: it has been changed again since.")
        elif before is None:
            session.delete(row)
        else:
            for key, value in before.items():
                if key not in iron and key != "version":
                    setattr(row, key, unplain(table, key, value))
            if "version" in before:
                row.version += 1  # type: ignore[attr-defined]  # rows that carry a version count on, never back
        # One row at a time: unique numbers (lots) may be handed on from row to row.
        session.flush()


def _still(row: Row, after: Mapping[str, Any], iron: set[str]) -> bool:
    ignored = iron | {"version"}
    return all(plain(getattr(row, key)) == value for key, value in after.items() if key not in ignored)


def last_undoable(session: Session, meet_id: int, platform_id: int | None) -> JournalRow | None:
    """The newest entry that stands: not an undo itself, not undone, and one that changed more than the iron."""
    standing = _standing(session, meet_id)
    for entry in _newest_first(session, meet_id, platform_id):
        if entry.undoes is None and entry.id in standing and _moves_more_than_iron(entry.edits):
            return entry
    return None


def last_redoable(session: Session, meet_id: int, platform_id: int | None) -> JournalRow | None:
    """The newest undo that stands, as long as nothing else has been entered since."""
    standing = _standing(session, meet_id)
    for entry in _newest_first(session, meet_id, platform_id):
        if entry.id not in standing or not _moves_more_than_iron(entry.edits):
            continue
        if entry.undoes is None:
            return None
        undone = session.get(JournalRow, entry.undoes)
        if undone is not None and undone.undoes is None:
            return entry
    return None


def _standing(session: Session, meet_id: int) -> set[int]:
    """The entries that no standing entry has taken back. An undo is newer than what it undoes: newest first."""
    pairs = session.exec(
        select(JournalRow.id, JournalRow.undoes)
        .where(JournalRow.meet_id == meet_id)
        .order_by(col(JournalRow.id).desc())
    )
    standing: set[int] = set()
    taken_back: set[int] = set()
    for entry_id, undoes in pairs:
        if entry_id is not None and entry_id not in taken_back:
            standing.add(entry_id)
            if undoes is not None:
                taken_back.add(undoes)
    return standing


def _newest_first(session: Session, meet_id: int, platform_id: int | None) -> Iterable[JournalRow]:
    """The entries of a platform, or of the whole meet, read as far back as they are asked for."""
    query = (
        select(JournalRow)
        .where(JournalRow.meet_id == meet_id)
        .order_by(col(JournalRow.id).desc())
        .execution_options(yield_per=20)
    )
    if platform_id is not None:
        query = query.where(JournalRow.platform_id == platform_id)
    return session.exec(query)


def _moves_more_than_iron(edits: Iterable[Edit]) -> bool:
    return any(
        edit["before"] is None or edit["after"] is None or set(edit["after"]) - IRON.get(edit["table"], set())
        for edit in edits
    )

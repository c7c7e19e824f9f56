"""The journal played again from nothing: where it leads, and whether that is what is stored."""

from __future__ import annotations

from typing import Any

from sqlmodel import Session, col, select

from app.store.journal import snapshot
from app.store.tables import TABLES, JournalRow

State = dict[tuple[str, int], dict[str, Any]]
"""By table and id: the kept columns of a row, as JSON holds them."""

MISSING = object()


def play(state: State, entry: JournalRow) -> list[str]:
    """Do one entry's edits to ``state``; what does not fit onto what was there is told, one sentence each."""
    wrong: list[str] = []
    for edit in entry.edits:
        place = (edit["table"], edit["id"])
        wrong += _misfit(state.get(place), edit, f"Entry {entry.id} ({entry.what})")
        if edit["after"] is None:
            state.pop(place, None)
        else:
            state[place] = state.get(place, {}) | edit["after"]
    return wrong


def _misfit(row: dict[str, Any] | None, edit: dict[str, Any], entry: str) -> list[str]:
    name, before = f"{edit['table']} {edit['id']}", edit["before"]
    if (row is None) != (before is None):
        there = "was not there" if row is None else "was there already"
        return [f"{entry} changes {name}, which {there}."]
    if row is None or before is None:
        return []
    return [
        f"{entry} says that {name} had {column} {_words(value)}; it had {_words(row.get(column))}."
        for column, value in before.items()
        if row.get(column, MISSING) != value
    ]


def stored(session: Session) -> State:
    """Every row of every meet as the file has it. Raises ``ValueError`` on a value that cannot be read."""
    return {
        (name, row.id): snapshot(row)
        for name, table in TABLES.items()
        for row in session.exec(select(table)).all()
        if row.id is not None
    }


def entries(session: Session) -> list[JournalRow]:
    """The whole journal in the order of its numbers: the clock has no say in it."""
    return list(session.exec(select(JournalRow).order_by(col(JournalRow.id))).all())


def differences(told: State, found: State) -> list[str]:
    """Where the journal's end and the file disagree, one sentence a row that is missing or a value.

    A column that the journal never names for a row (a later version added it) is not compared.
    """
    wrong = []
    for table, key in sorted(told.keys() | found.keys()):
        expected, row = told.get((table, key)), found.get((table, key))
        if expected is None or row is None:
            which = "the journal knows it and the file does not" if row is None else "no entry made it"
            wrong.append(f"{table} {key}: {which}.")
            continue
        wrong += [
            f"{table} {key}: the journal leads to {column} {_words(value)}, the file has {_words(row.get(column))}."
            for column, value in expected.items()
            if column in row and row[column] != value
        ]
    return wrong


def _words(value: object) -> str:
    text = "nothing" if value is None else str(value)
    return text if len(text) <= 80 else f"{text[:77]}…"

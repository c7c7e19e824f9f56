"""A whole meet as one document, out and in again: what comes out after coming in is the same to the byte.

Rows are numbered from 1 within each table, in the order in which they were made; rows that only the journal
still knows keep their number too, so that the journal means the same in another folder. What is derived (the
plan) stays behind and is made anew.
"""

from __future__ import annotations

import json
from collections import defaultdict
from collections.abc import Mapping
from typing import Any, cast

from pydantic import ValidationError
from sqlalchemy import Table, func
from sqlalchemy.exc import IntegrityError, InterfaceError, OperationalError, ProgrammingError, StatementError
from sqlmodel import Session, col, select

from app.loading.mass import parse_mass
from app.store.journal import plain, unplain
from app.store.tables import (
    TABLES,
    AttemptRow,
    FlightRow,
    ImplementRow,
    JournalRow,
    LifterRow,
    LiftRow,
    MeetRow,
    PlateRow,
    PlatformRow,
    RackRow,
    Row,
    SessionRow,
)

FORMAT = 1
MOST_WORDS = 120
ALL: dict[str, type[Row]] = TABLES | {"journal": JournalRow}
LEFT_OUT = {"platform": {"plan"}}
# References that no foreign key declares: two point in a circle, one is the journal's own.
HIDDEN_KEYS = {
    ("platform", "flight_id"): "flight",
    ("platform", "lift_id"): "lift",
    ("platform", "implement_id"): "implement",
    ("journal", "undoes"): "journal",
}

Numbers = dict[str, dict[int, int]]
"""By table: the id in the database → the number in the document."""


# What pydantic, SQLite and we ourselves say to values that no row can have.
DAMAGED = (
    ValidationError,
    IntegrityError,
    InterfaceError,
    ProgrammingError,
    StatementError,
    TypeError,
    ValueError,
    KeyError,
    AttributeError,
    ArithmeticError,
)


class WrongMeetFile(ValueError):
    """A document that is no meet, or not a whole one; the message is one plain sentence."""


def meet_rows(session: Session, meet_id: int) -> dict[str, list[Row]]:
    """Every row of a meet, table by table, in the order in which they were made."""
    found: dict[str, list[Row]] = {"meet": _rows(session, MeetRow, "id", [meet_id])}
    for table, column, above in (
        (PlatformRow, "meet_id", "meet"),
        (ImplementRow, "platform_id", "platform"),
        (PlateRow, "platform_id", "platform"),
        (SessionRow, "platform_id", "platform"),
        (LiftRow, "session_id", "session"),
        (FlightRow, "session_id", "session"),
        (LifterRow, "meet_id", "meet"),
        (RackRow, "lifter_id", "lifter"),
        (AttemptRow, "lifter_id", "lifter"),
        (JournalRow, "meet_id", "meet"),
    ):
        keys = [row.id for row in found[above]]
        found[str(table.__tablename__)] = _rows(session, cast("type[Row]", table), column, keys)
    return found


def _rows(session: Session, table: type[Row], column: str, keys: list[int | None]) -> list[Row]:
    query = select(table).where(col(getattr(table, column)).in_(keys)).order_by(col(table.id))
    return list(session.exec(query).all())


def meet_text(session: Session, meet_id: int) -> str:
    """The meet as a JSON text, always the same for the same meet."""
    rows = meet_rows(session, meet_id)
    numbers = _numbers(rows)
    tables = {
        name: [{"row": numbers[name][cast("int", row.id)]} | _row(name, row, numbers) for row in found]
        for name, found in rows.items()
    }
    document = {"platewright meet": FORMAT, "tables": tables}
    return json.dumps(document, ensure_ascii=False, sort_keys=True, indent=1) + "\n"


def _numbers(rows: Mapping[str, list[Row]]) -> Numbers:
    seen: defaultdict[str, set[int]] = defaultdict(set)
    for name, found in rows.items():
        seen[name] |= {cast("int", row.id) for row in found}
    for entry in cast("list[JournalRow]", rows["journal"]):
        for edit in entry.edits:
            seen[edit["table"]].add(edit["id"])
    return {name: {key: place for place, key in enumerate(sorted(seen[name]), start=1)} for name in ALL}


def _row(name: str, row: Row, numbers: Numbers) -> dict[str, Any]:
    left_out = LEFT_OUT.get(name, set()) | {"id"}
    values = {key: plain(getattr(row, key)) for key in type(row).model_fields if key not in left_out}
    return _renumbered(name, values, numbers)


def references(name: str) -> dict[str, str]:
    """Which columns of a table hold the id of a row of which table."""
    table = cast("Table", ALL[name].__table__)  # type: ignore[attr-defined]  # SQLModel adds it
    declared = {c.name: next(iter(c.foreign_keys)).column.table.name for c in table.c if c.foreign_keys}
    return declared | {column: other for (own, column), other in HIDDEN_KEYS.items() if own == name}


def _renumbered(
    name: str, values: Mapping[str, Any], numbers: Mapping[str, Mapping[int, int]]
) -> dict[str, Any]:
    """The same values with every reference, also those inside JSON, in the other numbering."""
    out = dict(values)
    for column, other in references(name).items():
        if out.get(column) is not None:
            out[column] = _other(numbers, other, out[column])
    for column in ("hand", "ahead") if name == "platform" else ():
        if out.get(column):
            out[column] = out[column] | {"attempt": _other(numbers, "attempt", out[column]["attempt"])}
    if name == "journal":
        out["edits"] = [_edit(edit, numbers) for edit in out["edits"]]
    return out


def _edit(edit: Mapping[str, Any], numbers: Mapping[str, Mapping[int, int]]) -> dict[str, Any]:
    name = edit["table"]
    key = _other(numbers, name, edit["id"])
    sides = {
        side: None if edit[side] is None else _renumbered(name, edit[side], numbers)
        for side in ("before", "after")
    }
    for values in sides.values():
        if values is not None and "id" in values:
            values["id"] = key
    return {"table": name, "id": key} | sides


def _other(numbers: Mapping[str, Mapping[int, int]], table: str, key: object) -> int:
    if not isinstance(key, int) or key not in numbers[table]:
        raise WrongMeetFile(f"The file speaks of {table} {key}, which is not in it.")
    return numbers[table][key]


def load_meet(session: Session, text: str) -> int:
    """Make the meet of a document as a new meet of this folder; its id. Raises :class:`WrongMeetFile`."""
    tables = _read(text)
    numbers = _free_numbers(session, tables)
    try:
        for name in ALL:
            for values in tables[name]:
                session.add(_made(name, values, numbers))
            session.flush()
    except OperationalError:
        raise  # the disk, not the file
    except DAMAGED as error:
        if isinstance(error, WrongMeetFile):
            raise
        raise WrongMeetFile(f"The file is damaged in its table “{name}”{_because(error)}.") from error
    return numbers["meet"][tables["meet"][0]["row"]]


def _because(error: Exception) -> str:
    """Our own readers say what is wrong in words; what a library says is for its programmers."""
    words = str(error).rstrip(".")
    return f": {words}" if type(error) is ValueError and len(words) < MOST_WORDS and "\n" not in words else ""


def _read(text: str) -> dict[str, list[dict[str, Any]]]:
    try:
        document = json.loads(text)
    except (ValueError, RecursionError):
        raise WrongMeetFile("This is not a meet file: it is not JSON.") from None
    if not isinstance(document, dict) or document.get("platewright meet") != FORMAT:
        raise WrongMeetFile("This is not a meet file of this version of Platewright.")
    tables = document.get("tables")
    if not isinstance(tables, dict) or set(tables) != set(ALL) or not all(map(_is_table, tables.values())):
        raise WrongMeetFile("The meet file is not complete.")
    if len(tables["meet"]) != 1:
        raise WrongMeetFile("The file must hold exactly one meet.")
    return cast("dict[str, list[dict[str, Any]]]", tables)


def _is_table(rows: object) -> bool:
    return isinstance(rows, list) and all(
        isinstance(row, dict) and type(row.get("row")) is int and 0 < row["row"] < 10_000_000 for row in rows
    )


def _free_numbers(session: Session, tables: Mapping[str, list[dict[str, Any]]]) -> Numbers:
    """The document's number → an id that is free here, in the same order."""
    used: defaultdict[str, set[int]] = defaultdict(set)
    for name, rows in tables.items():
        used[name] |= {row["row"] for row in rows}
    for entry in tables["journal"]:
        for edit in entry.get("edits") or ():
            if (
                not isinstance(edit, dict)
                or edit.get("table") not in TABLES
                or type(edit.get("id")) is not int
            ):
                raise WrongMeetFile("The file's journal is damaged.")
            used[edit["table"]].add(edit["id"])
    last = _last_used(session)
    return {name: {number: last[name] + number for number in used[name]} for name in ALL}


def _last_used(session: Session) -> dict[str, int]:
    """The highest id that each table has or, as the journal remembers it, ever had: none is used twice."""
    last = {
        name: int(session.exec(select(func.max(col(table.id)))).one() or 0) for name, table in ALL.items()
    }
    for edits in session.exec(select(JournalRow.edits)):
        for edit in edits:
            last[edit["table"]] = max(last[edit["table"]], edit["id"])
    return last


def _made(name: str, values: Mapping[str, Any], numbers: Numbers) -> Row:
    table = ALL[name]
    known = set(table.model_fields) - LEFT_OUT.get(name, set()) - {"id"}
    given = {key: value for key, value in values.items() if key != "row"}
    if set(given) != known:
        raise WrongMeetFile(f"A row of the table “{name}” has other columns than this version knows.")
    moved = _renumbered(name, given, numbers)
    typed = {key: _typed(name, key, value) for key, value in moved.items()}
    return table.model_validate(typed | {"id": numbers[name][values["row"]]})


def _typed(name: str, column: str, value: Any) -> Any:
    if name == "journal":
        return value
    if name == "platform" and column == "bar" and value is not None:
        for face in value:
            parse_mass(face)
    return unplain(name, column, value)

"""A whole meet out to one file and in again; results and the journal as tables."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Sequence
from typing import Any

from sqlmodel import Session, col, select

from app.desk.entry import Desk, kept
from app.desk.errors import NotAllowedNow
from app.desk.meet_check import check_meet
from app.desk.roster import pictures
from app.desk.settle import settle
from app.loading.mass import show_mass
from app.meet.model import RESULT_WORDS, Result
from app.store.engine import reading
from app.store.meet_file import WrongMeetFile, load_meet, meet_text
from app.store.picture import Picture, get, key
from app.store.tables import JournalRow, MeetRow, PlatformRow

RESULT_COLUMNS = (
    "platform",
    "session",
    "flight",
    "lot",
    "lifter",
    "body weight",
    "lift",
    "attempt",
    "weight",
    "result",
)
JOURNAL_COLUMNS = ("number", "at", "who", "what", "platform", "revision", "undoes")


def export_meet(desk: Desk, meet_id: int) -> str:
    """The whole meet as one JSON text."""
    with reading(desk.engine) as session:
        get(session, MeetRow, meet_id, "meet")
        return meet_text(session, meet_id)


def import_meet(desk: Desk, text: str) -> int:
    """A meet file becomes another meet of this folder, beside those that are there; its id."""
    with kept(desk.engine) as session:
        try:
            meet_id = load_meet(session, text)
            check_meet(session, meet_id)
        except WrongMeetFile as wrong:
            raise NotAllowedNow(f"{wrong} Nothing was taken in.") from wrong
        for row in session.exec(select(PlatformRow).where(PlatformRow.meet_id == meet_id)).all():
            settle(session, key(row), desk.budget)  # the plan is derived and was left out of the file
        return meet_id


def results(desk: Desk, meet_id: int) -> list[dict[str, Any]]:
    """Every attempt that was handed in, flight by flight, in the words of the score sheet."""
    with reading(desk.engine) as session:
        return [row for now in pictures(session, meet_id) for row in _results_of(now)]


def _results_of(now: Picture) -> list[dict[str, Any]]:
    rows = []
    for _, session, programme in now.sessions:
        lifters = {lifter.id: lifter for lifter in programme.lifters}
        flights = {flight.id: flight.name for flight in programme.flights}
        attempts = sorted(programme.attempts, key=lambda a: (lifters[a.lifter_id].lot, a.lift_id, a.number))
        for attempt in attempts:
            if attempt.weight is None and attempt.result is Result.OPEN:
                continue
            lifter = lifters[attempt.lifter_id]
            values = (
                now.platform,
                session,
                flights[lifter.flight_id],
                lifter.lot,
                lifter.name,
                "" if lifter.body_weight is None else show_mass(lifter.body_weight),
                programme.lift(attempt.lift_id).name,
                attempt.number,
                "" if attempt.weight is None else show_mass(attempt.weight),
                RESULT_WORDS[attempt.result],
            )
            rows.append(dict(zip(RESULT_COLUMNS, values, strict=True)))
    return rows


def journal(desk: Desk, meet_id: int) -> list[dict[str, Any]]:
    """Every entry of the meet, oldest first, with what it changed."""
    with reading(desk.engine) as session:
        get(session, MeetRow, meet_id, "meet")
        return [_entry(session, row) for row in _journal_rows(session, meet_id)]


def _journal_rows(session: Session, meet_id: int) -> Sequence[JournalRow]:
    query = select(JournalRow).where(JournalRow.meet_id == meet_id).order_by(col(JournalRow.id))
    return session.exec(query).all()


def _entry(session: Session, row: JournalRow) -> dict[str, Any]:
    platform = "" if row.platform_id is None else get(session, PlatformRow, row.platform_id, "platform").name
    values = (row.id, row.at.isoformat(), row.who, row.what, platform, row.revision, row.undoes)
    return dict(zip(JOURNAL_COLUMNS, values, strict=True)) | {"edits": row.edits}


def as_csv(columns: Sequence[str], rows: Sequence[dict[str, Any]]) -> str:
    """Rows as CSV; a text that a spreadsheet would run as a formula is set off by an apostrophe."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\r\n")
    writer.writerow(columns)
    for row in rows:
        writer.writerow([_cell(row[column]) for column in columns])
    return out.getvalue()


def _cell(value: object) -> object:
    return f"'{value}" if isinstance(value, str) and value[:1] in tuple("=+-@\t\r") else value


def as_json(rows: Sequence[dict[str, Any]]) -> str:
    """Rows as JSON."""
    return json.dumps(rows, ensure_ascii=False, indent=1) + "\n"

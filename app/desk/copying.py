"""A new meet set up like an earlier one: its platforms, iron, sessions, lifts and rules, but none of its day."""

from __future__ import annotations

from typing import TypeVar

from sqlmodel import Session, col, select

from app.desk.entry import Desk, meet_entry
from app.desk.setup import checked_name
from app.store.picture import get, key
from app.store.tables import ImplementRow, LiftRow, MeetRow, PlateRow, PlatformRow, Row, SessionRow

T = TypeVar("T", bound=Row)


def copy_meet(desk: Desk, meet_id: int, name: str, *, who: str) -> int:
    """The copy's id. Flights go with the people, so there are none; every bar is empty; one line of journal."""
    name = checked_name(name, "the new meet")
    with meet_entry(desk, 0, who) as work:
        model = get(work.session, MeetRow, meet_id, "meet")
        meet = MeetRow(name=name, unit=model.unit, created_at=work.now, owned=model.owned)
        _keep(work.session, meet)
        work.meet_id = key(meet)
        for platform in _of(work.session, PlatformRow, "meet_id", meet_id):
            copied = PlatformRow(meet_id=key(meet), name=platform.name, changed_at=work.now, bar=[])
            _keep(work.session, copied)
            _copy_platform(work.session, key(platform), key(copied))
        work.what = f"meet {name} started as a copy of {model.name}"
        return key(meet)


def _copy_platform(session: Session, old: int, new: int) -> None:
    for plate in _of(session, PlateRow, "platform_id", old):
        _keep(session, _like(plate, platform_id=new))
    tools = {
        key(tool): key(_keep(session, _like(tool, platform_id=new)))
        for tool in _of(session, ImplementRow, "platform_id", old)
    }
    for block in _of(session, SessionRow, "platform_id", old):
        copied = key(_keep(session, _like(block, platform_id=new)))
        for lift in _of(session, LiftRow, "session_id", key(block)):
            _keep(session, _like(lift, session_id=copied, implement_id=tools[lift.implement_id]))


def _of(session: Session, table: type[T], column: str, number: int) -> list[T]:
    query = select(table).where(getattr(table, column) == number).order_by(col(table.id))
    return list(session.exec(query).all())


def _like(row: T, **other: int) -> T:
    """The same row under another number, belonging to something else."""
    return type(row)(**{name: getattr(row, name) for name in type(row).model_fields if name != "id"} | other)


def _keep(session: Session, row: T) -> T:
    session.add(row)
    session.flush()
    return row

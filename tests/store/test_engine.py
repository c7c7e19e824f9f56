"""The database as a small durable server: whole transactions, one writer at a time, readers undisturbed."""

from __future__ import annotations

from datetime import UTC, datetime
from fractions import Fraction
from pathlib import Path

import pytest
from alembic import command
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from sqlalchemy import inspect, text
from sqlalchemy.exc import IntegrityError
from sqlmodel import select

from app.desk.entry import Desk
from app.store.engine import make_engine, reading, writing
from app.store.migrate import config, upgrade
from app.store.tables import TABLES, MeetRow, PlateRow, PlatformRow

AT = datetime(2026, 3, 7, 9, 0, tzinfo=UTC)


def names(desk: Desk) -> list[str]:
    with reading(desk.engine) as session:
        return [row.name for row in session.exec(select(MeetRow))]


def test_what_was_written_in_one_go_is_there_afterwards(desk: Desk) -> None:
    with writing(desk.engine) as session:
        session.add(MeetRow(name="Harbour Cup", created_at=AT))
    assert names(desk) == ["Harbour Cup"]


def test_an_error_half_way_leaves_nothing(desk: Desk) -> None:
    def fail() -> None:
        with writing(desk.engine) as session:
            session.add(MeetRow(name="Harbour Cup", created_at=AT))
            session.flush()
            raise ZeroDivisionError

    with pytest.raises(ZeroDivisionError):
        fail()
    assert names(desk) == []


def test_a_reader_sees_one_moment_though_somebody_writes_meanwhile(desk: Desk) -> None:
    with reading(desk.engine) as session:
        assert session.exec(select(MeetRow)).all() == []
        with writing(desk.engine) as other:
            other.add(MeetRow(name="Harbour Cup", created_at=AT))
        assert session.exec(select(MeetRow)).all() == []
    assert names(desk) == ["Harbour Cup"]


def test_an_acknowledged_entry_is_on_the_disk_and_ids_point_at_something(desk: Desk) -> None:
    """WAL with synchronous=FULL syncs the log at every commit (SQLite documentation, PRAGMA synchronous: FULL is 2)."""
    with desk.engine.connect() as connection:
        found = {
            pragma: connection.execute(text(f"PRAGMA {pragma}")).scalar_one()
            for pragma in ("journal_mode", "synchronous", "foreign_keys", "busy_timeout")
        }
    assert found == {"journal_mode": "wal", "synchronous": 2, "foreign_keys": 1, "busy_timeout": 5000}
    with pytest.raises(IntegrityError), writing(desk.engine) as session:
        session.add(PlatformRow(meet_id=99, name="Nowhere", changed_at=AT))


def test_a_number_is_never_given_twice(desk: Desk) -> None:
    with writing(desk.engine) as session:
        session.add(MeetRow(name="First", created_at=AT))
    with writing(desk.engine) as session:
        session.delete(session.get_one(MeetRow, 1))
    with writing(desk.engine) as session:
        session.add(MeetRow(name="Second", created_at=AT))
    with reading(desk.engine) as session:
        assert session.exec(select(MeetRow.id)).all() == [2]


def test_every_table_of_a_migrated_file_gives_its_numbers_once(desk: Desk) -> None:
    with desk.engine.connect() as connection:
        found = connection.execute(text("SELECT name, sql FROM sqlite_master WHERE type = 'table'"))
        made = {row.name: row.sql for row in found}
    assert [name for name in (*TABLES, "journal") if "AUTOINCREMENT" not in made[name]] == []


def test_times_come_back_aware_and_in_utc(desk: Desk) -> None:
    with writing(desk.engine) as session:
        session.add(MeetRow(name="Harbour Cup", created_at=AT))
    with reading(desk.engine) as session:
        found = session.exec(select(MeetRow)).one().created_at
    assert (found, found.utcoffset()) == (AT, AT.utcoffset())


@settings(max_examples=30, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(
    face=st.fractions(0, 1000, max_denominator=10**6).map(lambda mass: Fraction(round(mass * 10**8), 10**8)),
    thickness=st.one_of(st.none(), st.decimals("0.01", "99", places=2).map(Fraction)),
)
def test_masses_and_lengths_come_back_exactly(desk: Desk, face: Fraction, thickness: Fraction | None) -> None:
    with writing(desk.engine) as session:
        meet = MeetRow(name="Harbour Cup", created_at=AT)
        session.add(meet)
        session.flush()
        platform = PlatformRow(meet_id=meet.id, name="Hall", changed_at=AT)
        session.add(platform)
        session.flush()
        plate = PlateRow(platform_id=platform.id, face=face, count=2, thickness_mm=thickness)
        session.add(plate)
        session.flush()
        number = plate.id
    with reading(desk.engine) as session:
        found = session.get_one(PlateRow, number)
        assert (found.face, found.thickness_mm) == (face, thickness)


def test_a_fresh_file_brought_up_to_date_is_just_what_the_program_works_with(tmp_path: Path) -> None:
    url = f"sqlite:///{tmp_path / 'fresh.db'}"
    upgrade(url)
    command.check(config(url))


def test_bringing_a_file_up_to_date_twice_changes_nothing(tmp_path: Path) -> None:
    url = f"sqlite:///{tmp_path / 'twice.db'}"
    upgrade(url)
    engine = make_engine(url)
    with writing(engine) as session:
        session.add(MeetRow(name="Harbour Cup", created_at=AT))
    upgrade(url)
    with reading(engine) as session:
        assert session.exec(select(MeetRow.name)).all() == ["Harbour Cup"]
    engine.dispose()


def test_the_way_back_takes_every_table_away(tmp_path: Path) -> None:
    url = f"sqlite:///{tmp_path / 'back.db'}"
    upgrade(url)
    command.downgrade(config(url), "base")
    engine = make_engine(url)
    assert inspect(engine).get_table_names() == ["alembic_version"]
    engine.dispose()

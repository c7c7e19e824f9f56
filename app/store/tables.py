"""The tables. They are not the domain: :mod:`app.store.convert` turns rows into the meet's own nouns.

Masses are stored as exact decimal text in the meet's unit, never as floats. Times are aware UTC.
"""

from __future__ import annotations

from datetime import datetime
from fractions import Fraction
from typing import Any

from sqlalchemy import JSON, Column, Dialect, String, UniqueConstraint
from sqlalchemy.types import TypeDecorator
from sqlmodel import Field, SQLModel

from app.loading.mass import parse_mass, show_mass

SQLModel.metadata.naming_convention = {
    "ix": "ix_%(table_name)s_%(column_0_name)s",
    "uq": "uq_%(table_name)s_%(column_0_name)s",
    "fk": "fk_%(table_name)s_%(column_0_name)s_%(referred_table_name)s",
    "pk": "pk_%(table_name)s",
}


class Exact(TypeDecorator[Fraction]):
    """A mass or a length as exact decimal text, read back as the same fraction."""

    impl = String(32)
    cache_ok = True

    def process_bind_param(self, value: Fraction | None, dialect: Dialect) -> str | None:  # noqa: ARG002 - SQLAlchemy's signature
        """To the database."""
        return None if value is None else show_mass(value)

    def process_result_value(self, value: str | None, dialect: Dialect) -> Fraction | None:  # noqa: ARG002 - SQLAlchemy's signature
        """From the database."""
        return None if value is None else parse_mass(value)


def _exact(*, nullable: bool = False) -> Any:
    return Field(default=None, sa_column=Column(Exact(), nullable=nullable))


def _key(table: str, *, nullable: bool = False) -> Any:
    return Field(default=None, foreign_key=f"{table}.id", nullable=nullable, index=True)


def _json() -> Any:
    return Field(default=None, sa_column=Column(JSON(none_as_null=True), nullable=True))


# A number is never given twice: an undo that brings a row back, and a page that still names one that has gone,
# must not meet another row under the old number.
ONCE = {"sqlite_autoincrement": True}


class Row(SQLModel):
    """What all tables share: a number of their own."""

    __table_args__: Any = ONCE
    id: int | None = Field(default=None, primary_key=True)


class MeetRow(Row, table=True):
    """A meet: its name and the one unit of all its masses."""

    __tablename__ = "meet"
    name: str
    unit: str = "kg"
    created_at: datetime
    owned: dict[str, int] | None = _json()  # pieces the meet owns, by face; null = not counted


class PlatformRow(Row, table=True):
    """A platform: what it is lifting, what is on the bar, the plan, and the revision all its pages name."""

    __tablename__ = "platform"
    meet_id: int = _key("meet")
    name: str
    revision: int = 0
    changed_at: datetime
    # No foreign keys here: flight and lift point back to the platform, and a circle cannot be created in order.
    flight_id: int | None = Field(default=None)
    lift_id: int | None = Field(default=None)
    condition: str = "idle"
    loaded_at: datetime | None = None
    implement_id: int | None = Field(default=None)
    bar: list[str] | None = _json()  # faces a side, inside to outside; null = nobody knows
    hand: dict[str, Any] | None = _json()
    spare: list[str] | None = _json()  # what is on the belt that is free; null = nobody knows
    ahead: dict[str, Any] | None = _json()  # the instruction by which the free belt is made up
    plan: dict[str, Any] | None = _json()


class ImplementRow(Row, table=True):
    """A bar or a belt, with its own collars."""

    __tablename__ = "implement"
    platform_id: int = _key("platform")
    name: str
    kind: str  # "bar" or "belt"
    pieces: int = 1  # how many of it are in circulation
    mass: Fraction = _exact()
    usable_mm: Fraction | None = _exact(nullable=True)
    collar_mass: Fraction | None = _exact(nullable=True)
    collar_width_mm: Fraction | None = _exact(nullable=True)


class PlateRow(Row, table=True):
    """The plates of one face value that stand at a platform."""

    __tablename__ = "plate"
    __table_args__ = (UniqueConstraint("platform_id", "face"), ONCE)
    platform_id: int = _key("platform")
    face: Fraction = _exact()
    count: int
    thickness_mm: Fraction | None = _exact(nullable=True)
    diameter_mm: Fraction | None = _exact(nullable=True)
    colour: str = "#777777"


class SessionRow(Row, table=True):
    """A block of flights that lift the same lifts on one platform."""

    __tablename__ = "session"
    platform_id: int = _key("platform")
    name: str
    position: int = 0
    rules: dict[str, Any] | None = _json()


class LiftRow(Row, table=True):
    """A lift of a session: on which implement, in which steps, and how its stacks are to be chosen."""

    __tablename__ = "lift"
    session_id: int = _key("session")
    name: str
    position: int = 0
    implement_id: int = _key("implement")
    step: Fraction = _exact()
    loading: dict[str, Any] | None = _json()


class FlightRow(Row, table=True):
    """A flight of a session."""

    __tablename__ = "flight"
    __table_args__ = (UniqueConstraint("session_id", "name"), ONCE)
    session_id: int = _key("session")
    name: str
    position: int = 0
    owner: str = ""  # the official who enters for it; others see, and take over explicitly
    starts_at: datetime | None = None


class LifterRow(Row, table=True):
    """A lifter; the lot number is unique in the meet."""

    __tablename__ = "lifter"
    __table_args__ = (UniqueConstraint("meet_id", "lot"), ONCE)
    meet_id: int = _key("meet")
    flight_id: int = _key("flight")
    name: str
    lot: int
    body_weight: Fraction | None = _exact(nullable=True)
    withdrawn: bool = False


class RackRow(Row, table=True):
    """What is set for a lifter in one lift: rack height, in or out, chain length, as the card says it."""

    __tablename__ = "rack"
    __table_args__ = (UniqueConstraint("lifter_id", "lift_id"), ONCE)
    lifter_id: int = _key("lifter")
    lift_id: int = _key("lift")
    setting: str


class AttemptRow(Row, table=True):
    """One attempt. ``version`` rises with each change: a form that saw an older one is refused."""

    __tablename__ = "attempt"
    __table_args__ = (UniqueConstraint("lifter_id", "lift_id", "number"), ONCE)
    lifter_id: int = _key("lifter")
    lift_id: int = _key("lift")
    number: int
    weight: Fraction | None = _exact(nullable=True)
    result: str = "open"
    version: int = 0
    entered_by: str = ""
    entered_at: datetime | None = None
    changes: int = 0  # how often one handed-in weight was replaced by another
    record: bool = False
    retake: str | None = None  # where a retake that was granted goes; null = no retake
    lifted_at: datetime | None = None


class JournalRow(Row, table=True):
    """One change of a meet: who, when, what, and every row it touched before and after. Only ever added to."""

    __tablename__ = "journal"
    meet_id: int = _key("meet")
    platform_id: int | None = _key("platform", nullable=True)
    revision: int | None = None
    at: datetime
    who: str
    what: str
    edits: list[dict[str, Any]] = Field(default_factory=list, sa_column=Column(JSON, nullable=False))
    undoes: int | None = Field(default=None)


TABLES: dict[str, type[Row]] = {
    str(table.__tablename__): table
    for table in (
        MeetRow,
        PlatformRow,
        ImplementRow,
        PlateRow,
        SessionRow,
        LiftRow,
        FlightRow,
        LifterRow,
        RackRow,
        AttemptRow,
    )
}

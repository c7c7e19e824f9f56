"""One consistent look at a platform or a meet, as frozen dataclasses of the pure rooms."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from datetime import datetime
from fractions import Fraction
from typing import Any, TypeVar, cast

from sqlmodel import Session, col, select

from app.loading.equipment import Collar, Equipment, Implement, Plate
from app.loading.mass import parse_mass, show_mass
from app.meet.horizon import Programme
from app.meet.model import Attempt, Flight, Lift, Lifter, Result
from app.meet.platform import Bar, Condition, Hand
from app.meet.rule_reading import read_rules
from app.meet.rules import Rules
from app.store.tables import (
    AttemptRow,
    FlightRow,
    ImplementRow,
    LifterRow,
    LiftRow,
    MeetRow,
    PlateRow,
    PlatformRow,
    RackRow,
    Row,
    SessionRow,
)


class NotFound(Exception):
    """Something asked for by number that is not there.

    No frozen dataclass: a context manager that an exception passes through sets its traceback.
    """

    def __init__(self, what: str) -> None:
        super().__init__(
            f"There is no such {what} here. It may have been taken away; go back and choose again."
        )
        self.what = what


@dataclass(frozen=True, slots=True)
class PlateStock:
    """A plate as the platform owns it: what the planner needs, and how it is drawn."""

    id: int
    plate: Plate
    colour: str


@dataclass(frozen=True, slots=True)
class Tool:
    """A bar or belt by name, with its collars."""

    id: int
    name: str
    kind: str
    implement: Implement
    collar: Collar | None
    pieces: int = 1


@dataclass(frozen=True, slots=True)
class Picture:
    """Everything about one platform at one revision."""

    meet_id: int
    meet: str
    unit: str
    platform_id: int
    platform: str
    revision: int
    changed_at: datetime
    flight_id: int | None
    lift_id: int | None
    implement_id: int | None
    bar: Bar
    plan: dict[str, Any] | None
    stock: tuple[PlateStock, ...]
    tools: tuple[Tool, ...]
    sessions: tuple[tuple[int, str, Programme], ...]
    rules: dict[int, Rules]  # by session id
    loading: dict[int, dict[str, Any]]  # by lift id
    racks: dict[tuple[int, int], str]  # by (lifter id, lift id)

    def tool(self, implement_id: int) -> Tool:
        """The bar or belt with this id."""
        return next(tool for tool in self.tools if tool.id == implement_id)

    def equipment(self, lift_id: int) -> Equipment:
        """What a lift is loaded with: its implement, collars, and this platform's plates."""
        tool = self.tool(self.programme(lift_id).lift(lift_id).implement_id)
        return Equipment(tool.implement, tool.collar, tuple(item.plate for item in self.stock))

    def programme(self, lift_id: int) -> Programme:
        """The session that a lift belongs to."""
        return next(p for _, _, p in self.sessions if any(lift.id == lift_id for lift in p.lifts))

    def programme_of_flight(self, flight_id: int) -> Programme:
        """The session that a flight belongs to."""
        return next(p for _, _, p in self.sessions if any(one.id == flight_id for one in p.flights))


T = TypeVar("T", bound=Row)


def get(session: Session, table: type[T], key: int | None, what: str) -> T:
    """The row with this id, or :class:`NotFound` in the words of a person."""
    row = session.get(table, key) if key is not None else None
    if row is None:
        raise NotFound(what)
    return row


def picture(session: Session, platform_id: int) -> Picture:
    """Read a platform whole: the same few queries for any number of lifters."""
    platform = get(session, PlatformRow, platform_id, "platform")
    meet = get(session, MeetRow, platform.meet_id, "meet")
    sessions = session.exec(
        select(SessionRow).where(SessionRow.platform_id == platform_id).order_by(col(SessionRow.position))
    ).all()
    session_ids = [key(row) for row in sessions]
    lifts = session.exec(select(LiftRow).where(col(LiftRow.session_id).in_(session_ids))).all()
    flights = session.exec(select(FlightRow).where(col(FlightRow.session_id).in_(session_ids))).all()
    flight_ids = [key(row) for row in flights]
    lifters = session.exec(select(LifterRow).where(col(LifterRow.flight_id).in_(flight_ids))).all()
    lift_ids = [key(row) for row in lifts]
    attempts = session.exec(select(AttemptRow).where(col(AttemptRow.lift_id).in_(lift_ids))).all()
    racks = session.exec(select(RackRow).where(col(RackRow.lift_id).in_(lift_ids))).all()
    return Picture(
        meet_id=key(meet),
        meet=meet.name,
        unit=meet.unit,
        platform_id=platform_id,
        platform=platform.name,
        revision=platform.revision,
        changed_at=platform.changed_at,
        flight_id=platform.flight_id,
        lift_id=platform.lift_id,
        implement_id=platform.implement_id,
        bar=to_bar(platform),
        plan=platform.plan,
        stock=stock(session, platform_id),
        tools=tools(session, platform_id),
        sessions=tuple(
            (key(row), row.name, _programme(row, lifts, flights, lifters, attempts, meet.unit))
            for row in sessions
        ),
        rules={key(row): to_rules(row, meet.unit) for row in sessions},
        loading={key(row): row.loading or {} for row in lifts},
        racks={(row.lifter_id, row.lift_id): row.setting for row in racks},
    )


def _programme(
    row: SessionRow,
    lifts: Sequence[LiftRow],
    flights: Sequence[FlightRow],
    lifters: Sequence[LifterRow],
    attempts: Sequence[AttemptRow],
    unit: str,
) -> Programme:
    own_lifts = [one for one in lifts if one.session_id == row.id]
    own_flights = [one for one in flights if one.session_id == row.id]
    lift_ids, flight_ids = {one.id for one in own_lifts}, {one.id for one in own_flights}
    own_lifters = [one for one in lifters if one.flight_id in flight_ids]
    lifter_ids = {one.id for one in own_lifters}
    return Programme(
        lifts=tuple(sorted(map(to_lift, own_lifts), key=lambda one: one.position)),
        flights=tuple(sorted(map(to_flight, own_flights), key=lambda one: one.position)),
        lifters=tuple(map(to_lifter, own_lifters)),
        attempts=tuple(
            to_attempt(one) for one in attempts if one.lift_id in lift_ids and one.lifter_id in lifter_ids
        ),
        rules=to_rules(row, unit),
    )


def stock(session: Session, platform_id: int) -> tuple[PlateStock, ...]:
    """The platform's plates, heaviest first."""
    rows = session.exec(select(PlateRow).where(PlateRow.platform_id == platform_id)).all()
    found = (
        PlateStock(key(row), Plate(row.face, row.count, row.thickness_mm, row.diameter_mm), row.colour)
        for row in rows
    )
    return tuple(sorted(found, key=lambda item: -item.plate.face))


def tools(session: Session, platform_id: int) -> tuple[Tool, ...]:
    """The platform's bars and belts."""
    rows = session.exec(
        select(ImplementRow).where(ImplementRow.platform_id == platform_id).order_by(col(ImplementRow.id))
    )
    return tuple(to_tool(row) for row in rows)


def key(row: Row) -> int:
    """The id of a row that has been written."""
    return cast("int", row.id)


def to_tool(row: ImplementRow) -> Tool:
    """A bar has two equal ends, a belt one stack; a collar only where it has a mass or a width."""
    collar = None
    if row.collar_mass is not None:
        collar = Collar(row.collar_mass, row.collar_width_mm)
    return Tool(
        key(row),
        row.name,
        row.kind,
        Implement(row.mass, 2 if row.kind == "bar" else 1, row.usable_mm),
        collar,
        row.pieces,
    )


def to_rules(row: SessionRow, unit: str) -> Rules:
    """The session's rules; those that were never set are the preset's. Stored texts were checked when kept."""
    rules = read_rules(row.rules or {}, unit)
    if isinstance(rules, list):
        raise ValueError(  # noqa: TRY004 - a list of sentences is what the reader returns, not a wrong type
            f"The stored rules of {row.name} cannot be read: {' '.join(rules)}"
        )
    return rules


def to_lift(row: LiftRow) -> Lift:
    """The lift as the rules see it."""
    return Lift(key(row), row.name, row.position, row.implement_id, row.step)


def to_flight(row: FlightRow) -> Flight:
    """The flight as the rules see it."""
    return Flight(key(row), row.name, row.position)


def to_lifter(row: LifterRow) -> Lifter:
    """The lifter as the rules see them."""
    return Lifter(key(row), row.name, row.lot, row.flight_id, row.body_weight, row.withdrawn)


def to_attempt(row: AttemptRow) -> Attempt:
    """The attempt as the rules see it."""
    return Attempt(
        id=key(row),
        lifter_id=row.lifter_id,
        lift_id=row.lift_id,
        number=row.number,
        weight=row.weight,
        result=Result(row.result),
        version=row.version,
        entered_by=row.entered_by,
        changes=row.changes,
        record=row.record,
        retake=row.retake or "",
        lifted_at=row.lifted_at,
    )


def faces(stack: Sequence[Fraction]) -> list[str]:
    """A stack as JSON holds it."""
    return [show_mass(face) for face in stack]


def to_stack(stored: Sequence[str] | None) -> tuple[Fraction, ...] | None:
    """A stored stack; None stays None: nobody knows."""
    return None if stored is None else tuple(parse_mass(face) for face in stored)


def to_bar(row: PlatformRow) -> Bar:
    """What is on the bar, from the platform's row."""
    return Bar(
        Condition(row.condition),
        to_stack(row.bar),
        _to_hand(row.hand),
        to_stack(row.spare),
        _to_hand(row.ahead),
    )


def _to_hand(stored: Mapping[str, Any] | None) -> Hand | None:
    if stored is None:
        return None
    return Hand(
        attempt_id=stored["attempt"],
        weight=parse_mass(stored["weight"]),
        before=to_stack(stored["before"]),
        stack=to_stack(stored["stack"]) or (),
        why=stored.get("why", ""),
    )


def store_bar(row: PlatformRow, bar: Bar) -> None:
    """Write the iron back, if it is not as it was (an equal value must not look like a change)."""
    stored = {
        "condition": bar.condition.value,
        "bar": _stored_stack(bar.carries),
        "hand": _stored_hand(bar.hand),
        "spare": _stored_stack(bar.spare),
        "ahead": _stored_hand(bar.ahead),
    }
    for column, value in stored.items():
        if getattr(row, column) != value:
            setattr(row, column, value)


def _stored_stack(stack: Sequence[Fraction] | None) -> list[str] | None:
    return None if stack is None else faces(stack)


def _stored_hand(hand: Hand | None) -> dict[str, Any] | None:
    if hand is None:
        return None
    return {
        "attempt": hand.attempt_id,
        "weight": show_mass(hand.weight),
        "before": _stored_stack(hand.before),
        "stack": faces(hand.stack),
        "why": hand.why,
    }

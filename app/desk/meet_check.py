"""Is a meet that came from a file fit to be worked with? A file may have been damaged, or written by hand.

Types and references are looked to while the rows are made. Here is looked to what no column can say: that a value
is one the program knows, that what belongs together belongs to the same platform, and that everything the pages and
the plan will ask of the meet can be answered.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping, Sequence
from typing import Any, TypeVar, cast

from sqlmodel import Session

from app.desk.equipment import LONGEST_MM, MOST_KINDS, MOST_PIECES
from app.desk.wish import plan_request, read_wish
from app.loading.chart import loadable
from app.loading.mass import parse_mass
from app.meet.declare import HEAVIEST
from app.meet.model import Result
from app.meet.rules import RetakePlace
from app.planning import Refusal
from app.store.journal import unplain
from app.store.meet_file import WrongMeetFile, meet_rows
from app.store.picture import Picture, key, picture
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
    Row,
    SessionRow,
)

T = TypeVar("T", bound=Row)
MOST_ON_AN_END = 40
MOST_LETTERS = 200
LAST_ATTEMPT = 4

# What a part of the program says, by itself, to data that it cannot read.
UNREADABLE = (ValueError, KeyError, TypeError, AttributeError, StopIteration, ArithmeticError, IndexError)


def check_meet(session: Session, meet_id: int) -> None:
    """Raise :class:`WrongMeetFile` with the first thing that is wrong, as one plain sentence."""
    rows = meet_rows(session, meet_id)
    try:
        wrong = next(_wrong(session, rows), None)
    except UNREADABLE as error:
        raise WrongMeetFile("The file is damaged: what is in it does not fit together.") from error
    if wrong is not None:
        raise WrongMeetFile(f"The file is damaged: {wrong}.")


def _of(rows: Mapping[str, Sequence[Row]], table: type[T]) -> list[T]:
    return cast("list[T]", rows[str(table.__tablename__)])


def _wrong(session: Session, rows: Mapping[str, Sequence[Row]]) -> Iterator[str]:
    yield from _names(rows)
    yield from _iron(rows)
    yield from _people(rows)
    yield from _places(rows)
    yield from _journal(_of(rows, JournalRow))
    for row in _of(rows, PlatformRow):
        yield from _answerable(picture(session, key(row)))


def _names(rows: Mapping[str, Sequence[Row]]) -> Iterator[str]:
    for table in (MeetRow, PlatformRow, ImplementRow, SessionRow, LiftRow, FlightRow, LifterRow):
        for row in _of(rows, cast("type[Row]", table)):
            name = getattr(row, "name", "")
            if not name.strip() or len(name) > MOST_LETTERS or not name.isprintable():
                yield f"a {table.__tablename__} has no name that can be read"
    for meet in _of(rows, MeetRow):
        if meet.unit not in ("kg", "lb"):
            yield "the unit of the meet is neither kg nor lb"
        for face, count in (meet.owned or {}).items():
            if parse_mass(face) <= 0 or type(count) is not int or count < 0:
                yield "what the meet owns cannot be read"


def _iron(rows: Mapping[str, Sequence[Row]]) -> Iterator[str]:
    for plate in _of(rows, PlateRow):
        lengths = (plate.thickness_mm, plate.diameter_mm)
        if not 0 <= plate.count <= MOST_PIECES or not 0 < plate.face <= LONGEST_MM:
            yield "there is a plate of no possible face or count"
        if any(one is not None and not 0 < one <= LONGEST_MM for one in lengths):
            yield "there is a plate of no possible size"
        if not re.fullmatch(r"#[0-9a-f]{6}", plate.colour):
            yield "there is a plate of no known colour"
    kinds = [plate.platform_id for plate in _of(rows, PlateRow)]
    if any(kinds.count(platform) > MOST_KINDS for platform in set(kinds)):
        yield f"there are more than {MOST_KINDS} kinds of plates at one platform"
    for tool in _of(rows, ImplementRow):
        collar = (tool.usable_mm, tool.collar_mass, tool.collar_width_mm)
        if (
            tool.kind not in ("bar", "belt")
            or not 0 <= tool.mass <= LONGEST_MM
            or not 1 <= tool.pieces <= MOST_PIECES
        ):
            yield "there is a bar or belt of no possible kind, mass or number"
        if any(one is not None and not 0 <= one <= LONGEST_MM for one in collar):
            yield "there is a bar or belt of no possible size"


def _people(rows: Mapping[str, Sequence[Row]]) -> Iterator[str]:
    for lifter in _of(rows, LifterRow):
        if not 0 < lifter.lot < 10**6:
            yield "there is a lot number that is none"
        if lifter.body_weight is not None and not 0 < lifter.body_weight <= HEAVIEST:
            yield "there is a body weight that nobody has"
    for attempt in _of(rows, AttemptRow):
        if not 1 <= attempt.number <= LAST_ATTEMPT or attempt.result not in set(Result):
            yield "there is an attempt of no known number or result"
        if attempt.weight is not None and not 0 <= attempt.weight <= HEAVIEST:
            yield "there is a weight that no bar carries"
        if attempt.retake is not None and attempt.retake not in set(RetakePlace):
            yield "there is a retake at no known place"
        if attempt.version < 0 or attempt.changes < 0:
            yield "there is an attempt changed less than never"
    for lift in _of(rows, LiftRow):
        if not 0 < lift.step <= HEAVIEST:
            yield "there is a lift in steps of nothing"


def _places(rows: Mapping[str, Sequence[Row]]) -> Iterator[str]:
    """What a platform names must be its own."""
    sessions = {key(one): one.platform_id for one in _of(rows, SessionRow)}
    lifts = {key(one): one.session_id for one in _of(rows, LiftRow)}
    flights = {key(one): one.session_id for one in _of(rows, FlightRow)}
    tools = {key(one): one.platform_id for one in _of(rows, ImplementRow)}
    for lift in _of(rows, LiftRow):
        if tools[lift.implement_id] != sessions[lift.session_id]:
            yield "a lift is lifted with another platform's bar or belt"
    for row in _of(rows, PlatformRow):
        if row.revision < 0:
            yield "a platform has a revision less than none"
        if (row.flight_id is None) != (row.lift_id is None):
            yield "a platform lifts half of something"
        if row.flight_id is not None and row.lift_id is not None:
            session = flights[row.flight_id]
            if lifts[row.lift_id] != session or sessions[session] != row.id:
                yield "a platform lifts what is not on it"
        if row.implement_id is not None and tools[row.implement_id] != row.id:
            yield "a platform has another platform's bar or belt"
        yield from _hands(row)


def _hands(row: PlatformRow) -> Iterator[str]:
    ends: list[Any] = [row.bar, row.spare]
    for hand in (row.hand, row.ahead):
        if hand is not None:
            ends += [hand["before"], hand["stack"]]
            if not 0 <= parse_mass(hand["weight"]) <= HEAVIEST or not isinstance(hand.get("why", ""), str):
                yield "the crew's instruction cannot be read"
    for end in ends:
        faces = [] if end is None else [parse_mass(face) for face in end]
        if (
            not isinstance(end, list | None)
            or len(faces) > MOST_ON_AN_END
            or any(face <= 0 for face in faces)
        ):
            yield "what is on the bar cannot be read"


def _journal(entries: Sequence[JournalRow]) -> Iterator[str]:
    for entry in entries:
        if not isinstance(entry.who, str) or not isinstance(entry.what, str):
            yield "its journal has an entry without words"
        for edit in entry.edits:
            if edit["before"] is None and edit["after"] is None:
                yield "its journal has an edit of nothing"
            known = set(TABLES[edit["table"]].model_fields)
            for side in (edit["before"], edit["after"]):
                if side is not None and not set(side) <= known:
                    yield "its journal knows other columns than this version"
                for column, value in (side or {}).items():
                    unplain(edit["table"], column, value)


def _answerable(now: Picture) -> Iterator[str]:
    """Everything that pages and plan will ask: the rules, how each lift is loaded, the order of each flight."""
    for _, _, programme in now.sessions:
        for lift in programme.lifts:
            try:
                equipment = now.equipment(lift.id)
                loadable(equipment, equipment.base_mass)
                plan_request(now.unit, equipment, read_wish(now.loading[lift.id]), (), ())
            except Refusal:
                yield f"how {lift.name} is loaded cannot be worked with"
            for flight in programme.flights:
                programme.order(flight.id, lift.id)

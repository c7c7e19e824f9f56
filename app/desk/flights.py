"""Flights of a session: proposed with what each proposal costs the crew, and taken with one press."""

from __future__ import annotations

import hashlib
import re
from dataclasses import dataclass, replace
from fractions import Fraction

from sqlmodel import Session, col, select

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.flight_names import flight_rows, free_name
from app.desk.planned import wish_of
from app.desk.plates_check import flights_openers
from app.desk.wish import plan_request
from app.loading.mass import parse_mass
from app.meet.flights import Entrant, Flights, Handled, Proposal, openers_cost, propose
from app.meet.horizon import Programme
from app.meet.model import Flight, Result
from app.planning import Budget
from app.store.engine import reading
from app.store.picture import NotFound, Picture, get, key, picture
from app.store.tables import FlightRow, LifterRow, SessionRow

LIFTED = (Result.GOOD, Result.MISSED)
WAYS = {"opener": "By opener", "class": "By body-weight class"}


@dataclass(frozen=True, slots=True)
class Asked:
    """How flights shall be proposed, as typed: ``by`` a lift's id or "" for all lifts together; class limits."""

    session_id: int
    by: str = ""
    limits: str = ""


@dataclass(frozen=True, slots=True)
class Proposals:
    """The flights as they stand and each proposal, all priced alike."""

    now: Picture
    programme: Programme
    standing: Handled
    made: tuple[Proposal[Handled], ...]
    seen: str


def session_of(now: Picture, session_id: int) -> Programme:
    """The session with this number, if it is on this platform."""
    found = next((programme for number, _, programme in now.sessions if number == session_id), None)
    if found is None:
        raise NotFound("session")
    return found


def read_limits(text: str) -> tuple[Fraction, ...]:
    """The classes' upper limits as typed, ``59, 66, 74, 83``; none typed, none given."""
    limits: list[Fraction] = []
    for word in re.split(r"[,;\s]+", text.strip()):
        if not word:
            continue
        try:
            limit = parse_mass(word.removeprefix("-"))
        except ValueError:
            raise NotAllowedNow(
                f"Class limits: “{word}” is not a number. Type them like 59, 66, 74."
            ) from None
        if not limit or (limits and limit <= limits[-1]):
            raise NotAllowedNow(
                f"Class limits rise from one to the next, and {word} does not. Write 67.5 with a point."
            )
        limits.append(limit)
    return tuple(limits)


def entrants(programme: Programme, by: str) -> list[Entrant]:
    """Who is to be placed. The opener is that of one lift, or those of all lifts together."""
    lifts = {str(lift.id): lift.id for lift in programme.lifts}
    if by and by not in lifts:
        raise NotAllowedNow("Choose one of the lifts of this session, or all of them together.")
    wanted = {lifts[by]} if by else set(lifts.values())
    openers: dict[int, Fraction] = {}
    for attempt in programme.attempts:
        if attempt.lift_id in wanted and attempt.number == 1 and attempt.weight is not None:
            openers[attempt.lifter_id] = openers.get(attempt.lifter_id, Fraction(0)) + attempt.weight
    return [
        Entrant(one.id, one.lot, openers.get(one.id), one.body_weight)
        for one in programme.lifters
        if not one.withdrawn
    ]


def proposals(desk: Desk, platform_id: int, asked: Asked, budget: Budget) -> Proposals:
    """Every way to make the session's flights, with plates and mass of all lifts' openers' rounds.

    Plans each flight's openers in each lift once a proposal, each plan within the budget.
    """
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    programme = session_of(now, asked.session_id)
    made = propose(
        entrants(programme, asked.by),
        read_limits(asked.limits),
        now.rules[asked.session_id].most_in_flight,
        lambda flights: _cost(now, _regrouped(programme, flights), budget),
    )
    return Proposals(now, programme, _cost(now, programme, budget), made, flights_seen(programme))


def _regrouped(programme: Programme, flights: Flights) -> Programme:
    """The same session with other flights, to be priced only."""
    place = {lifter_id: number for number, flight in enumerate(flights) for lifter_id in flight}
    return replace(
        programme,
        flights=tuple(Flight(number, "", number) for number in range(len(flights))),
        lifters=tuple(replace(one, flight_id=place[one.id]) for one in programme.lifters if one.id in place),
    )


def _cost(now: Picture, programme: Programme, budget: Budget) -> Handled:
    total = Handled(0, Fraction(0))
    for lift in programme.lifts:
        wish = wish_of(now, lift.id)
        request = plan_request(now.unit, now.equipment(lift.id), wish, (), ())
        total += openers_cost(request, budget, wish.departure)(flights_openers(programme, lift.id))
    return total


def flights_seen(programme: Programme) -> str:
    """Names who is where and what they open with: a proposal that was made from something else is refused."""
    who = sorted(
        (one.id, one.flight_id, one.withdrawn, one.body_weight, one.lot) for one in programme.lifters
    )
    openers = sorted((a.id, a.weight) for a in programme.attempts if a.number == 1 and a.weight is not None)
    return hashlib.sha256(repr((who, openers)).encode()).hexdigest()[:16]


def take_proposal(desk: Desk, platform_id: int, asked: Asked, way: str, seen: str, *, who: str) -> str:
    """Make the session's flights as proposed; refused once somebody has lifted in it.

    Flights that are there keep their names and times, first ones first; more are named by the next free letter;
    those that are left over are taken out.
    """
    if way not in WAYS:
        raise NotAllowedNow("Choose one of the proposals.")
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        programme = session_of(now, asked.session_id)
        if any(attempt.result in LIFTED for attempt in programme.attempts):
            raise NotAllowedNow(
                "Somebody has lifted in this session, so its flights stay. Move single lifters instead."
            )
        if flights_seen(programme) != seen:
            raise SomebodyWasFirst(
                "The roster has changed since this was proposed. Look at the new proposal."
            )
        most = now.rules[asked.session_id].most_in_flight
        made = propose(entrants(programme, asked.by), read_limits(asked.limits), most, len)
        chosen = next((one for one in made if one.name == WAYS[way]), None)
        if chosen is None or not chosen.flights:
            raise NotAllowedNow(
                "Type the limits of the body-weight classes first, for instance 59, 66, 74, 83."
            )
        told = _make(work, asked.session_id, chosen.flights)
        name = get(work.session, SessionRow, asked.session_id, "session").name
        work.what = f"{name}: flights {chosen.name[0].lower()}{chosen.name[1:]}: {told}"
        return f"The flights of {name} are made: {told}."


def _make(work: Work, session_id: int, flights: Flights) -> str:
    rows = flight_rows(work.session, session_id)
    kept = [*rows[: len(flights)]]
    while len(kept) < len(flights):
        kept.append(new_flight(work, session_id, len(kept)))
    lifters = {key(one): one for one in _lifters(work.session, [key(row) for row in rows])}
    for position, (row, ids) in enumerate(zip(kept, flights, strict=True)):
        row.position = position
        for lifter_id in ids:
            lifters.pop(lifter_id).flight_id = key(row)
    left_over = rows[len(flights) :]
    gone = {key(row) for row in left_over}
    for lifter in lifters.values():  # withdrawn, so in no proposal: they stay where they are, if that stays
        if lifter.flight_id in gone:
            lifter.flight_id = key(kept[0])
    work.session.flush()
    for row in left_over:
        remove_row(work, row)
    return ", ".join(f"{row.name} {len(ids)}" for row, ids in zip(kept, flights, strict=True))


def _lifters(session: Session, flight_ids: list[int]) -> list[LifterRow]:
    return list(session.exec(select(LifterRow).where(col(LifterRow.flight_id).in_(flight_ids))).all())


def new_flight(work: Work, session_id: int, position: int) -> FlightRow:
    """Another flight, named by the first letter that no flight of the meet has."""
    row = FlightRow(session_id=session_id, name=free_name(work.session, work.meet_id), position=position)
    work.session.add(row)
    work.session.flush()
    return row


def remove_row(work: Work, row: FlightRow) -> None:
    """Take an empty flight out, unless it is on the platform."""
    if work.platform.flight_id == row.id:
        raise NotAllowedNow(f"{row.name} is on the platform. Bring another flight at the Table first.")
    work.session.delete(row)
    work.session.flush()

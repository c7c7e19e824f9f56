"""What the Table says about time: who has still to hand in, whose rest is short, and how the flight stands."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from fractions import Fraction

from app.desk.board import Board
from app.loading.mass import show_mass
from app.meet.clock import pace, say_pace, still_to_hand_in, too_soon
from app.meet.model import attempt_name
from app.web.words import clock_words

PLANNED_SECONDS = Fraction(60)  # an attempt: what school meets plan (trade, C1: Mississippi, 2021)


@dataclass(frozen=True, slots=True)
class DueLine:
    """A weight that has still to be handed in; ``until`` is ISO 8601, "" where there is no limit."""

    lot: str
    lifter: str
    attempt: str
    default: str
    until: str


def due_lines(one: Board) -> tuple[DueLine, ...]:
    """Who has lifted and not handed in, least time left first."""
    programme, lift = one.programme, one.lift
    here = [lifter for lifter in programme.of_flight(one.flight.id) if not lifter.withdrawn]
    lifted = {a.id: a.lifted_at for a in programme.attempts if a.lifted_at is not None}
    found = still_to_hand_in(programme.rules_of(lift.id), here, programme.of_lift(lift.id), lifted)
    return tuple(
        DueLine(
            lot=str(due.lifter.lot),
            lifter=due.lifter.name,
            attempt=attempt_name(lift.name, due.attempt.number),
            default="" if due.default is None else show_mass(due.default),
            until="" if due.until is None else due.until.isoformat(),
        )
        for due in found
    )


def rest_words(one: Board, at: datetime) -> str:
    """The first lifter who would be called before the rest that the rules ask for; "" when nobody would."""
    last: dict[int, datetime] = {}
    for attempt in one.programme.attempts:
        if attempt.lifted_at is not None and attempt.lift_id == one.lift.id:
            last[attempt.lifter_id] = max(attempt.lifted_at, last.get(attempt.lifter_id, attempt.lifted_at))
    found = too_soon(one.programme.rules_of(one.lift.id), one.order, last, at, PLANNED_SECONDS)
    if not one.here or not found:
        return ""
    first = found[0]
    return f"{first.turn.lifter.name} has not rested long enough before {clock_words(first.earliest)}."


def pace_words(one: Board, at: datetime) -> str:
    """Minutes ahead or behind since the flight's first lift, and when the flight's lift will be over."""
    members = {lifter.id for lifter in one.programme.of_flight(one.flight.id)}
    times = [
        a.lifted_at
        for a in one.programme.attempts
        if a.lifted_at is not None and a.lift_id == one.lift.id and a.lifter_id in members
    ]
    if not one.here or not times:
        return ""
    found = pace(PLANNED_SECONDS, min(times), len(times) - 1, len(one.order), at)
    finish = found.finish.astimezone().strftime("%H:%M")
    return f"{say_pace(found).capitalize()} against one attempt a minute; this lift ends about {finish}."

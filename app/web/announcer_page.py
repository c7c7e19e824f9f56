"""The announcer's page: who is up, on deck and in the hole, with the weight and the attempt. Read only."""

from __future__ import annotations

from dataclasses import dataclass

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, Board, board
from app.loading.mass import show_mass
from app.meet.horizon import after
from app.meet.model import attempt_name
from app.meet.order import Turn
from app.web import htmx
from app.web.crew_view import bare_crew_view, crew_view
from app.web.house import DeskDep, OfficialDep, frame, page

router = APIRouter(prefix="/platforms/{platform_id}")

PLACES = ("Up", "On deck", "In the hole")
NEXT_PLACES = ("First", "Second", "Third")  # nobody is left of the flight that was on


@dataclass(frozen=True, slots=True)
class Announced:
    """One line of what is read out."""

    place: str  # "Up", "On deck", "In the hole"
    lifter: str
    lot: str
    weight: str
    attempt: str
    flight: str  # named only where it is not the flight that is on
    note: str  # "not handed in: by the rule", "new round"


@router.get("/announcer")
def show_announcer(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """Three lifters, or for htmx what changes on the page."""
    one = board(desk, platform_id)
    name = "announcer/_now.html" if htmx.wants_fragment(request) else "announcer/page.html"
    around = frame(one.now.meet, official, one.now.meet_id, platform_id, "Announcer")
    if isinstance(one, Bare):
        return page(name, frame=around, view=bare_crew_view(one.now), lines=(), flight="")
    return page(name, frame=around, view=crew_view(one), lines=announced(one), flight=_flight(one))


def _flight(one: Board) -> str:
    if one.up is None:
        return f"{one.flight.name}, {one.lift.name}"
    return f"{one.flight.name}, {one.lift.name}, round {one.up.attempt.number}"


def announced(one: Board) -> tuple[Announced, ...]:
    """Up, on deck and in the hole; at the end of a flight the first of the next one follow."""
    if not one.here:
        return ()
    own = [one.up] if one.up else []
    own += [turn for turn in one.order if one.up is None or turn.attempt.id != one.up.attempt.id]
    turns = own + _of_next_flight(one)
    places = PLACES if own else NEXT_PLACES
    before = (None, *turns)
    return tuple(
        _line(one, place, turn, before[at], own=at < len(own))
        for at, (place, turn) in enumerate(zip(places, turns, strict=False))
    )


def _line(one: Board, place: str, turn: Turn, before: Turn | None, *, own: bool) -> Announced:
    lift = one.programme.lift(turn.attempt.lift_id)
    return Announced(
        place=place,
        lifter=turn.lifter.name,
        lot=str(turn.lifter.lot),
        weight=show_mass(turn.weight),
        attempt=attempt_name(lift.name, turn.attempt.number),
        flight="" if own else one.programme.flight(turn.lifter.flight_id).name,
        note=_note(before, turn),
    )


def _of_next_flight(one: Board) -> list[Turn]:
    following = after(one.programme, one.flight.id, one.lift.id)
    return list(one.programme.order(*following)) if following else []


def _note(before: Turn | None, turn: Turn) -> str:
    notes = []
    if turn.assumed:
        notes.append("weight not handed in, by the rule")
    if before is not None and before.lifter.id == turn.lifter.id:
        notes.append("the same lifter again")
    return "; ".join(notes)

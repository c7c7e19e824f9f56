"""The Flights page: who lifts together, what other flights would cost, and one lifter or one flight changed."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk import flight_changes, flights
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.flight_changes import NEW, show_start
from app.desk.flights import LIFTED, Asked, Proposals, flight_rows, session_of
from app.loading.mass import show_mass
from app.meet.flights import Handled
from app.meet.horizon import Programme
from app.meet.model import Lifter
from app.planning import Budget
from app.store.engine import reading
from app.store.picture import Picture, picture
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who

router = APIRouter(prefix="/platforms/{platform_id}/flights")
ROLE = "director"
ROUND_SECONDS = 1.0  # one flight's openers in one lift; a bar takes a hundredth of it


@dataclass(frozen=True, slots=True)
class LifterRow:
    """A lifter in the list of a flight."""

    id: int
    lot: int
    name: str
    body_weight: str
    openers: tuple[str, ...]
    withdrawn: bool


@dataclass(frozen=True, slots=True)
class FlightView:
    """One flight as it stands."""

    id: int
    name: str
    starts: str
    lifters: tuple[LifterRow, ...]
    others: tuple[tuple[str, str], ...]  # where its lifters may be moved
    too_many: bool
    here: bool  # it is on the platform


@dataclass(frozen=True, slots=True)
class FlightsView:
    """The flights of one session."""

    platform_id: int
    meet_id: int
    platform: str
    unit: str
    session_id: int
    session: str
    sessions: tuple[tuple[int, str], ...]
    lifts: tuple[tuple[str, str], ...]
    flights: tuple[FlightView, ...]
    most: int
    lifted: bool
    asked: Asked


@dataclass(frozen=True, slots=True)
class WayView:
    """One way to make flights: as they stand, or a proposal."""

    way: str  # "" for the flights as they stand
    name: str
    plates: int
    mass: str
    less: str  # against the flights as they stand
    left_out: int
    flights: tuple[tuple[str, ...], ...]


@router.get("")
def show_flights(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: int | None = None,
    by: str = "",
    limits: str = "",
) -> Response:
    """The flights of a session, and the form that asks for proposals."""
    return _render(request, desk, platform_id, official, session, by=by, limits=limits)


def _render(
    request: Request,
    desk: Desk,
    platform_id: int,
    official: str,
    session_id: int | None,
    *,
    by: str = "",
    limits: str = "",
    said: str = "",
    refused: str = "",
    status: int = 200,
) -> Response:
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
        wanted = session_id if session_id is not None else next((one for one, _, _ in now.sessions), 0)
        starts = {row.id: show_start(row.starts_at, desk.clock()) for row in flight_rows(session, wanted)}
    return page(
        "flights/page.html",
        status,
        frame=frame(now.meet, official, now.meet_id, platform_id, "Flights"),
        layout=htmx.layout(request),
        view=_view(now, wanted, starts, Asked(wanted, by, limits)),
        said=said,
        refused=refused,
    )


def _view(now: Picture, session_id: int, starts: dict[int | None, str], asked: Asked) -> FlightsView:
    programme = session_of(now, session_id)
    names = {number: name for number, name, _ in now.sessions}
    return FlightsView(
        platform_id=now.platform_id,
        meet_id=now.meet_id,
        platform=now.platform,
        unit=now.unit,
        session_id=session_id,
        session=names[session_id],
        sessions=tuple(names.items()),
        lifts=tuple((str(lift.id), lift.name) for lift in programme.lifts),
        flights=tuple(
            _flight(now, programme, one.id, starts)
            for one in sorted(programme.flights, key=lambda flight: (flight.position, flight.id))
        ),
        most=now.rules[session_id].most_in_flight,
        lifted=any(attempt.result in LIFTED for attempt in programme.attempts),
        asked=asked,
    )


def _flight(now: Picture, programme: Programme, flight_id: int, starts: dict[int | None, str]) -> FlightView:
    lifters = programme.of_flight(flight_id)
    others = [(str(one.id), one.name) for one in programme.flights if one.id != flight_id]
    return FlightView(
        id=flight_id,
        name=programme.flight(flight_id).name,
        starts=starts.get(flight_id, ""),
        lifters=tuple(_lifter(programme, one) for one in lifters),
        others=(*others, (NEW, "a new flight")),
        too_many=sum(not one.withdrawn for one in lifters) > programme.rules.most_in_flight,
        here=now.flight_id == flight_id,
    )


def _lifter(programme: Programme, one: Lifter) -> LifterRow:
    openers = {
        a.lift_id: a.weight
        for a in programme.attempts
        if a.lifter_id == one.id and a.number == 1 and a.weight
    }
    return LifterRow(
        id=one.id,
        lot=one.lot,
        name=one.name,
        body_weight="" if one.body_weight is None else show_mass(one.body_weight),
        openers=tuple(show_mass(openers[x.id]) if x.id in openers else "" for x in programme.lifts),
        withdrawn=one.withdrawn,
    )


@router.get("/proposals")
def show_proposals(platform_id: int, desk: DeskDep, session: int, by: str = "", limits: str = "") -> Response:
    """What each way to make the flights costs; fetched when the page is there, since it plans every round."""
    asked = Asked(session, by, limits)
    budget = Budget(seconds=ROUND_SECONDS, monotonic=time.monotonic)
    try:
        found = flights.proposals(desk, platform_id, asked, budget)
    except DeskError as refused:
        return page("parts/error.html", text=str(refused))
    names = {one.id: one.name for one in found.programme.lifters}
    keys = {name: way for way, name in flights.WAYS.items()}
    standing = tuple(
        tuple(one.name for one in found.programme.of_flight(flight.id)) for flight in found.programme.flights
    )
    rows = [_way("", found.standing, found, standing)]
    for one in found.made:
        named = tuple(tuple(names[lifter_id] for lifter_id in flight) for flight in one.flights)
        rows.append(_way(keys[one.name], one.cost, found, named))
    return page(
        "flights/_proposals.html",
        platform_id=platform_id,
        asked=asked,
        seen=found.seen,
        unit=found.now.unit,
        rows=rows,
        lifted=any(attempt.result in LIFTED for attempt in found.programme.attempts),
    )


def _way(way: str, cost: Handled, found: Proposals, made: tuple[tuple[str, ...], ...]) -> WayView:
    return WayView(
        way=way,
        name=flights.WAYS.get(way, "As they stand"),
        plates=cost.plates,
        mass=show_mass(cost.mass) if cost.mass else "0",
        less=_less(cost, found.standing, found.now.unit) if way else "",
        left_out=cost.left_out,
        flights=made,
    )


def _less(cost: Handled, standing: Handled, unit: str) -> str:
    """How much less (or more) is handled than with the flights as they stand."""
    parts = []
    for word, fewer, new, old in (
        ("plates", "fewer", cost.plates, standing.plates),
        (unit, "less", cost.mass, standing.mass),
    ):
        if old:
            share = round(100 * (new - old) / old)
            parts.append(
                f"{abs(share)} % {'more' if share > 0 else fewer} {word}" if share else f"as many {word}"
            )
    return ", ".join(parts)


@router.post("/take")
def take(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: Annotated[int, Form()],
    way: Annotated[str, Form()],
    seen: Annotated[str, Form()],
    by: Annotated[str, Form()] = "",
    limits: Annotated[str, Form()] = "",
) -> Response:
    """Make the flights as proposed."""
    asked = Asked(session, by, limits)
    return _do(
        request,
        desk,
        platform_id,
        official,
        asked,
        lambda: flights.take_proposal(desk, platform_id, asked, way, seen, who=who(official, ROLE)),
    )


@router.post("/move")
def move(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: Annotated[int, Form()],
    lifter: Annotated[int, Form()],
    flight: Annotated[int, Form()],
    to: Annotated[str, Form()],
) -> Response:
    """One lifter into another flight."""
    return _do(
        request,
        desk,
        platform_id,
        official,
        Asked(session),
        lambda: flight_changes.move_lifter(desk, platform_id, lifter, flight, to, who=who(official, ROLE)),
    )


@router.post("/save")
def save(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: Annotated[int, Form()],
    flight: Annotated[int, Form()],
    name: Annotated[str, Form()] = "",
    starts: Annotated[str, Form()] = "",
) -> Response:
    """A flight's name and start."""
    return _do(
        request,
        desk,
        platform_id,
        official,
        Asked(session),
        lambda: flight_changes.save_flight(desk, platform_id, flight, name, starts, who=who(official, ROLE)),
    )


@router.post("/remove")
def remove(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: Annotated[int, Form()],
    flight: Annotated[int, Form()],
) -> Response:
    """Take an empty flight out."""
    return _do(
        request,
        desk,
        platform_id,
        official,
        Asked(session),
        lambda: flight_changes.remove_flight(desk, platform_id, flight, who=who(official, ROLE)),
    )


def _do(
    request: Request, desk: Desk, platform_id: int, official: str, asked: Asked, act: Callable[[], str]
) -> Response:
    """Do it and show the page again with what was done, or why not."""
    said, refused, status = "", "", 200
    try:
        said = act()
    except DeskError as error:
        refused, status = str(error), error.status_code
    return _render(
        request,
        desk,
        platform_id,
        official,
        asked.session_id,
        by=asked.by,
        limits=asked.limits,
        said=said,
        refused=refused,
        status=status,
    )

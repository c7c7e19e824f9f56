"""The Flights page: who lifts together, what other flights would cost, and one lifter or one flight changed."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk import flight_changes, flights
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.flight_changes import show_start
from app.desk.flight_names import flight_rows
from app.desk.flights import LIFTED, Asked
from app.planning import Budget
from app.store.engine import reading
from app.store.picture import picture
from app.web import htmx
from app.web.flights_view import flights_view, ways
from app.web.house import DeskDep, OfficialDep, frame, page, who

router = APIRouter(prefix="/platforms/{platform_id}/flights")
ROLE = "director"
ROUND_SECONDS = 1.0  # one flight's openers in one lift; a bar takes a hundredth of it


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
        view=flights_view(now, wanted, starts, Asked(wanted, by, limits)),
        said=said,
        refused=refused,
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
    return page(
        "flights/_proposals.html",
        platform_id=platform_id,
        asked=asked,
        seen=found.seen,
        unit=found.now.unit,
        rows=ways(found),
        lifted=any(attempt.result in LIFTED for attempt in found.programme.attempts),
    )


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

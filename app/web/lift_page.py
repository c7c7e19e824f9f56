"""How one lift is loaded: its settings."""

from __future__ import annotations

import time
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk import lift_loading
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.lift_loading import COMFORT_ROWS, WORDS
from app.desk.planned import wish_of
from app.desk.wish import Wish, wish_document
from app.planning import Budget
from app.planning.belts import BELT_COMFORT
from app.store.engine import reading
from app.store.picture import NotFound, Picture, picture
from app.web import htmx
from app.web.figures_view import figures_view
from app.web.house import DeskDep, OfficialDep, frame, page, who

router = APIRouter(prefix="/platforms/{platform_id}/lifts/{lift_id}")
ROLE = "director"
ROW_SECONDS = 1.0  # a row of the table of figures that takes longer is shown with its bound


@dataclass(frozen=True, slots=True)
class LiftView:
    """The form as it stands, or as it was typed when something was wrong with it."""

    platform_id: int
    platform: str
    lift_id: int
    lift: str
    unit: str
    typed: Mapping[str, str]
    belt: bool
    flights: tuple[tuple[int, str], ...]
    ready: tuple[str, ...]
    comfort_rows: tuple[int, ...]
    words: Mapping[str, Mapping[str, str]]


def form_of(wish: Wish) -> dict[str, str]:
    """The settings as form fields."""
    document = wish_document(wish)
    fields = {name: str(value) for name, value in document.items() if not isinstance(value, list | bool)}
    fields |= {name: "yes" if value else "" for name, value in document.items() if isinstance(value, bool)}
    for place in range(COMFORT_ROWS):
        by, slack = wish.comfort[place] if place < len(wish.comfort) else ("", "")
        fields |= {f"by_{place + 1}": by, f"slack_{place + 1}": slack}
    return fields


@router.get("")
def show_lift(
    request: Request, platform_id: int, lift_id: int, desk: DeskDep, official: OfficialDep
) -> Response:
    """The page."""
    return _render(request, desk, platform_id, lift_id, official)


def _render(
    request: Request,
    desk: Desk,
    platform_id: int,
    lift_id: int,
    official: str,
    *,
    said: str = "",
    refused: str = "",
    status: int = 200,
    typed: Mapping[str, str] | None = None,
) -> Response:
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    if lift_id not in now.loading:
        raise NotFound("lift")
    return page(
        "lift/page.html",
        status,
        frame=frame(now.meet, official, now.meet_id, platform_id, "Equipment"),
        layout=htmx.layout(request),
        view=_view(now, lift_id, typed),
        said=said,
        refused=refused,
    )


def _view(now: Picture, lift_id: int, typed: Mapping[str, str] | None) -> LiftView:
    standing = form_of(wish_of(now, lift_id))
    return LiftView(
        platform_id=now.platform_id,
        platform=now.platform,
        lift_id=lift_id,
        lift=now.programme(lift_id).lift(lift_id).name,
        unit=now.unit,
        typed=standing if typed is None else standing | dict.fromkeys(standing, "") | dict(typed),
        belt=now.tool(now.programme(lift_id).lift(lift_id).implement_id).kind == "belt",
        flights=tuple((flight.id, flight.name) for flight in now.programme(lift_id).flights),
        ready=tuple(BELT_COMFORT),
        comfort_rows=tuple(range(1, COMFORT_ROWS + 1)),
        words=WORDS,
    )


@router.post("")
async def save_lift(
    request: Request, platform_id: int, lift_id: int, desk: DeskDep, official: OfficialDep
) -> Response:
    """Keep the settings, or show them again as typed with what is wrong."""
    typed = {name: str(value) for name, value in (await request.form()).items()}
    try:
        lift_loading.save_loading(desk, platform_id, lift_id, typed, who=who(official, ROLE))
    except DeskError as refused:
        return _render(
            request,
            desk,
            platform_id,
            lift_id,
            official,
            refused=str(refused),
            status=refused.status_code,
            typed=typed,
        )
    return _render(request, desk, platform_id, lift_id, official, said="Kept. The plan has been made anew.")


@router.get("/figures")
def show_figures(platform_id: int, lift_id: int, flight: int, desk: DeskDep) -> Response:
    """What each choice would cost the crew on a flight's lift; fetched when the page is there, since it takes long."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    if lift_id not in now.loading or all(one.id != flight for one in now.programme(lift_id).flights):
        raise NotFound("flight")
    budget = Budget(seconds=ROW_SECONDS, monotonic=time.monotonic)
    found = lift_loading.figures(desk, platform_id, lift_id, flight, budget)
    view = figures_view(found, now.unit, wish_of(now, lift_id)) if found else None
    return page("lift/_figures.html", view=view, platform_id=platform_id, lift_id=lift_id)


@router.post("/ready")
def use_ready_made(
    request: Request,
    platform_id: int,
    lift_id: int,
    desk: DeskDep,
    official: OfficialDep,
    ready: Annotated[str, Form()],
) -> Response:
    """Comfort of a belt lift from the ready-made settings."""
    lift_loading.use_ready_made(desk, platform_id, lift_id, ready, who=who(official, ROLE))
    return htmx.go_to(request, f"/platforms/{platform_id}/lifts/{lift_id}")


@router.post("/choice")
def use_choice(
    request: Request,
    platform_id: int,
    lift_id: int,
    desk: DeskDep,
    official: OfficialDep,
    extra_plates: Annotated[str, Form()],
    aim: Annotated[str, Form()],
    measure: Annotated[str, Form()],
) -> Response:
    """What shall be small, picked from the figures."""
    lift_loading.use_choice(desk, platform_id, lift_id, extra_plates, aim, measure, who=who(official, ROLE))
    return htmx.go_to(request, f"/platforms/{platform_id}/lifts/{lift_id}")

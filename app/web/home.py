"""The front door: the meets in this folder, a new one, and the pages of each."""

from __future__ import annotations

from typing import Annotated
from urllib.parse import quote

from fastapi import APIRouter, Form
from sqlmodel import col, select
from starlette.requests import Request
from starlette.responses import Response

from app.desk import setup
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.roster import pictures
from app.meet.presets import PRESETS
from app.store.engine import reading
from app.store.picture import get, key
from app.store.tables import MeetRow
from app.web import htmx
from app.web.house import NAME_COOKIE, DeskDep, OfficialDep, frame, page, who

router = APIRouter()


@router.get("/")
def home(request: Request, desk: DeskDep, official: OfficialDep) -> Response:
    """All meets of this folder, and the form for a new one."""
    return _render_home(request, desk, official)


def _render_home(
    request: Request, desk: Desk, official: str, *, refused: str = "", typed: str = "", unit: str = "kg"
) -> Response:
    with reading(desk.engine) as session:
        meets = [
            (key(row), row.name, row.unit) for row in session.exec(select(MeetRow).order_by(col(MeetRow.id)))
        ]
    return page(
        "home/page.html",
        422 if refused else 200,
        frame=frame("Platewright", official),
        layout=htmx.layout(request),
        meets=meets,
        refused=refused,
        typed=typed,
        unit=unit,
    )


@router.post("/meets")
def start_meet(
    request: Request,
    desk: DeskDep,
    official: OfficialDep,
    name: Annotated[str, Form()] = "",
    unit: Annotated[str, Form()] = "kg",
) -> Response:
    """A new meet."""
    try:
        made = setup.start_meet(desk, name, unit)
    except DeskError as refused:
        return _render_home(request, desk, official, refused=str(refused), typed=name, unit=unit)
    return htmx.go_to(request, f"/meets/{made}")


@router.get("/meets/{meet_id}")
def show_meet(request: Request, meet_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The meet: its platforms with their pages, and the form for another platform."""
    return _render_meet(request, desk, meet_id, official)


def _render_meet(
    request: Request,
    desk: Desk,
    meet_id: int,
    official: str,
    *,
    refused: str = "",
    typed: str = "",
    preset: str = "",
) -> Response:
    with reading(desk.engine) as session:
        meet = get(session, MeetRow, meet_id, "meet")
        name, unit = meet.name, meet.unit
        platforms = pictures(session, meet_id)
    return page(
        "home/meet.html",
        422 if refused else 200,
        frame=frame(name, official, meet_id, here="Meet"),
        layout=htmx.layout(request),
        meet_id=meet_id,
        name=name,
        unit=unit,
        platforms=platforms,
        presets=[(one.key, one.name) for one in PRESETS if one.unit == unit],
        refused=refused,
        typed=typed,
        preset=preset,
    )


@router.post("/meets/{meet_id}/platforms")
def add_platform(
    request: Request,
    meet_id: int,
    desk: DeskDep,
    official: OfficialDep,
    name: Annotated[str, Form()] = "",
    preset: Annotated[str, Form()] = "",
) -> Response:
    """Another platform."""
    try:
        setup.add_platform(desk, meet_id, name, preset, who=who(official, "director"))
    except DeskError as refused:
        return _render_meet(request, desk, meet_id, official, refused=str(refused), typed=name, preset=preset)
    return htmx.go_to(request, f"/meets/{meet_id}")


@router.post("/official")
def say_name(
    request: Request, name: Annotated[str, Form()] = "", back: Annotated[str, Form()] = "/"
) -> Response:
    """Who sits at this screen; kept on this device only, shown to the second of two who enter the same thing."""
    # Only a path of our own: a form must not be able to send people elsewhere.
    own = back if back.startswith("/") and not back.startswith("//") and "\\" not in back else "/"
    answer = htmx.go_to(request, own)
    answer.set_cookie(
        NAME_COOKIE, quote(" ".join(name.split())[:40]), max_age=7 * 86400, httponly=True, samesite="lax"
    )
    return answer

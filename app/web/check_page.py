"""The Check page: for the referee, read only."""

from __future__ import annotations

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, board
from app.web import htmx
from app.web.check_view import check_view
from app.web.crew_view import bare_crew_view
from app.web.house import DeskDep, OfficialDep, frame, page

router = APIRouter(prefix="/platforms/{platform_id}")


@router.get("/check")
def show_check(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The called weight with its sum, or for htmx what changes on the page."""
    one = board(desk, platform_id)
    name = "check/_now.html" if htmx.wants_fragment(request) else "check/page.html"
    around = frame(one.now.meet, official, one.now.meet_id, platform_id, "Check")
    if isinstance(one, Bare):
        return page(name, frame=around, check=None, view=bare_crew_view(one.now))
    check = check_view(one)
    return page(name, frame=around, check=check, view=check.crew)

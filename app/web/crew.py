"""The Crew page and the few things the crew may say."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk import bar
from app.desk.board import Bare, board
from app.desk.entry import Desk
from app.web import htmx
from app.web.crew_ahead import ahead_views
from app.web.crew_roles import alone_view
from app.web.crew_view import bare_crew_view, crew_view
from app.web.house import DeskDep, OfficialDep, frame, page, who
from app.web.languages import words_in
from app.web.screen import the_screen

router = APIRouter(prefix="/platforms/{platform_id}")
ROLE = "crew"


@router.get("/crew")
def show_crew(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The crew's screen, or for htmx what changes on it."""
    return _screen(request, desk, platform_id, official)


def _screen(request: Request, desk: Desk, platform_id: int, official: str) -> Response:
    one = board(desk, platform_id)
    screen = the_screen(request)
    words = words_in(screen.language)
    name = "crew/_now.html" if htmx.wants_fragment(request) else "crew/page.html"
    around = frame(one.now.meet, official, one.now.meet_id, platform_id, "Crew")
    view = bare_crew_view(one.now, words.say) if isinstance(one, Bare) else crew_view(one, words.say)
    alone = alone_view(one, view) if screen.role == "alone" and not isinstance(one, Bare) else None
    return page(name, 200, frame=around, view=view, screen=screen, alone=alone, **words.context())


@router.get("/crew/ahead")
def show_ahead(request: Request, platform_id: int, desk: DeskDep) -> Response:
    """The next changes as whole screens, for the crew to go on by hand when the network goes."""
    one = board(desk, platform_id)
    screen = the_screen(request)
    words = words_in(screen.language)
    ahead = () if isinstance(one, Bare) else ahead_views(one, words.say)
    return page("crew/_ahead.html", 200, ahead=ahead, screen=screen, **words.context())


@router.post("/loaded")
def bar_is_loaded(
    request: Request, platform_id: int, desk: DeskDep, official: OfficialDep, shown: Annotated[str, Form()]
) -> Response:
    """The bar is loaded as shown."""
    bar.bar_is_loaded(desk, platform_id, shown, who=who(official, ROLE))
    return _after(request, desk, platform_id, official)


@router.post("/bar")
def bar_carries(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    answer: Annotated[str, Form(alias="bar")],
    shown: Annotated[str, Form()],
) -> Response:
    """What is on the bar now, after the weight changed under the crew's hands."""
    bar.bar_carries(desk, platform_id, answer, shown, who=who(official, ROLE))
    return _after(request, desk, platform_id, official)


def _after(request: Request, desk: Desk, platform_id: int, official: str) -> Response:
    if htmx.wants_fragment(request):
        return _screen(request, desk, platform_id, official)
    return htmx.go_to(request, f"/platforms/{platform_id}/crew")

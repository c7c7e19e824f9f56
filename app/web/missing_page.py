"""Don't have it: the crew says which plate of its change is not there."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, board
from app.desk.missing_plate import plate_is_missing
from app.web import htmx
from app.web.crew_view import bare_crew_view, crew_view
from app.web.house import DeskDep, OfficialDep, frame, page, who
from app.web.languages import words_in
from app.web.screen import ScreenDep

router = APIRouter(prefix="/platforms/{platform_id}/missing")


@router.get("")
def show_missing(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    screen: ScreenDep,
    face: str = "",
) -> Response:
    """The plates that go on in this change, each with its button; the one that was tapped first."""
    one = board(desk, platform_id)
    words = words_in(screen.language)
    view = bare_crew_view(one.now, words.say) if isinstance(one, Bare) else crew_view(one, words.say)
    plates = view.change.on if view.change and view.state in ("changing", "unknown") else ()
    faces = list(dict.fromkeys(plate.face for plate in plates))
    return page(
        "missing/page.html",
        200,
        frame=frame(one.now.meet, official, one.now.meet_id, platform_id),
        layout=htmx.layout(request),
        view=view,
        faces=sorted(faces, key=lambda one: one != face),
        tapped=face if face in faces else "",
        **words.context(),
    )


@router.post("")
def say_missing(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    face: Annotated[str, Form()] = "",
    shown: Annotated[str, Form()] = "",
) -> Response:
    """Take it out of stock and go back to the crew's screen, which asks what is on the bar."""
    plate_is_missing(desk, platform_id, face, shown, who=who(official, "crew"))
    return htmx.go_to(request, f"/platforms/{platform_id}/crew")

"""This screen: the page on which a tablet or TV is told what it is, with a line to hold a ruler against."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Depends, Form
from starlette.requests import Request
from starlette.responses import Response

from app.store.engine import reading
from app.store.picture import picture
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.languages import LANGUAGES
from app.web.live import known_platform
from app.web.screen import DISTANCES, ROLES, SCREEN_COOKIE, Screen, ScreenDep, read_diagonal, read_screen

router = APIRouter(prefix="/platforms/{platform_id}")
A_YEAR = 365 * 86400
NO_SIZE = "That is not the diagonal of a screen in inches. A tablet has about 10, a TV 32 to 65."


@router.get("/screen")
def show_screen(
    request: Request, platform_id: int, desk: DeskDep, official: OfficialDep, screen: ScreenDep
) -> Response:
    """The settings of this device."""
    return _render(request, platform_id, desk, official, screen)


def _render(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: str,
    screen: Screen,
    refused: str = "",
    typed: str = "",
) -> Response:
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    return page(
        "screen/page.html",
        422 if refused else 200,
        frame=frame(now.meet, official, now.meet_id, platform_id),
        layout=htmx.layout(request),
        now=now,
        screen=screen,
        distances=DISTANCES,
        languages=LANGUAGES,
        roles=ROLES,
        refused=refused,
        typed=typed or screen.diagonal,
    )


@router.post("/screen", dependencies=[Depends(known_platform)])
def save_screen(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    distance: Annotated[str, Form()] = "",
    diagonal: Annotated[str, Form()] = "",
    language: Annotated[str, Form()] = "en",
    role: Annotated[str, Form()] = "",
) -> Response:
    """Keep the settings on this device."""
    said = read_screen({"distance": distance, "diagonal": diagonal, "language": language, "role": role})
    if read_diagonal(diagonal) is None:
        return _render(request, platform_id, desk, official, said, NO_SIZE, diagonal)
    answer = htmx.go_to(request, f"/platforms/{platform_id}/screen")
    answer.set_cookie(SCREEN_COOKIE, said.cookie(), max_age=A_YEAR, httponly=True, samesite="lax")
    return answer

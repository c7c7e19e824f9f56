"""What every route is given: the desk, who sits at the screen, and the templates."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, cast
from urllib.parse import unquote

from fastapi import Depends
from jinja2 import Environment, FileSystemLoader, StrictUndefined, select_autoescape
from starlette.requests import Request
from starlette.responses import HTMLResponse

from app.desk.entry import Desk
from app.desk.hub import MemoryHub
from app.web import drawing, languages
from app.web.views import Frame, Link

PROJECT = Path(__file__).resolve().parents[2]
NAME_COOKIE = "official"


def make_templates() -> Environment:
    """Jinja with everything escaped and every missing name an error."""
    made = Environment(
        loader=FileSystemLoader(PROJECT / "templates"),
        autoescape=select_autoescape(default=True, default_for_string=True),
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.globals |= drawing.TEMPLATE_GLOBALS | languages.TEMPLATE_GLOBALS
    return made


templates = make_templates()


def the_desk(request: Request) -> Desk:
    """The desk of this process."""
    return cast("Desk", request.app.state.desk)


def the_hub(request: Request) -> MemoryHub:
    """Where streams wait for news."""
    return cast("MemoryHub", request.app.state.hub)


def the_official(request: Request) -> str:
    """Who sits at this screen, as they wrote it themselves; it says who to ask, it proves nothing."""
    name = " ".join(unquote(request.cookies.get(NAME_COOKIE, "")).split())[:40]
    return name if name.isprintable() else ""


DeskDep = Annotated[Desk, Depends(the_desk)]
HubDep = Annotated[MemoryHub, Depends(the_hub)]
OfficialDep = Annotated[str, Depends(the_official)]


def who(official: str, role: str) -> str:
    """The name in the journal: the person's own, or the page's role."""
    return official or role


def frame(
    meet: str, official: str, meet_id: int | None = None, platform_id: int | None = None, here: str = ""
) -> Frame:
    """What stands around a page's content."""
    pages = []
    if meet_id is not None:
        pages = [("Meet", f"/meets/{meet_id}"), ("Roster", f"/meets/{meet_id}/roster")]
    if platform_id is not None:
        pages += [
            ("Equipment", f"/platforms/{platform_id}/equipment"),
            ("Flights", f"/platforms/{platform_id}/flights"),
            ("Rules", f"/platforms/{platform_id}/rules"),
            ("Table", f"/platforms/{platform_id}/table"),
            ("Crew", f"/platforms/{platform_id}/crew"),
            ("Check", f"/platforms/{platform_id}/check"),
            ("Announcer", f"/platforms/{platform_id}/announcer"),
            ("Cards", f"/platforms/{platform_id}/cards"),
            ("Join", f"/platforms/{platform_id}/join"),
        ]
    return Frame(meet, tuple(Link(text, href, text == here) for text, href in pages), official)


def page(name: str, /, status_code: int = 200, **context: Any) -> HTMLResponse:
    """Render a template whole."""
    return HTMLResponse(templates.get_template(name).render(**context), status_code=status_code)

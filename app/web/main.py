"""The application: routes, the one place where errors become answers, and what is made at start-up."""

from __future__ import annotations

import asyncio
import logging
import time
from collections.abc import AsyncIterator, Awaitable, Callable
from contextlib import asynccontextmanager
from datetime import UTC, datetime
from urllib.parse import urlsplit

from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from sqlalchemy.exc import DBAPIError
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.responses import JSONResponse, Response
from starlette.staticfiles import StaticFiles

from app.desk.entry import Clock, Desk
from app.desk.errors import DeskError
from app.desk.hub import MemoryHub
from app.desk.improve import Improver
from app.desk.keeper import CopyPlan, Keeper
from app.desk.plan_text import watched
from app.planning import Budget
from app.store.engine import make_engine
from app.store.migrate import upgrade
from app.store.picture import NotFound
from app.store.trouble import trouble_of
from app.web import (
    cards,
    crew,
    equipment,
    files,
    flights_page,
    home,
    htmx,
    lift_page,
    live,
    misload_page,
    paper_back,
    plan_api,
    plates_check_page,
    roster,
    rules_page,
    screens,
    table,
)
from app.web.house import PROJECT, frame, page, the_official

log = logging.getLogger("platewright")

IMPROVE_SECONDS = 15.0  # what a plan may take in the background, when nobody waits for it

SECURITY_HEADERS = {
    "Content-Security-Policy": "default-src 'self'; img-src 'self' data:; frame-ancestors 'none'; form-action 'self'",
    "X-Content-Type-Options": "nosniff",
    "Referrer-Policy": "same-origin",
}

NO_PAGE = "There is no such page here."
BACK = "Go back, or begin at the first page."
AGAIN = "Load the page again and enter it once more."


def utc_now() -> datetime:
    """The one clock of the process."""
    return datetime.now(UTC)


def create_app(
    database_url: str,
    clock: Clock = utc_now,
    plan_budget: Budget | None = None,
    copy_plan: CopyPlan | None = None,
) -> FastAPI:
    """The app over one database, brought up to date at start; with a plan for copies, these are made too."""

    @asynccontextmanager
    async def lifespan(app: FastAPI) -> AsyncIterator[None]:
        upgrade(database_url)
        engine = make_engine(database_url)
        hub = MemoryHub(asyncio.get_running_loop())
        improver = Improver(engine, hub, Budget(seconds=IMPROVE_SECONDS, monotonic=time.monotonic))
        app.state.hub = hub
        app.state.desk = Desk(engine, hub, clock, improver=improver)
        keeper = None if copy_plan is None else Keeper(engine, copy_plan, clock, time.monotonic)
        app.state.keeper = keeper
        if keeper is not None:
            keeper.start()
        yield
        improver.close()
        if keeper is not None:
            keeper.close()  # nothing is served any more, so nobody waits for the last copy
        engine.dispose()

    app = FastAPI(title="Platewright", lifespan=lifespan, docs_url=None, redoc_url=None)
    app.state.plan_budget = plan_budget or watched()
    app.mount("/static", StaticFiles(directory=PROJECT / "static"), name="static")
    for router in (
        home,
        files,
        roster,
        equipment,
        plates_check_page,
        flights_page,
        lift_page,
        rules_page,
        table,
        misload_page,
        paper_back,
        crew,
        screens,
        cards,
        live,
        plan_api,
    ):
        app.include_router(router.router)
    app.middleware("http")(_guard)
    app.add_exception_handler(DeskError, _desk_error)
    app.add_exception_handler(DBAPIError, _unreadable)
    app.add_exception_handler(NotFound, _not_found)
    app.add_exception_handler(OverflowError, _no_such_number)
    app.add_exception_handler(HTTPException, _http_error)
    app.add_exception_handler(RequestValidationError, _bad_form)
    app.add_exception_handler(Exception, _broken)
    return app


async def _guard(request: Request, call_next: Callable[[Request], Awaitable[Response]]) -> Response:
    """Headers on every answer; and no post from another site's page."""
    if request.method not in ("GET", "HEAD", "OPTIONS") and _from_another_site(request):
        return _secured(_answer(request, 403, "Posted from another site's page: refused.", AGAIN))
    return _secured(await call_next(request))


def _from_another_site(request: Request) -> bool:
    """As the browser itself says. Over plain http on a hall's network it sends Origin, but not Sec-Fetch-Site."""
    origin = request.headers.get("Origin")
    elsewhere = origin is not None and urlsplit(origin).netloc != request.headers.get("Host")
    return elsewhere or request.headers.get("Sec-Fetch-Site") == "cross-site"


def _secured(response: Response) -> Response:
    for name, value in SECURITY_HEADERS.items():
        response.headers.setdefault(name, value)
    return response


def _answer(request: Request, status: int, text: str, help_: str = "") -> Response:
    """One shape for every refusal: a fragment for htmx, a page for a person, JSON for a program."""
    if request.url.path.startswith("/api/"):
        return JSONResponse({"error": {"code": "bad-request", "because": text}}, status_code=status)
    if htmx.wants_fragment(request):
        return page("parts/error.html", status, text=text, help=help_)
    around = frame("Platewright", the_official(request))
    return page(
        "parts/error_page.html", status, frame=around, layout=htmx.layout(request), text=text, help=help_
    )


async def _desk_error(request: Request, error: Exception) -> Response:
    return _answer(request, error.status_code if isinstance(error, DeskError) else 500, str(error))


async def _unreadable(request: Request, error: Exception) -> Response:
    """A page whose meet cannot be read; entries that cannot be written are a :class:`NotKept` of the desk."""
    trouble = trouble_of(error)
    if trouble is None:
        return await _broken(request, error)
    log.error("%s %s failed: the disk %s", request.method, request.url.path, trouble)
    sentence = f"The meet cannot be read: the file or its disk {trouble}. Nothing was entered."
    return _answer(
        request, 503, sentence, "Stop the server, run “platewright check”, and restore the newest copy."
    )


async def _not_found(request: Request, error: Exception) -> Response:
    return _answer(request, 404, str(error))


async def _no_such_number(request: Request, _error: Exception) -> Response:
    """A number in the address or the form that is larger than any row's."""
    return _answer(request, 404, NO_PAGE, BACK)


async def _http_error(request: Request, error: Exception) -> Response:
    status = error.status_code if isinstance(error, HTTPException) else 500
    words = {404: NO_PAGE, 405: "This address takes another kind of request."}
    detail = error.detail if isinstance(error, HTTPException) else ""
    return _answer(request, status, words.get(status, str(detail)), BACK)


async def _bad_form(request: Request, error: Exception) -> Response:
    wrong = error.errors() if isinstance(error, RequestValidationError) else []
    if any(one["loc"][0] != "body" for one in wrong):
        return _answer(request, 404, NO_PAGE, BACK)  # the address itself, or its query, is no number
    names = ", ".join(sorted({str(one["loc"][-1]) for one in wrong}))
    return _answer(request, 422, f"The form was not complete: {names}.", AGAIN)


async def _broken(request: Request, error: Exception) -> Response:
    """Answered outside of :func:`_guard`, so the headers are set here."""
    log.error("%s %s failed", request.method, request.url.path, exc_info=error)
    sentence = "Something went wrong inside Platewright; nothing was entered."
    return _secured(_answer(request, 500, sentence, "Go back and try once more."))

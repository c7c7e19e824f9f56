"""The application: routes, the one place where errors become answers, and what is made at start-up."""

from __future__ import annotations

import asyncio
import logging
from collections.abc import AsyncIterator, Awaitable, Callable
from contextlib import asynccontextmanager
from datetime import UTC, datetime

from fastapi import FastAPI
from fastapi.exceptions import RequestValidationError
from starlette.exceptions import HTTPException
from starlette.requests import Request
from starlette.responses import JSONResponse, Response
from starlette.staticfiles import StaticFiles

from app.desk.entry import Clock, Desk
from app.desk.errors import DeskError
from app.desk.hub import MemoryHub
from app.store.engine import make_engine
from app.store.migrate import upgrade
from app.store.picture import NotFound
from app.web import cards, crew, equipment, home, htmx, live, plan_api, roster, table
from app.web.house import PROJECT, frame, page, the_official

log = logging.getLogger("platewright")

SECURITY_HEADERS = {
    "Content-Security-Policy": "default-src 'self'; img-src 'self' data:; frame-ancestors 'none'; form-action 'self'",
    "X-Content-Type-Options": "nosniff",
    "Referrer-Policy": "same-origin",
}


def utc_now() -> datetime:
    """The one clock of the process."""
    return datetime.now(UTC)


def create_app(database_url: str, clock: Clock = utc_now) -> FastAPI:
    """The app over one database, brought up to date at start."""

    @asynccontextmanager
    async def lifespan(app: FastAPI) -> AsyncIterator[None]:
        upgrade(database_url)
        engine = make_engine(database_url)
        app.state.hub = MemoryHub(asyncio.get_running_loop())
        app.state.desk = Desk(engine, app.state.hub, clock)
        yield
        engine.dispose()

    app = FastAPI(title="Platewright", lifespan=lifespan, docs_url=None, redoc_url=None)
    app.mount("/static", StaticFiles(directory=PROJECT / "static"), name="static")
    for router in (home, roster, equipment, table, crew, cards, live, plan_api):
        app.include_router(router.router)
    app.middleware("http")(_guard)
    app.add_exception_handler(DeskError, _desk_error)
    app.add_exception_handler(NotFound, _not_found)
    app.add_exception_handler(HTTPException, _http_error)
    app.add_exception_handler(RequestValidationError, _bad_form)
    app.add_exception_handler(Exception, _broken)
    return app


async def _guard(request: Request, call_next: Callable[[Request], Awaitable[Response]]) -> Response:
    """Headers on every answer; and no post from another site's page."""
    if (
        request.method not in ("GET", "HEAD", "OPTIONS")
        and request.headers.get("Sec-Fetch-Site") == "cross-site"
    ):
        return JSONResponse({"detail": "Posted from another site: refused."}, status_code=403)
    response = await call_next(request)
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


async def _not_found(request: Request, error: Exception) -> Response:
    return _answer(request, 404, str(error))


async def _http_error(request: Request, error: Exception) -> Response:
    status = error.status_code if isinstance(error, HTTPException) else 500
    words = {404: "There is no such page here.", 405: "This address takes another kind of request."}
    detail = error.detail if isinstance(error, HTTPException) else ""
    return _answer(request, status, words.get(status, str(detail)), "Go back, or begin at the first page.")


async def _bad_form(request: Request, error: Exception) -> Response:
    wrong = error.errors() if isinstance(error, RequestValidationError) else []
    names = ", ".join(sorted({str(one["loc"][-1]) for one in wrong}))
    return _answer(
        request, 422, f"The form was not complete: {names}.", "Load the page again and enter it once more."
    )


async def _broken(request: Request, error: Exception) -> Response:
    log.error("%s %s failed", request.method, request.url.path, exc_info=error)
    return _answer(
        request,
        500,
        "Something went wrong inside Platewright; nothing was entered.",
        "Go back and try once more.",
    )

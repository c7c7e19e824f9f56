"""The Table page and its entries."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Form
from starlette.requests import Request
from starlette.responses import Response

from app.desk import attempts, bar, undo
from app.desk.attempts import Seen
from app.desk.board import Bare, Board, board
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.meet.model import Result
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who
from app.web.table_view import table_view

router = APIRouter(prefix="/platforms/{platform_id}")
ROLE = "table"

Looking = Annotated[int | None, Form()]


@router.get("/table")
def show_table(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    flight: int | None = None,
    lift: int | None = None,
) -> Response:
    """The Table, looking at one flight and lift, or at those that are lifting."""
    return render(request, board(desk, platform_id, flight, lift), official)


def render(
    request: Request,
    one: Board | Bare,
    official: str,
    said: str = "",
    refused: str = "",
    status: int = 200,
    at: int = 0,
    typed: str = "",
) -> Response:
    """The page, or its content for a swap; ``refused`` stands on the line of attempt ``at`` with what was typed."""
    around = frame(one.now.meet, official, one.now.meet_id, one.now.platform_id, "Table")
    if isinstance(one, Bare):
        return page("table/empty.html", status, frame=around, layout=htmx.layout(request), now=one.now)
    swapped = htmx.wants_fragment(request)
    view = table_view(one, at if refused else 0)
    if refused and at not in {row.attempt_id for row in (*view.order, *view.no_opener)}:
        # Its line is not on this page (any more): said at the top, with what would have been lost.
        at, refused = 0, f"{refused} You had typed “{typed}”."
    return page(
        "table/_now.html" if swapped else "table/page.html",
        status,
        frame=around,
        view=view,
        said=said,
        refused=refused,
        at=at,
        typed=typed,
        # The cursor moves when the page is opened and after an entry of one's own, never because of another's.
        first=not swapped,
    )


def _answer(
    request: Request,
    desk: Desk,
    platform_id: int,
    official: str,
    flight: int | None,
    lift: int | None,
    said: str,
) -> Response:
    """After an entry: the new Table into the page, or for a plain form the page itself."""
    if htmx.wants_fragment(request):
        return render(request, board(desk, platform_id, flight, lift), official, said)
    looking = f"?flight={flight}&lift={lift}" if flight and lift else ""
    return htmx.go_to(request, f"/platforms/{platform_id}/table{looking}")


@router.post("/weight")
def enter_weight(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    attempt: Annotated[int, Form()],
    version: Annotated[int, Form()],
    weight: Annotated[str, Form()] = "",
    flight: Looking = None,
    lift: Looking = None,
) -> Response:
    """Hand in a weight for an attempt; empty takes the default."""
    try:
        said = attempts.declare(desk, platform_id, Seen(attempt, version), weight, who=who(official, ROLE))
    except DeskError as refused:
        one = board(desk, platform_id, flight, lift)
        return render(
            request, one, official, refused=str(refused), status=refused.status_code, at=attempt, typed=weight
        )
    return _answer(request, desk, platform_id, official, flight, lift, said)


@router.post("/result")
def enter_result(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    attempt: Annotated[int, Form()],
    version: Annotated[int, Form()],
    result: Annotated[Result, Form()],
    flight: Looking = None,
    lift: Looking = None,
) -> Response:
    """Good lift, no lift or pass."""
    said = attempts.judge(desk, platform_id, Seen(attempt, version), result, who=who(official, ROLE))
    return _answer(request, desk, platform_id, official, flight, lift, said)


@router.post("/undo")
def undo_last(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    entry: Annotated[int | None, Form()] = None,
    flight: Looking = None,
    lift: Looking = None,
) -> Response:
    """Take the last entry back."""
    said = undo.undo(desk, platform_id, entry, who=who(official, ROLE))
    return _answer(request, desk, platform_id, official, flight, lift, said)


@router.post("/redo")
def redo_last(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    entry: Annotated[int | None, Form()] = None,
    flight: Looking = None,
    lift: Looking = None,
) -> Response:
    """Enter again what the last undo took back."""
    said = undo.redo(desk, platform_id, entry, who=who(official, ROLE))
    return _answer(request, desk, platform_id, official, flight, lift, said)


@router.post("/flight")
def bring_flight(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    flight: Annotated[int, Form()],
    lift: Annotated[int, Form()],
) -> Response:
    """Bring a flight and lift to the platform."""
    bar.bring_flight(desk, platform_id, flight, lift, who=who(official, ROLE))
    return _answer(request, desk, platform_id, official, flight, lift, "The flight is on the platform.")


@router.post("/table-bar")
def tell_bar(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    tell: Annotated[str, Form()],
    shown: Annotated[str | None, Form()] = None,
    flight: Looking = None,
    lift: Looking = None,
) -> Response:
    """What the table says about the bar: loaded, not-loaded, hold, go, or what it carries."""
    by = who(official, ROLE)
    match tell:
        case "loaded":
            bar.bar_is_loaded(desk, platform_id, shown, who=by)
        case "not-loaded":
            bar.bar_is_not_loaded(desk, platform_id, who=by)
        case "hold":
            bar.hold_platform(desk, platform_id, who=by)
        case "go":
            bar.end_hold(desk, platform_id, who=by)
        case _:
            bar.bar_carries(desk, platform_id, tell, shown, who=by)
    return _answer(request, desk, platform_id, official, flight, lift, "")

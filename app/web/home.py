"""The front door: the meets in this folder, a new one, and the pages of each."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from typing import Annotated
from urllib.parse import quote

from fastapi import APIRouter, Form
from sqlmodel import Session, col, select
from starlette.concurrency import run_in_threadpool
from starlette.requests import Request
from starlette.responses import Response

from app.desk import copying, setup, stock
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.desk.keeper import Standing
from app.desk.owned import owned_pieces, placed
from app.desk.roster import pictures
from app.desk.stock import owned_seen
from app.loading.mass import show_mass
from app.meet.presets import PRESETS
from app.store.engine import reading
from app.store.picture import get, key
from app.store.tables import MeetRow
from app.web import htmx
from app.web.house import NAME_COOKIE, DeskDep, OfficialDep, frame, page, who

router = APIRouter()

Rows = list[dict[str, str]]


@dataclass(frozen=True, slots=True)
class OwnedView:
    """What the meet owns and where it stands: one row a face; before it is counted, what stands at the platforms."""

    counted: bool
    seen: str
    rows: Rows


@dataclass(frozen=True, slots=True)
class CopiesView:
    """How the copies stand, in two sentences; ``bad``: none is being made."""

    sentence: str
    hint: str
    bad: bool


def copies_view(standing: Standing, now: datetime) -> CopiesView:
    """What the Meet page says of the copies. Times are those of the machine's clock; of another day, with the date."""
    plan, last = standing.plan, standing.last
    when = ""
    if last is not None:
        local = last.at.astimezone()
        when = local.strftime("%H:%M" if local.date() == now.astimezone().date() else "%Y-%m-%d %H:%M")
    if standing.trouble:
        since = f"No copy since {when}" if when else "No copy yet"
        return CopiesView(
            f"{since}: the folder {plan.folder} {standing.trouble}.",
            "The meet goes on and every entry is on this machine's disk. It is tried again by itself; put the folder "
            "right, or start again with another one: --backup FOLDER.",
            bad=True,
        )
    sentence = (
        f"Last copy {when}, {standing.kept} kept in {plan.folder}."
        if when
        else f"No copy yet; it will go to {plan.folder}."
    )
    return CopiesView(
        sentence,
        f"One after each round and every {plan.minutes:g} minutes while something changes; the last {plan.keep} are "
        "kept. On a stick (--backup FOLDER) they outlive this machine.",
        bad=False,
    )


@router.get("/")
def home(request: Request, desk: DeskDep, official: OfficialDep) -> Response:
    """All meets of this folder, and the form for a new one."""
    return _render_home(request, desk, official)


def _render_home(
    request: Request,
    desk: Desk,
    official: str,
    *,
    refused: str = "",
    typed: str = "",
    unit: str = "kg",
    copy_refused: str = "",
    copy_of: int = 0,
    copy_name: str = "",
) -> Response:
    with reading(desk.engine) as session:
        meets = [
            (key(row), row.name, row.unit) for row in session.exec(select(MeetRow).order_by(col(MeetRow.id)))
        ]
    return page(
        "home/page.html",
        422 if refused or copy_refused else 200,
        frame=frame("Platewright", official),
        layout=htmx.layout(request),
        meets=meets,
        refused=refused,
        typed=typed,
        unit=unit,
        copy_refused=copy_refused,
        copy_of=copy_of,
        copy_name=copy_name,
    )


@router.post("/meets/copy")
def copy_meet(
    request: Request,
    desk: DeskDep,
    official: OfficialDep,
    meet: Annotated[int, Form()],
    name: Annotated[str, Form()] = "",
) -> Response:
    """A new meet set up like an earlier one."""
    try:
        made = copying.copy_meet(desk, meet, name, who=who(official, "director"))
    except DeskError as refused:
        return _render_home(request, desk, official, copy_refused=str(refused), copy_of=meet, copy_name=name)
    return htmx.go_to(request, f"/meets/{made}")


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
    typed: str | None = None,
    preset: str = "",
    owned_refused: str = "",
    owned_typed: Rows | None = None,
    status: int = 422,
) -> Response:
    with reading(desk.engine) as session:
        meet = get(session, MeetRow, meet_id, "meet")
        name, unit = meet.name, meet.unit
        platforms = pictures(session, meet_id)
        owned = _owned(session, meet, owned_typed)
    keeper = getattr(request.app.state, "keeper", None)
    return page(
        "home/meet.html",
        status if refused or owned_refused else 200,
        frame=frame(name, official, meet_id, here="Meet"),
        layout=htmx.layout(request),
        meet_id=meet_id,
        name=name,
        unit=unit,
        platforms=platforms,
        presets=[(one.key, one.name) for one in PRESETS if one.unit == unit],
        refused=refused,
        typed=f"Platform {len(platforms) + 1}" if typed is None else typed,
        preset=preset,
        owned=owned,
        copies=None if keeper is None else copies_view(keeper.standing, desk.clock()),
        owned_refused=owned_refused,
    )


def _owned(session: Session, meet: MeetRow, typed: Rows | None) -> OwnedView:
    stand, have = placed(session, key(meet)), owned_pieces(meet)
    words = {
        show_mass(face): ", ".join(f"{name} {count}" for name, count in places)
        for face, places in stand.items()
    }
    sums = {face: sum(count for _, count in places) for face, places in stand.items()}
    counts = sums if have is None else dict.fromkeys(stand, 0) | have
    rows = typed or [
        {"face": show_mass(face), "count": str(counts[face])} for face in sorted(counts, reverse=True)
    ]
    spare: Rows = [] if typed else [{"face": "", "count": ""}]
    return OwnedView(
        counted=have is not None,
        seen=owned_seen(meet),
        rows=[row | {"places": words.get(row["face"], "")} for row in [*rows, *spare]],
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


@router.post("/meets/{meet_id}/owned")
async def save_owned(request: Request, meet_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """What the meet owns, or that nobody counts it."""
    form = await request.form()
    rows = [
        {"face": str(face), "count": str(count)}
        for face, count in zip(form.getlist("face"), form.getlist("count"), strict=False)
    ]
    counted = None if form.get("uncounted") else rows
    seen = str(form.get("seen", ""))

    def saved_or_refused() -> Response:
        try:
            stock.save_owned(desk, meet_id, counted, seen, who=who(official, "director"))
        except DeskError as refused:
            return _render_meet(
                request,
                desk,
                meet_id,
                official,
                owned_refused=str(refused),
                owned_typed=rows,
                status=refused.status_code,
            )
        return htmx.go_to(request, f"/meets/{meet_id}#owned")

    return await run_in_threadpool(saved_or_refused)


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

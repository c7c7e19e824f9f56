"""The page that asks, the day before, whether the plates will do."""

from __future__ import annotations

import time
from dataclasses import dataclass

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk import plates_check
from app.desk.plates_check import LiftCheck, PlatformCheck
from app.loading.mass import show_mass
from app.meet.stock_check import Borrowed, say_pieces, sentences
from app.planning import Budget
from app.store.engine import reading
from app.store.picture import Picture, picture
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.words import tool_words

router = APIRouter(prefix="/platforms/{platform_id}/plates-check")
KIND_SECONDS = 2.0  # one plan of all openers with one more pair; more than enough for a bar


@dataclass(frozen=True, slots=True)
class LiftRow:
    """What one lift's panel says."""

    lift_id: int
    name: str
    session: str
    tool: str
    openers: int
    will_do: bool
    said: tuple[str, ...]
    elsewhere: tuple[tuple[int, str], ...]  # at which platforms the plates that are short stand, in words
    refused: str


@router.get("")
def show_check(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """Every lift of the platform."""
    found = plates_check.check_platform(desk, platform_id)
    now = found.now
    return page(
        "plates_check/page.html",
        frame=frame(now.meet, official, now.meet_id, platform_id, "Equipment"),
        layout=htmx.layout(request),
        platform_id=platform_id,
        platform=now.platform,
        meet_id=now.meet_id,
        lifts=tuple(_row(found, one) for one in found.lifts),
    )


def _row(found: PlatformCheck, one: LiftCheck) -> LiftRow:
    now, check = found.now, one.check
    tool = now.tool(one.lift.implement_id)
    return LiftRow(
        lift_id=one.lift.id,
        name=one.lift.name,
        session=one.session,
        tool=tool_words(tool, now.unit),
        openers=one.openers,
        will_do=check is not None and not check.missing,
        said=sentences(check, now.unit, tool.implement.ends) if check else (),
        elsewhere=tuple(
            (platform_id, f"{place} has {count} of the {show_mass(short.face)}s.")
            for short in (check.shortages if check else ())
            for platform_id, place, count in found.elsewhere.get(short.face, ())
        ),
        refused=one.refused,
    )


@router.get("/{lift_id}/borrow")
def show_borrow(platform_id: int, lift_id: int, desk: DeskDep) -> Response:
    """Which one pair is worth borrowing; fetched when the page is there, since it plans once a kind of plate."""
    budget = Budget(seconds=KIND_SECONDS, monotonic=time.monotonic)
    best = plates_check.worth_borrowing(desk, platform_id, lift_id, budget)
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    return page("plates_check/_borrow.html", said=_borrow_words(now, lift_id, best))


def _borrow_words(now: Picture, lift_id: int, best: Borrowed | None) -> str:
    if best is None:
        return "No single borrowed plate spares the crew a kilogram over these openers."
    ends = now.tool(now.programme(lift_id).lift(lift_id).implement_id).implement.ends
    about = "" if best.proved else "about "
    return (
        f"Borrow {say_pieces(best.face, best.pieces, ends)}: over the openers' rounds the crew "
        f"then handles {about}{show_mass(best.saves)} {now.unit} less of {show_mass(best.of)} {now.unit}."
    )

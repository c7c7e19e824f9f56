"""The Table page and its entries."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, Form
from starlette.responses import Response

from app.desk import ahead, attempts, bar, people, undo
from app.desk.attempts import Seen
from app.desk.errors import AgainstTheRules, DeskError, NotAllowedNow
from app.loading.mass import show_mass
from app.meet.model import Result
from app.web.house import page
from app.web.table_place import Asked, Posted
from app.web.words import plate_views

router = APIRouter(prefix="/platforms/{platform_id}")

LATE_REASON = "handed in in time, entered late"  # the usual one, offered so that Enter is enough


@router.get("/table")
def show_table(place: Asked) -> Response:
    """The Table, looking at one flight and lift, or at those that are lifting."""
    return place.render()


@router.post("/weight")
def enter_weight(
    place: Posted,
    attempt: Annotated[int, Form()],
    version: Annotated[int, Form()],
    weight: Annotated[str, Form()] = "",
    reason: Annotated[str, Form()] = "",
) -> Response:
    """Hand in a weight for an attempt; empty takes the default, a reason overrides a rule."""
    try:
        said = attempts.declare(
            place.desk, place.platform_id, Seen(attempt, version), weight, reason, who=place.by
        )
    except AgainstTheRules as refused:
        asked = LATE_REASON if refused.late else ""
        return place.render(refused=str(refused), status=422, at=attempt, typed=weight, reason=asked)
    except DeskError as refused:
        return place.render(refused=str(refused), status=refused.status_code, at=attempt, typed=weight)
    return place.answer(said)


@router.get("/ahead")
def look_ahead(place: Asked, attempt: int, version: int, weight: str = "") -> Response:
    """Before Enter: what the rules would say to this weight, and what it would need."""
    if not weight.strip():
        return page("table/_ahead.html", ahead=ahead.Ahead(()), refused="")
    try:
        seen = Seen(attempt, version)
        found = ahead.look_ahead(place.desk, place.platform_id, seen, weight)
    except DeskError as refused:
        return page("table/_ahead.html", refused=str(refused), ahead=None)
    now = place.board().now
    return page(
        "table/_ahead.html",
        refused="",
        ahead=found,
        place=f"{found.place}." if found.place else "",
        after=show_mass(found.after.weight) if found.after else "",
        hands=found.hands is not None,
        off=plate_views(found.hands.off, now) if found.hands else (),
        on=plate_views(found.hands.on, now) if found.hands else (),
    )


@router.post("/result")
def enter_result(
    place: Posted,
    attempt: Annotated[int, Form()],
    version: Annotated[int, Form()],
    result: Annotated[Result, Form()],
) -> Response:
    """Good lift, no lift or pass."""
    seen = Seen(attempt, version)
    return place.answer(attempts.judge(place.desk, place.platform_id, seen, result, who=place.by))


@router.post("/undo")
def undo_last(place: Posted, entry: Annotated[int | None, Form()] = None) -> Response:
    """Take the last entry back."""
    return place.answer(undo.undo(place.desk, place.platform_id, entry, who=place.by))


@router.post("/redo")
def redo_last(place: Posted, entry: Annotated[int | None, Form()] = None) -> Response:
    """Enter again what the last undo took back."""
    return place.answer(undo.redo(place.desk, place.platform_id, entry, who=place.by))


@router.post("/flight")
def bring_flight(place: Posted, flight: Annotated[int, Form()], lift: Annotated[int, Form()]) -> Response:
    """Bring a flight and lift to the platform."""
    bar.bring_flight(place.desk, place.platform_id, flight, lift, who=place.by)
    return place.answer("The flight is on the platform.")


@router.post("/lifter")
def tell_lifter(place: Posted, lifter: Annotated[int, Form()], do: Annotated[str, Form()]) -> Response:
    """A lifter withdraws, is back, or is granted a fourth attempt in the lift looked at."""
    if do == "fourth":
        if place.lift is None:
            raise NotAllowedNow("Choose the lift first.")
        said = people.grant_fourth(place.desk, place.platform_id, lifter, place.lift, who=place.by)
    else:
        said = people.withdraw(place.desk, place.platform_id, lifter, back=do == "back", who=place.by)
    return place.answer(said)


@router.post("/owner")
def tell_owner(place: Posted, take: Annotated[str, Form()]) -> Response:
    """Who enters for the flight looked at: this official, or anybody."""
    if place.flight is None:
        raise NotAllowedNow("Choose the flight first.")
    tell = people.take_over if take == "yes" else people.hand_back
    return place.answer(tell(place.desk, place.platform_id, place.flight, who=place.by))


@router.post("/table-bar")
def tell_bar(
    place: Posted, tell: Annotated[str, Form()], shown: Annotated[str | None, Form()] = None
) -> Response:
    """What the table says about the bar: loaded, not-loaded, hold, go, or what it carries."""
    desk, platform_id, by = place.desk, place.platform_id, place.by
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
    return place.answer()

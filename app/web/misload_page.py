"""After an error in loading: what was on the bar, what the rules allow, and taking it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Form, Query
from starlette.responses import Response

from app.desk import misload
from app.desk.attempts import Seen
from app.desk.errors import DeskError
from app.desk.misload import Inquiry
from app.loading.mass import show_mass
from app.web import htmx
from app.web.house import frame, page
from app.web.table_place import Asked, Posted

router = APIRouter(prefix="/platforms/{platform_id}/misload")

KINDS = {
    "bar": "another load than called, or unequal ends",
    "disturbed": "the bar or its plates moved, or the platform was disturbed",
    "spoiled": "a loader or spotter spoiled the lift",
}


@dataclass(frozen=True, slots=True)
class MisloadView:
    """What is known, in words."""

    name: str
    called: str
    ends: int
    stack: str
    words: str
    mass: str
    remedies: tuple[str, ...]


def _view(inquiry: Inquiry) -> MisloadView:
    differs = inquiry.found is not None and inquiry.found.mass != inquiry.called
    return MisloadView(
        name=inquiry.name,
        called=show_mass(inquiry.called),
        ends=inquiry.ends,
        stack=" ".join(map(show_mass, inquiry.stack)),
        words=inquiry.words,
        mass=show_mass(inquiry.found.mass) if inquiry.found is not None and differs else "",
        remedies=tuple(remedy.words for remedy in inquiry.remedies),
    )


@router.get("")
def ask(
    place: Asked,
    attempt: int,
    version: int,
    end: Annotated[list[str] | None, Query()] = None,
    kind: str = "bar",
) -> Response:
    """The form, and once something was said in it, what the rules allow."""
    return _render(place, attempt, version, end or [], kind, asked=end is not None)


def _render(
    place: Asked, attempt: int, version: int, ends: list[str], kind: str, *, asked: bool, refused: str = ""
) -> Response:
    now = place.board().now
    seen = Seen(attempt, version)
    try:
        inquiry = misload.inquire(place.desk, place.platform_id, seen, ends, kind if asked else "spoiled")
    except DeskError as error:
        refused = str(error)
        inquiry = misload.inquire(place.desk, place.platform_id, seen, ends, "spoiled")
    return page(
        "table/misload.html",
        422 if refused else 200,
        frame=frame(now.meet, place.official, now.meet_id, place.platform_id, "Table"),
        layout=htmx.layout(place.request),
        platform_id=place.platform_id,
        unit=now.unit,
        view=_view(inquiry),
        attempt=attempt,
        version=version,
        ends=ends,
        kind=kind,
        kinds=KINDS,
        asked=asked,
        refused=refused,
    )


@router.post("")
def take(
    place: Posted,
    attempt: Annotated[int, Form()],
    version: Annotated[int, Form()],
    choice: Annotated[int, Form()],
    kind: Annotated[str, Form()],
    end: Annotated[list[str] | None, Form()] = None,
) -> Response:
    """Take a remedy."""
    seen = Seen(attempt, version)
    misload.take_remedy(place.desk, place.platform_id, seen, end or [], kind, choice, who=place.by)
    return htmx.go_to(place.request, f"/platforms/{place.platform_id}/table")

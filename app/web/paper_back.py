"""Bring back from paper: the page on which a round run on cards is typed in."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Annotated

from fastapi import APIRouter, Form
from starlette.responses import Response

from app.desk.attempts import Seen
from app.desk.board import Bare, Board
from app.desk.errors import DeskError
from app.desk.from_paper import PaperLine, bring_back
from app.loading.mass import show_mass
from app.meet.model import ROUNDS, Result
from app.web import htmx
from app.web.house import frame, page
from app.web.table_place import Asked, Place, Posted

router = APIRouter(prefix="/platforms/{platform_id}/from-paper")

RESULTS = {"": "not lifted", "good": "good lift", "missed": "no lift", "passed": "passed"}
Many = Annotated[list[str] | None, Form()]


@dataclass(frozen=True, slots=True)
class Row:
    """One attempt of the round, as it is here or as it was typed."""

    attempt: int
    version: int
    lot: int
    lifter: str
    weight: str
    result: str


@router.get("")
def show(place: Asked, number: int = 0) -> Response:
    """The round that is on, or the one asked for."""
    return _render(place, number)


def _render(
    place: Place, number: int, refused: str = "", status: int = 200, typed: list[Row] | None = None
) -> Response:
    one = place.board()
    around = frame(one.now.meet, place.official, one.now.meet_id, place.platform_id, "Cards")
    layout = htmx.layout(place.request)
    if isinstance(one, Bare):
        return page("table/empty.html", status, frame=around, layout=layout, now=one.now)
    shown = number if number in ROUNDS else one.order[0].attempt.number if one.order else ROUNDS[-1]
    return page(
        "table/from_paper.html",
        status,
        frame=around,
        layout=layout,
        platform_id=place.platform_id,
        unit=one.now.unit,
        title=f"{one.flight.name} · {one.lift.name} · round {shown}",
        flight_id=one.flight.id,
        lift_id=one.lift.id,
        number=shown,
        rounds=ROUNDS,
        rows=typed or _rows(one, shown),
        results=RESULTS,
        refused=refused,
    )


def _rows(one: Board, number: int) -> list[Row]:
    """The flight's attempts of a round, as a card has them: by weight, then lot."""
    attempts = one.programme.of_lift(one.lift.id)
    rows = [
        (attempt.weight is None, attempt.weight or 0, lifter.lot, attempt, lifter)
        for lifter in one.programme.of_flight(one.flight.id)
        for attempt in attempts.get(lifter.id, ())
        if attempt.number == number
    ]
    return [
        Row(
            attempt=attempt.id,
            version=attempt.version,
            lot=lifter.lot,
            lifter=lifter.name,
            weight="" if attempt.weight is None else show_mass(attempt.weight),
            result="" if attempt.result is Result.OPEN else attempt.result.value,
        )
        for *_, attempt, lifter in sorted(rows, key=lambda row: row[:3])
    ]


@router.post("")
def take(
    place: Posted,
    number: Annotated[int, Form()],
    attempt: Many = None,
    version: Many = None,
    weight: Many = None,
    result: Many = None,
) -> Response:
    """Take the round in; with anything wrong the page comes back as typed."""
    columns = [attempt or [], version or [], weight or [], result or []]
    if len({len(column) for column in columns}) != 1 or not all(
        text.isascii() and text.isdigit() and len(text) < 12 for text in (*columns[0], *columns[1])
    ):
        return _render(
            place, number, "The form was not complete. Load the page again and type it once more.", 422
        )
    typed = list(zip(*columns, strict=True))
    lines = [PaperLine(Seen(int(a), int(v)), w, r) for a, v, w, r in typed]
    try:
        bring_back(place.desk, place.platform_id, lines, who=place.by)
    except DeskError as refused:
        one = place.board()
        known = {} if isinstance(one, Bare) else {row.attempt: row for row in _rows(one, number)}
        again = [
            Row(int(a), known[int(a)].version, known[int(a)].lot, known[int(a)].lifter, w, r)
            for a, _, w, r in typed
            if int(a) in known
        ]
        return _render(place, number, str(refused), refused.status_code, again)
    return htmx.go_to(place.request, f"/platforms/{place.platform_id}/table")

"""Cards: what can be printed, and the swap list of a round."""

from __future__ import annotations

from dataclasses import dataclass

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, Board, board
from app.desk.entry import Desk
from app.meet.model import ROUNDS
from app.store.picture import NotFound
from app.web import htmx
from app.web.card_pdf import card_pdf
from app.web.card_view import card_view
from app.web.chart_page import pdf_response
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.paper import paper_size
from app.web.views import CardView

router = APIRouter(prefix="/platforms/{platform_id}")


@dataclass(frozen=True, slots=True)
class CardLink:
    """One card that can be printed; ``now`` marks the round that is lifting."""

    title: str
    rounds: tuple[tuple[int, str], ...]
    lifting: bool


@router.get("/cards")
def list_cards(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """Every flight, lift and round of the platform."""
    one = board(desk, platform_id)
    around = frame(one.now.meet, official, one.now.meet_id, platform_id, "Cards")
    charts = [
        (lift.name, f"/platforms/{platform_id}/chart/{lift.id}")
        for _, _, programme in one.now.sessions
        for lift in programme.lifts
        if programme.flights
    ]
    return page(
        "cards/list.html",
        frame=around,
        layout=htmx.layout(request),
        cards=_links(one),
        charts=charts,
        now=one.now,
    )


def _links(one: Board | Bare) -> list[CardLink]:
    found = []
    for _, _, programme in one.now.sessions:
        for lift in programme.lifts:
            for flight in programme.flights:
                base = f"/platforms/{one.now.platform_id}/cards/{flight.id}/{lift.id}"
                lifting = (one.now.flight_id, one.now.lift_id) == (flight.id, lift.id)
                rounds = tuple((number, f"{base}/{number}") for number in ROUNDS)
                found.append(CardLink(f"{flight.name}, {lift.name}", rounds, lifting))
    return found


@router.get("/cards/{flight_id}/{lift_id}/{round_number}")
def show_card(
    request: Request,
    platform_id: int,
    flight_id: int,
    lift_id: int,
    round_number: int,
    desk: DeskDep,
    official: OfficialDep,
) -> Response:
    """The swap list of one round, ready for the browser's print."""
    view, meet_id = _card(desk, platform_id, flight_id, lift_id, round_number)
    around = frame(view.meet, official, meet_id, platform_id, "Cards")
    here = f"/platforms/{platform_id}/cards/{flight_id}/{lift_id}/{round_number}"
    return page("cards/page.html", frame=around, layout=htmx.layout(request), view=view, here=here)


@router.get("/cards/{flight_id}/{lift_id}/{round_number}/pdf")
def card_as_pdf(
    platform_id: int, flight_id: int, lift_id: int, round_number: int, desk: DeskDep, paper: str = ""
) -> Response:
    """The same as PDF: A4, or Letter where that is asked for."""
    view, _ = _card(desk, platform_id, flight_id, lift_id, round_number)
    return pdf_response(card_pdf(view, paper_size(paper)), f"{view.title}, {view.platform}")


def _card(
    desk: Desk, platform_id: int, flight_id: int, lift_id: int, round_number: int
) -> tuple[CardView, int]:
    one = board(desk, platform_id, flight_id, lift_id)
    asked = (flight_id, lift_id)
    if isinstance(one, Bare) or (one.flight.id, one.lift.id) != asked or round_number not in ROUNDS:
        raise NotFound("card")
    return card_view(one, round_number, now=desk.clock()), one.now.meet_id

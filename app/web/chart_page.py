"""The loading chart as a page and as PDF."""

from __future__ import annotations

from fractions import Fraction

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk.board import Bare, board
from app.desk.entry import Desk
from app.loading.mass import parse_mass
from app.store.picture import NotFound
from app.web import htmx
from app.web.chart_view import ChartPage, chart_view
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.paper import LINE, TEXT_PT, Paper, paper_size, width_of, wrapped
from app.web.words import now_words

router = APIRouter(prefix="/platforms/{platform_id}/chart/{lift_id}")

WEIGHT_PT = 16.0
COLUMNS, WEIGHT_WIDE, GAP = 2, 23.0, 5.0
FOOT = "The chart fills with the heaviest plates first, heaviest inside. The meet's rules and the referee decide."


@router.get("")
def show_chart(
    request: Request,
    platform_id: int,
    lift_id: int,
    desk: DeskDep,
    official: OfficialDep,
    lightest: str = "",
    heaviest: str = "",
) -> Response:
    """Every makeable weight in the range with its chart stack."""
    view, meet_id = _chart(desk, platform_id, lift_id, lightest, heaviest)
    around = frame(view.meet, official, meet_id, platform_id)
    here = f"/platforms/{platform_id}/chart/{lift_id}"
    return page("chart/page.html", frame=around, layout=htmx.layout(request), view=view, here=here)


@router.get("/pdf")
def chart_as_pdf(
    platform_id: int, lift_id: int, desk: DeskDep, lightest: str = "", heaviest: str = "", paper: str = ""
) -> Response:
    """The same for the printer."""
    view, _ = _chart(desk, platform_id, lift_id, lightest, heaviest)
    printed = now_words(desk.clock())
    return pdf_response(chart_pdf(view, paper_size(paper), printed), f"{view.title}, {view.platform}")


def _chart(desk: Desk, platform_id: int, lift_id: int, lightest: str, heaviest: str) -> tuple[ChartPage, int]:
    found = board(desk, platform_id)
    if isinstance(found, Bare):
        raise NotFound("chart")
    flights = [
        f.id for _, _, p in found.now.sessions for f in p.flights if any(x.id == lift_id for x in p.lifts)
    ]
    one = board(desk, platform_id, flights[0], lift_id) if flights else found
    if isinstance(one, Bare) or one.lift.id != lift_id:
        raise NotFound("chart")
    return chart_view(one, _mass(lightest), _mass(heaviest)), one.now.meet_id


def _mass(typed: str) -> Fraction | None:
    """A bound of the range; nothing sensible is no bound."""
    try:
        return parse_mass(typed.replace(",", "."))
    except ValueError:
        return None


def pdf_response(document: bytes, name: str) -> Response:
    """A PDF that the browser shows, with a name to save it under."""
    plain = "".join(one if one.isascii() and (one.isalnum() or one in " -") else "" for one in name)
    return Response(
        document,
        media_type="application/pdf",
        headers={"Content-Disposition": f'inline; filename="{" ".join(plain.split()) or "platewright"}.pdf"'},
    )


def chart_pdf(view: ChartPage, size: str, printed: str) -> bytes:
    """Two columns of weights, down the first and then the second; a line is never split."""
    paper = Paper(f"{view.title}, {view.platform}", size, [f"Printed {printed}. {FOOT}"])
    wide = (paper.width - GAP) / COLUMNS
    stack_wide = wide - WEIGHT_WIDE
    top = _head(paper, view)
    column = 0
    for line in view.lines:
        stack = wrapped(" ".join(line.stack) or "empty", stack_wide)
        high = LINE * len(stack) + 1.6
        if paper.y + high > paper.bottom:
            column += 1
            if column == COLUMNS:
                paper.new_page()
                top, column = _head(paper, view), 0
            paper.y = top
        x = column * (wide + GAP)
        paper.text(x, paper.y + LINE, line.weight, WEIGHT_PT, bold=True)
        for at, words in enumerate(stack):
            paper.text(x + WEIGHT_WIDE, paper.y + LINE * (at + 1), words)
        paper.y += high
        paper.line(x, paper.y, x + wide, paper.y, 0.2)
    return paper.pdf()


def _head(paper: Paper, view: ChartPage) -> float:
    """Title, bar and plates; returns where the lines begin."""
    paper.y += 5.5
    paper.text(0, paper.y, f"{view.title}, {view.unit}", 19, bold=True)
    place = f"{view.meet}, {view.platform}"
    paper.text(paper.width - width_of(place, TEXT_PT), paper.y, place)
    paper.paragraph(f"{view.tool}. Plates {view.side}, inside first.", bold=True)
    paper.paragraph(f"Made from {view.plates}.")
    paper.y += 2
    paper.line(0, paper.y, paper.width, paper.y, 0.9)
    return paper.y

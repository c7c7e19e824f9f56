"""The set-up checklist of a platform: screens, iron, paper and cautions, with this platform's own figures in it."""

from __future__ import annotations

from dataclasses import dataclass

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.loading.mass import show_mass
from app.store.engine import reading
from app.store.picture import Picture, picture
from app.web import htmx
from app.web.chart_page import pdf_response
from app.web.house import DeskDep, OfficialDep, frame, page
from app.web.paper import LINE, Paper, paper_size, wrapped
from app.web.words import now_words, tool_words

router = APIRouter(prefix="/platforms/{platform_id}/checklist")

BOX, INDENT = 4.6, 8.0
SCREENS = (
    "Every tablet and TV: join by the QR code of its page, then open This screen and say distance and size.",
    "Hold a ruler against the line on This screen: it must be 100 mm. The digits then are what they say.",
    "Each tablet stays awake: screen time-out set to never (Display settings), on a charger, battery saver off.",
    "Do not rely on the page for that: over plain http it cannot keep a tablet awake by itself.",
    "No lock screen, no notifications, automatic brightness off and bright, rotation locked.",
    "Stop the table for five seconds, or switch the wifi off: every screen must say that it is not connected.",
    "Tablets at most 3 m from the loaders, clear of the plates' path; a TV beyond that.",
)
PAPER = (
    "Loading cards of round 1 of every flight, and blank cards for rounds 2 and 3, at the table and at each tree.",
    "The loading chart of each bar on the wall, and one with the chief referee.",
    "Pens that write on sweat-damp paper, two clipboards, a torch.",
)
CAUTIONS = (
    "Shoes, no loose jewellery, no fingers between plates. Lift with the legs; two people for a 25 held high.",
    "Both ends alike: on a rack or bench never more than one big plate between the ends, no end told to go ahead.",
    "Collars on before hands leave. Nobody loads while a lifter is under the bar or stands in the belt.",
    "Never step under or lean over a bar that moves; never catch a falling bar; eyes on the lifter, not on a screen.",
    "Chock a bar on the floor. Check the carabiner's gate, the chain and the strap before each belt.",
    "Crews rotate; water within reach. Stop always beats on time.",
    "The meet's rules, the referee, local codes and trained people decide; this list does not replace them.",
)


@dataclass(frozen=True, slots=True)
class Section:
    """A heading and its boxes to tick."""

    title: str
    items: tuple[str, ...]


def checklist(now: Picture) -> tuple[Section, ...]:
    """The list with the platform's own plates and bars."""
    plates = tuple(
        f"{item.plate.count} × {show_mass(item.plate.face)} {now.unit}"
        + ("" if item.plate.thickness_mm else ", thickness not measured")
        for item in now.stock
        if item.plate.count
    )
    bars = tuple(tool_words(tool, now.unit) for tool in now.tools)
    return (
        Section("Plates, counted at both trees", plates or ("No plates are entered on the Equipment page.",)),
        Section(
            "Bars, belts and collars",
            (
                *bars,
                "Each weighed; sleeves turn; collars close and hold. A spare bar and a spare pair of collars near.",
                "Small plates in one box, face up, where both ends reach it. A jack and a brush.",
                "Rack heights tried from the lowest to the highest on the roster; safeties and blocks at hand.",
            ),
        ),
        Section("Screens", SCREENS),
        Section("Paper", PAPER),
        Section("Take care", CAUTIONS),
    )


@router.get("")
def show_checklist(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The list."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    around = frame(now.meet, official, now.meet_id, platform_id)
    return page(
        "checklist/page.html", frame=around, layout=htmx.layout(request), now=now, sections=checklist(now)
    )


@router.get("/pdf")
def checklist_as_pdf(platform_id: int, desk: DeskDep, paper: str = "") -> Response:
    """The list for the printer."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    printed = now_words(desk.clock())
    return pdf_response(checklist_pdf(now, paper_size(paper), printed), f"Set-up, {now.platform}")


def checklist_pdf(now: Picture, size: str, printed: str) -> bytes:
    """Boxes to tick; no item is split between two pages."""
    paper = Paper(f"Set-up, {now.platform}", size, [f"{now.meet}, {now.platform}. Printed {printed}."])
    paper.paragraph(f"Set-up of {now.platform}", 19, bold=True)
    for section in checklist(now):
        _room(paper, 4 * LINE)
        paper.y += 2.5
        paper.paragraph(section.title, 16, bold=True)
        for item in section.items:
            _room(paper, LINE * len(wrapped(item, paper.width - INDENT)) + 1)
            paper.box(0, paper.y + 1.4, BOX)
            paper.paragraph(item, indent=INDENT)
            paper.y += 1
    return paper.pdf()


def _room(paper: Paper, high: float) -> None:
    if paper.y + high > paper.bottom:
        paper.new_page()

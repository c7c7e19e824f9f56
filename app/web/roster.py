"""The Roster page: paste or upload, see what is wrong line by line, take it out again."""

from __future__ import annotations

from codecs import BOM_UTF16_BE, BOM_UTF16_LE
from typing import Annotated

from fastapi import APIRouter, File, Form, UploadFile
from starlette.requests import Request
from starlette.responses import Response

from app.desk import roster
from app.desk.entry import Desk
from app.desk.errors import DeskError, NotAllowedNow, WrongRoster
from app.desk.roster import lift_names, pictures, roster_entries
from app.loading.mass import show_mass
from app.store.engine import reading
from app.store.picture import get
from app.store.tables import MeetRow
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who

router = APIRouter(prefix="/meets/{meet_id}/roster")
MOST_BYTES = 1_000_000


@router.get("")
def show_roster(request: Request, meet_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The lifters of the meet, and the form that takes more."""
    return _render(request, desk, meet_id, official)


def _render(
    request: Request,
    desk: Desk,
    meet_id: int,
    official: str,
    *,
    said: str = "",
    refused: str = "",
    wrong: tuple[tuple[int, str], ...] = (),
    typed: str = "",
    status: int = 200,
) -> Response:
    with reading(desk.engine) as session:
        meet = get(session, MeetRow, meet_id, "meet")
        name, unit = meet.name, meet.unit
        seen = pictures(session, meet_id)
    entries = sorted(
        (entry for now in seen for entry in roster_entries(now)), key=lambda one: (one.flight, one.lot)
    )
    lifts = lift_names(seen)
    return page(
        "roster/page.html",
        status,
        frame=frame(name, official, meet_id, here="Roster"),
        layout=htmx.layout(request),
        meet_id=meet_id,
        unit=unit,
        lifts=lifts,
        entries=entries,
        show=show_mass,
        has_platform=bool(seen),
        platforms=[(now.platform_id, now.platform) for now in seen],
        header=",".join(
            ["name", "lot", "flight", "platform", "body weight"]
            + [f"{lift} {what}" for lift in lifts for what in ("opener", "rack")]
        ),
        said=said,
        refused=refused,
        wrong=wrong,
        typed=typed,
    )


@router.post("")
def import_roster(
    request: Request,
    meet_id: int,
    desk: DeskDep,
    official: OfficialDep,
    text: Annotated[str, Form()] = "",
    file: Annotated[UploadFile | None, File()] = None,
) -> Response:
    """Take lifters in: all of them or none."""
    try:
        text = _uploaded(file) or text
        said = roster.import_roster(desk, meet_id, text, who=who(official, "roster"))
    except WrongRoster as refused:
        return _render(
            request,
            desk,
            meet_id,
            official,
            refused=str(refused),
            wrong=refused.wrong,
            typed=text,
            status=422,
        )
    except DeskError as refused:
        return _render(
            request, desk, meet_id, official, refused=str(refused), typed=text, status=refused.status_code
        )
    return _render(request, desk, meet_id, official, said=said)


def _uploaded(file: UploadFile | None) -> str:
    """The text of the uploaded file; "" when none was chosen."""
    if file is None or not file.filename:
        return ""
    data = file.file.read(MOST_BYTES + 1)
    if len(data) > MOST_BYTES:
        raise NotAllowedNow(
            "The file is larger than 1 MB. A roster is a small text file; is this the right one?"
        )
    # Spreadsheets write UTF-8, "Unicode text" in UTF-16, or the old code page.
    wide = data[:2] in (BOM_UTF16_LE, BOM_UTF16_BE)
    for encoding in ("utf-16",) if wide else ("utf-8-sig", "cp1252"):
        try:
            text = data.decode(encoding)
        except UnicodeDecodeError:
            continue
        if "\x00" not in text:
            return text
    raise NotAllowedNow("The file is not text. Save it as CSV (UTF-8) and choose it again.")


@router.get(".csv")
def download_roster(meet_id: int, desk: DeskDep) -> Response:
    """The roster as a file that can be taken in again."""
    text = roster.export_roster(desk, meet_id)
    headers = {"Content-Disposition": 'attachment; filename="roster.csv"'}
    return Response(text, media_type="text/csv; charset=utf-8", headers=headers)

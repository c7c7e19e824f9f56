"""Files of a meet: results, the journal, and the whole meet, out and in again."""

from __future__ import annotations

from typing import Annotated

from fastapi import APIRouter, File, UploadFile
from starlette.requests import Request
from starlette.responses import Response

from app.desk import meet_file
from app.desk.errors import NotAllowedNow
from app.desk.meet_file import JOURNAL_COLUMNS, RESULT_COLUMNS, as_csv, as_json
from app.web import htmx
from app.web.house import DeskDep

router = APIRouter()
MOST_BYTES = 50_000_000


def _file(text: str, name: str, kind: str) -> Response:
    headers = {"Content-Disposition": f'attachment; filename="{name}"'}
    return Response(text, media_type=f"{kind}; charset=utf-8", headers=headers)


@router.get("/meets/{meet_id}/results.csv")
def results_csv(meet_id: int, desk: DeskDep) -> Response:
    """Every attempt as a table."""
    return _file(as_csv(RESULT_COLUMNS, meet_file.results(desk, meet_id)), "results.csv", "text/csv")


@router.get("/meets/{meet_id}/results.json")
def results_json(meet_id: int, desk: DeskDep) -> Response:
    """Every attempt as JSON."""
    return _file(as_json(meet_file.results(desk, meet_id)), "results.json", "application/json")


@router.get("/meets/{meet_id}/journal.csv")
def journal_csv(meet_id: int, desk: DeskDep) -> Response:
    """Every entry in words."""
    return _file(as_csv(JOURNAL_COLUMNS, meet_file.journal(desk, meet_id)), "journal.csv", "text/csv")


@router.get("/meets/{meet_id}/journal.json")
def journal_json(meet_id: int, desk: DeskDep) -> Response:
    """Every entry with each row before and after."""
    return _file(as_json(meet_file.journal(desk, meet_id)), "journal.json", "application/json")


@router.get("/meets/{meet_id}/meet.json")
def whole_meet(meet_id: int, desk: DeskDep) -> Response:
    """The whole meet as one file, which :func:`take_meet` takes in."""
    return _file(meet_file.export_meet(desk, meet_id), "meet.json", "application/json")


@router.post("/meets/file")
def take_meet(request: Request, desk: DeskDep, file: Annotated[UploadFile, File()]) -> Response:
    """A meet file becomes another meet here."""
    data = file.file.read(MOST_BYTES + 1)
    if len(data) > MOST_BYTES:
        raise NotAllowedNow("The file is larger than 50 MB, so it is no meet file.")
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError:
        raise NotAllowedNow(
            "The file is not text, so it is no meet file. Choose the meet.json you saved."
        ) from None
    return htmx.go_to(request, f"/meets/{meet_file.import_meet(desk, text)}")

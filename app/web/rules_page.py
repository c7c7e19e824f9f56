"""The Rules page: every rule of a session as a setting, with where its value comes from."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from fastapi import APIRouter
from starlette.requests import Request
from starlette.responses import Response

from app.desk import rule_book
from app.desk.entry import Desk
from app.desk.errors import DeskError
from app.meet.rule_presets import rule_preset
from app.meet.rule_reading import rules_document
from app.meet.rule_settings import SETTINGS, Setting
from app.store.engine import reading
from app.store.picture import NotFound, Picture, picture
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who

router = APIRouter(prefix="/platforms/{platform_id}/rules")
ROLE = "director"


@dataclass(frozen=True, slots=True)
class Row:
    """One setting as it stands, beside what the preset gives and from which source."""

    setting: Setting
    value: str
    preset: str
    source: str
    differs: bool


@dataclass(frozen=True, slots=True)
class RulesView:
    """The rules of one session, in the groups of the page."""

    platform_id: int
    platform: str
    unit: str
    session_id: int
    session: str
    sessions: tuple[tuple[int, str], ...]
    preset: str
    presets: tuple[tuple[str, str, str], ...]
    groups: Mapping[str, tuple[Row, ...]]


@router.get("")
def show_rules(
    request: Request,
    platform_id: int,
    desk: DeskDep,
    official: OfficialDep,
    session: int | None = None,
    preset: str | None = None,
) -> Response:
    """The rules of a session; ``preset`` fills the form from another set, to be looked at and then kept."""
    return _render(request, desk, platform_id, official, session, preset=preset)


def _render(
    request: Request,
    desk: Desk,
    platform_id: int,
    official: str,
    session_id: int | None,
    *,
    preset: str | None = None,
    typed: Mapping[str, str] | None = None,
    said: str = "",
    refused: str = "",
    status: int = 200,
) -> Response:
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    return page(
        "rules/page.html",
        status,
        frame=frame(now.meet, official, now.meet_id, platform_id, "Rules"),
        layout=htmx.layout(request),
        view=_view(now, session_id, preset, typed),
        said=said,
        refused=refused,
    )


def _view(
    now: Picture, session_id: int | None, preset: str | None, typed: Mapping[str, str] | None
) -> RulesView:
    sessions = tuple((number, name) for number, name, _ in now.sessions)
    wanted = session_id if session_id is not None else sessions[0][0] if sessions else 0
    if wanted not in now.rules:
        raise NotFound("session")
    known = {key for key, _, _ in rule_book.preset_names()}
    values = rules_document(now.rules[wanted])
    if preset in known:
        values = {"preset": preset}
    if typed is not None:
        values = values | dict(typed)
    start = rule_preset(values["preset"] if values["preset"] in known else next(iter(known)))
    groups: dict[str, tuple[Row, ...]] = {}
    for setting in SETTINGS:
        given = start.value(setting.key, now.unit)
        value = values.get(setting.key, given)
        row = Row(
            setting,
            value,
            _said(setting, given, now.unit),
            start.source(setting.key, now.unit),
            value != given,
        )
        groups[setting.group] = (*groups.get(setting.group, ()), row)
    return RulesView(
        platform_id=now.platform_id,
        platform=now.platform,
        unit=now.unit,
        session_id=wanted,
        session=dict(sessions)[wanted],
        sessions=sessions,
        preset=start.key,
        presets=tuple(rule_book.preset_names()),
        groups=groups,
    )


def _said(setting: Setting, text: str, unit: str) -> str:
    """The preset's value in words."""
    words = {str(value): name for value, name in setting.choices}
    if text in words:
        return words[text]
    if text == "any":
        return "any number"
    word = unit if setting.unit == "mass" else setting.unit
    return f"{text} {word}".strip()


@router.post("")
async def save_rules(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """Keep the rules, or show them again as typed."""
    typed = {name: str(value) for name, value in (await request.form()).items()}
    number = typed.pop("session", "")
    session_id = int(number) if number.isascii() and number.isdigit() and len(number) < 10 else 0
    try:
        said = rule_book.save_rules(desk, platform_id, session_id, typed, who=who(official, ROLE))
    except DeskError as refused:
        return _render(
            request,
            desk,
            platform_id,
            official,
            session_id,
            typed=typed,
            refused=str(refused),
            status=refused.status_code,
        )
    return _render(request, desk, platform_id, official, session_id, said=said)

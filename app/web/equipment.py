"""The Equipment page: plates, bars, belts, collars, and what each lift asks of them."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields

from fastapi import APIRouter
from sqlmodel import col, select
from starlette.concurrency import run_in_threadpool
from starlette.datastructures import FormData
from starlette.requests import Request
from starlette.responses import Response

from app.desk import equipment, stock
from app.desk.entry import Desk
from app.desk.equipment import CHOICES, LiftWish, lifts_seen, stock_seen
from app.desk.errors import DeskError
from app.loading.mass import show_mass
from app.store.engine import reading
from app.store.picture import Picture, PlateStock, Tool, key, picture
from app.store.tables import PlatformRow
from app.web import htmx
from app.web.house import DeskDep, OfficialDep, frame, page, who
from app.web.words import tool_words

router = APIRouter(prefix="/platforms/{platform_id}/equipment")
ROLE = "director"

PLATE_COLUMNS = ("face", "count", "thickness", "diameter", "colour")
TOOL_COLUMNS = ("id", "name", "kind", "mass", "usable", "collar_mass", "collar_width", "pieces")
SPARE_ROWS = 2
MOST_ROWS = 60

Rows = list[dict[str, str]]


@dataclass(frozen=True, slots=True)
class EquipmentView:
    """The forms as they stand, or as they were typed when something was wrong with them."""

    platform_id: int
    platform: str
    unit: str
    seen: str
    lifts_seen: str
    plates: Rows
    tools: Rows
    lifts: Rows
    choices: dict[str, dict[str, str]]
    total: str
    tool_sums: tuple[str, ...]
    others: tuple[tuple[int, str], ...]  # the meet's other platforms
    lendable: tuple[tuple[str, int], ...]  # faces that are here, with how many
    lending: Mapping[str, str]


@router.get("")
def show_equipment(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The page."""
    return _render(request, desk, platform_id, official)


def _render(
    request: Request,
    desk: Desk,
    platform_id: int,
    official: str,
    *,
    said: str = "",
    refused: str = "",
    status: int = 200,
    typed: Mapping[str, Rows] | None = None,
) -> Response:
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
        query = select(PlatformRow).where(PlatformRow.meet_id == now.meet_id).order_by(col(PlatformRow.id))
        others = tuple((key(row), row.name) for row in session.exec(query) if row.id != platform_id)
    around = frame(now.meet, official, now.meet_id, platform_id, "Equipment")
    view = _view(now, typed or {}, others)
    return page(
        "equipment/page.html",
        status,
        frame=around,
        layout=htmx.layout(request),
        view=view,
        said=said,
        refused=refused,
    )


def _view(now: Picture, typed: Mapping[str, Rows], others: tuple[tuple[int, str], ...]) -> EquipmentView:
    spare_plates: Rows = [dict.fromkeys(PLATE_COLUMNS, "") | {"colour": "#777777"} for _ in range(SPARE_ROWS)]
    spare_tool: Rows = [dict.fromkeys(TOOL_COLUMNS, "") | {"kind": "bar"}]
    total = sum(item.plate.face * item.plate.count for item in now.stock)
    return EquipmentView(
        platform_id=now.platform_id,
        platform=now.platform,
        unit=now.unit,
        seen=stock_seen(now.stock, now.tools),
        lifts_seen=lifts_seen(now),
        plates=typed.get("plates") or [*map(_plate_row, now.stock), *spare_plates],
        tools=typed.get("tools") or [*map(_tool_row, now.tools), *spare_tool],
        lifts=_over(_lift_rows(now), typed.get("lifts", [])),
        choices=CHOICES,
        total=show_mass(total) if total else "0",
        tool_sums=tuple(tool_words(tool, now.unit) for tool in now.tools),
        others=others,
        lendable=tuple(
            (show_mass(item.plate.face), item.plate.count) for item in now.stock if item.plate.count
        ),
        lending=next(iter(typed.get("lend", [])), {"face": "", "pieces": "2", "to": ""}),
    )


def _plate_row(item: PlateStock) -> dict[str, str]:
    plate = item.plate
    return {
        "face": show_mass(plate.face),
        "count": str(plate.count),
        "thickness": "" if plate.thickness_mm is None else show_mass(plate.thickness_mm),
        "diameter": "" if plate.diameter_mm is None else show_mass(plate.diameter_mm),
        "colour": item.colour,
    }


def _tool_row(tool: Tool) -> dict[str, str]:
    usable, collar = tool.implement.usable_mm, tool.collar
    return {
        "id": str(tool.id),
        "name": tool.name,
        "kind": tool.kind,
        "mass": show_mass(tool.implement.mass),
        "pieces": str(tool.pieces),
        "usable": "" if usable is None else show_mass(usable),
        "collar_mass": "" if collar is None else show_mass(collar.mass),
        "collar_width": "" if collar is None or collar.width_mm is None else show_mass(collar.width_mm),
    }


def _lift_rows(now: Picture) -> Rows:
    return [
        {
            "lift_id": str(lift.id),
            "name": lift.name,
            "session": session,
            "implement_id": str(lift.implement_id),
            "step": show_mass(lift.step),
            "extra_plates": str(now.loading[lift.id].get("extra_plates", 1)),
            "measure": str(now.loading[lift.id].get("measure", "plates")),
            "aim": str(now.loading[lift.id].get("aim", "total")),
        }
        for _, session, programme in now.sessions
        for lift in programme.lifts
    ]


def _over(rows: Rows, typed: Rows) -> Rows:
    """The lifts with what was typed for each."""
    by_lift = {row["lift_id"]: row for row in typed}
    return [row | by_lift.get(row["lift_id"], {}) for row in rows]


def _typed_rows(form: FormData, columns: tuple[str, ...]) -> Rows:
    """Repeated fields back into rows; a missing field is empty, not an error of the reader."""
    values = {name: [str(value) for value in form.getlist(name)] for name in columns}
    length = min(max((len(one) for one in values.values()), default=0), MOST_ROWS)
    return [
        {name: cells[place] if place < len(cells) else "" for name, cells in values.items()}
        for place in range(length)
    ]


@router.post("/plates")
async def save_plates(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The plates at the platform."""
    form = await request.form()
    rows = _typed_rows(form, PLATE_COLUMNS)

    def save() -> None:
        equipment.save_plates(desk, platform_id, rows, str(form.get("seen", "")), who=who(official, ROLE))

    saved = "The plates are saved."
    return await _save(request, desk, platform_id, official, save, {"plates": rows}, saved)


@router.post("/out")
async def take_out(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """One broken or missing piece out of stock; what else was typed stays in the form."""
    form = await request.form()
    rows = _typed_rows(form, PLATE_COLUMNS)
    face = str(form.get("out", ""))

    def take() -> str:
        said = stock.take_out(desk, platform_id, face, str(form.get("seen", "")), who=who(official, ROLE))
        for row in rows:
            if row["face"] == face and row["count"].isdecimal():
                row["count"] = str(max(0, int(row["count"]) - 1))
        return said

    return await _save(request, desk, platform_id, official, take, {"plates": rows}, keep=True)


@router.post("/lend")
async def lend(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """Pieces of one plate to another platform."""
    form = await request.form()
    typed = {name: str(form.get(name, "")) for name in ("face", "pieces", "to")}
    to = int(typed["to"]) if typed["to"].isdecimal() and len(typed["to"]) < 10 else 0

    def give() -> str:
        seen, who_ = str(form.get("seen", "")), who(official, ROLE)
        return stock.lend(desk, platform_id, to, typed["face"], typed["pieces"], seen, who=who_)

    return await _save(request, desk, platform_id, official, give, {"lend": [typed]})


@router.post("/tools")
async def save_tools(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """The bars, belts and collars."""
    form = await request.form()
    rows = _typed_rows(form, TOOL_COLUMNS)

    def save() -> None:
        equipment.save_tools(desk, platform_id, rows, str(form.get("seen", "")), who=who(official, ROLE))

    saved = "The bars and belts are saved."
    return await _save(request, desk, platform_id, official, save, {"tools": rows}, saved)


@router.post("/lifts")
async def save_lifts(request: Request, platform_id: int, desk: DeskDep, official: OfficialDep) -> Response:
    """What each lift is loaded with, and how."""
    columns = tuple(one.name for one in fields(LiftWish))
    form = await request.form()
    rows = _typed_rows(form, columns)
    seen = str(form["seen"]) if "seen" in form else None

    def save() -> None:
        wishes = [
            LiftWish(
                int(row["lift_id"]) if row["lift_id"].isdecimal() else 0, **{k: row[k] for k in columns[1:]}
            )
            for row in rows
        ]
        equipment.save_lifts(desk, platform_id, wishes, who=who(official, ROLE), seen=seen)

    saved = "The settings of the lifts are saved."
    return await _save(request, desk, platform_id, official, save, {"lifts": rows}, saved)


async def _save(
    request: Request,
    desk: Desk,
    platform_id: int,
    official: str,
    save: Callable[[], str | None],
    typed: Mapping[str, Rows],
    said: str = "",
    *,
    keep: bool = False,
) -> Response:
    """Save, or show the page again with everything as it was typed (also afterwards, if that is to be kept)."""

    def saved_or_refused() -> Response:
        try:
            told = save() or said
        except DeskError as refused:
            sentence, status = str(refused), refused.status_code
            return _render(request, desk, platform_id, official, refused=sentence, status=status, typed=typed)
        return _render(request, desk, platform_id, official, said=told, typed=typed if keep else None)

    # A save plans anew: that must not hold up the streams of the other pages.
    return await run_in_threadpool(saved_or_refused)

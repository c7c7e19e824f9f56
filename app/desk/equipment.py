"""The platform's iron as the organiser types it in: plates, bars, belts, collars, and each lift's settings."""

from __future__ import annotations

import hashlib
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction

from sqlmodel import select

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.chart import TooManyWeights, loadable
from app.loading.mass import parse_mass, show_mass
from app.store.picture import Picture, PlateStock, Tool, key
from app.store.tables import ImplementRow, LiftRow, PlateRow

MOST_PIECES = 200
MOST_KINDS = 24
LONGEST_MM = Fraction(5000)


def stock_seen(stock: Sequence[PlateStock], tools: Sequence[Tool]) -> str:
    """Names the equipment as a page showed it: a form that saw another one is refused."""
    plates = [
        (
            item.id,
            item.plate.face,
            item.plate.count,
            item.plate.thickness_mm,
            item.plate.diameter_mm,
            item.colour,
        )
        for item in stock
    ]
    return hashlib.sha256(repr((plates, list(tools))).encode()).hexdigest()[:16]


@dataclass(slots=True)
class Form:
    """One typed row being read; collects what is wrong with it."""

    row: Mapping[str, str]
    label: str
    wrong: list[str] = field(default_factory=list)

    def mass(self, column: str, what: str, *, needed: bool = True, zero: bool = False) -> Fraction | None:
        """A mass or a length; None when the field is empty and may be."""
        text = self.row.get(column, "").strip().replace(",", ".")
        if not text:
            if needed:
                self.wrong.append(f"{self.label}: {what} is empty.")
            return None
        try:
            value = parse_mass(text)
        except ValueError:
            self.wrong.append(f"{self.label}: {what} “{text}” is not a number.")
            return None
        if value < 0 or (value == 0 and not zero) or value > LONGEST_MM:
            self.wrong.append(f"{self.label}: {what} {text} is not possible.")
            return None
        return value

    def count(self) -> int:
        """How many pieces there are."""
        text = self.row.get("count", "").strip()
        if text.isascii() and text.isdigit() and len(text) <= 4 and int(text) <= MOST_PIECES:
            return int(text)
        self.wrong.append(f"{self.label}: count “{text}” is not a whole number from 0 to {MOST_PIECES}.")
        return 0


def save_plates(
    desk: Desk, platform_id: int, rows: Sequence[Mapping[str, str]], seen: str, *, who: str
) -> None:
    """The plates at the platform are these. A row with an empty face value is taken out."""
    with platform_entry(desk, platform_id, who) as work:
        now = unchanged(work, seen)
        wanted, wrong = _read_plates(rows)
        if wrong:
            raise NotAllowedNow(" ".join(wrong))
        query = select(PlateRow).where(PlateRow.platform_id == platform_id)
        have = {row.face: row for row in work.session.exec(query)}
        for face, row in have.items():
            if face not in wanted:
                work.session.delete(row)
        work.session.flush()
        for face, values in wanted.items():
            plate = have.get(face) or PlateRow(platform_id=platform_id, face=face, count=0)
            _set(plate, values)
            work.session.add(plate)
        check_room(work.picture())
        check_searchable(work.picture())
        work.what = f"{now.platform}: plates changed"


def check_room(now: Picture) -> None:
    """Room that is limited can only be kept to when everything that takes it is measured."""
    wrong: list[str] = []
    for tool in now.tools:
        if tool.implement.usable_mm is None:
            continue
        way_out = f"or leave the room for plates of {tool.name} empty."
        if tool.collar is not None and tool.collar.width_mm is None:
            wrong.append(f"{tool.name}: fill in how much room its collar takes, {way_out}")
        unmeasured = [
            show_mass(item.plate.face)
            for item in now.stock
            if item.plate.thickness_mm is None and item.plate.count >= tool.implement.ends
        ]
        if unmeasured:
            wrong.append(f"Fill in the thickness of the {', '.join(unmeasured)}, {way_out}")
    if wrong:
        raise NotAllowedNow(" ".join(wrong))


def check_searchable(now: Picture) -> None:
    """So many odd plates that not even the makeable weights can be listed are refused while they are typed."""
    try:
        for _, _, programme in now.sessions:
            for lift in programme.lifts:
                loadable(now.equipment(lift.id), Fraction(0))
    except TooManyWeights as refused:
        raise NotAllowedNow(f"{refused} Leave out the plates that will not be used.") from refused


def _read_plates(rows: Sequence[Mapping[str, str]]) -> tuple[dict[Fraction, dict[str, object]], list[str]]:
    wanted: dict[Fraction, dict[str, object]] = {}
    wrong: list[str] = []
    for number, row in enumerate(rows, start=1):
        if not row.get("face", "").strip():
            continue
        form = Form(row, f"Row {number}")
        face = form.mass("face", "face value")
        values: dict[str, object] = {
            "count": form.count(),
            "thickness_mm": form.mass("thickness", "thickness", needed=False),
            "diameter_mm": form.mass("diameter", "diameter", needed=False),
            "colour": _colour(form),
        }
        if face is not None and face in wanted:
            form.wrong.append(f"Row {number}: {show_mass(face)} stands twice. Add the counts together.")
        if face is not None:
            wanted[face] = values
        wrong += form.wrong
    if len(wanted) > MOST_KINDS:
        wrong.append(f"More than {MOST_KINDS} kinds of plates at one platform.")
    return wanted, wrong


def _colour(form: Form) -> str:
    colour = form.row.get("colour", "").strip().lower() or "#777777"
    if not re.fullmatch(r"#[0-9a-f]{6}", colour):
        form.wrong.append(f"{form.label}: colour “{colour}” is not of the form #c62828.")
    return colour


def save_tools(
    desk: Desk, platform_id: int, rows: Sequence[Mapping[str, str]], seen: str, *, who: str
) -> None:
    """The bars and belts at the platform are these. A row with an empty name is taken out, if no lift uses it."""
    with platform_entry(desk, platform_id, who) as work:
        now = unchanged(work, seen)
        query = select(ImplementRow).where(ImplementRow.platform_id == platform_id)
        have = {str(row.id): row for row in work.session.exec(query)}
        wrong: list[str] = []
        used = {lift.implement_id for _, _, p in now.sessions for lift in p.lifts}
        for number, row in enumerate(rows, start=1):
            form = Form(row, f"Row {number}")
            known = have.get(row.get("id", ""))
            if not row.get("name", "").strip():
                if known is not None and known.id in used:
                    wrong.append(
                        f"{form.label}: {known.name} is used by a lift. Give that lift another one first."
                    )
                elif known is not None:
                    work.session.delete(known)
                continue
            values = _read_tool(form)
            wrong += form.wrong
            if not form.wrong:
                tool = known or ImplementRow(platform_id=platform_id, name="", kind="bar", mass=Fraction(0))
                _set(tool, values)
                work.session.add(tool)
        if wrong:
            raise NotAllowedNow(" ".join(wrong))
        check_room(work.picture())
        work.what = f"{now.platform}: bars and belts changed"


def _read_tool(form: Form) -> dict[str, object]:
    kind = form.row.get("kind", "bar")
    if kind not in ("bar", "belt"):
        form.wrong.append(f"{form.label}: it is a bar or a belt.")
    collar = form.mass("collar_mass", "collar", needed=False, zero=True)
    return {
        "name": " ".join(form.row["name"].split())[:80],
        "kind": kind,
        "mass": form.mass("mass", "mass", zero=kind == "belt"),
        "pieces": _pieces(form),
        "usable_mm": form.mass("usable", "room for plates", needed=False),
        "collar_mass": collar,
        "collar_width_mm": form.mass("collar_width", "collar width", needed=False, zero=True),
    }


def _pieces(form: Form) -> int:
    """How many of it are in circulation; a form without the field means one."""
    text = form.row.get("pieces", "").strip() or "1"
    if text in ("1", "2", "3", "4", "5", "6"):
        return int(text)
    form.wrong.append(f"{form.label}: “{text}” in circulation is not a number from 1 to 6.")
    return 1


@dataclass(frozen=True, slots=True)
class LiftWish:
    """One lift's settings as typed."""

    lift_id: int
    implement_id: str
    step: str
    extra_plates: str
    measure: str
    aim: str


CHOICES: dict[str, dict[str, str]] = {
    "measure": {"plates": "fewest plates", "mass": "least kilograms", "time": "least time"},
    "aim": {"total": "in total", "worst": "at the slowest change"},
    "extra_plates": {"0": "fewest only", "1": "one more", "2": "two more", "3": "three more"},
}


def lifts_seen(now: Picture) -> str:
    """Names the settings of the lifts as a page showed them."""
    lifts = [(lift, sorted(now.loading[lift.id].items())) for _, _, p in now.sessions for lift in p.lifts]
    return hashlib.sha256(repr(lifts).encode()).hexdigest()[:16]


def save_lifts(
    desk: Desk, platform_id: int, wishes: Sequence[LiftWish], *, who: str, seen: str | None = None
) -> None:
    """Which implement and step each lift has, and what its plan shall keep small. ``seen``: as the page was."""
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        if seen is not None and seen != lifts_seen(now):
            raise SomebodyWasFirst(
                "Somebody changed the lifts since this page was made. Look, and save again."
            )
        tools = {str(tool.id): tool.id for tool in now.tools}
        lift_ids = {lift.id for _, _, p in now.sessions for lift in p.lifts}
        wrong: list[str] = []
        for wish in wishes:
            row = work.session.get(LiftRow, wish.lift_id)
            if row is None or key(row) not in lift_ids:
                raise NotAllowedNow(
                    "One of these lifts is not on this platform any more. Load the page again."
                )
            form = Form({"step": wish.step}, row.name)
            step = form.mass("step", "step")
            if wish.implement_id not in tools:
                form.wrong.append(f"{row.name}: choose a bar or belt of this platform.")
            form.wrong += [
                f"{row.name}: choose one of {', '.join(CHOICES[name].values())}."
                for name in CHOICES
                if getattr(wish, name) not in CHOICES[name]
            ]
            wrong += form.wrong
            if not form.wrong:
                chosen = {"measure": wish.measure, "aim": wish.aim, "extra_plates": int(wish.extra_plates)}
                loading = (row.loading or {}) | chosen
                _set(row, {"implement_id": tools[wish.implement_id], "step": step, "loading": loading})
        if wrong:
            raise NotAllowedNow(" ".join(wrong))
        work.what = f"{now.platform}: settings of the lifts changed"


def unchanged(work: Work, seen: str) -> Picture:
    """The platform, if its equipment is still as the page showed it."""
    now = work.picture()
    if stock_seen(now.stock, now.tools) != seen:
        raise SomebodyWasFirst(
            "Somebody changed the equipment since this page was made. Look, and save again."
        )
    return now


def _set(row: PlateRow | ImplementRow | LiftRow, values: Mapping[str, object]) -> None:
    """Set what differs, so that an unchanged row leaves no trace in the journal."""
    for column, value in values.items():
        if getattr(row, column) != value:
            setattr(row, column, value)

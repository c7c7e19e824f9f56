"""From nothing to a platform that can be loaded: a meet, a platform, and a set to start from."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from sqlmodel import select

from app.desk.entry import Desk, meet_entry
from app.desk.errors import NotAllowedNow
from app.desk.owned import pieces_left
from app.desk.wish import Wish, wish_document
from app.loading.equipment import Order
from app.meet.presets import PRESETS, Preset, exact, preset
from app.store.picture import get, key
from app.store.tables import ImplementRow, LiftRow, MeetRow, PlateRow, PlatformRow, SessionRow

MOST_LETTERS = 80


def start_meet(desk: Desk, name: str, unit: str, *, who: str = "director") -> int:
    """A new meet; its id."""
    name = checked_name(name, "the meet")
    if unit not in ("kg", "lb"):
        raise NotAllowedNow("The unit is kg or lb.")
    with meet_entry(desk, 0, who) as work:
        meet = MeetRow(name=name, unit=unit, created_at=work.now)
        work.session.add(meet)
        work.session.flush()
        work.meet_id = key(meet)
        work.what = f"meet {name} started"
        return work.meet_id


def add_platform(desk: Desk, meet_id: int, name: str, preset_key: str, *, who: str) -> int:
    """A platform with its stock, its implements, one session and its lifts; its id.

    Where the meet counts what it owns, the stock is what no other platform has.
    """
    name = checked_name(name, "the platform")
    with meet_entry(desk, meet_id, who) as work:
        meet = get(work.session, MeetRow, meet_id, "meet")
        chosen = _preset(preset_key, meet.unit)
        taken = work.session.exec(select(PlatformRow.name).where(PlatformRow.meet_id == meet_id)).all()
        if name.casefold() in [other.casefold() for other in taken]:
            raise NotAllowedNow(f"There is already a platform called “{name}”. Choose another name.")
        platform = PlatformRow(meet_id=meet_id, name=name, changed_at=work.now, bar=[], spare=[])
        work.session.add(platform)
        work.session.flush()
        platform_id = key(platform)
        tools = [_tool(platform_id, chosen, place) for place in range(len(chosen.tools))]
        session_row = SessionRow(platform_id=platform_id, name=chosen.session, rules={"preset": chosen.rules})
        work.session.add_all([*tools, session_row])
        work.session.add_all(
            PlateRow(
                platform_id=platform_id,
                face=Fraction(plate.face),
                count=pieces_left(work.session, meet_id, Fraction(plate.face), plate.count),
                thickness_mm=exact(plate.thickness_mm),
                diameter_mm=exact(plate.diameter_mm),
                colour=plate.colour,
            )
            for plate in chosen.plates
        )
        work.session.flush()
        work.session.add_all(
            LiftRow(
                session_id=key(session_row),
                name=lift.name,
                position=place,
                implement_id=key(tools[lift.tool]),
                step=Fraction(lift.step),
                loading=_loading(chosen),
            )
            for place, lift in enumerate(chosen.lifts)
        )
        work.what = f"platform {name} set up: {chosen.name}"
        return platform_id


def _loading(chosen: Preset) -> dict[str, Any]:
    """How the lifts of a preset are loaded: a belt's stack may stand in any order, a bar's heaviest inside.

    No comfort rules to begin with: what they cost the crew is a choice to be made from the figures.
    """
    return {} if chosen.tools[0].kind == "bar" else wish_document(Wish(order=Order.ANY))


def _preset(preset_key: str, unit: str) -> Preset:
    try:
        chosen = preset(preset_key)
    except KeyError:
        raise NotAllowedNow(f"Choose one of: {', '.join(one.name for one in PRESETS)}.") from None
    if chosen.unit != unit:
        raise NotAllowedNow(
            f"This meet is in {unit}; “{chosen.name}” is in {chosen.unit}. Choose a set in {unit}."
        )
    return chosen


def _tool(platform_id: int, chosen: Preset, place: int) -> ImplementRow:
    tool = chosen.tools[place]
    return ImplementRow(
        platform_id=platform_id,
        name=tool.name,
        kind=tool.kind,
        mass=Fraction(tool.mass),
        usable_mm=exact(tool.usable_mm),
        collar_mass=exact(tool.collar_mass),
        collar_width_mm=exact(tool.collar_width_mm),
    )


def checked_name(name: str, what: str) -> str:
    """A name as typed, without stray spaces; refused when empty or too long."""
    name = " ".join(name.split())
    if not name:
        raise NotAllowedNow(f"Give {what} a name.")
    if len(name) > MOST_LETTERS:
        raise NotAllowedNow(f"The name of {what} is longer than {MOST_LETTERS} letters.")
    return name

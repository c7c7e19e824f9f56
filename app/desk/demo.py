"""The demo meet: invented people, made through the same use cases as a real one, so that it proves them."""

from __future__ import annotations

import csv
import tomllib
from pathlib import Path
from typing import Any

from sqlmodel import col, select

from app.desk.attempts import Seen, declare, judge
from app.desk.bar import bar_is_loaded, bring_flight, instruction_name
from app.desk.board import Bare, board
from app.desk.entry import Desk, meet_entry
from app.desk.roster import import_roster, meet_ids
from app.desk.setup import add_platform, start_meet
from app.meet.model import Attempt, Result
from app.store.engine import reading
from app.store.picture import Picture, picture
from app.store.tables import SessionRow

WHO = "demo"


def make_demo(desk: Desk, folder: Path) -> bool:
    """Make the demo meet from its folder, unless there is a meet already. True if it was made."""
    with reading(desk.engine) as session:
        if meet_ids(session):
            return False
    plan = tomllib.loads((folder / "meet.toml").read_text(encoding="utf-8"))
    meet_id = start_meet(desk, plan["name"], plan["unit"], who=WHO)
    for day in plan["platforms"]:
        platform_id = add_platform(desk, meet_id, day["name"], day["preset"], who=WHO)
        _name_session(desk, meet_id, platform_id, day["session"])
    for roster in plan["rosters"]:
        import_roster(desk, meet_id, (folder / roster).read_text(encoding="utf-8"), who=WHO)
    with reading(desk.engine) as session:
        rows = session.exec(select(SessionRow).order_by(col(SessionRow.id))).all()
        platforms = [row.platform_id for row in rows]
    for platform_id, day in zip(platforms, plan["platforms"], strict=True):
        _play(desk, platform_id, day, folder)
    return True


def _name_session(desk: Desk, meet_id: int, platform_id: int, name: str) -> None:
    with meet_entry(desk, meet_id, WHO) as work:
        row = work.session.exec(select(SessionRow).where(SessionRow.platform_id == platform_id)).one()
        row.name = name
        work.what = f"session named {name}"


def _play(desk: Desk, platform_id: int, day: dict[str, Any], folder: Path) -> None:
    """Bring the flight on and lift what the day's file says, each weight handed in after the lift before."""
    with reading(desk.engine) as session:
        now = picture(session, platform_id)
    flight_id, lift_id = _find(now, day["flight"], day["lift"])
    bring_flight(desk, platform_id, flight_id, lift_id, who=WHO)
    with (folder / day["so_far"]).open(encoding="utf-8", newline="") as file:
        for line in csv.DictReader(file):
            _lift(desk, platform_id, line)


def _find(now: Picture, flight: str, lift: str) -> tuple[int, int]:
    programme = now.sessions[0][2]
    flight_id = next(one.id for one in programme.flights if one.name == flight)
    return flight_id, next(one.id for one in programme.lifts if one.name == lift)


def _lift(desk: Desk, platform_id: int, line: dict[str, str]) -> None:
    one = board(desk, platform_id)
    if isinstance(one, Bare) or one.up is None or str(one.up.lifter.lot) != line["lot"]:
        raise ValueError(f"The demo's file says that lot {line['lot']} is up, and the order says otherwise.")
    attempt = one.up.attempt
    bar_is_loaded(desk, platform_id, instruction_name(one.now.bar), who=WHO)
    judge(desk, platform_id, Seen(attempt.id, attempt.version), Result(line["result"]), who=WHO)
    if line["next"]:
        following = _following(desk, platform_id, attempt)
        declare(desk, platform_id, Seen(following.id, following.version), line["next"], who=WHO)


def _following(desk: Desk, platform_id: int, attempt: Attempt) -> Attempt:
    one = board(desk, platform_id)
    attempts = () if isinstance(one, Bare) else one.programme.attempts
    return next(
        a
        for a in attempts
        if (a.lifter_id, a.lift_id, a.number) == (attempt.lifter_id, attempt.lift_id, attempt.number + 1)
    )

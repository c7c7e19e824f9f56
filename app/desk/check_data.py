"""``platewright check``: is a meet's file whole, does its journal lead to it, did every instruction add up?"""

from __future__ import annotations

import sqlite3
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from pathlib import Path
from typing import Any, cast

from sqlalchemy.exc import DatabaseError
from sqlmodel import Session, col, select

from app.desk.planned import less, wish_of
from app.desk.wish import read_wish
from app.loading.equipment import Collar, Equipment, Implement, Plate
from app.loading.mass import parse_mass
from app.loading.stack import WrongLoad, check_stack
from app.store.picture import NotFound, picture, to_stack
from app.store.replay import State, differences, entries, play, stored
from app.store.sound import damage, dangling, reading_file
from app.store.tables import JournalRow, PlatformRow

TOLD = 10  # of each kind; the rest is counted


@dataclass(slots=True)
class Report:
    """What was looked at and is in order, and what is not: plain sentences. ``newest``: the last entry's number."""

    good: list[str] = field(default_factory=list)
    wrong: list[str] = field(default_factory=list)
    newest: int = 0

    def note(self, sentence: str, wrong: Sequence[str]) -> None:
        """One look: the sentence where nothing was found, else what was found."""
        if not wrong:
            self.good.append(sentence)
        self.wrong += wrong[:TOLD]
        if len(wrong) > TOLD:
            self.wrong.append(f"And {len(wrong) - TOLD} more of this kind.")


def check_file(file: Path) -> Report:
    """Look through a database file without writing to it; a server may be at work on it. Raises ``OSError``."""
    report = Report()
    broken = damage(file)
    if broken is not None:
        report.wrong.append(f"The file is damaged: {broken.rstrip('.')}.")
        return report
    report.good.append("The file is whole.")
    try:
        with reading_file(file) as session:
            _check(session, report)
    except (
        DatabaseError,
        sqlite3.DatabaseError,
        ValueError,
        LookupError,
        TypeError,
        NotFound,
        StopIteration,
    ) as error:
        first = (str(getattr(error, "orig", None) or error) or type(error).__name__).partition("\n")[0]
        report.wrong.append(f"Something in the file cannot be read: {first.rstrip('.')}.")
    return report


def _check(session: Session, report: Report) -> None:
    database = session.connection().connection.driver_connection
    nowhere = dangling(cast("Any", database))
    report.note("Every reference leads to something that is there.", nowhere)
    journal = entries(session)
    report.newest = journal[-1].id or 0 if journal else 0
    state: State = {}
    gaps: list[str] = []
    wrong_loads: list[str] = []
    given = 0
    for entry in journal:
        gaps += play(state, entry)
        # Once the journal has a gap, nobody knows any more which plates stood there.
        for load in _given(state, entry) if not gaps else ():
            given += 1
            wrong_loads += load.wrong()
    wrong = gaps + differences(state, stored(session)) + _revisions(session, journal)
    report.note(
        f"The journal's {_counted(len(journal), 'entry', 'entries')} lead to just what is stored.", wrong
    )
    planned = [] if nowhere else _planned(session)
    wrong_loads += [sentence for load in planned for sentence in load.wrong()]
    report.note(
        f"{_counted(given, 'instruction', 'instructions')} given so far and "
        f"{_counted(len(planned), 'planned load', 'planned loads')} add up to the weight, from plates that were there.",
        wrong_loads,
    )


def _counted(number: int, one: str, many: str) -> str:
    return f"{number} {one if number == 1 else many}"


@dataclass(frozen=True, slots=True)
class Load:
    """A stack that somebody was or will be told to make, and what there was to make it from."""

    where: str
    equipment: Equipment
    stack: tuple[Fraction, ...]
    weight: Fraction
    order: Any

    def wrong(self) -> list[str]:
        """What the independent sum says against it: one sentence or none."""
        try:
            check_stack(self.equipment, self.stack, self.weight, self.order)
        except WrongLoad as wrong:
            return [f"{self.where}: {wrong}"]
        return []


def _given(state: State, entry: JournalRow) -> Iterator[Load]:
    """The instructions that went out with an entry, each with the plates that stood there at that moment."""
    for edit in entry.edits:
        if edit["table"] != "platform" or edit["after"] is None:
            continue
        row = state[("platform", edit["id"])]
        for column in ("hand", "ahead"):
            hand = edit["after"].get(column)
            if hand is None:
                continue
            equipment = _equipment(state, row)
            if column == "ahead" and row["hand"]:
                equipment = less(equipment, to_stack(row["hand"]["stack"]) or ())
            yield Load(
                f"Entry {entry.id}, {row['name']}",
                equipment,
                to_stack(hand["stack"]) or (),
                parse_mass(hand["weight"]),
                read_wish(state[("lift", row["lift_id"])]["loading"] or {}).order,
            )


def _equipment(state: State, platform: dict[str, Any]) -> Equipment:
    """A platform's bar and plates, read from the journal alone."""
    bar = state[("implement", platform["implement_id"])]
    plates = [
        row for (table, _), row in state.items() if table == "plate" and row["platform_id"] == platform["id"]
    ]
    return Equipment(
        Implement(parse_mass(bar["mass"]), 2 if bar["kind"] == "bar" else 1, _length(bar["usable_mm"])),
        None
        if bar["collar_mass"] is None
        else Collar(parse_mass(bar["collar_mass"]), _length(bar["collar_width_mm"])),
        tuple(
            Plate(
                parse_mass(row["face"]),
                row["count"],
                _length(row["thickness_mm"]),
                _length(row["diameter_mm"]),
            )
            for row in plates
        ),
    )


def _length(text: str | None) -> Fraction | None:
    return None if text is None else parse_mass(text)


def _planned(session: Session) -> list[Load]:
    """What each platform's stored plan will ask for next, with the plates of now."""
    pictures = [
        picture(session, number or 0)
        for number in session.exec(select(PlatformRow.id).order_by(col(PlatformRow.id))).all()
    ]
    return [
        Load(
            f"The plan of {now.platform}",
            now.equipment(now.lift_id),
            to_stack(step["stack"]) or (),
            parse_mass(step["weight"]),
            wish_of(now, now.lift_id).order,
        )
        for now in pictures
        if now.plan is not None and now.lift_id is not None
        for step in now.plan["steps"]
    ]


def _revisions(session: Session, journal: Sequence[JournalRow]) -> list[str]:
    """Pages trust a platform's revision to rise with every entry."""
    last = {entry.platform_id: entry.revision for entry in journal if entry.revision is not None}
    return [
        f"{row.name} stands at revision {row.revision}, and entry by entry it had reached {last[row.id]}."
        for row in session.exec(select(PlatformRow)).all()
        if row.id in last and row.revision < (last[row.id] or 0)
    ]

"""The ready meet (the demo, in a file of its own) and what its database holds, read past the program."""

from __future__ import annotations

import json
import sqlite3
from contextlib import closing
from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest

from app.desk.demo import make_demo
from app.desk.entry import Desk
from app.desk.hub import QuietHub
from app.store.engine import make_engine
from app.store.migrate import upgrade
from app.web.house import PROJECT
from app.web.main import utc_now

Row = dict[str, Any]
TABLES = ("meet", "platform", "implement", "plate", "session", "lift", "flight", "lifter", "rack", "attempt")
NOT_STATE = ("revision", "changed_at", "plan")  # counted up or derived


def make_ready(folder: Path) -> Path:
    """The demo meet in a database file of this folder."""
    file = folder / "meet.db"
    upgrade(f"sqlite:///{file}")
    engine = make_engine(f"sqlite:///{file}")
    make_demo(Desk(engine, QuietHub(), utc_now), PROJECT / "demo_meet")
    engine.dispose()
    return file


_made: list[Path] = []


def ready_once(factory: pytest.TempPathFactory) -> Path:
    """The same file for all folders of tests that need it: making it takes seconds. Copy it, never write to it."""
    if not _made:
        _made.append(make_ready(factory.mktemp("demo")))
    return _made[0]


@dataclass(frozen=True)
class Meet:
    """The database file of a test, looked at with plain SQL."""

    file: Path

    def rows(self, query: str, *values: object) -> list[Row]:
        """The rows of a query."""
        with closing(sqlite3.connect(self.file)) as connection:
            connection.row_factory = sqlite3.Row
            return [dict(row) for row in connection.execute(query, values)]

    def row(self, query: str, *values: object) -> Row:
        """The only row of a query."""
        (found,) = self.rows(query, *values)
        return found

    def state(self) -> dict[str, dict[int, Row]]:
        """Everything the meet is, table by table, by id."""
        return {
            table: {row["id"]: _kept(row) for row in self.rows(f"SELECT * FROM {table}")} for table in TABLES
        }

    def journal(self) -> list[Row]:
        """The entries so far, oldest first."""
        return self.rows("SELECT * FROM journal ORDER BY id")

    def platform(self, platform_id: int = 1) -> Row:
        """A platform's row, its bar and hand read."""
        row = self.row("SELECT * FROM platform WHERE id = ?", platform_id)
        return row | {name: json.loads(row[name]) if row[name] else None for name in ("bar", "hand", "plan")}

    def attempt(self, lot: int, lift: str, number: int) -> Row:
        """One attempt by the lifter's lot, the lift's name and its number."""
        return self.row(
            "SELECT attempt.* FROM attempt JOIN lifter ON lifter.id = lifter_id JOIN lift ON lift.id = lift_id"
            " WHERE lot = ? AND lift.name = ? AND number = ?",
            lot,
            lift,
            number,
        )

    def attempt_by_id(self, attempt_id: int) -> Row:
        """One attempt."""
        return self.row("SELECT * FROM attempt WHERE id = ?", attempt_id)

    def stock(self, platform_id: int) -> dict[Fraction, int]:
        """How many pieces of each plate stand at a platform."""
        rows = self.rows("SELECT face, count FROM plate WHERE platform_id = ?", platform_id)
        return {Fraction(row["face"]): row["count"] for row in rows}

    def diameters(self, platform_id: int) -> dict[Fraction, Fraction]:
        """How wide each plate is, in mm."""
        rows = self.rows("SELECT face, diameter_mm FROM plate WHERE platform_id = ?", platform_id)
        return {Fraction(row["face"]): Fraction(row["diameter_mm"] or 0) for row in rows}

    def loading(self, lift_id: int) -> Row:
        """A lift's settings as they are stored."""
        return json.loads(self.row("SELECT loading FROM lift WHERE id = ?", lift_id)["loading"] or "{}")


def _kept(row: Row) -> Row:
    return {name: value for name, value in row.items() if name not in NOT_STATE}


def changed(before: dict[str, dict[int, Row]], after: dict[str, dict[int, Row]]) -> dict[str, Any]:
    """What differs: ``{"attempt 12": {"weight": "92.5"}}``; a new row whole, a removed one as None."""
    found: dict[str, Any] = {}
    for table, earlier in before.items():
        for key in sorted(earlier.keys() | after[table].keys()):
            old, new = earlier.get(key), after[table].get(key)
            if old == new:
                continue
            if old is None or new is None:
                found[f"{table} {key}"] = new
            else:
                found[f"{table} {key}"] = {name: new[name] for name in new if new[name] != old[name]}
    return found

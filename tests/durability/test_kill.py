"""Killed at any moment: two tables enter as fast as they can, the server gets SIGKILL, nothing acknowledged is lost.

A handful of kills in every run; ``PLATEWRIGHT_KILLS=100 uv run pytest tests/durability/test_kill.py -s`` for the long
one, ``PLATEWRIGHT_SEED`` for other moments. SIGKILL leaves what the system holds for the disk; that the log's end may
be torn by the loss of power is :mod:`tests.durability.test_torn`'s.
"""

from __future__ import annotations

import json
import os
import random
import shutil
import statistics
import threading
import time
from collections.abc import Sequence
from dataclasses import dataclass, field
from pathlib import Path

import httpx2
import pytest

from app.desk.check_data import check_file
from app.store.backup import copies
from tests.serving import Served, served
from tests.web.pages import read
from tests.web.ready import Meet

KILLS = int(os.environ.get("PLATEWRIGHT_KILLS", "4"))
SEED = int(os.environ.get("PLATEWRIGHT_SEED", "6"))
LONGEST_S = 1.5  # after the first acknowledgement, at the latest, the server dies

Said = tuple[int, str]
"""What an answer acknowledges: the attempt's version, and its weight then."""


@dataclass
class Table:
    """A client that hands in one weight after another for one attempt of its platform, and remembers each answer."""

    name: str
    platform_id: int
    attempt_id: int
    steps: Sequence[str]
    acknowledged: list[Said] = field(default_factory=list)
    seconds: list[float] = field(default_factory=list)
    wrong: list[str] = field(default_factory=list)

    def enter(self, url: str, version: int, first: threading.Event) -> None:
        """From this version on until the server is gone."""
        with httpx2.Client(base_url=url, cookies={"official": self.name}, timeout=30) as client:
            while True:
                weight = self.steps[version % len(self.steps)]
                typed = {
                    "attempt": self.attempt_id,
                    "version": version,
                    "weight": weight,
                    "reason": "to and fro",
                }
                since = time.monotonic()
                try:
                    answer = client.post(f"/platforms/{self.platform_id}/weight", data=typed)
                except httpx2.TransportError:
                    return
                if answer.status_code != 303:
                    self.wrong.append(f"{answer.status_code} {read(answer.text).text[:300]}")
                    return
                self.seconds.append(time.monotonic() - since)
                version += 1
                self.acknowledged.append((version, weight))
                first.set()


def entered(meet: Meet, table: Table) -> list[Said]:
    """What the journal has of this table, in its order: version and weight after each entry."""
    found = []
    for row in meet.rows("SELECT edits FROM journal WHERE who = ? ORDER BY id", table.name):
        for edit in json.loads(row["edits"]):
            if (edit["table"], edit["id"]) == ("attempt", table.attempt_id):
                found.append((edit["after"]["version"], edit["after"]["weight"]))
    return found


def check_life(meet: Meet, running: Served, tables: Sequence[Table], unsure: dict[str, set[Said]]) -> None:
    """After a start: the whole file is in order, the answers are all there, once each, and the page shows the last."""
    assert check_file(meet.file).wrong == []
    for table in tables:
        kept = entered(meet, table)
        assert len(set(kept)) == len(kept)
        extra = [one for one in kept if one not in table.acknowledged]
        # The entry whose answer the kill swallowed may be there: one a kill.
        for one in extra:
            unsure[table.name].add(one)
        assert [one for one in kept if one in table.acknowledged] == table.acknowledged
        page = read(httpx2.get(f"{running.url}/platforms/{table.platform_id}/table").text)
        if kept:
            shown = page.one("input", id=f"weight-{table.attempt_id}").attrs["value"]
            assert shown == kept[-1][1] == meet.attempt_by_id(table.attempt_id)["weight"]


@pytest.fixture
def meet(demo_file: Path, tmp_path: Path) -> Meet:
    """A data folder with the demo meet."""
    folder = tmp_path / "data"
    folder.mkdir()
    return Meet(Path(shutil.copy(demo_file, folder / "meet.db")))


def table_at(meet: Meet, platform_id: int, name: str, steps: Sequence[str]) -> Table:
    """A table at the last attempt of the last lot that the platform's flight has still to hand in."""
    row = meet.row(
        "SELECT attempt.id FROM attempt JOIN lifter ON lifter.id = lifter_id JOIN platform"
        " ON platform.flight_id = lifter.flight_id AND platform.lift_id = attempt.lift_id"
        " WHERE platform.id = ? AND result = 'open' ORDER BY number DESC, lot DESC LIMIT 1",
        platform_id,
    )
    return Table(name, platform_id, row["id"], steps)


def test_every_acknowledged_entry_survives_kill_9_at_any_moment(meet: Meet) -> None:
    chance = random.Random(SEED)
    tables = [
        table_at(meet, 1, "Wanda", ("180", "182.5", "185", "187.5")),
        table_at(meet, 2, "Otto", ("40", "41.25", "42.5")),
    ]
    unsure: dict[str, set[Said]] = {table.name: set() for table in tables}
    starts = []
    for life in range(KILLS + 1):
        since = time.monotonic()
        with served("serve", meet.file.parent, options=["--backup-minutes", "0.005"]) as running:
            starts.append(time.monotonic() - since)
            check_life(meet, running, tables, unsure)
            if life == KILLS:
                break
            kill_while_they_enter(meet, running, tables, chance)
    for table in tables:
        assert table.wrong == []
        assert len(unsure[table.name]) <= KILLS
    assert sum(len(table.acknowledged) for table in tables) >= KILLS  # every life waits for a first answer
    made = copies(meet.file.parent / "backups")
    for copy in made[:: max(1, len(made) // 10)]:
        assert check_file(copy.file).wrong == []
    tell(tables, unsure, starts, len(made))


def kill_while_they_enter(
    meet: Meet, running: Served, tables: Sequence[Table], chance: random.Random
) -> None:
    """Both tables enter until the server is dead; it dies some time after the first answer."""
    first = threading.Event()
    versions = [int(meet.attempt_by_id(table.attempt_id)["version"]) for table in tables]
    clients = [
        threading.Thread(target=table.enter, args=(running.url, version, first))
        for table, version in zip(tables, versions, strict=True)
    ]
    for client in clients:
        client.start()
    first.wait(30)
    running.process.poll()
    threading.Event().wait(chance.uniform(0, LONGEST_S))
    running.kill()
    for client in clients:
        client.join()


def tell(
    tables: Sequence[Table], unsure: dict[str, set[Said]], starts: Sequence[float], kept_copies: int
) -> None:
    """The figures, for whoever runs this with -s."""
    seconds = sorted(one for table in tables for one in table.seconds)
    print(
        f"\n{KILLS} kills (seed {SEED}): {len(seconds)} entries acknowledged, none lost, none doubled; "
        f"{sum(map(len, unsure.values()))} more were kept whose answer the kill swallowed.\n"
        f"From start to the first answer: median {statistics.median(starts):.1f} s, "
        f"worst {max(starts):.1f} s ({len(starts)} starts).\n"
        f"An entry, from sending to answer: median {1000 * statistics.median(seconds):.0f} ms, "
        f"99 % {1000 * seconds[len(seconds) * 99 // 100]:.0f} ms. {kept_copies} copies."
    )

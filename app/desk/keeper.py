"""The keeper of copies: after each round, and every few minutes while something changes, one more.

A folder that is full, read-only or gone never stops the meet: it is said, in the log and on the Meet page, and
tried again.
"""

from __future__ import annotations

import logging
import sqlite3
import threading
from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from sqlalchemy import Engine, func
from sqlalchemy.exc import SQLAlchemyError
from sqlmodel import Session, col, select

from app.meet.rules import OrderSystem
from app.store.backup import BadCopy, Copy, copies, make_copy
from app.store.engine import reading
from app.store.picture import picture
from app.store.tables import JournalRow, PlatformRow
from app.store.trouble import trouble_of

log = logging.getLogger("platewright.copies")

LOOK_S = 2.0  # how often the keeper looks whether there is something to do
AGAIN_S = 30.0  # after a failure
LAST_WAIT_S = 10.0  # a stick that hangs must not hold up the end

Rounds = tuple[tuple[int, int | None, int | None, int | None], ...]


@dataclass(frozen=True, slots=True)
class CopyPlan:
    """Where copies go, how many are kept, and how often one is made while something changes."""

    folder: Path
    keep: int = 48
    minutes: float = 3.0


@dataclass(frozen=True, slots=True)
class Standing:
    """How the copies stand: the last one, how many are kept, and what is in the way now ("" when nothing is)."""

    plan: CopyPlan
    last: Copy | None = None
    kept: int = 0
    trouble: str = ""


class Keeper:
    """Looks every few seconds, in a thread of its own; :meth:`look` alone is one look, for whoever has the time."""

    def __init__(
        self,
        engine: Engine,
        plan: CopyPlan,
        clock: Callable[[], datetime],
        monotonic: Callable[[], float],
    ) -> None:
        self._engine, self._plan = engine, plan
        self._clock, self._monotonic = clock, monotonic
        self._standing = Standing(plan)
        self._copied = 0  # the newest entry that is in a copy
        self._rounds: Rounds | None = None  # as they stood when that copy was made
        self._tried: float | None = None
        self._one_look = threading.Lock()
        self._stop = threading.Event()
        self._thread = threading.Thread(target=self._run, name="copies", daemon=True)

    @property
    def standing(self) -> Standing:
        """How the copies stand at this moment."""
        return self._standing

    def start(self) -> None:
        """Begin to look."""
        self._thread.start()

    def close(self) -> None:
        """Make a last copy if anything is in none yet, and stop."""
        self._stop.set()
        self._thread.join(LAST_WAIT_S)

    def _run(self) -> None:
        pause = min(LOOK_S, self._plan.minutes * 60)
        while not self._stop.wait(pause):
            self.look()
        self.look(last=True)

    def look(self, *, last: bool = False) -> None:
        """Make a copy if one is due; whatever is in the way is told in :attr:`standing` and in the log."""
        with self._one_look:
            self._look(last=last)

    def _look(self, *, last: bool) -> None:
        try:
            with reading(self._engine) as session:
                newest = session.exec(select(func.max(JournalRow.id))).one() or 0
                if newest == self._copied and not self._standing.trouble:
                    return
                rounds = _rounds(session)
            if last or self._due(rounds):
                self._tried = self._monotonic()
                self._copy(rounds)
        except (OSError, sqlite3.Error, SQLAlchemyError, BadCopy) as error:
            self._failed(trouble_of(error) or str(error).partition("\n")[0])
        except Exception:
            # Whatever it is: the copies must not end for good because one look went wrong.
            log.exception("A look after the copies went wrong.")
            self._failed("could not be written: see the server's log")

    def _due(self, rounds: Rounds) -> bool:
        if self._tried is None:
            return True
        since = self._monotonic() - self._tried
        if self._standing.trouble:
            return since >= AGAIN_S
        return rounds != self._rounds or since >= self._plan.minutes * 60

    def _copy(self, rounds: Rounds) -> None:
        made = make_copy(self._engine, self._plan.folder, self._clock(), self._plan.keep)
        if made is None:
            return
        if self._standing.trouble:
            log.info("Copies are made again in %s.", self._plan.folder)
        kept = len(copies(self._plan.folder, made.file.name.split("-")[1]))
        self._copied, self._rounds = made.entry, rounds
        self._standing = Standing(self._plan, made, kept)

    def _failed(self, trouble: str) -> None:
        if trouble != self._standing.trouble:
            log.error(
                "No copy could be made: %s %s. The meet goes on; it is tried again every %d s.",
                self._plan.folder,
                trouble,
                AGAIN_S,
            )
        self._standing = Standing(self._plan, self._standing.last, self._standing.kept, trouble)


def _rounds(session: Session) -> Rounds:
    """Which flight, lift and round each platform is in. A rising bar knows no rounds."""
    found = []
    for number in session.exec(select(PlatformRow.id).order_by(col(PlatformRow.id))).all():
        now = picture(session, number or 0)
        attempt = None
        if now.flight_id is not None and now.lift_id is not None:
            programme = now.programme(now.lift_id)
            order = programme.order(now.flight_id, now.lift_id)
            if order and programme.rules.order_system is OrderSystem.ROUNDS:
                attempt = order[0].attempt.number
        found.append((now.platform_id, now.flight_id, now.lift_id, attempt))
    return tuple(found)

"""One entry: a transaction that is journalled, settles the platforms it touched, and is then made known."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import datetime

from sqlalchemy import Engine
from sqlmodel import Session, col, select

from app.desk.errors import NotKept
from app.desk.hands_off import check_hands_off
from app.desk.hub import Hub, platform_topic
from app.desk.improve import Improver
from app.desk.owned import check_owned
from app.desk.settle import settle
from app.planning import Budget
from app.store.engine import CannotWrite, writing
from app.store.journal import Edit, Recorder
from app.store.picture import Picture, get, key, picture
from app.store.tables import JournalRow, PlateRow, PlatformRow

Clock = Callable[[], datetime]

PLAN_SECONDS = 0.25  # nobody at the table waits longer for a plan


@dataclass(frozen=True, slots=True)
class Desk:
    """What every use case needs: where the meet is kept, who is told, and what time it is (aware UTC)."""

    engine: Engine
    hub: Hub
    clock: Clock
    budget: Budget = field(default_factory=lambda: Budget(seconds=PLAN_SECONDS, monotonic=time.monotonic))
    improver: Improver | None = None


@dataclass(frozen=True, slots=True)
class Changed:
    """A platform's new revision, and whether its plan is proved best."""

    platform_id: int
    revision: int
    proved: bool


@dataclass(slots=True)
class Work:
    """An entry being made."""

    session: Session
    meet_id: int
    platform_id: int | None
    now: datetime
    who: str
    what: str = ""
    undoes: int | None = None
    touched: set[int] = field(default_factory=set)

    @property
    def platform(self) -> PlatformRow:
        """The row of the platform that this entry is about."""
        return get(self.session, PlatformRow, self.platform_id, "platform")

    def picture(self) -> Picture:
        """The platform as it stands, this entry's own changes included."""
        self.session.flush()
        return picture(self.session, self.platform.id or 0)


@contextmanager
def kept(engine: Engine) -> Iterator[Session]:
    """A write transaction that is on the disk when the block ends, or else was refused in a plain sentence."""
    try:
        with writing(engine) as session:
            yield session
    except CannotWrite as error:
        raise NotKept(error.trouble) from error


@contextmanager
def platform_entry(desk: Desk, platform_id: int, who: str) -> Iterator[Work]:
    """An entry about one platform."""
    with kept(desk.engine) as session:
        meet_id = get(session, PlatformRow, platform_id, "platform").meet_id
        work = Work(session, meet_id, platform_id, desk.clock(), who, touched={platform_id})
        recorder = Recorder(session)
        yield work
        changed = _close(work, recorder, desk.budget)
    _publish(desk, changed)


@contextmanager
def meet_entry(desk: Desk, meet_id: int, who: str) -> Iterator[Work]:
    """An entry about the whole meet (its roster, its equipment): every platform of it gets a new revision.

    The entry that starts a meet begins with a number that is none, 0, and gives the work the meet's own.
    """
    with kept(desk.engine) as session:
        work = Work(session, meet_id, None, desk.clock(), who)
        recorder = Recorder(session)
        yield work
        session.flush()
        rows = session.exec(select(PlatformRow).where(col(PlatformRow.meet_id) == work.meet_id))
        work.touched |= {key(row) for row in rows}
        changed = _close(work, recorder, desk.budget)
    _publish(desk, changed)


def _close(work: Work, recorder: Recorder, budget: Budget) -> list[Changed]:
    """Settle, journal, and count the revision up; does nothing at all when nothing was changed."""
    if not recorder.edits():
        return []
    check_owned(work.session, work.meet_id, recorder.edits())
    work.touched |= _stocks(work.session, recorder.edits())
    for platform_id in sorted(work.touched):
        settle(work.session, platform_id, budget)
    edits = recorder.edits()
    check_hands_off(work.session, edits)
    revision = None
    changed = []
    for platform_id in sorted(work.touched):
        row = get(work.session, PlatformRow, platform_id, "platform")
        row.revision += 1
        row.changed_at = work.now
        if platform_id == work.platform_id:
            revision = row.revision
        changed.append(Changed(platform_id, row.revision, row.plan is None or row.plan.get("proved", True)))
    work.session.add(
        JournalRow(
            meet_id=work.meet_id,
            platform_id=work.platform_id,
            revision=revision,
            at=work.now,
            who=work.who,
            what=work.what,
            edits=edits,
            undoes=work.undoes,
        )
    )
    return changed


def _stocks(session: Session, edits: Sequence[Edit]) -> set[int]:
    """The platforms whose plates were changed: plates that are lent, or an undo of that, concern two."""
    found: set[int] = set()
    for edit in edits:
        if edit["table"] == "plate":
            gone = (edit["before"] or {}).get("platform_id")
            found.add(gone if gone is not None else session.get_one(PlateRow, edit["id"]).platform_id)
    return found


def _publish(desk: Desk, changed: list[Changed]) -> None:
    for one in changed:
        desk.hub.publish(platform_topic(one.platform_id))
        if desk.improver is not None:
            desk.improver.newer(one.platform_id, one.revision, proved=one.proved)

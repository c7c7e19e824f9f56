"""Undo and redo: the last entry that stands is taken back, in words, and taking back is an entry itself.

It changes what was entered. It cannot move plates: the crew's instruction stays, and if the bar wanted next
is now another one, the crew is asked what is on the bar. Any depth: each undo reaches one entry further
back, each redo one forward again, until something new is entered.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable

from sqlmodel import Session

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.hands_off import hands_off
from app.desk.people import check_owner
from app.meet.model import Result
from app.meet.platform import Condition
from app.store.journal import CannotUndo, Edit, last_redoable, last_undoable, put_back
from app.store.picture import get
from app.store.tables import AttemptRow, JournalRow, LifterRow

Find = Callable[[Session, int, int | None], JournalRow | None]


def undo(desk: Desk, platform_id: int, entry_id: int | None, *, who: str) -> str:
    """Take the platform's last entry back. ``entry_id`` is the one the person saw; another is not undone."""
    return _reverse(desk, platform_id, entry_id, last_undoable, "undo", who)


def redo(desk: Desk, platform_id: int, entry_id: int | None, *, who: str) -> str:
    """Enter again what the last undo took back, if nothing else has been entered since."""
    return _reverse(desk, platform_id, entry_id, last_redoable, "redo", who)


def _reverse(desk: Desk, platform_id: int, entry_id: int | None, find: Find, word: str, who: str) -> str:
    with platform_entry(desk, platform_id, who) as work:
        entry = find(work.session, work.meet_id, platform_id)
        if entry is None:
            raise NotAllowedNow(f"There is nothing to {word}.")
        if entry_id is not None and entry.id != entry_id:
            raise SomebodyWasFirst(
                f"Somebody made another entry since: “{entry.what}”. Look before you {word}."
            )
        _check_owners(work, entry.edits)
        if word == "undo":
            _leave_loaded_bar(work, entry.edits)
        try:
            put_back(work.session, entry.edits, entry.what)
        except CannotUndo as refused:
            raise NotAllowedNow(str(refused)) from refused
        work.undoes = entry.id
        plain = entry.what.removeprefix(UNDONE)
        work.what = f"{UNDONE if word == 'undo' else REDONE}{plain}"
        return f"{work.what[0].upper()}{work.what[1:]}."


def _leave_loaded_bar(work: Work, edits: Iterable[Edit]) -> None:
    """A retake that was granted is not taken back while its lifter stands under the bar: that would be a result."""
    hand = work.platform.hand
    if hand is None or work.platform.condition != Condition.LIFTING:
        return
    granted = [edit["id"] for edit in edits if (edit["after"] or {}).get("result") == Result.OPEN]
    if hand["attempt"] in granted:
        row = get(work.session, AttemptRow, hand["attempt"], "attempt")
        lifter = get(work.session, LifterRow, row.lifter_id, "lifter")
        raise NotAllowedNow(hands_off(lifter.name, hand["weight"]))


def _check_owners(work: Work, edits: Iterable[Edit]) -> None:
    """An entry for a flight is taken back by whoever enters for it."""
    for edit in edits:
        row = work.session.get(AttemptRow, edit["id"]) if edit["table"] == "attempt" else None
        lifter = work.session.get(LifterRow, row.lifter_id if row else 0)
        if lifter is not None:
            check_owner(work, lifter.flight_id)


UNDONE, REDONE = "undone: ", "entered again: "

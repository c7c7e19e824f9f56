"""Undo: the last entry that stands is taken back, in words, and the undo is an entry itself.

It changes what was entered. It cannot move plates: the crew's instruction stays, and if the bar wanted next
is now another one, the crew is asked what is on the bar.
"""

from __future__ import annotations

from app.desk.entry import Desk, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.store.journal import CannotUndo, last_undoable, put_back


def undo(desk: Desk, platform_id: int, entry_id: int | None, *, who: str) -> str:
    """Take the platform's last entry back. ``entry_id`` is the one the person saw; another is not undone."""
    with platform_entry(desk, platform_id, who) as work:
        entry = last_undoable(work.session, work.meet_id, platform_id)
        if entry is None:
            raise NotAllowedNow("There is nothing to undo.")
        if entry_id is not None and entry.id != entry_id:
            raise SomebodyWasFirst(f"Somebody made another entry since: “{entry.what}”. Undo that one first?")
        try:
            put_back(work.session, entry.edits, entry.what)
        except CannotUndo as refused:
            raise NotAllowedNow(str(refused)) from refused
        work.undoes = entry.id
        work.what = f"undone: {entry.what}"
        return f"Undone: {entry.what}."

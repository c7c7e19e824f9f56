"""The crew cannot find a plate of the change it was shown: the stock is made true, and the stack is planned again."""

from __future__ import annotations

from sqlmodel import select

from app.desk.bar import instruction_name
from app.desk.entry import Desk, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.mass import parse_mass, show_mass
from app.meet.platform import Condition
from app.store.tables import PlateRow


def plate_is_missing(desk: Desk, platform_id: int, face: str, shown: str, *, who: str) -> str:
    """One plate of this face is not there. What is left is at most one fewer than the change needs.

    So the change cannot be made any more, the crew is asked what is on the bar, and the next one comes without
    that plate. The Equipment page puts it back when it is found. Returns a sentence for the crew.
    """
    with platform_entry(desk, platform_id, who) as work:
        now = work.picture()
        hand = now.bar.hand
        if shown != instruction_name(now.bar):
            raise SomebodyWasFirst(
                "This screen was showing an earlier change. Look at the new one, then answer."
            )
        if hand is None or now.bar.condition is not Condition.CHANGING or now.lift_id is None:
            raise NotAllowedNow("There is no change out in which a plate could be missing.")
        try:
            value = parse_mass(face)
        except ValueError:
            raise NotAllowedNow("Choose one of the plates of this change.") from None
        needed = hand.stack.count(value)
        query = select(PlateRow).where(PlateRow.platform_id == platform_id, PlateRow.face == value)
        row = work.session.exec(query).first()
        if not needed or row is None:
            raise NotAllowedNow(f"This change needs no {show_mass(value)}.")
        ends = now.equipment(now.lift_id).implement.ends
        row.count = max(0, min(row.count - 1, ends * needed - 1))
        work.what = f"{now.platform}: a {show_mass(value)} is missing, {row.count} counted now"
        return f"A {show_mass(value)} is taken out of the plates here; {row.count} counted now."

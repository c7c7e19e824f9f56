"""Hands off: while the bar is loaded for somebody, no entry may make it another bar.

Whatever the entry is (a declaration, an undo, a roster, another flight, another bar for the lift): the lifter is
under it. Their result ends it, or somebody takes “bar is loaded” back, or holds the platform.
"""

from __future__ import annotations

from collections.abc import Iterable

from sqlmodel import Session

from app.desk.errors import NotAllowedNow
from app.meet.model import Result
from app.meet.platform import Condition
from app.store.journal import Edit
from app.store.tables import AttemptRow, LifterRow, PlatformRow


def check_hands_off(session: Session, edits: Iterable[Edit]) -> None:
    """Refuse an entry that takes away the instruction of a loaded bar whose attempt is still to be lifted."""
    for edit in edits:
        before = edit["before"] or {}
        hand = before.get("hand")
        if edit["table"] == "platform" and hand is None and "implement_id" in before:
            # Another bar may want the same stack, so the same hand.
            hand = session.get_one(PlatformRow, edit["id"]).hand
        if edit["table"] != "platform" or hand is None or before.get("condition") != Condition.LIFTING:
            continue
        attempt = session.get(AttemptRow, hand["attempt"])
        if attempt is None or attempt.result != Result.OPEN:
            continue
        lifter = session.get_one(LifterRow, attempt.lifter_id)
        raise NotAllowedNow(hands_off(lifter.name, hand["weight"]))


def hands_off(lifter: str, weight: str) -> str:
    """The refusal, in words."""
    return (
        f"The bar is loaded for {lifter} at {weight}. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )

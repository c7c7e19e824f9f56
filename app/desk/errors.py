"""What a person at the table can run into: one root, one class a reason, each a plain sentence."""

from __future__ import annotations

from app.store.trouble import BUSY, DAMAGED, FULL, READ_ONLY


class DeskError(Exception):
    """Something that was not done, and why; nothing was changed."""

    status_code = 422


class NotAllowedNow(DeskError):
    """A rule of the meet, or the state of the platform, stands against it."""


class AgainstTheRules(NotAllowedNow):
    """A rule that the table may override, with a reason. ``late``: only the time to hand in has run out."""

    def __init__(self, sentence: str, *, late: bool) -> None:
        super().__init__(sentence)
        self.late = late


class SomebodyWasFirst(DeskError):
    """Two people entered the same thing; the second is told what the first wrote."""

    status_code = 409


class NotKept(DeskError):
    """The disk did not take the entry; what was acknowledged before is not touched by that."""

    status_code = 503

    def __init__(self, trouble: str) -> None:
        super().__init__(
            f"Not entered: the disk on which the meet is kept {trouble}. What was entered before is safe. "
            f"{REMEDIES.get(trouble, 'Look after the disk')}, then enter it again."
        )


REMEDIES = {
    FULL: "Make room on it (empty the wastebasket, move films and pictures away)",
    READ_ONLY: "Make it writable again, or restore the newest copy on another disk",
    BUSY: "Close the other program",
    DAMAGED: "Stop the server and run “platewright check”",
}


class WrongRoster(DeskError):
    """A roster with wrong lines: nothing of it was taken."""

    def __init__(self, wrong: tuple[tuple[int, str], ...]) -> None:
        lines = len({line for line, _ in wrong})
        super().__init__(
            f"Nothing was imported: {lines} line{'s are' if lines != 1 else ' is'} wrong. Correct and send again."
        )
        self.wrong = wrong

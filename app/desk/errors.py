"""What a person at the table can run into: one root, one class a reason, each a plain sentence."""

from __future__ import annotations


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


class WrongRoster(DeskError):
    """A roster with wrong lines: nothing of it was taken."""

    def __init__(self, wrong: tuple[tuple[int, str], ...]) -> None:
        lines = len({line for line, _ in wrong})
        super().__init__(
            f"Nothing was imported: {lines} line{'s are' if lines != 1 else ' is'} wrong. Correct and send again."
        )
        self.wrong = wrong

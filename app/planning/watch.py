"""The clock of one plan, if there is one."""

from __future__ import annotations

from app.planning.budget import Budget


class OutOfTime(Exception):
    """The seconds of the budget are over."""


class Watch:
    """Started when made. Without a clock in the budget it never runs out."""

    def __init__(self, budget: Budget) -> None:
        self.clock = budget.monotonic
        self.end = budget.monotonic() + budget.seconds if budget.monotonic else 0.0

    def check(self) -> None:
        """Raise :class:`OutOfTime` once the seconds are over."""
        if self.clock is not None and self.clock() > self.end:
            raise OutOfTime

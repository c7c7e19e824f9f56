"""The clock and the room of one plan."""

from __future__ import annotations

from app.planning.budget import Budget


class OutOfTime(Exception):
    """The seconds of the budget are over: the best plan so far is answered."""


class TooLarge(Exception):
    """An exact way would need more memory than the budget has: a plan with a bound is answered."""


class Watch:
    """Started when made. Without a clock in the budget it never runs out of time."""

    def __init__(self, budget: Budget) -> None:
        self.clock = budget.monotonic
        self.end = budget.monotonic() + budget.seconds if budget.monotonic else 0.0
        self.memory_bytes = budget.memory_bytes

    def without_clock(self) -> Watch:
        """The same memory, and no end of time: for the little that an answer cannot do without."""
        return Watch(Budget(memory_bytes=self.memory_bytes))

    def check(self) -> None:
        """Raise :class:`OutOfTime` once the seconds are over."""
        if self.clock is not None and self.clock() > self.end:
            raise OutOfTime

    def room(self, needed_bytes: int) -> None:
        """Raise :class:`TooLarge` when an array would not fit the budget."""
        if needed_bytes > self.memory_bytes:
            raise TooLarge

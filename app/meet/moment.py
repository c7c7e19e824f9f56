"""When something is handed in, as the rules see it, and what a rule answers."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from fractions import Fraction


@dataclass(frozen=True, slots=True, kw_only=True)
class Moment:
    """The facts of time around one declaration; aware UTC times, and ``now`` comes from outside.

    ``asked_since``: when the time to hand in began (the end of the lifter's attempt before); None: it has
    not. ``changes``: how often a weight of this attempt has been replaced by another. ``clock_ends``: when
    the lifter's time to start runs out; None while no clock runs. ``flight_starts``: when the lifter's flight
    is due; ``attempts_before``: what the flight before still has to lift, None if there is no flight before.
    ``bar_weight``: what is on a rising bar, or called for it.
    """

    now: datetime
    asked_since: datetime | None = None
    changes: int = 0
    called: bool = False
    loaded: bool = False
    clock_ends: datetime | None = None
    last_lift: bool = False
    flight_starts: datetime | None = None
    attempts_before: int | None = None
    bar_weight: Fraction | None = None


@dataclass(frozen=True, slots=True)
class Breach:
    """A rule that a declaration breaks. ``key`` is the setting, or ``lifted``, ``under-bar`` or ``stock``.

    ``because`` and ``right`` are sentences: what is wrong, and what would be right.
    """

    key: str
    because: str
    right: str
    overridable: bool = True

    def __str__(self) -> str:
        return f"{self.because} {self.right}".strip()

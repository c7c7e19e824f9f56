"""The rules of a meet as settings: what the table, the order and the referee go by.

No rule is written into code: every one has a value here, a plain label in :mod:`app.meet.rule_settings`, and
for each preset a source in :mod:`app.meet.rule_presets`. Masses are exact fractions of the meet's own unit.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction


class OrderSystem(StrEnum):
    """How the lifting order is made."""

    ROUNDS = "rounds"
    RISING = "rising"


class Ties(StrEnum):
    """Who goes first of two at the same weight."""

    LOT = "lot"
    SEQUENCE = "sequence"


class Default(StrEnum):
    """What holds when the time to hand in has run out."""

    REPEAT_OR_STEP = "repeat-or-step"
    STEP = "step"
    FORFEITED = "forfeited"


class OpenerDeadline(StrEnum):
    """Until when an opener may be changed."""

    MINUTES = "minutes"
    ATTEMPTS_LEFT = "attempts-left"
    AS_LATER = "as-later"


class Changeable(StrEnum):
    """Which attempts after the opener may be changed once they are handed in."""

    LAST_LIFT_THIRD = "last-lift-third"
    THIRDS = "thirds"
    ALL = "all"


class Until(StrEnum):
    """The moment after which a weight that is handed in stands."""

    NEVER = "never"
    CALLED = "called"
    LOADED = "loaded"
    WARNING = "warning"


class Granted(StrEnum):
    """What a lifter is granted after an error that was not theirs."""

    COUNTS = "counts"
    KEEP_OR_RETAKE = "keep-or-retake"
    RETAKE = "retake"
    STANDS = "stands"


class RetakePlace(StrEnum):
    """Where a retake goes in the order."""

    END_OF_ROUND = "end-of-round"
    AT_ONCE = "at-once"


@dataclass(frozen=True, slots=True, kw_only=True)
class Rules:
    """Everything that one meet may set otherwise than another. ``preset`` is what it started from.

    ``None`` as a number of changes means any number. Zero seconds to hand in, or of rest, means no limit.
    """

    preset: str
    order_system: OrderSystem
    ties: Ties
    step: Fraction
    record_step: Fraction
    least_rise: Fraction
    below_missed: bool
    fourth_for_record: bool
    default: Default
    seconds_to_hand_in: int
    opener_changes: int | None
    opener_deadline: OpenerDeadline
    opener_minutes: int
    opener_attempts_left: int
    changeable: Changeable
    changes_each: int | None
    change_until: Until
    seconds_to_start: int
    seconds_following: int
    warning_seconds: int
    least_rest_seconds: int
    most_in_flight: int
    lighter_good: Granted
    lighter_missed: Granted
    heavier_good: Granted
    heavier_missed: Granted
    unequal_good: Granted
    unequal_missed: Granted
    spoiled_missed: Granted
    misload_rounding: Fraction
    retake_place: RetakePlace
    record_retake_place: RetakePlace
    collars_counted: bool
    belt_counted: bool
    first_face_in: bool
    outside_collar: bool
    full_diameter: bool

    def for_step(self, step: Fraction) -> Rules:
        """The same rules for a lift that is declared in another step.

        The least rise and the rounding of a misload follow where they were the step itself.
        """
        return replace(
            self,
            step=step,
            record_step=min(self.record_step, step),
            least_rise=step if self.least_rise == self.step else self.least_rise,
            misload_rounding=step if self.misload_rounding == self.step else self.misload_rounding,
        )

    def step_for(self, *, record: bool) -> Fraction:
        """What a weight must be a multiple of."""
        return self.record_step if record else self.step

"""When nobody hands in a weight: what the rule gives, and what a plan takes for granted until then."""

from __future__ import annotations

from fractions import Fraction

from app.meet.model import Attempt, Result
from app.meet.rules import Default, Rules


def ruled_default(rules: Rules, before: Attempt | None, before_weight: Fraction | None) -> Fraction | None:
    """The weight that stands when the time to hand in has run out; None if there is none.

    None for an opener, for a fourth attempt (only asked for), and where the attempt is forfeited.
    """
    if rules.default is Default.FORFEITED:
        return None
    return stand_in(rules, before, before_weight)


def stand_in(rules: Rules, before: Attempt | None, before_weight: Fraction | None) -> Fraction | None:
    """What a plan takes for granted while the weight may still be handed in; None for opener and fourth.

    The rule's default; where the rule forfeits the attempt, a step more after a good lift and else the same,
    since nearly everybody hands in. An attempt that is still to be lifted is taken as good. After a pass the
    careful reading is that of a miss (no published rule).
    """
    if before is None or before_weight is None or before.number >= 3:
        return None
    failed = before.result in (Result.MISSED, Result.PASSED)
    if failed and rules.default is not Default.STEP:
        return before_weight
    return step_up(before_weight + max(rules.least_rise, rules.step), rules.step)


def step_up(weight: Fraction, step: Fraction) -> Fraction:
    """The least multiple of the step that is no lighter: after a record attempt at 200.5 a step is 205."""
    return -(-weight // step) * step

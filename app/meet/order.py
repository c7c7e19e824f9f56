"""Who lifts when, in the rounds system.

The order is the rulebook's and not ours to choose: rounds one after another; inside a round the lighter
bar first; on equal weights the lower lot number (WDFPF 2007, Order of competition, as read in
``figures.md`` 1.2; lower lot first is common practice).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from app.meet.model import Attempt, Lifter, Result


@dataclass(frozen=True, slots=True)
class Turn:
    """An attempt still to come, with the weight it is planned at.

    ``assumed`` is true when nobody has handed the weight in and ``weight`` is what the rule gives by default.
    """

    attempt: Attempt
    lifter: Lifter
    weight: Fraction
    assumed: bool


def lifting_order(turns: Iterable[Turn]) -> tuple[Turn, ...]:
    """Rounds, then ascending weight, then the lower lot number; the same turns always give the same order."""
    return tuple(sorted(turns, key=lambda turn: (turn.attempt.number, turn.weight, turn.lifter.lot)))


def without_opener(
    lifters: Iterable[Lifter], attempts: Mapping[int, Sequence[Attempt]]
) -> tuple[Lifter, ...]:
    """Lifters whose opener nobody has handed in: they are in no order yet, and somebody must be told."""
    missing = [
        lifter
        for lifter in lifters
        if any(
            attempt.number == 1 and attempt.weight is None and attempt.result is Result.OPEN
            for attempt in attempts.get(lifter.id, ())
        )
    ]
    return tuple(sorted(missing, key=lambda lifter: lifter.lot))

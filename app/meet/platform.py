"""What is on the bar, and which change the crew holds in its hands.

A platform is in one of four conditions. *Changing*: an instruction has been shown and stays exactly as it
was until the bar is confirmed. *Lifting*: the bar is loaded, hands off, nothing may change on it. *Hold*:
something is wrong, nothing moves. *Unknown*: nobody can say what is on the bar, so the next instruction is
a full build from empty.

Entries never touch the instruction. They may make it out of date, which :func:`overtaken` says; then the
crew tells what is on the bar, and only then does a new instruction, the difference from there, replace it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction

from app.loading.equipment import Stack
from app.meet.order import Turn


class Condition(StrEnum):
    """What the platform is doing."""

    IDLE = "idle"  # no instruction out: nobody is up, or the next weight has not been handed in
    CHANGING = "changing"
    LIFTING = "lifting"
    HOLD = "hold"


@dataclass(frozen=True, slots=True)
class Hand:
    """The change that the crew has been shown: from ``before`` to ``stack``, for one attempt at one weight.

    ``before`` is None when the bar was unknown: then the bar is stripped and built from empty. ``why`` says
    in a sentence why the stack is not the wall chart's; "" where it is.
    """

    attempt_id: int
    weight: Fraction
    before: Stack | None
    stack: Stack
    why: str = ""


@dataclass(frozen=True, slots=True)
class Bar:
    """The platform's iron: what each end carries (None = nobody knows), and the instruction out.

    Where several belts are in circulation, ``spare`` is what hangs on the one that is free while a lifter has
    the other, and ``ahead`` the instruction by which the crew makes it up meanwhile.
    """

    condition: Condition
    carries: Stack | None
    hand: Hand | None
    spare: Stack | None = ()
    ahead: Hand | None = None


@dataclass(frozen=True, slots=True)
class BarRefused(Exception):
    """Something that cannot be done to the bar now, with the reason as a sentence."""

    because: str

    def __str__(self) -> str:
        return self.because


def up_next(bar: Bar, order: Sequence[Turn]) -> Turn | None:
    """Whose attempt it is. Once the bar is loaded for somebody, it is theirs whatever is entered."""
    if bar.condition is Condition.LIFTING and bar.hand is not None:
        for turn in order:
            if turn.attempt.id == bar.hand.attempt_id:
                return turn
    return order[0] if order else None


def overtaken(bar: Bar, order: Sequence[Turn]) -> bool:
    """True when the instruction in the crew's hands is no longer for the bar that is wanted next."""
    if bar.hand is None:
        return False
    turn = up_next(bar, order)
    return turn is None or turn.attempt.id != bar.hand.attempt_id or turn.weight != bar.hand.weight


def instruct(bar: Bar, turn: Turn, stack: Stack, why: str = "") -> Bar:
    """Give the crew its next change, from what is on the bar now. Freezes it."""
    hand = Hand(turn.attempt.id, turn.weight, bar.carries, stack, why)
    return replace(bar, condition=Condition.CHANGING, hand=hand)


def loaded(bar: Bar) -> Bar:
    """The crew, or the table for it, says that the bar is loaded as shown."""
    if bar.hand is None or bar.condition is not Condition.CHANGING:
        raise BarRefused("There is no change to confirm.")
    return replace(bar, condition=Condition.LIFTING, carries=bar.hand.stack)


def not_loaded(bar: Bar) -> Bar:
    """Takes “bar is loaded” back: the crew goes on with the same change."""
    if bar.hand is None or bar.condition is not Condition.LIFTING:
        raise BarRefused("The bar is not confirmed as loaded.")
    return replace(bar, condition=Condition.CHANGING, carries=bar.hand.before)


def lifted(bar: Bar) -> Bar:
    """The attempt on the bar has a result: the bar carries what was shown, and the hands are free.

    If the other belt was being made up meanwhile, that instruction goes on as it was, and the belt that comes
    back is the spare one.
    """
    if bar.hand is None:
        return replace(bar, condition=Condition.IDLE)
    if bar.ahead is not None:
        return Bar(Condition.CHANGING, bar.ahead.before, bar.ahead, bar.hand.stack)
    return replace(bar, condition=Condition.IDLE, carries=bar.hand.stack, hand=None)


def prepare(bar: Bar, turn: Turn, stack: Stack, why: str = "") -> Bar:
    """While a lifter has one belt: the crew's change for the next one, from what is on the spare belt."""
    return replace(bar, ahead=Hand(turn.attempt.id, turn.weight, bar.spare, stack, why))


def found(bar: Bar, carries: Stack | None) -> Bar:
    """Somebody has looked: each end carries this. None: nobody can tell, build from empty. A hold stays on."""
    condition = Condition.HOLD if bar.condition is Condition.HOLD else Condition.IDLE
    return replace(bar, condition=condition, carries=carries, hand=None, ahead=None)


def hold(bar: Bar) -> Bar:
    """Something is wrong: nothing moves until the table says so."""
    return replace(bar, condition=Condition.HOLD)


def resume(bar: Bar) -> Bar:
    """After a hold the same change goes on, if one was out; where there is no hold, nothing happens."""
    if bar.condition is not Condition.HOLD:
        return bar
    return replace(bar, condition=Condition.CHANGING if bar.hand else Condition.IDLE)

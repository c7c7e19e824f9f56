"""The bar was not what was called: what kind of error, what the rules grant, and where a retake goes.

The remedies are settings. Those of the presets for a bar in rounds are a rulebook's clause on errors in
loading as a second-hand page repeats it (``figures.md`` 1.4, V25 to V32); the referees decide, not the table.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import StrEnum
from fractions import Fraction

from app.loading.equipment import Equipment, Stack
from app.loading.mass import show_mass
from app.meet.model import Attempt, Result
from app.meet.order import Turn
from app.meet.rules import Granted, OrderSystem, RetakePlace, Rules


class Error(StrEnum):
    """What went wrong with an attempt through no fault of the lifter."""

    LIGHTER = "lighter"
    HEAVIER = "heavier"
    UNEQUAL = "unequal"
    DISTURBED = "disturbed"
    SPOILED = "spoiled"


ERROR_WORDS = {
    Error.LIGHTER: "the bar was lighter than called",
    Error.HEAVIER: "the bar was heavier than called",
    Error.UNEQUAL: "the two ends were not the same",
    Error.DISTURBED: "the bar or its plates moved during the lift, or the platform was disturbed",
    Error.SPOILED: "a loader or spotter spoiled the lift",
}


@dataclass(frozen=True, slots=True)
class Found:
    """An error, and the mass that was really lifted."""

    error: Error
    called: Fraction
    mass: Fraction


@dataclass(frozen=True, slots=True)
class Remedy:
    """One thing that may now be done: the lift counts as ``recorded``, or it is taken again at ``place``.

    A retake is at the weight called. Neither: the miss stands, or the bar is put right before the lift.
    """

    words: str
    recorded: Fraction | None = None
    place: RetakePlace | None = None


@dataclass(frozen=True, slots=True)
class Retake:
    """An attempt that was granted again (and is therefore ``OPEN``), and where it goes."""

    attempt_id: int
    place: RetakePlace


def what_was_on(equipment: Equipment, ends: Sequence[Stack]) -> Fraction:
    """The true mass of what was on the bar, each end for itself; a belt has one. ``ValueError`` otherwise."""
    if len(ends) != equipment.implement.ends:
        raise ValueError(f"Say what was on each of the {equipment.implement.ends} ends, and on no other.")
    return equipment.base_mass + sum((sum(end, Fraction(0)) for end in ends), Fraction(0))


def find_error(equipment: Equipment, called: Fraction, ends: Sequence[Stack]) -> Found | None:
    """The error in what was on the bar; None if it was right.

    Ends of different mass are unequal whatever they sum to; ends of the same mass made of other plates are
    not an error of mass.
    """
    mass = what_was_on(equipment, ends)
    if len({sum(end, Fraction(0)) for end in ends}) > 1:
        return Found(Error.UNEQUAL, called, mass)
    if mass == called:
        return None
    return Found(Error.LIGHTER if mass < called else Error.HEAVIER, called, mass)


def recorded_weight(rules: Rules, found: Found) -> Fraction:
    """What a misloaded lift that counts is recorded as.

    The next lower multiple of the rounding (unequal ends 25+15+2.5 and 25+15+1.25 on 25 kg weigh 108.75 and
    count 107.5: V32); but a lift at least as heavy as called, ends equal, never counts less than called.
    """
    mass, rounding = found.mass, rules.misload_rounding
    rounded = mass // rounding * rounding if rounding else mass
    return max(rounded, found.called) if found.error is Error.HEAVIER else rounded


def remedies(
    rules: Rules, found: Found, result: Result, unit: str, *, record: bool = False
) -> tuple[Remedy, ...]:
    """What the rules allow after this error, in plain words; the first is the usual one."""
    if result not in (Result.GOOD, Result.MISSED):
        return (Remedy("Not lifted yet: put the bar right before the attempt goes on."),)
    granted = _granted(rules, found.error, result)
    if granted is None:
        return (Remedy("The good lift counts.", recorded=found.called),)
    if granted is Granted.STANDS:
        return (Remedy("The miss stands."),)
    choices = []
    if granted in (Granted.COUNTS, Granted.KEEP_OR_RETAKE):
        weight = recorded_weight(rules, found)
        verb = "The good lift counts" if granted is Granted.COUNTS else "The lifter keeps the good lift"
        choices.append(Remedy(f"{verb}, recorded as {show_mass(weight)} {unit}.", recorded=weight))
    if granted in (Granted.KEEP_OR_RETAKE, Granted.RETAKE):
        choices.append(_retake(rules, found, unit, record=record))
    return tuple(choices)


def _retake(rules: Rules, found: Found, unit: str, *, record: bool) -> Remedy:
    place = rules.record_retake_place if record else rules.retake_place
    if rules.order_system is OrderSystem.RISING:
        place = RetakePlace.AT_ONCE  # a rising bar has no rounds to wait for the end of
    where = (
        "at once, following himself or herself"
        if place is RetakePlace.AT_ONCE
        else "at the end of this round"
    )
    ask = "If the referees grant it, the" if found.error is Error.SPOILED else "The"
    return Remedy(f"{ask} lifter takes {show_mass(found.called)} {unit} again, {where}.", place=place)


def _granted(rules: Rules, error: Error, result: Result) -> Granted | None:
    """The setting that decides; None where a good lift simply counts (nobody spoiled it)."""
    good = result is Result.GOOD
    if error is Error.SPOILED:
        return None if good else rules.spoiled_missed
    if error is Error.LIGHTER:
        return rules.lighter_good if good else rules.lighter_missed
    if error is Error.HEAVIER:
        return rules.heavier_good if good else rules.heavier_missed
    return rules.unequal_good if good else rules.unequal_missed


def granted_again(attempt: Attempt, called: Fraction) -> Attempt:
    """The attempt as it stands once a retake is granted: not lifted, at the weight that was called."""
    return replace(attempt, weight=called, result=Result.OPEN)


def with_retakes(order: Sequence[Turn], retakes: Sequence[Retake]) -> tuple[Turn, ...]:
    """The same turns, each retake where the rules put it.

    At once: first of all, in the order in which they were granted. At the end of the round: after all others
    of its round, and there by weight and lot number (the bar may go down for them: WPA base rules).
    """
    place = {retake.attempt_id: retake.place for retake in retakes}
    granted = {retake.attempt_id: rank for rank, retake in enumerate(retakes)}

    def key(at: int, turn: Turn) -> tuple[int, int, int, Fraction, int]:
        where = place.get(turn.attempt.id)
        if where is RetakePlace.AT_ONCE:
            return -1, 0, granted[turn.attempt.id], turn.weight, turn.lifter.lot
        if where is RetakePlace.END_OF_ROUND:
            return last[turn.attempt.number], 1, 0, turn.weight, turn.lifter.lot
        return at, 0, 0, turn.weight, turn.lifter.lot

    last: dict[int, int] = {}
    for number in {turn.attempt.number for turn in order}:
        last[number] = max((at for at, turn in enumerate(order) if turn.attempt.number <= number), default=0)
    keyed = sorted(enumerate(order), key=lambda pair: key(*pair))
    return tuple(turn for _, turn in keyed)

"""The table's two entries: what a lifter will take, and what became of it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.mass import show_mass
from app.meet.declare import Refused, decide, read_weight, sentence
from app.meet.model import RESULT_WORDS, Attempt, Lifter, Result, attempt_name
from app.meet.order import turns_of
from app.meet.platform import Condition, lifted, overtaken, up_next
from app.store.picture import Picture, get, store_bar
from app.store.tables import AttemptRow


@dataclass(frozen=True, slots=True)
class Seen:
    """An attempt as the person saw it who now enters something: by its id and version."""

    attempt_id: int
    version: int


@dataclass(frozen=True, slots=True)
class Subject:
    """The attempt an entry is about, with its surroundings."""

    row: AttemptRow
    now: Picture
    attempt: Attempt
    lifter: Lifter
    earlier: tuple[Attempt, ...]

    @property
    def name(self) -> str:
        """``Mara Lindvik: Squat, 2nd``."""
        lift = self.now.programme(self.attempt.lift_id).lift(self.attempt.lift_id)
        return f"{self.lifter.name}: {attempt_name(lift.name, self.attempt.number)}"


def declare(desk: Desk, platform_id: int, seen: Seen, text: str, *, who: str) -> str:
    """Hand in a weight; empty text takes the rule's default. Returns what was entered, in words.

    Declaring the same weight again changes nothing. A weight that another person entered since the page
    was made is not overwritten: :class:`SomebodyWasFirst` tells what it is.
    """
    with platform_entry(desk, platform_id, who) as work:
        subject = _subject(work, seen)
        weight = _read(subject, text)
        if subject.attempt.weight == weight:
            return f"{subject.name} stays at {show_mass(weight)}."
        was = "" if subject.attempt.weight is None else f" (was {show_mass(subject.attempt.weight)})"
        subject.row.weight = weight
        _stamp(subject.row, work)
        work.what = f"{subject.name} declared at {show_mass(weight)}{was}"
        return f"{work.what}."


def _read(subject: Subject, text: str) -> Fraction:
    step = subject.now.programme(subject.attempt.lift_id).lift(subject.attempt.lift_id).step
    if text.strip():
        read = read_weight(text)
        if isinstance(read, Refused):
            raise NotAllowedNow(sentence(read))
        weight = read.weight
    elif subject.attempt.weight is not None:
        return subject.attempt.weight
    else:
        weight = _default(subject, step)
    equipment = subject.now.equipment(subject.attempt.lift_id)
    decision = decide(weight, subject.attempt, subject.earlier, step, equipment, subject.now.unit)
    if isinstance(decision, Refused):
        raise NotAllowedNow(sentence(decision))
    return decision.weight


def _default(subject: Subject, step: Fraction) -> Fraction:
    """The weight that the order shows for this attempt while nobody has handed one in."""
    asked = replace(subject.attempt, result=Result.OPEN)
    turns = turns_of(subject.lifter, (*subject.earlier, asked), step)
    weight = next((turn.weight for turn in turns if turn.attempt.id == asked.id), None)
    if weight is None:
        raise NotAllowedNow(f"{subject.name}: type a weight. An opener has no default.")
    return weight


def judge(desk: Desk, platform_id: int, seen: Seen, result: Result, *, who: str) -> str:
    """Enter good lift, no lift or pass; for an attempt that has been lifted, a correction. In words.

    A good lift or a miss of the attempt that is up tells also that the bar carries what the crew was shown,
    and gives them the next change.
    """
    with platform_entry(desk, platform_id, who) as work:
        subject = _subject(work, seen)
        if subject.attempt.result is result:
            return f"{subject.name} stays a {RESULT_WORDS[result]}."
        if result is Result.OPEN:
            raise NotAllowedNow("To take a result back, use undo.")
        if subject.attempt.result is Result.OPEN:
            _leave_platform(work, subject, result)
            work.what = f"{subject.name}: {RESULT_WORDS[result]}{_at(subject.attempt)}"
        else:
            if subject.attempt.weight is None:
                raise NotAllowedNow(f"{subject.name} was never handed in, so nothing was lifted. Use undo.")
            was = RESULT_WORDS[subject.attempt.result]
            work.what = f"{subject.name} corrected to {RESULT_WORDS[result]} (was {was})"
        subject.row.result = result.value
        _stamp(subject.row, work)
        return f"{work.what}."


def _at(attempt: Attempt) -> str:
    return "" if attempt.weight is None else f" at {show_mass(attempt.weight)}"


def _leave_platform(work: Work, subject: Subject, result: Result) -> None:
    """The attempt ends: is it allowed, and what does it say about the bar?"""
    now, bar = subject.now, subject.now.bar
    order = now.programme(subject.attempt.lift_id).order(subject.lifter.flight_id, subject.attempt.lift_id)
    in_hand = bar.hand is not None and bar.hand.attempt_id == subject.attempt.id
    if result is Result.PASSED:
        if in_hand and bar.condition is Condition.LIFTING:
            store_bar(work.platform, lifted(bar))
        return
    here = (now.flight_id, now.lift_id) == (subject.lifter.flight_id, subject.attempt.lift_id)
    up = up_next(bar, order) if here else None
    if bar.condition is Condition.HOLD:
        raise NotAllowedNow("The platform is on hold. End the hold first.")
    if up is None or up.attempt.id != subject.attempt.id:
        is_up = f" {up.lifter.name} is up." if up else ""
        raise NotAllowedNow(f"{subject.lifter.name} is not up, so there is no lift to judge.{is_up}")
    if up.assumed:
        raise NotAllowedNow(f"{subject.name} has not been handed in yet. Declare the weight first.")
    if not in_hand or overtaken(bar, order):
        raise NotAllowedNow(
            "The crew has not said what is on the bar. Answer that first, then enter the result."
        )
    store_bar(work.platform, lifted(bar))


def _subject(work: Work, seen: Seen) -> Subject:
    row = get(work.session, AttemptRow, seen.attempt_id, "attempt")
    now = work.picture()
    programmes = [p for _, _, p in now.sessions if any(a.id == seen.attempt_id for a in p.attempts)]
    if not programmes:
        raise NotAllowedNow("This attempt belongs to another platform.")
    programme = programmes[0]
    attempt = next(one for one in programme.attempts if one.id == seen.attempt_id)
    lifter = next(one for one in programme.lifters if one.id == attempt.lifter_id)
    theirs = programme.of_lift(attempt.lift_id)[lifter.id]
    subject = Subject(row, now, attempt, lifter, tuple(one for one in theirs if one.number < attempt.number))
    if row.version != seen.version:
        raise SomebodyWasFirst(
            f"{subject.name} was changed by {row.entered_by or 'somebody'} while you were typing: it is now "
            f"{RESULT_WORDS[attempt.result]}{_at(attempt)}. Nothing of yours was entered. Look, and enter again."
        )
    return subject


def _stamp(row: AttemptRow, work: Work) -> None:
    row.version += 1
    row.entered_by = work.who
    row.entered_at = work.now

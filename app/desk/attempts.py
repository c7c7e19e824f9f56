"""The table's two entries: what a lifter will take, and what became of it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

from app.desk.entry import Desk, Work, platform_entry
from app.desk.errors import AgainstTheRules, NotAllowedNow
from app.desk.hands_off import hands_off
from app.desk.people import check_owner
from app.desk.subject import Seen, Subject, at_words, find_subject, moment_of, stamp
from app.loading.mass import show_mass
from app.meet.check_declaration import check_declaration
from app.meet.declare import Refused, read_weight, sentence
from app.meet.model import RESULT_WORDS, Result
from app.meet.moment import Breach
from app.meet.order import Turn
from app.meet.platform import Condition, lifted, overtaken, up_next
from app.meet.ruled_order import ruled_turns
from app.meet.rules import Default, OrderSystem
from app.store.picture import store_bar

__all__ = ["Seen", "breaches_of", "declare", "judge", "read_entry"]

RECORD_MARK = "r"  # typed after a weight: 142.5r is a record attempt


def declare(desk: Desk, platform_id: int, seen: Seen, text: str, reason: str = "", *, who: str) -> str:
    """Hand in a weight; empty text takes the rule's default, an ``r`` behind it marks a record attempt.

    Returns what was entered, in words. Declaring the same again changes nothing. A weight against the rules of
    the meet is refused with what would be right; where the table may decide, a ``reason`` overrides, and the
    journal keeps it. A weight that another person entered since the page was made is not overwritten.
    """
    with platform_entry(desk, platform_id, who) as work:
        subject = find_subject(work, seen)
        check_owner(work, subject.lifter.flight_id)
        weight, record = read_entry(subject, text)
        attempt = subject.attempt
        if (attempt.weight, attempt.record) == (weight, record) and attempt.result is Result.OPEN:
            return f"{subject.name} stays at {show_mass(weight)}."
        if subject.in_hand and subject.now.bar.condition is Condition.LIFTING and attempt.weight is not None:
            # Said before any rule: no reason can change a bar that somebody stands under.
            raise NotAllowedNow(hands_off(subject.lifter.name, show_mass(attempt.weight)))
        overridden = _judged(breaches_of(work, subject, weight, record), " ".join(reason.split()))
        was = "" if attempt.weight is None else f" (was {show_mass(attempt.weight)})"
        subject.row.changes += attempt.weight is not None and attempt.weight != weight
        subject.row.weight, subject.row.record = weight, record
        stamp(subject.row, work)
        marked = ", record attempt" if record else ""
        work.what = f"{subject.name} declared at {show_mass(weight)}{was}{marked}{overridden}"
        return f"{work.what}."


def breaches_of(work: Work, subject: Subject, weight: Fraction, record: bool) -> list[Breach]:  # noqa: FBT001 - with its weight
    """Every rule of the meet that this weight would break now."""
    return check_declaration(
        subject.rules,
        weight,
        subject.attempt,
        subject.others,
        moment_of(work, subject),
        subject.now.equipment(subject.attempt.lift_id),
        subject.now.unit,
        record=record,
    )


def _judged(breaches: list[Breach], reason: str) -> str:
    """Refuse, or say in words what the table has overridden and why."""
    final = [breach for breach in breaches if not breach.overridable]
    if final:
        raise NotAllowedNow(str(final[0]))
    if not breaches:
        return ""
    if not reason:
        raise AgainstTheRules(
            " ".join(map(str, breaches)), late=[b.key for b in breaches] == ["seconds_to_hand_in"]
        )
    return f"; against the rule ({' '.join(breach.because for breach in breaches)}), because: {reason[:200]}"


def read_entry(subject: Subject, text: str) -> tuple[Fraction, bool]:
    """The typed weight and whether it is marked as a record; empty text gives what stands or the default."""
    text = text.strip()
    record = text[-1:].lower() == RECORD_MARK
    plain = text[:-1] if record else text
    if plain:
        read = read_weight(plain)
        if isinstance(read, Refused):
            raise NotAllowedNow(sentence(read))
        return read.weight, record
    if subject.attempt.weight is not None:
        return subject.attempt.weight, record or subject.attempt.record
    return _default(subject), record


def _default(subject: Subject) -> Fraction:
    """The weight that the order shows for this attempt while nobody has handed one in."""
    if subject.rules.default is Default.FORFEITED:
        raise NotAllowedNow(
            f"{subject.name}: type a weight. Not handed in, the attempt is forfeited: pass it then."
        )
    asked = replace(subject.attempt, result=Result.OPEN)
    turns: Sequence[Turn] = ruled_turns(subject.lifter, (*subject.others, asked), subject.rules)
    if subject.rules.order_system is OrderSystem.RISING and subject.attempt.result is Result.OPEN:
        # The order knows how high the bar will be by then.
        turns = subject.programme.order(subject.lifter.flight_id, asked.lift_id) or turns
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
        subject = find_subject(work, seen)
        check_owner(work, subject.lifter.flight_id)
        if subject.attempt.result is result:
            return f"{subject.name} stays a {RESULT_WORDS[result]}."
        if result is Result.OPEN:
            raise NotAllowedNow("To take a result back, use undo.")
        if subject.attempt.result is Result.OPEN:
            _leave_platform(work, subject, result)
            work.what = f"{subject.name}: {RESULT_WORDS[result]}{at_words(subject.attempt)}"
        else:
            if subject.attempt.weight is None:
                raise NotAllowedNow(f"{subject.name} was never handed in, so nothing was lifted. Use undo.")
            was = RESULT_WORDS[subject.attempt.result]
            work.what = f"{subject.name} corrected to {RESULT_WORDS[result]} (was {was})"
        if result is not Result.PASSED:
            subject.row.lifted_at = subject.row.lifted_at or work.now
        subject.row.result = result.value
        stamp(subject.row, work)
        return f"{work.what}."


def _leave_platform(work: Work, subject: Subject, result: Result) -> None:
    """The attempt ends: is it allowed, and what does it say about the bar?"""
    bar = subject.now.bar
    order = subject.programme.order(subject.lifter.flight_id, subject.attempt.lift_id)
    if result is Result.PASSED:
        if subject.in_hand and bar.condition is Condition.LIFTING:
            store_bar(work.platform, lifted(bar))
        return
    up = up_next(bar, order) if subject.here else None
    if bar.condition is Condition.HOLD:
        raise NotAllowedNow("The platform is on hold. End the hold first.")
    if up is None or up.attempt.id != subject.attempt.id:
        is_up = f" {up.lifter.name} is up." if up else ""
        raise NotAllowedNow(f"{subject.lifter.name} is not up, so there is no lift to judge.{is_up}")
    if up.assumed:
        raise NotAllowedNow(f"{subject.name} has not been handed in yet. Declare the weight first.")
    if not subject.in_hand or overtaken(bar, order):
        raise NotAllowedNow(
            "The crew has not said what is on the bar. Answer that first, then enter the result."
        )
    store_bar(work.platform, lifted(bar))

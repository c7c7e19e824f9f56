"""The attempt that an entry is about, as the person saw it and as it is now."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime, timedelta
from fractions import Fraction

from app.desk.entry import Work
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.loading.mass import show_mass
from app.meet.horizon import Programme
from app.meet.model import RESULT_WORDS, Attempt, Lifter, Result, attempt_name
from app.meet.moment import Moment
from app.meet.platform import Condition
from app.meet.rules import OrderSystem, Rules
from app.store.picture import Picture, get
from app.store.tables import AttemptRow, FlightRow


@dataclass(frozen=True, slots=True)
class Seen:
    """An attempt as the person saw it who now enters something: by its id and version."""

    attempt_id: int
    version: int


@dataclass(frozen=True, slots=True)
class Subject:
    """The attempt an entry is about, with its surroundings. ``others``: the lifter's others in this lift."""

    row: AttemptRow
    now: Picture
    programme: Programme
    attempt: Attempt
    lifter: Lifter
    others: tuple[Attempt, ...]

    @property
    def name(self) -> str:
        """``Mara Lindvik: Squat, 2nd``."""
        lift = self.programme.lift(self.attempt.lift_id).name
        return f"{self.lifter.name}: {attempt_name(lift, self.attempt.number)}"

    @property
    def rules(self) -> Rules:
        """The rules of the session in the step of this lift."""
        return self.programme.rules_of(self.attempt.lift_id)

    @property
    def in_hand(self) -> bool:
        """Whether the crew has been shown a change for this attempt."""
        hand = self.now.bar.hand
        return hand is not None and hand.attempt_id == self.attempt.id

    @property
    def here(self) -> bool:
        """Whether this attempt's flight and lift are the ones on the platform."""
        return (self.now.flight_id, self.now.lift_id) == (self.lifter.flight_id, self.attempt.lift_id)


def find_subject(work: Work, seen: Seen) -> Subject:
    """The attempt with its surroundings; refused when it was changed since ``seen``, or is elsewhere."""
    row = get(work.session, AttemptRow, seen.attempt_id, "attempt")
    now = work.picture()
    programmes = [p for _, _, p in now.sessions if any(a.id == seen.attempt_id for a in p.attempts)]
    if not programmes:
        raise NotAllowedNow("This attempt belongs to another platform.")
    programme = programmes[0]
    attempt = next(one for one in programme.attempts if one.id == seen.attempt_id)
    lifter = next(one for one in programme.lifters if one.id == attempt.lifter_id)
    others = tuple(one for one in programme.of_lift(attempt.lift_id)[lifter.id] if one.id != attempt.id)
    subject = Subject(row, now, programme, attempt, lifter, others)
    if row.version != seen.version:
        raise SomebodyWasFirst(
            f"{subject.name} was changed by {row.entered_by or 'somebody'} while you were typing: it is now "
            f"{RESULT_WORDS[attempt.result]}{at_words(attempt)}. Nothing of yours was entered. Look, and enter again."
        )
    return subject


def at_words(attempt: Attempt) -> str:
    """`` at 142.5``, or nothing while no weight was handed in."""
    return "" if attempt.weight is None else f" at {show_mass(attempt.weight)}"


def stamp(row: AttemptRow, work: Work) -> None:
    """Who entered it last, and one version more."""
    row.version += 1
    row.entered_by = work.who
    row.entered_at = work.now


def moment_of(work: Work, subject: Subject) -> Moment:
    """The facts of time around a declaration, as the rules want to know them."""
    bar = subject.now.bar
    loaded = subject.in_hand and bar.condition is Condition.LIFTING
    loaded_at = work.platform.loaded_at
    rising = subject.rules.order_system is OrderSystem.RISING
    return Moment(
        now=work.now,
        asked_since=_asked_since(subject),
        changes=subject.attempt.changes,
        called=subject.in_hand,
        loaded=loaded,
        clock_ends=loaded_at + timedelta(seconds=subject.rules.seconds_to_start)
        if loaded and loaded_at
        else None,
        last_lift=subject.programme.lifts[-1].id == subject.attempt.lift_id,
        flight_starts=get(work.session, FlightRow, subject.lifter.flight_id, "flight").starts_at,
        attempts_before=_attempts_before(subject),
        bar_weight=_bar_weight(subject) if rising else None,
    )


def _bar_weight(subject: Subject) -> Fraction | None:
    """How high a rising bar is in this flight's lift: the heaviest weight lifted, or the one called since."""
    members = {lifter.id for lifter in subject.programme.of_flight(subject.lifter.flight_id)}
    weights = [
        a.weight
        for a in subject.programme.attempts
        if a.weight is not None
        and a.result in (Result.GOOD, Result.MISSED)
        and a.lift_id == subject.attempt.lift_id
        and a.lifter_id in members
    ]
    hand = subject.now.bar.hand
    if subject.here and hand is not None:
        weights.append(hand.weight)
    return max(weights, default=None)


def _asked_since(subject: Subject) -> datetime | None:
    """When the lifter's attempt before ended: from then on the next weight is asked for."""
    before = [one for one in subject.others if one.number == subject.attempt.number - 1]
    return before[0].lifted_at if before and before[0].result is not Result.OPEN else None


def _attempts_before(subject: Subject) -> int | None:
    """What the flight before still has to lift, as far as that counts for the opener: None if there is none."""
    programme, lift_id = subject.programme, subject.attempt.lift_id
    pairs = [(flight.id, lift.id) for lift in programme.lifts for flight in programme.flights]
    place = pairs.index((subject.lifter.flight_id, lift_id))
    if place == 0:
        return None
    return len(programme.order(*pairs[place - 1]))

"""The crew's screen as words and drawings, from the board. Nothing is shown that does not re-sum."""

from __future__ import annotations

import logging
from collections.abc import Sequence

from app.desk.bar import instruction_name
from app.desk.board import Board, Step
from app.loading.mass import show_mass
from app.loading.stack import WrongLoad
from app.meet.model import ORDINALS
from app.meet.order import Turn
from app.meet.platform import Condition
from app.store.picture import Picture
from app.web.languages import Say
from app.web.other_belt import other_belt_view
from app.web.views import ChangeView, CrewState, CrewView, FallView, RackView, ThenView, UpView
from app.web.words import clock_words, end_view, plate_views, side_words, stack_words, where_words

THEN = 3
WANTED_WITHIN = 2

# Whole sentences, so that a translator sees each in one piece; see app/web/locales.
NO_FLIGHT = "The table has not brought a flight to this platform yet."
HELD = "Nothing moves until the table says so."
NOBODY_KNOWS = "Nobody knows what is on the bar. Strip it, then build this from empty."
NOT_VERIFIED = "The load could not be verified. Load by the chart and tell the table."
NOT_HANDED_IN = "{lifter} has not handed in a weight. By the rule it will be {weight} {unit}."
CANNOT_BE_MADE = "{weight} cannot be made with the plates here. The table has been told."
NO_OPENERS = "{number} lifters of this flight have no opener. The table is asked for them."
FLIGHT_FINISHED = "{flight} has finished this lift. The table brings the next flight."
NOBODY_LEFT = "Nobody is left to lift in this round."
PLATE_GONE = "A plate of this change is no longer at the platform."
MESSAGES = (
    NO_FLIGHT,
    HELD,
    NOBODY_KNOWS,
    NOT_VERIFIED,
    NOT_HANDED_IN,
    CANNOT_BE_MADE,
    NO_OPENERS,
    FLIGHT_FINISHED,
    NOBODY_LEFT,
    PLATE_GONE,
)
NOTES = (
    "round {number}",
    "same weight",
    "not handed in",
    "cannot be made",
    "Rack",
    "Chain",
    *ORDINALS.values(),
)

SHOWS_HAND = ("changing", "unknown", "lifting", "changed")

log = logging.getLogger("platewright.wrong_load")


def bare_crew_view(now: Picture, say: Say = str) -> CrewView:
    """The screen of a platform without flights."""
    return CrewView(
        platform_id=now.platform_id,
        platform=now.platform,
        unit=now.unit,
        revision=now.revision,
        as_of=clock_words(now.changed_at),
        state="idle",
        up=None,
        change=None,
        rack=(),
        then=(),
        keep_out=(),
        message=say(NO_FLIGHT),
    )


def crew_view(one: Board, say: Say = str) -> CrewView:
    """The one screen the crew reads, in the language that ``say`` speaks."""
    state, message = _state(one, say)
    change, other = None, None
    if state in SHOWS_HAND and one.now.bar.hand is not None:
        try:
            change, other = _change_in_hand(one), other_belt_view(one)
        except WrongLoad as wrong:
            # The promise of the house: rather no load than a wrong one. (Where the crew is only asked what is
            # on the bar, nothing is to be loaded: a plate of the old change may well have been taken away.)
            if state != "changed":
                log.exception("a stack failed its re-sum on platform %s", one.now.platform)
                state, message = "hold", f"{say(NOT_VERIFIED)} {wrong}"
    return CrewView(
        platform_id=one.now.platform_id,
        platform=one.now.platform,
        unit=one.now.unit,
        revision=one.now.revision,
        as_of=clock_words(one.now.changed_at),
        state=state,
        up=_up(one, state, say),
        change=change,
        rack=() if state == "changed" else _rack(one, say),
        then=then_views(one.up, coming(one), say),
        keep_out=_keep_out(one) if state == "changing" else (),
        message=message,
        shown=instruction_name(one.now.bar),
        new_weight=show_mass(one.up.weight) if state == "changed" and one.up else "",
        bar_now=_bar_now(one, state),
        fall=_fall(one, say) if state == "lifting" and other is None else None,
        other=other if state == "lifting" else None,
    )


def _state(one: Board, say: Say) -> tuple[CrewState, str]:
    """What fills the screen, and the one sentence it may need."""
    bar = one.now.bar
    if not one.here:
        return "idle", say(NO_FLIGHT)
    if bar.condition is Condition.HOLD:
        return "hold", say(HELD)
    if one.ask:
        return "changed", _why_asked(one, say)
    if bar.hand is None:
        return _resting(one, say)
    if bar.condition is Condition.LIFTING:
        return "lifting", ""
    if bar.hand.before is None:
        return "unknown", say(NOBODY_KNOWS)
    return "changing", ""


def _resting(one: Board, say: Say) -> tuple[CrewState, str]:
    """No change is out: nobody is left, or the next weight is not there to be loaded."""
    if one.up is None:
        return "finished", _finished(one, say)
    weight = show_mass(one.up.weight)
    if one.up.assumed:
        words = say(NOT_HANDED_IN)
        return "waiting", words.format(lifter=one.up.lifter.name, weight=weight, unit=one.now.unit)
    return "waiting", say(CANNOT_BE_MADE).format(weight=weight)


def _finished(one: Board, say: Say) -> str:
    if one.no_opener:
        return say(NO_OPENERS).format(number=len(one.no_opener))
    return say(FLIGHT_FINISHED).format(flight=one.flight.name)


def _why_asked(one: Board, say: Say) -> str:
    if one.up is None:
        return say(NOBODY_LEFT)
    hand = one.now.bar.hand
    if hand is not None and hand.attempt_id == one.up.attempt.id and hand.weight == one.up.weight:
        return say(PLATE_GONE)
    return ""


def _shown_turn(one: Board) -> Turn | None:
    """The turn that the instruction out was for, at the weight it was shown with."""
    hand = one.now.bar.hand
    if hand is None:
        return one.up
    attempt = next((a for a in one.programme.attempts if a.id == hand.attempt_id), None)
    lifter = next((x for x in one.programme.lifters if attempt and x.id == attempt.lifter_id), None)
    return Turn(attempt, lifter, hand.weight, assumed=False) if attempt and lifter else one.up


def _up(one: Board, state: CrewState, say: Say) -> UpView | None:
    turn = _shown_turn(one) if state in SHOWS_HAND else one.up
    return None if turn is None else up_view(one, turn, say)


def up_view(one: Board, turn: Turn, say: Say) -> UpView:
    """Who lifts, and what."""
    number = turn.attempt.number
    return UpView(
        lifter=turn.lifter.name,
        lot=str(turn.lifter.lot),
        attempt=f"{one.lift.name}, {say(ORDINALS.get(number, f'{number}th'))}",
        flight=f"{one.flight.name}, {one.lift.name}, {say('round {number}').format(number=number)}",
        weight=show_mass(turn.weight),
    )


def _change_in_hand(one: Board) -> ChangeView | None:
    hand, turn = one.now.bar.hand, _shown_turn(one)
    if hand is None or turn is None:
        return None
    return change_view(one, Step(turn, hand.before, hand.stack, one.wish.access, hand.why))


def change_view(one: Board, step: Step) -> ChangeView | None:
    """A step as what the hands do; raises WrongLoad rather than show a wrong load."""
    hands = step.hands
    if step.stack is None or hands is None:
        return None
    end = end_view(one, step.stack, step.turn.weight, hands.on_at)
    return ChangeView(
        off=() if step.before is None else plate_views(hands.off, one.now),
        on=plate_views(hands.on, one.now),
        side=side_words(one.tool),
        from_empty=step.before is None,
        end=end,
        how=where_words(hands, step.before or (), step.stack, step.access),
        why=step.why,
    )


def _rack(one: Board, say: Say) -> tuple[RackView, ...]:
    """The rack only where it differs from the lifter before."""
    turn = _shown_turn(one)
    return () if turn is None else rack_views(one, turn, _before_id(one, turn), say)


def rack_views(one: Board, turn: Turn, before_id: int, say: Say) -> tuple[RackView, ...]:
    """The rack's setting for a turn, where it differs from that of the lifter ``before_id``."""
    new = one.now.racks.get((turn.lifter.id, one.lift.id), "")
    old = one.now.racks.get((before_id, one.lift.id), "")
    name = say("Rack") if one.tool.kind == "bar" else say("Chain")
    return (RackView(name, old, new),) if new and new != old else ()


def _before_id(one: Board, turn: Turn) -> int:
    """Who lifted last in this flight and lift; 0 for nobody."""
    members = {x.id: x.lot for x in one.programme.of_flight(turn.lifter.flight_id)}
    done = [
        a
        for a in one.programme.attempts
        if a.lift_id == one.lift.id and a.lifter_id in members and a.result.value in ("good", "missed")
    ]
    last = max(done, key=lambda a: (a.number, a.weight or 0, members[a.lifter_id]), default=None)
    return last.lifter_id if last else 0


def coming(one: Board) -> list[Step]:
    """The steps after the one on the screen."""
    return [step for step in one.steps if one.up is None or step.turn.attempt.id != one.up.attempt.id]


def then_views(before: Turn | None, steps: Sequence[Step], say: Say) -> tuple[ThenView, ...]:
    """The first lines of what follows ``before``."""
    lines = []
    for step in steps[:THEN]:
        lines.append(ThenView(show_mass(step.turn.weight), step.turn.lifter.name, _note(before, step, say)))
        before = step.turn
    return tuple(lines)


def _note(before: Turn | None, step: Step, say: Say) -> str:
    turn = step.turn
    notes = []
    if before is not None and turn.attempt.number != before.attempt.number:
        notes.append(say("round {number}").format(number=turn.attempt.number))
    elif before is not None and turn.weight == before.weight:
        notes.append(say("same weight"))
    if turn.assumed:
        notes.append(say("not handed in"))
    if step.stack is None:
        notes.append(say("cannot be made"))
    return ", ".join(notes)


def _fall(one: Board, say: Say) -> FallView | None:
    """While a round's last lift is on: the next round's first bar, so that the great change can be prepared."""
    steps = coming(one)
    if one.up is None or not steps or steps[0].turn.attempt.number == one.up.attempt.number:
        return None
    try:
        change = change_view(one, steps[0])
    except WrongLoad:
        log.exception("the bar after this lift failed its re-sum on platform %s", one.now.platform)
        return None
    turn = steps[0].turn
    if change is None:
        return None
    return FallView(show_mass(turn.weight), turn.lifter.name, _note(one.up, steps[0], say), change)


def _keep_out(one: Board) -> tuple[str, ...]:
    hand = one.now.bar.hand
    return () if hand is None or hand.before is None else keep_out(one.steps)


def keep_out(steps: Sequence[Step]) -> tuple[str, ...]:
    """Faces that come off in the first step and are wanted again within two lifts."""
    if not steps or steps[0].hands is None:
        return ()
    off = set(steps[0].hands.off)
    wanted = {face for step in steps[1 : 1 + WANTED_WITHIN] if step.hands for face in step.hands.on}
    return tuple(show_mass(face) for face in sorted(off & wanted, reverse=True))


def _bar_now(one: Board, state: CrewState) -> str:
    hand = one.now.bar.hand
    if state == "changed" and hand is not None:
        return stack_words(hand.before)
    return stack_words(one.now.bar.carries) if state in ("waiting", "hold", "finished") else ""

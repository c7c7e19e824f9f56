"""The crew's screen as words and drawings, from the board. Nothing is shown that does not re-sum."""

from __future__ import annotations

import logging
from itertools import islice

from app.desk.bar import instruction_name
from app.desk.board import Board, Step
from app.loading.mass import show_mass
from app.loading.stack import WrongLoad
from app.meet.model import attempt_name
from app.meet.order import Turn
from app.meet.platform import Condition
from app.store.picture import Picture
from app.web.views import ChangeView, CrewState, CrewView, RackView, ThenView, UpView
from app.web.words import clock_words, end_view, plate_views, side_words, stack_words, where_words

THEN = 3
WANTED_WITHIN = 2
NO_FLIGHT = "The table has not brought a flight to this platform yet."
SHOWS_HAND = ("changing", "unknown", "lifting", "changed")

log = logging.getLogger("platewright.wrong_load")


def bare_crew_view(now: Picture) -> CrewView:
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
        message=NO_FLIGHT,
    )


def crew_view(one: Board) -> CrewView:
    """The one screen the crew reads."""
    state, message = _state(one)
    change = None
    if state in SHOWS_HAND and one.now.bar.hand is not None:
        try:
            change = _change_in_hand(one)
        except WrongLoad as wrong:
            # The promise of the house: rather no load than a wrong one. (Where the crew is only asked what is
            # on the bar, nothing is to be loaded: a plate of the old change may well have been taken away.)
            if state != "changed":
                log.exception("a stack failed its re-sum on platform %s", one.now.platform)
                state, message = (
                    "hold",
                    f"The load could not be verified: {wrong} Load by the chart and tell the table.",
                )
    return CrewView(
        platform_id=one.now.platform_id,
        platform=one.now.platform,
        unit=one.now.unit,
        revision=one.now.revision,
        as_of=clock_words(one.now.changed_at),
        state=state,
        up=_up(one, state),
        change=change,
        rack=() if state == "changed" else _rack(one),
        then=_then(one),
        keep_out=_keep_out(one) if state == "changing" else (),
        message=message,
        shown=instruction_name(one.now.bar),
        new_weight=show_mass(one.up.weight) if state == "changed" and one.up else "",
        bar_now=_bar_now(one, state),
    )


def _state(one: Board) -> tuple[CrewState, str]:
    """What fills the screen, and the one sentence it may need."""
    bar = one.now.bar
    if not one.here:
        return "idle", NO_FLIGHT
    if bar.condition is Condition.HOLD:
        return "hold", "Nothing moves until the table says so."
    if one.ask:
        return "changed", _why_asked(one)
    if bar.hand is None:
        return _resting(one)
    if bar.condition is Condition.LIFTING:
        return "lifting", ""
    if bar.hand.before is None:
        return "unknown", "Nobody knows what is on the bar. Strip it, then build this from empty."
    return "changing", ""


def _resting(one: Board) -> tuple[CrewState, str]:
    """No change is out: nobody is left, or the next weight is not there to be loaded."""
    if one.up is None:
        return "finished", _finished(one)
    weight = show_mass(one.up.weight)
    if one.up.assumed:
        name, unit = one.up.lifter.name, one.now.unit
        return "waiting", f"{name} has not handed in a weight. By the rule it will be {weight} {unit}."
    return "waiting", f"{weight} cannot be made with the plates here. The table has been told."


def _finished(one: Board) -> str:
    if one.no_opener:
        return f"{len(one.no_opener)} lifters of this flight have no opener. The table is asked for them."
    return f"{one.flight.name} has finished this lift. The table brings the next flight."


def _why_asked(one: Board) -> str:
    if one.up is None:
        return "Nobody is left to lift in this round."
    hand = one.now.bar.hand
    if hand is not None and hand.attempt_id == one.up.attempt.id and hand.weight == one.up.weight:
        return "A plate of this change is no longer at the platform."
    return ""


def _shown_turn(one: Board) -> Turn | None:
    """The turn that the instruction out was for, at the weight it was shown with."""
    hand = one.now.bar.hand
    if hand is None:
        return one.up
    attempt = next((a for a in one.programme.attempts if a.id == hand.attempt_id), None)
    lifter = next((x for x in one.programme.lifters if attempt and x.id == attempt.lifter_id), None)
    return Turn(attempt, lifter, hand.weight, assumed=False) if attempt and lifter else one.up


def _up(one: Board, state: CrewState) -> UpView | None:
    turn = _shown_turn(one) if state in SHOWS_HAND else one.up
    if turn is None:
        return None
    return UpView(
        lifter=turn.lifter.name,
        lot=str(turn.lifter.lot),
        attempt=attempt_name(one.lift.name, turn.attempt.number),
        flight=f"{one.flight.name}, {one.lift.name}, round {turn.attempt.number}",
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


def _rack(one: Board) -> tuple[RackView, ...]:
    """The rack only where it differs from the lifter before."""
    turn = _shown_turn(one)
    if turn is None:
        return ()
    new = one.now.racks.get((turn.lifter.id, one.lift.id), "")
    old = one.now.racks.get((_before_id(one, turn), one.lift.id), "")
    name = "Rack" if one.tool.kind == "bar" else "Chain"
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


def _coming(one: Board) -> list[Step]:
    """The steps after the one on the screen."""
    return [step for step in one.steps if one.up is None or step.turn.attempt.id != one.up.attempt.id]


def _then(one: Board) -> tuple[ThenView, ...]:
    lines = []
    before = one.up
    for step in islice(_coming(one), THEN):
        lines.append(ThenView(show_mass(step.turn.weight), step.turn.lifter.name, _note(before, step)))
        before = step.turn
    return tuple(lines)


def _note(before: Turn | None, step: Step) -> str:
    turn = step.turn
    notes = []
    if before is not None and turn.attempt.number != before.attempt.number:
        notes.append(f"round {turn.attempt.number}")
    elif before is not None and turn.weight == before.weight:
        notes.append("same weight")
    if turn.assumed:
        notes.append("not handed in")
    if step.stack is None:
        notes.append("cannot be made")
    return ", ".join(notes)


def _keep_out(one: Board) -> tuple[str, ...]:
    """Faces that come off now and are wanted again within two lifts."""
    hand = one.now.bar.hand
    if hand is None or not one.steps or one.steps[0].hands is None or hand.before is None:
        return ()
    off = set(one.steps[0].hands.off)
    wanted = {face for step in one.steps[1 : 1 + WANTED_WITHIN] if step.hands for face in step.hands.on}
    return tuple(show_mass(face) for face in sorted(off & wanted, reverse=True))


def _bar_now(one: Board, state: CrewState) -> str:
    hand = one.now.bar.hand
    if state == "changed" and hand is not None:
        return stack_words(hand.before)
    return stack_words(one.now.bar.carries) if state in ("waiting", "hold", "finished") else ""

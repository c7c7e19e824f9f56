"""What the pages read, and when the crew gets its next change."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from fractions import Fraction
from itertools import pairwise

import pytest
from sqlalchemy import Engine, event

from app.desk.bar import bar_carries
from app.desk.board import Bare, Board, Step, board, handled, handled_by_chart, lifted_last
from app.desk.equipment import save_plates, stock_seen
from app.desk.roster import import_roster
from app.loading.change import HandList
from app.loading.equipment import Access
from app.loading.stack import check_stack
from app.meet.model import Result
from app.meet.platform import Condition, Hand
from app.store.engine import reading
from app.store.picture import NotFound, picture
from tests.cast import (
    ADA,
    BO,
    CLEO,
    DEADLIFT,
    DOV,
    FLIGHT_A,
    FLIGHT_B,
    LUC,
    OLGA,
    SQUAT,
    Hall,
    bare_meet,
    kg,
    stack,
)
from tests.desk.checks import check_board
from tests.desk.forms import plate_rows
from tests.meet.nouns import turn


def hand_of(hall: Hall) -> Hand:
    hand = hall.picture().bar.hand
    assert hand is not None
    return hand


# When a change goes out


def test_the_change_in_hand_stays_whatever_the_others_declare(hall: Hall) -> None:
    bar = hall.picture().bar
    for name, number, weight in ((BO, 1, "105"), (CLEO, 1, "120"), (ADA, 2, "130"), (DOV, 1, "152.5")):
        hall.declare(name, number, weight)
        assert hall.picture().bar == bar
        check_board(hall.board())
    assert hall.board().ask is False


def test_somebody_lighter_makes_the_crew_say_first_what_is_on_the_bar(hall: Hall) -> None:
    bar = hall.picture().bar
    hall.declare(BO, 1, "90")
    assert (hall.picture().bar, hall.board().ask) == (bar, True)
    up = hall.board().up
    assert up is not None
    assert (up.lifter.name, up.weight) == (BO, kg(90))
    assert hall.board().steps[0].before == ()


def test_a_weight_changed_and_changed_back_leaves_the_crew_in_peace(hall: Hall) -> None:
    bar = hall.picture().bar
    hall.declare(ADA, 1, "105")
    hall.declare(ADA, 1, "100", reason="the coach has thought again")
    assert (hall.picture().bar, hall.board().ask) == (bar, False)


def test_a_default_is_planned_and_not_sent_to_the_crew(hall: Hall) -> None:
    """One step more after a good lift stands in (IPL Rulebook 2019, 6.1.1), but the lifter may still choose."""
    for name in (ADA, BO, CLEO):
        hall.lift(name, 1)
    one = hall.board()
    assert one.now.bar.hand is None
    assert [(step.turn.lifter.name, step.turn.assumed, step.stack is None) for step in one.steps[:3]] == [
        (ADA, True, False),
        (BO, True, False),
        (CLEO, True, False),
    ]
    check_board(one)
    hall.declare(BO, 2, "112.5")
    assert hall.picture().bar.hand is None
    hall.declare(ADA, 2, "102.5")
    assert (hand_of(hall).attempt_id, hand_of(hall).weight) == (hall.attempt(ADA, 2).id, kg("102.5"))


def test_a_default_that_no_plates_make_does_not_stop_the_plan_of_the_others(hall: Hall) -> None:
    now = hall.picture()
    pairs = [row for row in plate_rows(now) if row["face"] in ("25", "20", "10", "5")]  # steps of 10 kg
    save_plates(hall.desk, hall.platform_id, pairs, stock_seen(now.stock, now.tools), who=OLGA)
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    loads = {(step.turn.lifter.name, step.turn.attempt.number): step.stack for step in hall.board().steps}
    assert {place for place, load in loads.items() if load is None} == {
        (name, number) for name in (ADA, BO, CLEO) for number in (1, 2)
    }
    assert loads[(ADA, 3)] == stack(25, 10, 5)  # 105
    assert hall.picture().bar.hand is None
    hall.declare(ADA, 1, "95")
    assert hand_of(hall).stack == stack(25, 10)
    check_board(hall.board())


def test_after_a_pass_of_the_last_lifter_nobody_is_up_and_the_crew_is_asked_nothing_new(hall: Hall) -> None:
    for number in (1, 2, 3):
        for name in (ADA, BO, CLEO):
            hall.judge(name, number, Result.PASSED)
    one = hall.board()
    assert (one.order, one.steps, one.up, one.ask) == ((), (), None, True)
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    assert hall.picture().bar.condition is Condition.IDLE
    assert hall.board().ask is False


# Looking at a flight


def test_each_step_begins_with_the_stack_of_the_one_before_it(hall: Hall) -> None:
    steps = hall.board().steps
    assert len(steps) == 9
    assert steps[0].before == ()
    for before, after in pairwise(steps):
        assert after.before == before.stack
    check_board(hall.board())


def test_a_flight_that_is_not_on_is_planned_from_an_empty_bar(hall: Hall) -> None:
    one = board(hall.desk, hall.platform_id, hall.flight_id(FLIGHT_B), hall.lift_id(DEADLIFT))
    assert isinstance(one, Board)
    assert (one.here, one.up, one.ask) == (False, None, False)
    assert [(step.turn.lifter.name, step.turn.weight) for step in one.steps[:2]] == [
        (DOV, kg(180)),
        ("Etta Frost", kg(190)),
    ]
    assert one.steps[0].before == ()
    check_board(one)


@pytest.mark.parametrize("asked", [(99, 99), (None, None), (1, 99)], ids=["neither", "nothing", "half"])
def test_what_is_not_there_is_answered_with_what_is_lifting(hall: Hall, asked) -> None:
    one = board(hall.desk, hall.platform_id, *asked)
    assert isinstance(one, Board)
    assert (one.flight.name, one.lift.name, one.here) == (FLIGHT_A, SQUAT, True)


def test_a_platform_without_lifters_is_bare_and_one_with_a_roster_shows_its_first_flight(desk) -> None:
    hall = bare_meet(desk)
    assert board(desk, hall.platform_id) == Bare(hall.picture())
    import_roster(desk, hall.meet_id, "name,lot,flight\nFay Green,6,Flight D\n", who=OLGA)
    one = hall.board()
    assert (one.flight.name, one.lift.name, one.here, one.steps) == ("Flight D", SQUAT, False, ())
    assert [lifter.name for lifter in one.no_opener] == ["Fay Green"]


def test_a_platform_that_is_not_there_is_told_in_words(hall: Hall) -> None:
    with pytest.raises(NotFound) as told:
        board(hall.desk, 99)
    assert (
        str(told.value)
        == "There is no such platform here. It may have been taken away; go back and choose again."
    )


def test_the_one_who_lifted_last_is_the_one_who_hands_in_next(hall: Hall) -> None:
    assert lifted_last(hall.board()) is None
    hall.lift(ADA, 1)
    assert lifted_last(hall.board()) == hall.attempt(ADA, 1).id
    hall.lift(BO, 1, Result.MISSED)
    assert lifted_last(hall.board()) == hall.attempt(BO, 1).id


# Across the round's end


def test_the_plan_knows_what_the_next_flight_opens_with(hall: Hall) -> None:
    """Bo's last lift, then Flight B opens with the same weight: what is left on the bar serves both."""
    for name, number in ((ADA, 1), (CLEO, 1), (ADA, 2), (CLEO, 2), (ADA, 3), (CLEO, 3), (BO, 1), (BO, 2)):
        hall.judge(name, number, Result.PASSED)
    hall.declare(BO, 3, "150")
    hall.declare("Etta Frost", 1, "150", reason="the jury allows it")
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    last = hand_of(hall).stack
    plan = hall.picture().plan
    assert plan is not None
    opening = [step for step in plan["steps"] if step["weight"] == "150"]
    assert [[Fraction(face) for face in step["stack"]] for step in opening] == [list(last)] * 2


# What it costs

HANDS = [
    ((), stack(25, 10), HandList((), (), stack(25, 10), (0, 1))),
    (stack(25, 10), stack(25, 15), HandList(stack(10), (1,), stack(15), (1,))),
    (None, stack(25), HandList((), (), stack(25), (0,))),
]


@pytest.mark.parametrize(
    ("before", "after", "hands"), HANDS, ids=["from empty", "one for another", "unknown"]
)
def test_a_step_tells_what_comes_off_and_goes_on(before, after, hands: HandList) -> None:
    assert Step(turn(1, 1, 100), before, after, Access.OUTER_END).hands == hands


def test_a_step_that_cannot_be_made_has_no_hands() -> None:
    assert Step(turn(1, 1, 100), (), None, Access.OUTER_END).hands is None


def test_the_work_of_a_plan_is_counted_from_its_hands_and_beside_it_the_charts(hall: Hall) -> None:
    one = hall.board()
    plates, mass = 0, Fraction(0)
    for step in one.steps:
        assert step.stack is not None
        shared = 0
        for old, new in zip(step.before or (), step.stack, strict=False):
            if old != new:
                break
            shared += 1
        touched = (step.before or ())[shared:] + step.stack[shared:]
        plates, mass = plates + len(touched), mass + sum(touched, Fraction(0))
    assert (handled(one.steps).plates, handled(one.steps).mass) == (plates, mass)
    chart = handled_by_chart(one.steps, one.equipment)
    assert chart is not None
    assert chart.plates >= plates


# How often the database is asked


@contextmanager
def queries(engine: Engine) -> Iterator[list[str]]:
    """The statements that are sent to the database in this block."""
    seen: list[str] = []

    def note(_connection: object, _cursor: object, statement: str, *_rest: object) -> None:
        if not statement.startswith("BEGIN"):
            seen.append(statement)

    event.listen(engine, "before_cursor_execute", note)
    try:
        yield seen
    finally:
        event.remove(engine, "before_cursor_execute", note)


def test_a_platform_is_read_with_the_same_few_queries_for_three_lifters_and_for_thirty(hall: Hall) -> None:
    def asked() -> tuple[list[str], list[str]]:
        with queries(hall.desk.engine) as for_picture, reading(hall.desk.engine) as session:
            picture(session, hall.platform_id)
        with queries(hall.desk.engine) as for_board:
            hall.board()
        return for_picture, for_board

    few = asked()
    lines = [f"Lifter {lot},{lot},Flight {'AB'[lot % 2]},{100 + lot % 8 * 5}" for lot in range(10, 37)]
    import_roster(hall.desk, hall.meet_id, "\n".join(["name,lot,flight,Squat opener", *lines]), who=OLGA)
    assert len(hall.board().order) > 30
    assert asked() == few
    assert len(few[0]) <= 12
    for step in hall.board().steps:
        assert step.stack is not None
        check_stack(hall.board().equipment, step.stack, step.turn.weight)

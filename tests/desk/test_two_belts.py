"""Two belts in circulation: the next load is made up while the present lifter lifts, from the plates that are left."""

from __future__ import annotations

from collections import Counter
from fractions import Fraction

import pytest

from app.desk.bar import bar_carries
from app.desk.equipment import save_plates, save_tools, stock_seen
from app.desk.people import withdraw
from app.loading.stack import check_stack
from app.meet.model import Result
from app.meet.platform import Condition
from app.web.crew_view import crew_view
from tests.cast import LUC, OLGA, WANDA, Hall, stack
from tests.desk.forms import plate_rows, tool_rows


@pytest.fixture
def two(belt: Hall) -> Hall:
    """The belt platform with a second belt."""
    now = belt.picture()
    rows = [row | {"pieces": "2"} for row in tool_rows(now)]
    save_tools(belt.desk, belt.platform_id, rows, stock_seen(now.stock, now.tools), who=OLGA)
    return belt


def names(hall: Hall) -> list[str]:
    """Who lifts, in order."""
    return [turn.lifter.name for turn in hall.board().order]


def judge_up(hall: Hall, result: Result = Result.GOOD) -> None:
    """Whoever is up is judged."""
    up = hall.board().up
    assert up is not None
    lift = hall.board().lift.name
    hall.judge(up.lifter.name, up.attempt.number, result, lift)


def declare_second(hall: Hall) -> None:
    """The lifter who is up hands in the second attempt already."""
    up = hall.board().up
    assert up is not None
    hall.declare(up.lifter.name, 2, "5", hall.board().lift.name)


def test_while_a_lifter_has_one_belt_the_crew_makes_up_the_other(two: Hall) -> None:
    two.load()
    bar, order = two.picture().bar, two.board().order
    assert bar.hand is not None
    assert bar.ahead is not None
    assert (bar.ahead.attempt_id, bar.ahead.weight, bar.ahead.before) == (
        order[1].attempt.id,
        order[1].weight,
        (),
    )
    check_stack(two.board().equipment, bar.ahead.stack, order[1].weight, two.board().wish.order)
    have = {plate.face: plate.count for plate in two.board().equipment.plates}
    both = Counter(bar.hand.stack + bar.ahead.stack)
    assert all(pieces <= have[face] for face, pieces in both.items())
    other = crew_view(two.board()).other
    assert other is not None
    assert [Fraction(plate.face) for plate in other.change.on] == list(bar.ahead.stack)


def test_the_result_hands_the_instruction_on_as_it_was(two: Hall) -> None:
    two.load()
    before = two.picture().bar
    assert before.hand is not None
    judge_up(two)
    after = two.picture().bar
    assert (after.condition, after.hand, after.spare, after.ahead) == (
        Condition.CHANGING,
        before.ahead,
        before.hand.stack,
        None,
    )


def test_the_belt_that_comes_back_is_made_up_next_but_one(two: Hall) -> None:
    two.load()
    first = two.picture().bar.hand
    assert first is not None
    declare_second(two)
    judge_up(two)
    two.load()
    ahead = two.picture().bar.ahead
    assert ahead is not None
    assert ahead.before == first.stack


def test_a_changed_order_is_told_at_once_and_asked_about_when_the_lift_has_ended(two: Hall) -> None:
    two.load()
    declare_second(two)
    second = two.board().order[1].lifter
    withdraw(two.desk, two.platform_id, second.id, back=False, who=WANDA)
    other = crew_view(two.board()).other
    assert other is not None
    assert other.warning == "Stop: the next weight has changed. Wait for this lift to end."
    judge_up(two)
    assert two.board().ask
    bar_carries(two.desk, two.platform_id, "before", who=LUC)
    hand, up = two.picture().bar.hand, two.board().up
    assert hand is not None
    assert up is not None
    assert hand.attempt_id == up.attempt.id


def test_plates_that_hang_on_the_lifter_are_not_used_twice(two: Hall) -> None:
    """One plate of each: what the first lifter has, the second belt cannot have."""
    now = two.picture()
    rows = [row | {"count": "1"} for row in plate_rows(now)]
    save_plates(two.desk, two.platform_id, rows, stock_seen(now.stock, now.tools), who=OLGA)
    if two.board().ask:
        bar_carries(two.desk, two.platform_id, "empty", who=LUC)
    two.load()
    bar = two.picture().bar
    assert bar.hand is not None
    assert bar.ahead is None or not set(bar.hand.stack) & set(bar.ahead.stack)


def test_one_belt_is_never_made_up_ahead(belt: Hall) -> None:
    belt.load()
    assert belt.picture().bar.ahead is None
    assert belt.picture().bar.spare == ()


def test_every_step_of_the_board_starts_from_the_belt_that_it_takes(two: Hall) -> None:
    two.load()
    steps = two.board().steps
    on = [step.stack for step in steps]
    assert [step.before for step in steps[2:]] == on[: len(steps) - 2]
    assert steps[1].before == stack()
    assert sum((Fraction(0) if one is None else Fraction(1) for one in on), Fraction(0)) == len(on)

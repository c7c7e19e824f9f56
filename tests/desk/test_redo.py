"""Redo: what undo took back is entered again, any depth, until somebody enters something new."""

from __future__ import annotations

import pytest

from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.people import withdraw
from app.desk.undo import redo, undo
from app.meet.model import Result
from tests.cast import ADA, BO, CLEO, OTTO, WANDA, Hall
from tests.desk.checks import check_board, refused, replayed, rows
from tests.desk.test_undo import ENTRIES, entered


def back(hall: Hall) -> str:
    offered = hall.board().undo
    return undo(hall.desk, hall.platform_id, offered.id if offered else None, who=WANDA)


def again(hall: Hall) -> str:
    offered = hall.board().redo
    return redo(hall.desk, hall.platform_id, offered.id if offered else None, who=WANDA)


@pytest.mark.parametrize("entry", ENTRIES.values(), ids=list(ENTRIES))
def test_every_kind_of_entry_is_entered_again_whole_and_no_plate_moves(hall: Hall, entry) -> None:
    entry(hall)
    what, after, bar = hall.journal()[-1].what, entered(hall), hall.picture().bar
    back(hall)
    assert again(hall) == f"Entered again: {what}."
    assert entered(hall) == after
    assert hall.picture().bar == bar
    check_board(hall.board())
    assert replayed(hall.journal()) == rows(hall.desk.engine)


def test_undo_and_redo_reach_any_depth(hall: Hall) -> None:
    states = [entered(hall)]
    for name, number, weight in (
        (BO, 2, "115"),
        (BO, 3, "120"),
        (CLEO, 2, "112.5"),
        (CLEO, 3, "117.5"),
        (ADA, 2, "105"),
    ):
        hall.declare(name, number, weight)
        states.append(entered(hall))
    withdraw(hall.desk, hall.platform_id, hall.lifter(CLEO).id, back=False, who=WANDA)
    states.append(entered(hall))
    for state in reversed(states[:-1]):
        back(hall)
        assert entered(hall) == state
    for state in states[1:]:
        again(hall)
        assert entered(hall) == state
    for state in reversed(states[:-1]):
        back(hall)
        assert entered(hall) == state
    assert replayed(hall.journal()) == rows(hall.desk.engine)


def test_redo_is_gone_after_a_new_entry(hall: Hall) -> None:
    hall.declare(BO, 2, "115")
    back(hall)
    assert hall.board().redo is not None
    hall.declare(CLEO, 2, "115")
    assert hall.board().redo is None
    with refused(hall, NotAllowedNow, "There is nothing to redo."):
        again(hall)


def test_there_is_nothing_to_redo_before_anything_was_taken_back(hall: Hall) -> None:
    with refused(hall, NotAllowedNow, "There is nothing to redo."):
        again(hall)


def test_what_the_crew_says_meanwhile_does_not_take_redo_away(hall: Hall) -> None:
    hall.declare(BO, 2, "115")
    back(hall)
    hall.load()
    assert again(hall) == "Entered again: Bo Carver: Squat, 2nd declared at 115."


def test_redo_of_a_result_gives_the_next_change_as_it_was(hall: Hall) -> None:
    hall.load()
    hall.judge(ADA, 1, Result.GOOD)
    bar = hall.picture().bar
    back(hall)
    assert hall.board().ask is True  # the crew holds Bo's change and Ada is up again
    again(hall)
    assert hall.picture().bar == bar
    assert hall.board().ask is False


def test_redo_under_a_loaded_bar_is_refused(hall: Hall) -> None:
    hall.declare(ADA, 1, "105")
    back(hall)  # 100 again, and that is what the crew was shown
    hall.load()
    told = (
        "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake."
    )
    with refused(hall, NotAllowedNow, told):
        again(hall)


def test_the_redo_that_was_seen_is_done_and_no_other(hall: Hall) -> None:
    hall.declare(BO, 2, "115")
    hall.declare(BO, 3, "120")
    back(hall)
    seen = hall.board().redo
    assert seen is not None
    undo(hall.desk, hall.platform_id, None, who=OTTO)
    with pytest.raises(SomebodyWasFirst, match="Look before you redo"):
        redo(hall.desk, hall.platform_id, seen.id, who=WANDA)


def test_words_are_not_piled_up_by_going_back_and_forth(hall: Hall) -> None:
    hall.declare(BO, 2, "115")
    for _ in range(3):
        assert back(hall) == "Undone: Bo Carver: Squat, 2nd declared at 115."
        assert again(hall) == "Entered again: Bo Carver: Squat, 2nd declared at 115."


def test_redo_on_one_platform_leaves_the_other_alone(halls: tuple[Hall, Hall]) -> None:
    hall, other = halls
    hall.declare(BO, 2, "115")
    back(hall)
    before = other.picture()
    assert other.board().redo is None
    again(hall)
    assert other.picture() == before

"""Two people, or eight, at the same moment: nothing is lost, nothing is silently overwritten."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import ThreadPoolExecutor
from threading import Barrier

from app.desk import attempts
from app.desk.bar import bar_is_loaded, instruction_name
from app.desk.errors import DeskError, NotAllowedNow, SomebodyWasFirst
from app.desk.roster import import_roster
from app.desk.undo import undo
from app.meet.model import Result
from tests.cast import ADA, BO, CLEO, DOV, ETTA, LUC, OLGA, OTTO, WANDA, Hall, kg
from tests.desk.checks import check_board, replayed, rows


def all_at_once(doing: Sequence[Callable[[], object]]) -> list[object]:
    """Starts all of them together; what each returned, or the error that it met."""
    start = Barrier(len(doing))

    def one(what: Callable[[], object]) -> object:
        start.wait()
        try:
            return what()
        except DeskError as refused:
            return refused

    with ThreadPoolExecutor(len(doing)) as pool:
        return list(pool.map(one, doing))


def test_eight_entries_at_once_are_all_entered(hall: Hall) -> None:
    wanted = [(BO, 2), (BO, 3), (CLEO, 2), (CLEO, 3), (ADA, 2), (ADA, 3), (DOV, 2), (ETTA, 2)]
    seen = [hall.seen(name, number) for name, number in wanted]
    before, revision = len(hall.journal()), hall.picture().revision
    weights = [kg(200 + 5 * place) for place in range(8)]
    all_at_once(
        [
            lambda one=one, weight=weight: attempts.declare(hall.desk, 1, one, str(weight), who=WANDA)
            for one, weight in zip(seen, weights, strict=True)
        ]
    )
    assert [hall.attempt(name, number).weight for name, number in wanted] == weights
    assert (len(hall.journal()), hall.picture().revision) == (before + 8, revision + 8)
    assert [row.revision for row in hall.journal()[-8:]] == list(range(revision + 1, revision + 9))
    assert replayed(hall.journal()) == rows(hall.desk.engine)
    check_board(hall.board())


def test_of_two_who_enter_the_same_attempt_one_wins_and_the_other_is_told(hall: Hall) -> None:
    seen = hall.seen(BO, 2)
    answers = all_at_once(
        [
            lambda: attempts.declare(hall.desk, 1, seen, "120", who=WANDA),
            lambda: attempts.declare(hall.desk, 1, seen, "125", who=OTTO),
        ]
    )
    after = hall.attempt(BO, 2)
    winner, loser, weight = (0, 1, 120) if after.entered_by == WANDA else (1, 0, 125)
    assert (after.weight, after.version) == (weight, seen.version + 1)
    assert answers[winner] == f"Bo Carver: Squat, 2nd declared at {weight}."
    assert isinstance(answers[loser], SomebodyWasFirst)
    assert str(answers[loser]) == (
        f"Bo Carver: Squat, 2nd was changed by {after.entered_by} while you were typing: it is now not lifted at "
        f"{weight}. Nothing of yours was entered. Look, and enter again."
    )


def test_of_two_results_for_one_lift_one_is_entered(hall: Hall) -> None:
    hall.load()
    seen = hall.seen(ADA, 1)
    answers = all_at_once(
        [
            lambda: attempts.judge(hall.desk, 1, seen, Result.GOOD, who=WANDA),
            lambda: attempts.judge(hall.desk, 1, seen, Result.MISSED, who=OTTO),
        ]
    )
    assert [type(one) for one in answers].count(SomebodyWasFirst) == 1
    assert hall.attempt(ADA, 1).version == seen.version + 1


def test_two_loaders_who_tap_loaded_at_once_load_the_bar_once(hall: Hall) -> None:
    shown, before = instruction_name(hall.picture().bar), len(hall.journal())
    answers = all_at_once([lambda: bar_is_loaded(hall.desk, 1, shown, who=LUC)] * 2)
    assert sorted(type(one) for one in answers if one is not None) == [NotAllowedNow]
    assert len(hall.journal()) == before + 1


def test_two_who_undo_what_they_both_see_take_back_one_entry(hall: Hall) -> None:
    hall.declare(BO, 2, "120")
    hall.declare(BO, 3, "130")
    seen = hall.board().undo
    assert seen is not None
    answers = all_at_once([lambda: undo(hall.desk, 1, seen.id, who=WANDA)] * 2)
    assert [type(one) for one in answers].count(SomebodyWasFirst) == 1
    assert (hall.attempt(BO, 2).weight, hall.attempt(BO, 3).weight) == (120, None)


def test_two_rosters_at_once_bring_everybody_in_and_each_lot_once(hall: Hall) -> None:
    def bring(names: Sequence[str]) -> Callable[[], object]:
        lines = [f"{name},{lot},Flight C,100" for lot, name in enumerate(names, start=20)]
        text = "\n".join(["name,lot,flight,Squat opener", *lines])
        return lambda: import_roster(hall.desk, 1, text, who=OLGA)

    first, second = ["Fay Green", "Gil Hart"], ["Ina Joss", "Kai Lorne"]
    answers = all_at_once([bring(first), bring(second)])
    assert len([one for one in answers if isinstance(one, DeskError)]) == 1
    programme = hall.picture().sessions[0][2]
    came = [one.name for one in programme.of_flight(hall.flight_id("Flight C"))]
    assert came in (first, second)
    assert replayed(hall.journal()) == rows(hall.desk.engine)

"""A round that was run on cards while the screens were away comes back at one go, or not at all."""

from __future__ import annotations

import pytest

from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.from_paper import PaperLine, bring_back
from app.desk.undo import undo
from app.meet.model import Result
from tests.cast import ADA, BO, CLEO, WANDA, Hall, kg
from tests.desk.checks import check_board


def lines(hall: Hall, *written: tuple[str, str, str]) -> list[PaperLine]:
    """Lines of the first round: who, weight, result."""
    return [PaperLine(hall.seen(name, 1), weight, result) for name, weight, result in written]


ROUND = ((ADA, "102,5", "good"), (BO, "110", "missed"), (CLEO, "", "passed"))


def test_a_round_from_paper_is_taken_in_as_written_and_the_bar_is_then_unknown(hall: Hall) -> None:
    said = bring_back(hall.desk, hall.platform_id, lines(hall, *ROUND), who=WANDA)
    assert said == "Brought back from paper: 3 attempts. The next change is a full build from empty."
    done = [(hall.attempt(name, 1).weight, hall.attempt(name, 1).result) for name in (ADA, BO, CLEO)]
    assert done == [(kg("102.5"), Result.GOOD), (kg(110), Result.MISSED), (kg(110), Result.PASSED)]
    assert hall.picture().bar.carries is None
    hall.declare(ADA, 2, "105")
    hand = hall.picture().bar.hand
    assert hand is not None
    assert hand.before is None
    check_board(hall.board())


def test_one_wrong_line_stops_the_whole_and_every_wrong_line_is_named(hall: Hall) -> None:
    before = hall.picture()
    written = ((ADA, "101", "good"), (BO, "a lot", "good"), (CLEO, "110", "splendid"))
    with pytest.raises(NotAllowedNow) as refused:
        bring_back(hall.desk, hall.platform_id, lines(hall, *written), who=WANDA)
    assert str(refused.value) == (
        "Bo Carver: Squat, 1st: “a lot” is not a weight. Type a number such as 142.5. "
        "Cleo Dahl: Squat, 1st: “splendid” is no result."
    )
    assert hall.picture() == before


def test_a_line_that_a_colleague_has_entered_meanwhile_is_told(hall: Hall) -> None:
    old = lines(hall, *ROUND)
    hall.lift(ADA, 1)
    with pytest.raises(SomebodyWasFirst, match="Ada Brook"):
        bring_back(hall.desk, hall.platform_id, old, who=WANDA)
    assert hall.attempt(BO, 1).result is Result.OPEN


def test_the_same_round_again_changes_nothing(hall: Hall) -> None:
    bring_back(hall.desk, hall.platform_id, lines(hall, *ROUND), who=WANDA)
    before = (hall.picture(), len(hall.journal()))
    said = bring_back(hall.desk, hall.platform_id, lines(hall, *ROUND), who=WANDA)
    assert said == "Nothing was typed that is not here already."
    assert (hall.picture(), len(hall.journal())) == before


def test_a_round_from_paper_can_be_undone(hall: Hall) -> None:
    bring_back(hall.desk, hall.platform_id, lines(hall, *ROUND), who=WANDA)
    undo(hall.desk, hall.platform_id, None, who=WANDA)
    assert [hall.attempt(name, 1).result for name in (ADA, BO, CLEO)] == [Result.OPEN] * 3

"""Will the plates do? The day before, a platform's stock against every weight that is likely to be asked for."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from app.desk.equipment import save_plates, stock_seen
from app.desk.planned import wish_of
from app.desk.plates_check import LiftCheck, check_platform, flights_openers, worth_borrowing
from app.desk.wish import plan_request
from app.meet.stock_check import Shortage
from app.planning import Budget, Measure, plan
from app.store.picture import NotFound
from tests.cast import BENCH, DEADLIFT, OLGA, SQUAT, Hall, bare_meet, kg
from tests.desk.checks import rows
from tests.desk.forms import plate_rows


def save(hall: Hall, **counts: str) -> None:
    """The plates as they are, with other counts: ``save(hall, f5="0")`` for the 5s, ``f1_25`` for the 1.25s."""
    wanted = {name.removeprefix("f").replace("_", "."): count for name, count in counts.items()}
    now = hall.picture()
    typed = [row | {"count": wanted.get(row["face"], row["count"])} for row in plate_rows(now)]
    save_plates(hall.desk, hall.platform_id, typed, stock_seen(now.stock, now.tools), who=OLGA)


def of(hall: Hall, lift: str) -> LiftCheck:
    """What is said of one lift."""
    found = check_platform(hall.desk, hall.platform_id)
    return next(one for one in found.lifts if one.lift.name == lift)


def handled(hall: Hall, lift: str) -> Fraction:
    """Kilograms that a plan of all openers for least kilograms handles, both ends."""
    now = hall.picture()
    lift_id = hall.lift_id(lift)
    flights = flights_openers(now.programme(lift_id), lift_id)
    targets = [weight for flight in flights for weight in sorted(flight)]
    request = plan_request(now.unit, now.equipment(lift_id), wish_of(now, lift_id), (), targets)
    return plan(replace(request, measure=Measure.MASS)).total.mass * 2


def test_the_span_runs_from_the_lightest_opener_to_the_heaviest_and_fifteen_per_cent(hall: Hall) -> None:
    check = of(hall, SQUAT).check
    assert check is not None
    assert (check.lightest, check.heaviest) == (100, kg("182.5"))  # 160 × 1.15 = 184
    assert check.missing == ()


def test_a_plate_that_is_short_is_named_with_how_many_pieces(hall: Hall) -> None:
    save(hall, f1_25="0")
    check = of(hall, SQUAT).check
    assert check is not None
    assert check.missing[:3] == (kg("102.5"), kg("107.5"), kg("112.5"))
    assert check.shortages[0] == Shortage(kg("1.25"), 2, len(check.missing))
    assert check.beyond == ()


def test_a_kind_that_the_meet_does_not_own_may_be_what_is_short(hall: Hall) -> None:
    now = hall.picture()
    typed = [row for row in plate_rows(now) if row["face"] != "1.25"]
    save_plates(hall.desk, hall.platform_id, typed, stock_seen(now.stock, now.tools), who=OLGA)
    check = of(hall, SQUAT).check
    assert check is not None
    assert check.shortages[0].face == kg("1.25")


def test_another_platform_that_has_the_plate_is_named(halls: tuple[Hall, Hall]) -> None:
    found = check_platform(halls[0].desk, halls[0].platform_id)
    assert found.elsewhere[kg("1.25")] == ((halls[1].platform_id, "Stage", 2),)


def test_without_openers_nothing_is_said_of_a_lift(desk) -> None:
    hall = bare_meet(desk)
    assert [(one.openers, one.check) for one in check_platform(desk, hall.platform_id).lifts] == [
        (0, None)
    ] * 3


@pytest.mark.parametrize("lift", [BENCH, DEADLIFT])
def test_the_pair_to_borrow_saves_what_it_is_said_to_save(hall: Hall, lift: str) -> None:
    """Checked by really putting the pair in the stock and planning the openers with it."""
    best = worth_borrowing(hall.desk, hall.platform_id, hall.lift_id(lift), Budget())
    assert best is not None
    before = handled(hall, lift)
    have = {item.plate.face: item.plate.count for item in hall.picture().stock}
    name = "f" + str(float(best.face)).removesuffix(".0").replace(".", "_")
    save(hall, **{name: str(have[best.face] + best.pieces)})
    assert (best.of, best.saves, best.pieces, best.proved) == (before, before - handled(hall, lift), 2, True)


def test_no_other_pair_of_the_stock_saves_more(hall: Hall) -> None:
    best = worth_borrowing(hall.desk, hall.platform_id, hall.lift_id(DEADLIFT), Budget())
    assert best is not None
    start = hall.picture().stock
    for item in start:
        name = "f" + str(float(item.plate.face)).removesuffix(".0").replace(".", "_")
        save(hall, **{name: str(item.plate.count + 2)})
        assert handled(hall, DEADLIFT) >= best.of - best.saves
        save(hall, **{name: str(item.plate.count)})


def test_looking_changes_nothing(hall: Hall) -> None:
    before, entries = rows(hall.desk.engine), len(hall.journal())
    check_platform(hall.desk, hall.platform_id)
    worth_borrowing(hall.desk, hall.platform_id, hall.lift_id(SQUAT), Budget())
    assert (rows(hall.desk.engine), len(hall.journal())) == (before, entries)


def test_a_lift_of_another_platform_is_not_found(hall: Hall) -> None:
    with pytest.raises(NotFound):
        worth_borrowing(hall.desk, hall.platform_id, 999, Budget())

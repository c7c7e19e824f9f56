"""Plates on the move: counted once for the whole meet, lent between platforms, taken out when broken."""

from __future__ import annotations

from fractions import Fraction

import pytest

from app.desk.bar import bar_carries
from app.desk.equipment import LiftWish, save_lifts, save_plates, save_tools, stock_seen
from app.desk.errors import NotAllowedNow, SomebodyWasFirst
from app.desk.roster import pictures
from app.desk.setup import add_platform
from app.desk.stock import in_use, lend, owned_seen, save_owned, take_out
from app.desk.undo import undo
from app.meet.model import Result
from app.meet.platform import Bar, Condition, Hand
from app.store.engine import reading
from app.store.picture import get
from app.store.tables import MeetRow
from tests.cast import ADA, BO, LUC, OLGA, OTTO, SQUAT, Hall, kg, stack
from tests.desk.checks import changes, check_board, differing, refused, rows
from tests.desk.forms import plate_rows, tool_rows

CURE = (
    " A plate is counted once: lend it from one platform to the other, "
    "or correct on the Meet page what the meet owns."
)


def stock_of(hall: Hall) -> dict[Fraction, int]:
    return {item.plate.face: item.plate.count for item in hall.picture().stock}


def seen(hall: Hall) -> str:
    now = hall.picture()
    return stock_seen(now.stock, now.tools)


def plates(hall: Hall, **counts: str) -> None:
    """Saves other counts: ``plates(hall, f25="14")``."""
    wanted = {name.removeprefix("f").replace("_", "."): count for name, count in counts.items()}
    typed = [row | {"count": wanted.get(row["face"], row["count"])} for row in plate_rows(hall.picture())]
    save_plates(hall.desk, hall.platform_id, typed, seen(hall), who=OLGA)


def owned_now(hall: Hall) -> dict[str, int] | None:
    with reading(hall.desk.engine) as session:
        return get(session, MeetRow, hall.meet_id, "meet").owned


def own(hall: Hall, who: str = OLGA, **counts: str) -> None:
    """The meet owns what stands at its platforms, with other counts for some faces."""
    with reading(hall.desk.engine) as session:
        now = owned_seen(get(session, MeetRow, hall.meet_id, "meet"))
    sums: dict[Fraction, int] = {}
    with reading(hall.desk.engine) as session:
        seen_now = pictures(session, hall.meet_id)
    for one in seen_now:
        for face, count in ((item.plate.face, item.plate.count) for item in one.stock):
            sums[face] = sums.get(face, 0) + count
    typed = {str(float(face)).removesuffix(".0"): str(count) for face, count in sums.items()}
    typed |= {name.removeprefix("f").replace("_", "."): count for name, count in counts.items()}
    save_owned(
        hall.desk,
        hall.meet_id,
        [{"face": face, "count": count} for face, count in typed.items()],
        now,
        who=who,
    )


def give(hall: Hall, to: Hall, face: str, pieces: str, who: str = OLGA) -> str:
    return lend(hall.desk, hall.platform_id, to.platform_id, face, pieces, seen(hall), who=who)


def use_bar(hall: Hall) -> None:
    """The squat is done with another bar, lighter by 5 kg, from now on."""
    (power,) = tool_rows(hall.picture())
    light = power | {"id": "", "name": "Light bar", "mass": "15"}
    save_tools(hall.desk, hall.platform_id, [power, light], seen(hall), who=OLGA)
    wish = LiftWish(hall.lift_id(SQUAT), str(hall.picture().tools[-1].id), "2.5", "1", "plates", "total")
    save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)


# What the meet owns


def test_until_the_meet_counts_its_plates_any_stock_is_taken(halls: tuple[Hall, Hall]) -> None:
    plates(halls[0], f25="200")
    assert stock_of(halls[0])[kg(25)] == 200


def test_a_plate_counted_in_two_stocks_is_refused_with_its_sum_and_where_it_stands(
    halls: tuple[Hall, Hall],
) -> None:
    own(halls[0])
    told = "25: 17 would stand at the platforms (Hall 13, Stage 4), and the meet owns 16."
    with refused(halls[0], NotAllowedNow, told + CURE):
        plates(halls[0], f25="13")


def test_a_face_that_the_meet_does_not_own_stands_nowhere(hall: Hall) -> None:
    told = "0.25: 2 would stand at the platforms (Hall 2), and the meet owns 0."
    with refused(hall, NotAllowedNow, told + CURE):
        own(hall, f0_25="")
    plates(hall, f0_25="0")
    own(hall, f0_25="")
    assert "0.25" not in (owned_now(hall) or {})
    with refused(hall, NotAllowedNow, told + CURE):
        plates(hall, f0_25="2")


def test_owning_less_than_stands_at_the_platforms_is_refused(halls: tuple[Hall, Hall]) -> None:
    told = "20: 4 would stand at the platforms (Hall 2, Stage 2), and the meet owns 3."
    with refused(halls[0], NotAllowedNow, told + CURE):
        own(halls[0], f20="3")
    assert owned_now(halls[0]) is None


def test_fewer_plates_at_a_platform_are_always_taken(halls: tuple[Hall, Hall]) -> None:
    own(halls[0])
    plates(halls[0], f25="10")
    assert stock_of(halls[0])[kg(25)] == 10


def test_an_undo_does_not_count_a_plate_twice_either(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    own(hall)
    plates(hall, f25="10")
    plates(stage, f25="6")
    told = "25: 18 would stand at the platforms (Hall 12, Stage 6), and the meet owns 16."
    with refused(hall, NotAllowedNow, told + CURE):
        undo(hall.desk, hall.platform_id, None, who=OTTO)


def test_another_platform_starts_with_the_plates_that_are_left(hall: Hall) -> None:
    own(hall, f25="16", f20="2")
    stage = Hall(hall.desk, hall.meet_id, add_platform(hall.desk, hall.meet_id, "Stage", "bar-kg", who=OLGA))
    assert {face: count for face, count in stock_of(stage).items() if count} == {kg(25): 4}


def test_counting_can_end_and_the_second_of_two_is_told(hall: Hall) -> None:
    own(hall)
    with refused(
        hall, SomebodyWasFirst, "Somebody changed the plates of the meet since. Look, and save again."
    ):
        save_owned(hall.desk, hall.meet_id, None, "-", who=OTTO)
    with reading(hall.desk.engine) as session:
        now = owned_seen(get(session, MeetRow, hall.meet_id, "meet"))
    save_owned(hall.desk, hall.meet_id, None, now, who=OTTO)
    assert owned_now(hall) is None
    assert hall.journal()[-1].what == "plates of the meet are not counted"


@pytest.mark.parametrize(
    ("typed", "told"),
    [
        ([], "Type how many of each plate the meet owns, or do not count them."),
        (
            [{"face": "25", "count": "2"}, {"face": "25,0", "count": "4"}],
            "Row 2: 25 stands twice. Add the counts together.",
        ),
        ([{"face": "25", "count": "some"}], "Row 1: count “some” is not a whole number from 0 to 200."),
    ],
    ids=["nothing", "twice", "no number"],
)
def test_wrong_counts_of_the_meet_are_said_by_row(hall: Hall, typed, told: str) -> None:
    with refused(hall, NotAllowedNow, told):
        save_owned(hall.desk, hall.meet_id, typed, "-", who=OLGA)


# Lent


def test_plates_are_lent_in_one_entry_and_both_platforms_are_told(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    own(hall)
    before, there = stock_of(hall), stock_of(stage)
    revisions = (hall.picture().revision, stage.picture().revision)
    entries = len(hall.journal())
    assert give(hall, stage, "25", "4") == "4 of the 25s lent from Hall to Stage."
    assert stock_of(hall) == before | {kg(25): before[kg(25)] - 4}
    assert stock_of(stage) == there | {kg(25): there[kg(25)] + 4}
    assert (hall.picture().revision, stage.picture().revision) == tuple(one + 1 for one in revisions)
    assert len(hall.journal()) == entries + 1
    last = hall.journal()[-1]
    assert (last.platform_id, last.revision) == (hall.platform_id, hall.picture().revision)
    check_board(hall.board())
    check_board(stage.board())


def test_a_kind_that_the_other_platform_never_had_comes_with_its_sizes(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    typed = [
        *plate_rows(hall.picture()),
        {"face": "50", "count": "4", "thickness": "50", "diameter": "450", "colour": "#2e7d32"},
    ]
    save_plates(hall.desk, hall.platform_id, typed, seen(hall), who=OLGA)
    give(hall, stage, "50", "2")
    item = stage.picture().stock[0]
    assert (item.plate.face, item.plate.count, item.plate.thickness_mm, item.colour) == (50, 2, 50, "#2e7d32")


def test_undoing_a_loan_brings_the_plates_home_and_tells_both(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    before = rows(hall.desk.engine)
    give(hall, stage, "25", "4")
    revision = stage.picture().revision
    undo(hall.desk, hall.platform_id, None, who=OTTO)
    assert differing(before, rows(hall.desk.engine)) == {}
    assert stage.picture().revision == revision + 1


def test_nobody_lends_more_than_there_are(halls: tuple[Hall, Hall]) -> None:
    with refused(halls[0], NotAllowedNow, "Hall has only 2 of the 20s."):
        give(*halls, "20", "4")


def test_what_the_shown_change_needs_stays(halls: tuple[Hall, Hall]) -> None:
    """100 kg on a bar of 25 is 37.5 a side, so at least one pair of 25s or 15s is in the crew's hands."""
    hall, stage = halls
    hand = hall.picture().bar.hand
    assert hand is not None
    face = max(hand.stack)
    have, needed = stock_of(hall)[face], 2 * hand.stack.count(face)
    name = str(float(face)).removesuffix(".0")
    told = (
        f"{needed} of the {have} {name}s at Hall are on the bar or in the change its crew was shown. "
        f"At most {have - needed} can be lent now."
    )
    with refused(hall, NotAllowedNow, told):
        give(hall, stage, name, str(have - needed + 1))
    give(hall, stage, name, str(have - needed))
    assert hall.board().ask is False
    check_board(hall.board())


def test_what_hangs_on_the_bar_stays_also_when_no_change_is_out(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    hall.lift(ADA, 1)
    for name in (BO, "Cleo Dahl"):
        hall.lift(name, 1)
    bar = hall.picture().bar
    assert bar.carries
    face = bar.carries[0]
    with pytest.raises(NotAllowedNow, match="on the bar"):
        give(hall, stage, str(float(face)).removesuffix(".0"), str(stock_of(hall)[face]))


def test_while_nobody_knows_what_is_on_the_bar_nothing_is_lent(hall: Hall) -> None:
    stage = Hall(hall.desk, hall.meet_id, add_platform(hall.desk, hall.meet_id, "Stage", "belt-kg", who=OLGA))
    hall.declare(ADA, 1, "102.5")
    hall.judge(ADA, 1, Result.PASSED)
    for name in (BO, "Cleo Dahl"):
        hall.judge(name, 1, Result.PASSED)
    bar_carries(hall.desk, hall.platform_id, "unknown", who=LUC)
    assert (hall.picture().bar.carries, hall.picture().bar.hand) == (None, None)
    told = "Nobody knows what is on the bar at Hall. Say it at the Table first, then lend."
    with refused(hall, NotAllowedNow, told):
        give(hall, stage, "25", "2")


def test_a_second_press_lends_nothing_more(halls: tuple[Hall, Hall]) -> None:
    hall, stage = halls
    old = seen(hall)
    give(hall, stage, "25", "2")
    told = "Somebody changed the equipment since this page was made. Look, and save again."
    with refused(hall, SomebodyWasFirst, told):
        lend(hall.desk, hall.platform_id, stage.platform_id, "25", "2", old, who=OLGA)


@pytest.mark.parametrize(
    ("face", "pieces", "told"),
    [
        ("25", "none", "Pieces: “none” is not a whole number from 1 to 200."),
        ("25", "0", "Pieces: “0” is not a whole number from 1 to 200."),
        ("heavy", "2", "Choose one of the plates of this platform."),
        ("17", "2", "There is no 17 at this platform. Load the page again."),
    ],
)
def test_a_loan_that_cannot_be_read_is_refused(
    halls: tuple[Hall, Hall], face: str, pieces: str, told: str
) -> None:
    with refused(halls[0], NotAllowedNow, told):
        give(*halls, face, pieces)


def test_no_plate_is_lent_to_itself_or_to_another_meet(hall: Hall) -> None:
    for to in (hall.platform_id, 99):
        with refused(hall, NotAllowedNow, "Choose another platform of this meet."):
            lend(hall.desk, hall.platform_id, to, "25", "2", seen(hall), who=OLGA)


def test_both_ends_of_the_larger_stack_are_in_use() -> None:
    hand = Hand(1, kg(100), stack(25, 10), stack(25, 25))
    assert in_use(Bar(Condition.CHANGING, stack(25, 10), hand), 2, kg(25)) == 4
    assert in_use(Bar(Condition.CHANGING, stack(25, 10), hand), 2, kg(10)) == 2
    assert in_use(Bar(Condition.IDLE, stack(25), None), 1, kg(25)) == 1
    assert in_use(Bar(Condition.IDLE, None, None), 2, kg(25)) == 0


# Broken


def test_one_press_takes_one_piece_out(hall: Hall) -> None:
    plate = next(item for item in hall.picture().stock if item.plate.face == 20)
    with changes(hall, {("plate", plate.id): {"count"}}):
        told = take_out(hall.desk, hall.platform_id, "20", seen(hall), who=LUC)
    assert told == "One 20 is taken out: 1 is left, one of them without a partner."
    assert hall.journal()[-1].what == "Hall: one 20 taken out of stock"
    check_board(hall.board())


def test_when_the_change_in_hand_needs_the_broken_plate_the_crew_is_asked(hall: Hall) -> None:
    hand = hall.picture().bar.hand
    assert hand is not None
    face = min(hand.stack)
    name = str(float(face)).removesuffix(".0")
    while stock_of(hall)[face] >= 2 * hand.stack.count(face):
        take_out(hall.desk, hall.platform_id, name, seen(hall), who=LUC)
    assert hall.picture().bar.hand == hand  # an entry never alters the instruction
    assert hall.board().ask is True
    bar_carries(hall.desk, hall.platform_id, "before", who=LUC)
    new = hall.picture().bar.hand
    assert new is not None
    assert 25 + 2 * sum(new.stack) == 100
    assert 2 * new.stack.count(face) <= stock_of(hall)[face]
    check_board(hall.board())


def test_the_last_piece_can_be_taken_out_and_no_more(hall: Hall) -> None:
    for _ in range(2):
        take_out(hall.desk, hall.platform_id, "0.25", seen(hall), who=LUC)
    with refused(hall, NotAllowedNow, "There is no 0.25 left to take out."):
        take_out(hall.desk, hall.platform_id, "0.25", seen(hall), who=LUC)


# Another bar for a lift while a change is out


def test_another_bar_while_a_change_is_out_comes_out_empty_with_a_change_of_its_own(hall: Hall) -> None:
    """The old bar goes with what is on it; the crew builds on the new one from nothing."""
    old = hall.picture().bar.hand
    use_bar(hall)
    bar = hall.picture().bar
    assert bar.hand is not None
    assert (bar.condition, bar.carries, bar.hand.before) == (Condition.CHANGING, (), ())
    assert bar.hand != old
    assert 20 + 2 * sum(bar.hand.stack) == 100  # bar 15 and collars 5
    check_board(hall.board())


def test_another_bar_under_a_lifter_is_refused(hall: Hall) -> None:
    (power,) = tool_rows(hall.picture())
    save_tools(
        hall.desk, hall.platform_id, [power, power | {"id": "", "name": "Spare bar"}], seen(hall), who=OLGA
    )
    hall.load()
    wish = LiftWish(hall.lift_id(SQUAT), str(hall.picture().tools[-1].id), "2.5", "1", "plates", "total")
    with refused(
        hall,
        NotAllowedNow,
        "The bar is loaded for Ada Brook at 100. Nothing may change on it now; "
        "take “bar is loaded” back first if it is a mistake.",
    ):
        save_lifts(hall.desk, hall.platform_id, [wish], who=OLGA)

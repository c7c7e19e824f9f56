"""The day before: what the stock cannot make, what is short, what to borrow."""

from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from app.loading.chart import loadable
from app.loading.equipment import Plate
from app.meet.stock_check import (
    Shortage,
    best_to_borrow,
    check_stock,
    say_missing,
    sentences,
    span,
    with_more,
)
from app.planning import Measure, PlanRequest, plan
from tests.meet.nouns import KG_SET, STEP, bar


def masses(*texts: str) -> tuple[Fraction, ...]:
    return tuple(Fraction(text) for text in texts)


def test_the_span_goes_from_the_lightest_opener_to_the_heaviest_and_fifteen_percent() -> None:
    assert span(masses("60", "100"), STEP)[0] == 60
    assert span(masses("60", "100"), STEP)[-1] == 115
    assert span(masses("200"), STEP)[-1] == 230
    assert span(masses("110"), STEP)[-1] == 125  # 126.5 is no multiple
    assert span((), STEP) == ()


def test_a_stock_that_does_says_so() -> None:
    check = check_stock(KG_SET, masses("60", "180"), STEP)
    assert (check.missing, check.shortages) == ((), ())
    assert sentences(check, "kg", 2) == ("Every weight from 60 to 205 kg can be made.",)


def test_a_missing_small_pair_is_named_and_every_second_weight_is_one_phrase() -> None:
    """A pair of 1.25 kg makes steps of 2.5 kg (arithmetic, figures V8); without it every second one fails."""
    stock = bar(("25", 6), ("20", 2), ("15", 2), ("10", 2), ("5", 2), ("2.5", 2))
    check = check_stock(stock, masses("60", "100"), STEP, lendable=[Plate(Fraction("1.25"), 0)])
    assert check.missing == tuple(Fraction(weight) for weight in ("62.5", "67.5", "72.5", "77.5", "82.5",
        "87.5", "92.5", "97.5", "102.5", "107.5", "112.5"))  # fmt: skip
    assert check.shortages == (Shortage(Fraction("1.25"), 2, 11),)
    assert sentences(check, "kg", 2) == (
        "11 of the weights from 60 to 115 kg cannot be made: from 62.5 to 112.5 kg in steps of 5.",
        "Short by 1 pair of 1.25s, which makes 11 of them.",
    )


def test_too_few_big_plates_are_counted_in_pairs() -> None:
    """One bar of 387.5 kg takes all of Ontario's rental set (trade C2): the same thought, two 25s only."""
    stock = bar(("25", 2), ("20", 2), ("15", 2), ("10", 2), ("5", 2), ("2.5", 2), ("1.25", 2))
    check = check_stock(stock, masses("150", "200"), STEP)
    assert check.heaviest == 230
    assert check.missing[0] == Fraction("185")
    assert check.shortages == (Shortage(Fraction("25"), 2, len(check.missing)),)


def test_two_kinds_short_are_named_one_after_the_other() -> None:
    stock = bar(("25", 2), ("20", 2), ("10", 2), ("5", 2), ("2.5", 2))
    check = check_stock(stock, masses("100", "200"), STEP, lendable=[Plate(Fraction("1.25"), 0)])
    assert len(check.shortages) == 2
    assert check.beyond == ()
    repaired = stock
    for one in check.shortages:
        repaired = with_more(repaired, Plate(one.face, 0), one.pieces)
    assert check_stock(repaired, masses("100", "200"), STEP).missing == ()


def test_what_no_borrowed_plate_makes_is_said_apart() -> None:
    check = check_stock(KG_SET, masses("20", "60"), STEP)
    assert check.beyond == masses("20", "22.5")
    assert sentences(check, "kg", 2)[-1] == (
        "No borrowed plates make 20 kg; 22.5 kg: lighter than the empty bar, or more than there is room for."
    )


def test_of_two_plates_that_would_do_the_one_is_short_that_leaves_fewer_on_the_bar() -> None:
    stock = bar(*((face, 2) for face in ("25", "20", "15", "10", "5", "0.25")), ("2.5", 4), ("0.5", 2))
    check = check_stock(stock, masses("60", "100"), STEP, [Plate(Fraction("1.25"), 0)])
    assert check.shortages[0].face == Fraction("1.25")  # not a second pair of 0.5s beside the 0.25s


def test_a_lone_plate_needs_only_its_partner() -> None:
    stock = bar(("25", 6), ("20", 2), ("15", 2), ("10", 2), ("5", 2), ("2.5", 2), ("1.25", 1))
    check = check_stock(stock, masses("60", "100"), STEP)
    assert check.shortages == (Shortage(Fraction("1.25"), 1, 11),)
    assert sentences(check, "kg", 2)[1] == "Short by 1 of the 1.25s, which makes 11 of them."


def test_a_belt_is_short_by_single_pieces() -> None:
    belt = bar(("20", 1), ("10", 1), ("5", 1), ("2.5", 1), mass="0", collar=None, ends=1)
    check = check_stock(belt, masses("0", "35"), Fraction("2.5"))
    assert check.missing == masses("40")
    # A second 2.5 would make it too, of five plates; a second 20 makes it of two.
    assert check.shortages == (Shortage(Fraction(20), 1, 1),)


@pytest.mark.parametrize(
    ("weights", "phrases"),
    [
        ((), ()),
        (("300",), ("300 kg",)),
        (("300", "302.5"), ("300 kg", "302.5 kg")),
        (("300", "302.5", "305"), ("from 300 to 305 kg in steps of 2.5",)),
        (("42.5", "47.5", "52.5", "60", "62.5", "65"),
         ("from 42.5 to 52.5 kg in steps of 5", "from 60 to 65 kg in steps of 2.5")),
    ],
)  # fmt: skip
def test_missing_weights_are_merged_into_phrases(weights: tuple[str, ...], phrases: tuple[str, ...]) -> None:
    assert say_missing(masses(*weights), "kg") == phrases


@given(st.sets(st.integers(1, 40), max_size=20))
def test_the_phrases_name_every_missing_weight_once(whole: set[int]) -> None:
    said: list[int] = []
    for phrase in say_missing([Fraction(one) for one in whole], "kg"):
        words = phrase.split()
        said += (
            range(int(words[1]), int(words[3]) + 1, int(words[-1])) if words[0] == "from" else [int(words[0])]
        )
    assert said == sorted(whole)
    assert all(first < second for first, second in pairwise(said))


COUNTS = st.tuples(*(st.integers(0, 2) for _ in range(6)))


@settings(max_examples=40)
@given(COUNTS, st.lists(st.integers(10, 40), min_size=1, max_size=3))
def test_with_what_is_short_borrowed_everything_but_the_impossible_can_be_made(
    counts: tuple[int, ...], fives: list[int]
) -> None:
    faces = ("25", "20", "10", "5", "2.5", "1.25")
    stock = bar(*((face, count) for face, count in zip(faces, counts, strict=True)))
    openers = [Fraction(5 * five, 2) for five in fives]
    check = check_stock(stock, openers, STEP)
    repaired = stock
    for one in check.shortages:
        repaired = with_more(repaired, Plate(one.face, 0), one.pieces)
    assert tuple(weight for weight in check.missing if not loadable(repaired, weight)) == check.beyond
    assert sum(one.makes for one in check.shortages) + len(check.beyond) == len(check.missing)


def handled(request: PlanRequest, equipment, targets: tuple[Fraction, ...]) -> Fraction:
    return 2 * plan(PlanRequest(equipment, targets, measure=Measure.MASS)).total.mass


def test_the_pair_to_borrow_is_the_best_of_all_single_pairs() -> None:
    """Each candidate planned by itself, and the least kilograms taken."""
    stock = bar(("25", 6), ("20", 2), ("10", 2), ("5", 2), ("2.5", 2), ("1.25", 2))
    flights = [masses("90", "60", "80"), masses("130", "110", "125")]
    lendable = [Plate(Fraction(15), 0)]
    order = masses("60", "80", "90", "110", "125", "130")
    request = PlanRequest(stock, ())
    now = handled(request, stock, order)
    tried = {
        plate.face: now - handled(request, with_more(stock, plate, 2), order)
        for plate in (*stock.plates, *lendable)
    }
    best = best_to_borrow(request, flights, lendable)
    assert best is not None
    assert best.saves == max(tried.values()) == tried[best.face] > 0
    assert (best.pieces, best.of) == (2, now)


def test_nothing_is_borrowed_when_nothing_is_saved() -> None:
    assert best_to_borrow(PlanRequest(KG_SET, ()), [masses("75")]) is None
    assert best_to_borrow(PlanRequest(KG_SET, ()), []) is None

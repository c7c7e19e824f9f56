"""May this weight be declared, and if not, what near it could be?"""

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.loading.equipment import Equipment
from app.loading.stack import total_mass
from app.meet.declare import Allowed, Refused, decide, read_weight, sentence
from app.meet.model import Attempt, Result
from tests.meet.nouns import KG_SET, STEP, attempt, bar


def decision(
    weight: str | int | Fraction,
    *earlier: Attempt,
    equipment: Equipment = KG_SET,
    step: Fraction = STEP,
    result: Result = Result.OPEN,
) -> Allowed | Refused:
    asked = attempt(1, len(earlier) + 1, None, result)
    return decide(Fraction(weight), asked, earlier, step, equipment, "kg")


READ = {
    "a whole number": ("142", Allowed(Fraction(142))),
    "a decimal point": ("142.5", Allowed(Fraction("142.5"))),
    "a decimal comma": ("142,5", Allowed(Fraction("142.5"))),
    "stray spaces": ("  142.5 \t", Allowed(Fraction("142.5"))),
    "exact to the gram and finer": ("0.45359237", Allowed(Fraction("0.45359237"))),
    "nothing on the belt": ("0", Allowed(Fraction(0))),
    "the heaviest that is believed": ("2000", Allowed(Fraction(2000))),
    "words": ("heavy", Refused("“heavy” is not a weight. Type a number such as 142.5.")),
    "nothing": ("", Refused("“” is not a weight. Type a number such as 142.5.")),
    "not a number": ("NaN", Refused("“NaN” is not a weight. Type a number such as 142.5.")),
    "endless": ("Infinity", Refused("“Infinity” is not a weight. Type a number such as 142.5.")),
    "an exponent": ("1e2", Refused("“1e2” is not a weight. Type a number such as 142.5.")),
    "Arabic digits": ("١٤٢", Refused("“١٤٢” is not a weight. Type a number such as 142.5.")),
    "wide digits": ("１４２", Refused("“１４２” is not a weight. Type a number such as 142.5.")),
    "two commas": ("1,142,5", Refused("“1,142,5” is not a weight. Type a number such as 142.5.")),
    "a unit": ("142 kg", Refused("“142 kg” is not a weight. Type a number such as 142.5.")),
    "less than nothing": ("-5", Refused("A weight cannot be less than 0.")),
    "a slip of the finger": ("2000.5", Refused("2000.5 is more than any bar carries. Check the number.")),
}


@pytest.mark.parametrize(("text", "expected"), READ.values(), ids=list(READ))
def test_a_typed_weight_is_read_exactly_or_refused_in_words(text: str, expected: Allowed | Refused) -> None:
    assert read_weight(text) == expected


def test_a_number_as_long_as_a_novel_is_refused_shortly() -> None:
    refused = read_weight("9" * 100_000)
    assert isinstance(refused, Refused)
    assert len(refused.because) < 200


@given(text=st.text())
def test_whatever_is_typed_is_answered(text: str) -> None:
    assert isinstance(read_weight(text), Allowed | Refused)


@pytest.mark.parametrize("weight", ["25", "27.5", "100", "102.5", "110", "432.5"])
def test_a_weight_that_the_plates_make_is_allowed(weight: str) -> None:
    """25 is the bar with its collars and nothing on it (WDFPF 2007, Equipment and specifications: bar and
    both collars 25 kg)."""
    assert decision(weight) == Allowed(Fraction(weight))


def test_a_weight_under_the_bar_names_the_lightest_one() -> None:
    refused = decision(20)
    assert refused == Refused("20 kg is lighter than the bar with its collars, 25 kg.", above=Fraction(25))
    assert sentence(refused) == "20 kg is lighter than the bar with its collars, 25 kg. Next possible: 25."


def test_the_lightest_weight_that_is_offered_may_be_declared_too() -> None:
    """A bar of 20 kg with spring collars of 0.2 kg each weighs 20.4 kg: no multiple of 2.5 kg, so the first
    weight that can be declared and made is the next multiple that the plates make."""
    springs = bar(("25", 2), ("1.25", 2), ("1.05", 2), collar="0.2")
    assert decision(20, equipment=springs) == Refused(
        "20 kg is lighter than the bar with its collars, 20.4 kg.", above=Fraction("22.5")
    )
    assert decision("22.5", equipment=springs) == Allowed(Fraction("22.5"))


def test_what_is_no_multiple_of_the_step_is_refused_with_the_neighbours() -> None:
    """Attempts are multiples of 2.5 kg (IPL Rulebook 2019, 6.1.1)."""
    assert decision(101) == Refused("101 kg is not a multiple of 2.5.", Fraction(100), Fraction("102.5"))


def test_in_pounds_the_neighbours_are_multiples_of_five() -> None:
    """Steps of 5 lb are common practice with a pair of 2.5 lb plates (``figures.md`` V8)."""
    pounds = bar(("45", 8), ("2.5", 2), mass="45", collar=None)
    refused = decide(Fraction(137), attempt(1, 1), (), Fraction(5), pounds, "lb")
    assert refused == Refused("137 lb is not a multiple of 5.", Fraction(135), Fraction(140))


def test_what_the_plates_cannot_make_is_refused_with_the_neighbours_that_they_make() -> None:
    refused = decision(100, equipment=bar(("25", 2), ("10", 2)))
    assert refused == Refused("100 kg cannot be made with the plates at this platform.", Fraction(95))
    assert sentence(refused) == "100 kg cannot be made with the plates at this platform. Next possible: 95."


def test_without_any_plate_only_the_bare_bar_can_be_declared() -> None:
    assert decision(25, equipment=bar()) == Allowed(Fraction(25))
    assert decision(30, equipment=bar()) == Refused(
        "30 kg cannot be made with the plates at this platform.", Fraction(25)
    )


def test_plates_that_stand_singly_do_not_count_on_a_bar_and_do_on_a_belt() -> None:
    single = (("20", 1), ("5", 2))
    assert decision(65, equipment=bar(*single)) == Refused(
        "65 kg cannot be made with the plates at this platform.", Fraction(35)
    )
    belt = bar(*single, mass="0", collar=None, ends=1)
    assert decision(20, equipment=belt) == Allowed(Fraction(20))


def test_a_missed_weight_may_be_taken_again() -> None:
    """IPL Rulebook 2019, 6.1.1: not below a weight already failed; the same is the usual choice."""
    assert decision(100, attempt(1, 1, 100, Result.MISSED)) == Allowed(Fraction(100))


@pytest.mark.parametrize("result", [Result.MISSED, Result.GOOD])
def test_a_weight_that_was_taken_may_not_be_undercut(result: Result) -> None:
    """IPL Rulebook 2019, 6.1.1 for a failed weight; for a good lift common practice."""
    refused = decision("97.5", attempt(1, 1, 100, result))
    assert refused == Refused("97.5 kg is lower than this lifter's last attempt, 100.", above=Fraction(100))


def test_a_first_attempt_that_is_still_to_come_sets_no_floor() -> None:
    assert decision("97.5", attempt(1, 1, 100)) == Allowed(Fraction("97.5"))


@pytest.mark.parametrize("result", [Result.GOOD, Result.MISSED, Result.PASSED])
def test_an_attempt_that_is_over_takes_no_new_weight(result: Result) -> None:
    assert decision(100, result=result) == Refused(
        "This attempt has been lifted. Undo its result first, or correct the result."
    )


stocks = st.lists(
    st.tuples(st.sampled_from(["25", "10", "5", "2.5", "1.25", "0.5", "1.05"]), st.integers(0, 4)),
    max_size=4,
    unique_by=lambda plate: plate[0],
)


@given(
    plates=stocks,
    collar=st.sampled_from([None, "0.2", "2.5"]),
    step=st.sampled_from(["0.5", "1.25", "2.5", "5"]),
    quarters=st.integers(0, 600),
    taken=st.one_of(st.none(), st.integers(0, 60)),
)
def test_what_is_offered_instead_may_always_be_declared(plates, collar, step, quarters, taken) -> None:
    """The offer, typed in, must be allowed: somebody will do just that, with seconds to go."""
    equipment, step = bar(*plates, collar=collar), Fraction(step)
    earlier = [attempt(1, 1, equipment.base_mass + taken * step, Result.GOOD)] if taken is not None else []
    answer = decide(Fraction(quarters, 4), attempt(1, 2), earlier, step, equipment, "kg")
    if isinstance(answer, Allowed):
        assert answer.weight == Fraction(quarters, 4)
        return
    for offered in (answer.below, answer.above):
        if offered is not None:
            assert decide(offered, attempt(1, 2), earlier, step, equipment, "kg") == Allowed(offered)
    assert answer.below is None or answer.below < Fraction(quarters, 4)
    assert answer.above is None or answer.above > Fraction(quarters, 4)


@given(plates=stocks, picks=st.lists(st.integers(0, 3), max_size=4))
def test_whatever_somebody_can_load_may_be_declared_if_it_is_a_multiple(plates, picks) -> None:
    """Loads a bar by hand first and then asks for what it weighs: that must not be refused as impossible."""
    equipment = bar(*plates)
    pieces = [min(pick, plate.count // 2) for pick, plate in zip(picks, equipment.plates, strict=False)]
    loaded = tuple(plate.face for plate, n in zip(equipment.plates, pieces, strict=False) for _ in range(n))
    weight = total_mass(equipment, loaded)
    assert decide(weight, attempt(1, 1), (), Fraction("0.05"), equipment, "kg") == Allowed(weight)

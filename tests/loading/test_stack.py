"""The independent sum refuses every stack that must not be shown."""

from fractions import Fraction
from itertools import combinations, permutations

import pytest

from app.loading.equipment import Collar, Equipment, Implement, Order, Plate
from app.loading.stack import WrongLoad, check_stack, obeys, total_mass

PLATES = tuple(
    Plate(Fraction(face), count, Fraction(thick), Fraction(wide))
    for face, count, thick, wide in [("25", 4, 27, 450), ("10", 3, 21, 325), ("2.5", 2, 16, 190)]
)
BAR = Equipment(Implement(Fraction(20), 2, Fraction(120)), Collar(Fraction("2.5"), Fraction(30)), PLATES)


def stack(*faces: str) -> tuple[Fraction, ...]:
    return tuple(Fraction(face) for face in faces)


def test_the_weight_counts_both_ends_the_bar_and_the_collars() -> None:
    """Dziepak 1997: 110 kg = 25, 15, 2.5 a side on 20 kg with two collars of 2.5 kg."""
    assert total_mass(BAR, stack("25", "15", "2.5")) == 110


def test_a_right_stack_passes() -> None:
    check_stack(BAR, stack("25", "10", "2.5"), Fraction(100))


@pytest.mark.parametrize(
    ("faces", "target", "order", "why"),
    [
        (["25", "10"], "97.5", Order.ANY, "makes 95, not the 97.5"),
        (["25", "20"], "115", Order.ANY, "20, which is not at the platform"),
        (["10", "10"], "65", Order.ANY, "needs 4 of the 10; there are 3"),
        (["25", "25", "10", "2.5"], "150", Order.ANY, "takes 121 mm; the sleeve has 120 mm"),
        (["10", "25"], "95", Order.HEAVIEST_INSIDE, "breaks the order heaviest-inside"),
        (["10", "25"], "95", Order.WIDEST_INSIDE, "breaks the order widest-inside"),
        (["25", "2.5", "10"], "100", Order.NO_VALLEY, "breaks the order no-valley"),
    ],
)
def test_a_wrong_stack_is_refused_with_the_reason(faces, target, order, why) -> None:
    with pytest.raises(WrongLoad, match=why):
        check_stack(BAR, stack(*faces), Fraction(target), order)


def test_a_size_that_is_not_known_is_never_assumed() -> None:
    bare = Equipment(BAR.implement, BAR.collar, (Plate(Fraction(10), 2),))
    with pytest.raises(WrongLoad, match="thickness of the 10 is not known"):
        check_stack(bare, stack("10"), Fraction(45))
    with pytest.raises(WrongLoad, match="diameter of the 10 is not known"):
        obeys(bare, stack("10"), Order.WIDEST_INSIDE)


def test_no_valley_means_no_plate_between_two_wider_ones() -> None:
    faces = stack("25", "10", "2.5", "2.5")
    wide = {plate.face: plate.diameter_mm for plate in PLATES}
    for order in permutations(faces):
        valley = any(
            wide[order[a]] > wide[order[b]] < wide[order[c]] for a, b, c in combinations(range(4), 3)
        )
        assert obeys(BAR, order, Order.NO_VALLEY) is not valley


def test_equipment_that_cannot_be_is_refused() -> None:
    with pytest.raises(ValueError, match="two rows"):
        Equipment(BAR.implement, None, (PLATES[0], PLATES[0]))
    with pytest.raises(ValueError, match="weigh something"):
        Plate(Fraction(0), 2)
    with pytest.raises(ValueError, match="2 ends"):
        Implement(Fraction(20), 3)

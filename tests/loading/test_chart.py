"""The loading chart, and the weights that can be made at all."""

from fractions import Fraction
from itertools import product

from hypothesis import given
from hypothesis import strategies as st

from app.loading.chart import chart_stack, loadable, nearest
from app.loading.equipment import Collar, Equipment, Implement, Plate


def bar(*plates: tuple[str, int], room: int | None = None) -> Equipment:
    rows = tuple(Plate(Fraction(face), count, Fraction(20)) for face, count in plates)
    usable = None if room is None else Fraction(room)
    return Equipment(Implement(Fraction(20), 2, usable), Collar(Fraction(0), Fraction(10)), rows)


def test_the_chart_keeps_back_a_heavy_plate_if_the_rest_could_not_be_made() -> None:
    equipment = bar(("25", 2), ("20", 4), ("5", 0))
    assert chart_stack(equipment, Fraction(100)) == (20, 20)
    assert chart_stack(equipment, Fraction(110)) == (25, 20)


def test_the_chart_has_no_stack_for_what_the_stock_cannot_make_or_the_sleeve_cannot_hold() -> None:
    assert chart_stack(bar(("25", 2)), Fraction(71)) is None
    assert chart_stack(bar(("25", 2)), Fraction(15)) is None
    assert chart_stack(bar(("10", 4), room=40), Fraction(60)) is None
    assert chart_stack(bar(("10", 4), room=50), Fraction(60)) == (10, 10)


def test_single_plates_cannot_be_loaded_on_two_ends() -> None:
    equipment = bar(("20", 3), ("10", 1))
    assert loadable(equipment, Fraction(60))
    assert not loadable(equipment, Fraction(40))
    assert nearest(equipment, Fraction(90)) == (60, None)


def test_the_nearest_weights_stand_below_and_above() -> None:
    equipment = bar(("10", 2), ("1.25", 2))
    assert nearest(equipment, Fraction(41)) == (40, Fraction("42.5"))
    assert nearest(equipment, Fraction(19)) == (None, 20)


@given(
    counts=st.lists(st.integers(0, 4), min_size=4, max_size=4),
    target=st.integers(0, 80),
    room=st.one_of(st.none(), st.integers(10, 130)),
)
def test_chart_and_nearest_agree_with_listing_everything(counts, target, room) -> None:
    faces = ["10", "7", "3", "2"]
    equipment = bar(*zip(faces, counts, strict=True), room=room)
    made = {}
    for pieces in product(*(range(count // 2 + 1) for count in counts)):
        if room is None or 10 + 20 * sum(pieces) <= room:
            weight = 20 + 2 * sum(int(face) * n for face, n in zip(faces, pieces, strict=True))
            made[weight] = max(made.get(weight, ()), pieces)
    assert loadable(equipment, Fraction(target)) is (target in made)
    below = max((weight for weight in made if weight < target), default=None)
    above = min((weight for weight in made if weight > target), default=None)
    assert nearest(equipment, Fraction(target)) == (below, above)
    chart = chart_stack(equipment, Fraction(target))
    if room is None:
        expected = made.get(target)
        pieces = chart and tuple(chart.count(Fraction(face)) for face in faces)
        assert pieces == (expected if expected is None or sum(expected) else ())

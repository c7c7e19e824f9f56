"""The drawing of an end is true to scale, whole, and can be read."""

from __future__ import annotations

from dataclasses import replace
from typing import Literal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.web.drawing import COLLAR_MM, HEIGHT_UNITS, SLIM, draw, fit_label
from app.web.geometry import CAP_EM, FULL_MM, Box, width_em
from app.web.rows import TOKEN_GAP, chip_rim, fit_text, line_up
from app.web.views import EndView, PlateView

# A calibrated steel set, from memory (diameter, thickness in mm); only the order of the sizes matters here.
SIZES = {"25": (450, 27), "20": (450, 22.5), "15": (400, 21), "10": (325, 21), "5": (228, 21)}
SIZES |= {"2.5": (190, 16), "1.25": (160, 12), "0.25": (112, 6)}


def plate(face: str) -> PlateView:
    diameter, thickness = SIZES[face]
    return PlateView(face=face, colour="#888", diameter_mm=diameter, thickness_mm=thickness)


def end(*faces: str, implement: Literal["bar", "belt"] = "bar", collar: str | None = "2.5") -> EndView:
    plates = tuple(plate(face) for face in faces)
    return EndView(implement, plates, collar if implement == "bar" else None, 415, "", "", "")


any_plate = st.builds(
    PlateView,
    face=st.sampled_from(["25", "20", "2.5", "1.25", "0.25", "100"]),
    colour=st.just("#888"),
    diameter_mm=st.floats(60, 600),
    thickness_mm=st.floats(2, 110),
)
any_end = st.builds(
    EndView,
    implement=st.sampled_from(["bar", "belt"]),
    plates=st.lists(any_plate, max_size=16).map(tuple),
    collar=st.sampled_from([None, "2.5"]),
    usable_mm=st.none(),
    count=st.just(""),
    sum=st.just(""),
    whole=st.just(""),
)


def inside(inner: Box, outer: Box) -> bool:
    return (
        inner.x >= outer.x
        and inner.y >= outer.y
        and inner.right <= outer.right
        and inner.bottom <= outer.bottom
    )


def test_the_largest_plate_of_the_rulebooks_is_drawn_at_full_height() -> None:
    assert draw(end("25")).plates[0].box.height == HEIGHT_UNITS


@given(st.sampled_from(sorted(SIZES)), st.lists(st.sampled_from(sorted(SIZES)), max_size=8))
def test_a_plate_is_drawn_at_the_same_height_whatever_stands_beside_it(face: str, others: list[str]) -> None:
    assert draw(end(face)).plates[0].box.height == draw(end(face, *others)).plates[0].box.height


@given(any_end)
def test_heights_are_to_scale_to_the_unit(any_end: EndView) -> None:
    tallest = max([FULL_MM, *(p.diameter_mm for p in any_end.plates)])
    for shown, real in zip(draw(any_end).plates, any_end.plates, strict=True):
        assert abs(shown.box.height - real.diameter_mm * HEIGHT_UNITS / tallest) <= 1


def test_thicknesses_keep_their_proportion_within_a_drawing() -> None:
    thick, thin = (shown.box.width for shown in draw(end("25", "1.25")).plates)
    assert thick / thin == pytest.approx(27 / 12, rel=0.02)


@given(any_end)
def test_plates_touch_their_neighbours_and_the_collar_stands_outermost(any_end: EndView) -> None:
    drawing = draw(any_end)
    boxes = [shown.box for shown in drawing.plates]
    boxes += [drawing.collar] if drawing.collar else []
    assert [a.right for a in boxes[:-1]] == [b.x for b in boxes[1:]]


@given(any_end)
def test_every_plate_of_the_end_is_drawn_once_with_its_own_number(any_end: EndView) -> None:
    assert [shown.label.text for shown in draw(any_end).plates] == [p.face for p in any_end.plates]


@given(any_end)
def test_nothing_lies_outside_the_picture(any_end: EndView) -> None:
    drawing = draw(any_end)
    picture = Box(0, 0, drawing.width, drawing.height)
    parts = [drawing.shaft, drawing.shoulder, drawing.sleeve, drawing.collar]
    parts += [shown.box for shown in drawing.plates]
    assert all(inside(part, picture) for part in parts if part is not None)
    assert all(0 <= x <= drawing.width and 0 <= y <= drawing.height for x, y in drawing.chain)


@given(any_end)
def test_no_number_is_wider_than_its_plate(any_end: EndView) -> None:
    for shown in draw(any_end).plates:
        label = shown.label
        across = label.size * (CAP_EM if label.turned else width_em(label.text))
        assert across <= shown.box.width
        assert shown.box.width >= SLIM


def test_a_number_is_turned_only_where_that_makes_it_much_larger() -> None:
    assert not fit_label("5", Box(0, 0, 100, 220)).turned
    assert fit_label("1.25", Box(0, 0, 60, 160)).turned


def test_a_long_stack_shrinks_across_but_not_upright() -> None:
    short, long = draw(end("25")), draw(end(*["25"] * 12))
    assert long.plates[0].box.width < short.plates[0].box.width
    assert long.plates[0].box.height == short.plates[0].box.height


def test_a_bar_has_a_sleeve_and_a_collar_and_no_chain() -> None:
    drawing = draw(end("25", "10"))
    assert drawing.sleeve is not None
    assert drawing.collar is not None
    assert drawing.collar_mass == "2.5"
    assert drawing.chain == ()


def test_the_collar_keeps_the_scale_of_the_plates() -> None:
    drawing = draw(end("25"))
    assert drawing.collar is not None
    assert drawing.collar.width / drawing.plates[0].box.width == pytest.approx(COLLAR_MM / 27, rel=0.02)


def test_a_belt_hangs_on_a_chain_through_the_holes_and_has_no_sleeve() -> None:
    drawing = draw(end("20", "10", implement="belt"))
    assert (drawing.sleeve, drawing.shaft, drawing.collar) == (None, None, None)
    through = [(x, y) for x, y in drawing.chain if y == drawing.middle]
    assert through[0][0] < drawing.plates[0].box.x
    assert through[1][0] > drawing.plates[-1].box.right
    assert drawing.chain[0] == drawing.chain[-1]  # both ends meet at the belt's ring


def test_an_empty_end_is_drawn_and_said_as_empty() -> None:
    assert draw(end()).words == "An empty sleeve"
    assert draw(end(implement="belt")).words == "Nothing on the belt"


def test_the_drawing_says_in_words_what_it_shows() -> None:
    assert draw(end("25", "10")).words == "From inside to outside: 25, 10, then the collar 2.5"


def test_what_goes_on_now_stays_marked_in_the_drawing() -> None:
    loaded = replace(end("25", "10"), plates=(plate("25"), replace(plate("10"), fresh=True)))
    assert [shown.fresh for shown in draw(loaded).plates] == [False, True]


@given(st.lists(any_plate, max_size=9), st.integers(1, 2))
def test_a_row_keeps_the_order_of_the_hands(plates: list[PlateView], lines: int) -> None:
    row = line_up(plates, lines)
    assert [token.text for token in row.tokens] == [p.face for p in plates]
    places = [(token.baseline, token.x) for token in row.tokens]
    assert places == sorted(places)  # read as text is: along a line, then the next line


@given(st.lists(any_plate, min_size=1, max_size=9), st.integers(1, 2))
def test_nothing_in_a_row_overlaps_or_sticks_out(plates: list[PlateView], lines: int) -> None:
    row = line_up(plates, lines)
    ends = [token.x + round(width_em(token.text) * token.size) for token in row.tokens]
    assert max(ends) <= row.width
    for before, after, edge in zip(row.tokens, row.tokens[1:], ends, strict=False):
        assert after.rim.x == 0 or after.rim.x == edge + TOKEN_GAP
        assert after.rim.x > 0 or after.baseline > before.baseline


def test_two_lines_are_about_half_as_wide_as_one() -> None:
    plates = [plate(face) for face in ("1.25", "2.5", "5", "10", "15", "20", "25")]
    assert line_up(plates, 2).width < 0.6 * line_up(plates, 1).width


def test_a_rim_in_a_row_is_as_high_as_its_plate_is_wide() -> None:
    large, small = line_up([plate("25"), plate("1.25")]).tokens
    assert small.rim.height / large.rim.height == pytest.approx(160 / 450, rel=0.03)


@given(any_plate)
def test_a_rim_in_a_line_of_text_stays_within_its_place(shown: PlateView) -> None:
    assert inside(chip_rim(shown), Box(0, 0, 16, 46))


def test_a_text_that_fills_its_place_has_room_for_every_figure() -> None:
    assert fit_text("142.5").width == round(100 * (4 * 0.632 + 0.33))

"""Masses are exact in and out."""

from decimal import Decimal
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.loading.mass import parse_mass, show_mass


@pytest.mark.parametrize(
    ("value", "mass"),
    [
        (5, Fraction(5)),
        ("102.5", Fraction(205, 2)),
        (" 1.25 ", Fraction(5, 4)),
        (Decimal("0.45359237"), Fraction(45359237, 10**8)),
        (0.1, Fraction(1, 10)),
        ("-2.5", Fraction(-5, 2)),
        (".5", Fraction(1, 2)),
        (1e-7, Fraction(1, 10**7)),
        (Fraction(3, 4), Fraction(3, 4)),
    ],
)
def test_a_mass_is_read_exactly(value, mass) -> None:
    assert parse_mass(value) == mass


@pytest.mark.parametrize(
    "value",
    [
        True, None, [], {}, "", " ", "abc", "1e3", "1/3", "٣", "1,5", "--1", "NaN", "infinity", float("nan"),
        float("inf"), Decimal("NaN"), Decimal("1e999999999"), Decimal("1e-999999999"), 10**400, 1_000_001,
        "0.0000000000001", Fraction(1, 3), "9" * 60, 1 + 2j,
    ],
)  # fmt: skip
def test_what_is_no_mass_is_refused_in_a_sentence(value) -> None:
    with pytest.raises(ValueError, match=r"\.$"):
        parse_mass(value)


@given(st.decimals(allow_nan=False, allow_infinity=False, places=9, min_value=-999_999, max_value=999_999))
def test_a_mass_shown_and_read_again_is_the_same(number: Decimal) -> None:
    shown = show_mass(Fraction(number))
    assert parse_mass(shown) == Fraction(number)
    assert "." not in shown or not shown.endswith(("0", "."))


def test_a_pound_is_shown_to_its_last_decimal() -> None:
    """International pound, 1959."""
    assert show_mass(Fraction("0.45359237")) == "0.45359237"
    assert show_mass(Fraction("45.359237")) == "45.359237"


def test_a_third_has_no_decimal() -> None:
    with pytest.raises(ValueError, match="denominator 3"):
        show_mass(Fraction(1, 3))
